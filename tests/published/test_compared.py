"""Published yields once more, by the command that compares variants: exact, ranked, with shares.

The sources, and how each value was got, stand in the headers of the models beside this file and
in test_most_yields.py.
"""

from __future__ import annotations

import json
from collections.abc import Callable
from fractions import Fraction
from pathlib import Path
from typing import Any

import pytest

from fluxnet.cli.main import Exit, run

HERE = Path(__file__).parent
MODELS = HERE.parents[1] / "models"

# product: electrons per mole (the degree of reduction), so that the yield is 24 over it
ELECTRONS = {
    "ethanol": 12, "lactate": 12, "acetate": 8, "succinate": 14, "butyrate": 20, "butanol": 24,
    "isobutanol": 24, "propionate": 14, "2,3-butanediol": 22, "1,3-propanediol": 16,
    "citrate": 18, "glutamate": 18, "lysine": 28, "3-hydroxypropionate": 12, "hydrogen": 2,
    "methane": 8, "glycerol": 14, "itaconate": 18, "malate": 12, "fumarate": 12,
}  # fmt: skip


@pytest.fixture
def compared(capsys: pytest.CaptureFixture[str]) -> Callable[..., dict[str, Any]]:
    """What each variant can make, by name, as the command tells it in JSON."""

    def compared(model: Path, product: str, substrate: str, *more: str) -> dict[str, Any]:
        asked = ["compare", str(model), "--product", product, "--from", substrate, *more]
        assert run([*asked, "--draws", "0", "--json"]) == Exit.SOUND
        document = json.loads(capsys.readouterr().out)
        return {variant["name"]: variant for variant in document["variants"]}

    return compared


@pytest.mark.parametrize("product", ELECTRONS)
def test_a_line_that_wastes_nothing_yields_what_electrons_allow(compared, product):
    found = compared(HERE / "electron-limited.flux", product, "glucose", "--across", "base")["base"]
    last = found["yields"][-1]
    assert Fraction(last["exactly"]) == Fraction(24, ELECTRONS[product])
    assert found["electron_limit"] == pytest.approx(24 / ELECTRONS[product], rel=1e-12)
    assert last["share"] == pytest.approx(1, rel=1e-12)
    assert last["proof"]["verified"]


def test_lysine_by_its_pathway(compared):
    found = compared(MODELS / "amino-acid.flux", "lysine", "glucose", "--across", "base")["base"]
    assert found["electron_limit"] == pytest.approx(6 / 7, rel=1e-12)
    assert found["yields"][0]["per_carbon"] == pytest.approx(0.75, rel=1e-12)
    assert found["yields"][0]["share"] == pytest.approx(0.75 / (6 / 7), rel=1e-12)
    held = [line["name"] for line in found["optimum"]["held_back_by"]]
    assert "NADPH" in held


def test_succinate_in_four_networks_is_ranked(compared):
    networks = "pts * reductive|glk * reductive|pts|glk"
    found = compared(HERE / "succinate.flux", "succinate", "glucose", "--across", networks)
    exact = {name: Fraction(line["yields"][-1]["exactly"]) for name, line in found.items()}
    assert sorted(exact.values(), reverse=True) == [
        Fraction(12, 7), Fraction(4, 3), Fraction(6, 5), Fraction(1)
    ]  # fmt: skip
    assert [line["rank"] for line in found.values()] == [1, 2, 3, 4]
    best, second = list(found.values())[:2]
    assert best["optimum"]["by_products"] == []
    assert best["yields"][-1]["share"] == pytest.approx(1, rel=1e-12)
    # 2/3 acetate beside 4/3 succinate
    beside = {line["species"]: line for line in second["optimum"]["by_products"]}
    assert beside["acetate"]["least"] == pytest.approx(1 / 2, abs=1e-9)
    assert beside["acetate"]["most"] == pytest.approx(1 / 2, abs=1e-9)


def test_ethanol_from_xylose_by_mass(compared):
    found = compared(HERE / "xylose.flux", "ethanol", "xylose", "--across", "base")["base"]
    assert Fraction(found["yields"][-1]["exactly"]) == Fraction(5, 3)
    assert found["yields"][-1]["per_mass"] == pytest.approx(0.51, abs=0.005)


def test_acetate_of_a_strain_that_makes_nothing_else(compared):
    # Causey et al. 2003: 572 mM of 333 mM glucose; 2 mol/mol by the route, 57.3 % of the carbon
    found = compared(HERE / "homoacetate.flux", "acetate", "glucose", "--across", "base")["base"]
    last = found["yields"][-1]
    assert Fraction(last["exactly"]) == 2
    assert 572 / 333 / last["per_mole"] == pytest.approx(0.859, abs=5e-4)
    assert 572 / 333 / last["per_mole"] * last["per_carbon"] == pytest.approx(0.573, abs=5e-4)
    assert found["optimum"]["oxygen"] == pytest.approx(1, abs=1e-9)
