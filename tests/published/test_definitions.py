"""Electrons and masses by definition, through the commands.

Degree of reduction by Roels 1983 and Erickson, Minkevich & Eroshin 1978
(definition; values computed from it); with N2 as reference Villadsen, Nielsen & Liden,
Bioreaction Engineering Principles, 2nd ed., Table 4.3 (4.80, 3 and 6 read in
print, the others recalled); the mass of a C-mol is published as 24.6 g (read in
print) and computed from C 12.011, H 1.008, O 15.999, N 14.007.
"""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from fluxnet.cli.main import run

ELECTRONS = {
    "glucose": 24, "glycerol": 14, "ethanol": 12, "acetic acid": 8, "lactic acid": 12,
    "succinic acid": 14, "formic acid": 2, "butyric acid": 20, "1-butanol": 24, "acetone": 16,
    "carbon monoxide": 2, "hydrogen": 2, "ammonia": 0, "oxygen": -4, "propionic acid": 14,
    "2,3-butanediol": 22, "acetoin": 20, "1,3-propanediol": 16, "lysine": 28,
    "glutamic acid": 18, "citric acid": 18, "itaconic acid": 18, "fumaric acid": 12,
    "malic acid": 12, "pyruvic acid": 10, "alanine": 12, "palmitic acid": 92, "methane": 8,
    "methanol": 6, "oxalic acid": 2, "urea": 0,
}  # fmt: skip

PER_CARBON_FROM_N2 = {
    "urea": 6.0, "formic acid": 2, "acetic acid": 4, "propionic acid": 4.67, "butyric acid": 5.00,
    "palmitic acid": 5.75, "lactic acid": 4, "pyruvic acid": 3.33, "oxalic acid": 1,
    "succinic acid": 3.50, "fumaric acid": 3, "malic acid": 3, "citric acid": 3, "glucose": 4,
    "ethanol": 6, "glycerol": 4.67, "acetone": 5.33,
}  # fmt: skip


@pytest.mark.parametrize("name", ELECTRONS)
def test_electrons_per_mole(name: str, capsys: pytest.CaptureFixture[str]) -> None:
    run(["catalogue", *name.split(), "--json"])
    (compound,) = json.loads(capsys.readouterr().out)["compounds"]

    assert compound["electrons"] == pytest.approx(ELECTRONS[name], abs=1e-9)


def electrons_in(
    rows: str, nitrogen: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> float:
    path = tmp_path / "one.csv"
    path.write_text(f"species,direction,rate,sd,unit\n{rows}", encoding="utf-8")
    run(["closure", str(path), "--nitrogen", nitrogen, "--json"])
    (told,) = json.loads(capsys.readouterr().out)["runs"]
    electrons = next(b["in"] for b in told["balances"] if b["name"] == "electrons")
    return float(electrons) / 1000  # a C-mol is 1,000 C-mmol


@pytest.mark.parametrize("name", PER_CARBON_FROM_N2)
def test_electrons_per_carbon_from_nitrogen_gas(
    name: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    rows = f"{name},in,1,0.01,C-mol\n"

    assert electrons_in(rows, "N2", tmp_path, capsys) == pytest.approx(
        PER_CARBON_FROM_N2[name], abs=0.005
    )


@pytest.mark.parametrize(("nitrogen", "gamma"), [("ammonia", 4.2), ("N2", 4.8), ("nitrate", 5.8)])
def test_electrons_of_biomass_by_nitrogen_reference(
    nitrogen: str, gamma: float, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    path = tmp_path / "one.csv"
    path.write_text(
        "biomass X CH1.8O0.5N0.2\nspecies,direction,rate,sd,unit\nX,out,1,0.01,mol\n",
        encoding="utf-8",
    )
    run(["closure", str(path), "--nitrogen", nitrogen, "--json"])
    (told,) = json.loads(capsys.readouterr().out)["runs"]
    out = next(b["out"] for b in told["balances"] if b["name"] == "electrons")

    assert out == pytest.approx(gamma * 1000, rel=1e-9)


def test_a_c_mol_of_biomass_weighs_24_6_grams(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    path = tmp_path / "one.csv"
    path.write_text(
        "biomass X CH1.8O0.5N0.2\nspecies,direction,rate,sd,unit\nX,out,24.626,0.1,g\n",
        encoding="utf-8",
    )
    run(["closure", str(path), "--json"])
    (told,) = json.loads(capsys.readouterr().out)["runs"]
    carbon = next(b["out"] for b in told["balances"] if b["name"] == "carbon")

    assert 24.626 / carbon * 1000 == pytest.approx(24.6, abs=0.03)
    assert carbon == pytest.approx(1000, rel=1e-4)
