"""Whole screens, as a user sees them in a pipe.

Where a change is meant, write them anew with ``FLUXNET_WRITE_GOLDEN=1`` and read the difference.
"""

from __future__ import annotations

import os
import shutil
from pathlib import Path

import pytest

from fluxnet.cli.main import run
from fluxnet.ground.resources import resource_folder

HERE = Path(__file__).parent

BROKEN = """\
model   Broken on purpose
substrate  glucose, ammonia
product    ethanol, lactate
exchange   CO2
carrier    ATP   carries energy
carrier    NADH
inside     pyruvate, acetyl-CoA

compartment catabolism
    glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    pyr_dh     : pyruvate -> acetyl-CoA + 2 CO2 + NADH
    adh        : acetyl-CoA + 2 NADH -> ethanl
    ldh        : pyruvate + NADH -> 1,5 lactate
    upkeep     : ATP => nothing
"""

SCREENS = {
    "questions": [],
    "check": ["check", "tw4.flux"],
    "check-broken": ["check", "broken.flux"],
    "closure": ["closure", "rates.csv", "--model", "tw4.flux"],
    "solve": ["solve", "tw4.flux", "rates.csv", "--run", "W15"],
    "plan": ["solve", "tw4.flux", "rates.csv", "--run", "W15", "--plan", "ATP anabolism"],
    "inconsistent": ["solve", "tw4.flux", "rates.csv", "--run", "W11"],
    "infeasible": ["solve", "tw4.flux", "rates.csv", "--run", "W14", "--maximise", "mu"],
    "optimum": ["solve", "tw4.flux", "rates.csv", "--run", "W15", "--maximise", "2,3-butanediol"],
    "unbounded": ["solve", "tw4.flux", "--maximise", "2,3-butanediol"],
    "frontier": ["frontier", "tw4.flux", "mu", "2,3-butanediol", "--over", "glucose",
                 "--from", "2", "--to", "8"],
    "compare": [
        "compare", "sw9.flux", "--product", "3-hydroxypropionate", "--from", "xylose",
        "--across", "malonyl|aspartate|alanine|glycerol", "--across", "tank|stirred",
        "--reserve", "mu=0.04", "--staircase", "--detail", "alanine * tank",
    ],
    "routes": [
        "routes", "tw4.flux", "--from", "glucose", "--to", "2,3-butanediol", "--keep-above", "0.8",
    ],
    "lump": ["lump", "sw9.flux", "--keep", "pyruvate,acetate", "--variant", "base"],
    "overall": ["lump", "tw4.flux", "rates.csv", "--run", "W15", "--overall", "products"],
    "rates": ["rates", "batch", "--model", "lv3.flux"],
    "explain": ["explain", "unbalanced-line"],
    "catalogue": ["catalogue", "acetic", "acid"],
}


@pytest.mark.parametrize("name", SCREENS)
def test_a_screen_is_as_it_was(
    name: str,
    tmp_path: Path,
    monkeypatch: pytest.MonkeyPatch,
    capsys: pytest.CaptureFixture[str],
) -> None:
    for source in resource_folder("examples").glob("*/*"):
        if source.suffix in (".flux", ".csv"):
            (tmp_path / source.name).write_bytes(source.read_bytes())
    raw = resource_folder("examples") / "3-one-yeast-in-three-vessels" / "batch"
    shutil.copytree(raw, tmp_path / "batch")
    (tmp_path / "broken.flux").write_text(BROKEN, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    monkeypatch.delenv("COLUMNS", raising=False)
    status = run(SCREENS[name])
    shown = capsys.readouterr()
    text = f"exit status {status}\n--- standard error\n{shown.err}--- standard output\n{shown.out}"
    path = HERE / f"{name}.txt"
    if os.environ.get("FLUXNET_WRITE_GOLDEN"):
        path.write_text(text, encoding="utf-8")

    assert text == path.read_text(encoding="utf-8")
