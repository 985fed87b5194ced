"""The most ATP per glucose, with and without oxygen. Sources stand in most-atp.flux."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from fluxnet.cli.main import Exit, run

MODEL = Path(__file__).parent / "most-atp.flux"


@pytest.mark.parametrize(
    ("variant", "atp"),
    [("base", 38), ("usual", 32), ("low", 16)],  # 38 and 32 from memory (99 %), 16 computed
)
def test_most_atp_with_oxygen(ask, variant, atp):
    run = ask(MODEL, variant=variant, maximise="ATP")
    assert run.optimum == pytest.approx(atp, abs=1e-9)
    assert run.rate("oxygen") == pytest.approx(6, abs=1e-9)


@pytest.mark.parametrize(
    ("oxygen", "atp"), [(0, 4), (1, 10), (2, 16), (3, 21.5), (4, 27), (5, 32.5), (6, 38)]
)
def test_most_atp_when_oxygen_is_scarce(ask, oxygen, atp):
    # computed; at 3 and 2 ATP per oxygen atom
    run = ask(MODEL, {"glucose in": 1, "oxygen in": oxygen}, maximise="ATP")
    assert run.optimum == pytest.approx(atp, abs=1e-8)


def test_the_line_of_scarce_oxygen_has_one_break(capsys):
    # computed: acetate and hydrogen stop at 2, where the cycle starts; 38 is from memory (99 %)
    assert run(["frontier", str(MODEL), "oxygen", "ATP", "--json"]) == Exit.SOUND
    (curve,) = json.loads(capsys.readouterr().out)["curves"]
    points = [(point["x_exact"], point["y_exact"]) for point in curve["points"]]
    assert points == [("0", "4"), ("2", "16"), ("6", "38")]
    assert [point["slope_after"] for point in curve["points"]] == [6, 5.5, None]


@pytest.mark.parametrize(
    ("variant", "atp"),
    [
        ("lactate-only", 2),
        ("ethanol-only", 2),
        ("butyrate-only", 3),
        ("no-oxygen", 4),  # two acetate and four hydrogen
        ("no-oxygen * no-hydrogen", 3),
    ],
)
def test_most_atp_without_oxygen(ask, variant, atp):
    run = ask(MODEL, variant=variant, maximise="ATP")
    assert run.optimum == pytest.approx(atp, abs=1e-9)


def test_most_hydrogen_is_four_beside_two_acetate(ask):
    # "4 mol H2/mol glucose" was read in Bielen et al. 2013, Life 3:52, abstract
    run = ask(MODEL, variant="no-oxygen", maximise="hydrogen")
    assert run.optimum == pytest.approx(4, abs=1e-9)
    assert run.rate("acetate") == pytest.approx(2, abs=1e-9)
    assert run.flux("upkeep") == pytest.approx(4, abs=1e-9)
