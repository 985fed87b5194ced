"""Whole stoichiometries: propionic fermentation (textbooks), growth on glucose and hexadecane
(Shuler & Kargi, example 7.1; Doran, example 4.7). Sources stand in the models' headers."""

from __future__ import annotations

from pathlib import Path

import pytest

from fluxnet.studies.solution import SolveStatus

HERE = Path(__file__).parent
PROPIONIC = HERE / "propionic.flux"


@pytest.mark.parametrize(
    ("rates", "variant", "atp"),
    [
        # 12 was printed, with one ATP for each fumarate reduced; 8 without is computed
        ({"glucose in": 3, "propionate out": 4, "acetate out": 2, "CO2 out": 2}, "base", 12),
        ({"glucose in": 3, "propionate out": 4, "acetate out": 2, "CO2 out": 2}, "uncoupled", 8),
        # 1 was printed, without; 3 with is computed
        ({"lactate in": 3, "propionate out": 2, "acetate out": 1, "CO2 out": 1}, "uncoupled", 1),
        ({"lactate in": 3, "propionate out": 2, "acetate out": 1, "CO2 out": 1}, "base", 3),
    ],
)
def test_propionic_fermentation_and_its_atp(ask, rates, variant, atp):
    unused = {"lactate in": 0} if "glucose in" in rates else {"glucose in": 0}
    run = ask(PROPIONIC, rates | unused, variant=variant)
    assert run.status is SolveStatus.SOLVED
    assert run.flux("upkeep") == pytest.approx(atp, abs=1e-9)


def test_propionic_fermentation_of_other_proportions_is_impossible(ask):
    # three propionate of three glucose: carbon is short by three
    rates = {
        "glucose in": 3, "lactate in": 0, "propionate out": 3, "acetate out": 2, "CO2 out": 2,
    }  # fmt: skip
    run = ask(PROPIONIC, rates)
    assert run.status is SolveStatus.INFEASIBLE
    assert run.conflict.is_hard


def _water(run) -> float:
    """The water made, by the net equation of the whole cell."""
    whole = next(e for e in run.equations if e.compartment is None)
    return next(t.coefficient for t in whole.terms if t.species == "H2O")


# O2, NH3, X, H2O, CO2 per mol of substrate; g X per g substrate; g X per g O2.
# Glucose: read in print (0.909, 3.85, 2, 1.47); hexadecane: from memory (90 %), computed.
GROWTH = {
    "glucose": (1.4727, 0.7818, 0.9091, 3.8545, 2.0, 0.461, 1.76),
    "hexadecane": (12.427, 2.085, 2.424, 11.279, 5.333, 0.98, 0.557),
}


@pytest.mark.parametrize("substrate", GROWTH)
def test_growth_with_two_thirds_of_the_carbon_in_cells(ask, substrate):
    oxygen, ammonia, cells, water, carbon_dioxide, on_substrate, on_oxygen = GROWTH[substrate]
    other = "hexadecane" if substrate == "glucose" else "glucose"
    run = ask(HERE / "growth-lines.flux", {f"{substrate} in": 1, f"{other} in": 0}, maximise="X")
    for name, value in (
        ("oxygen", oxygen), ("ammonia", ammonia), ("X", cells), ("CO2", carbon_dioxide),
    ):  # fmt: skip
        assert run.rate(name) == pytest.approx(value, rel=2e-4)
    assert _water(run) == pytest.approx(water, rel=2e-4)
    found = next(y for y in run.yields if y.product == "X" and y.substrate == substrate)
    assert found.per_mass == pytest.approx(on_substrate, rel=0.005)
    mass_of_cells = found.per_mass * {"glucose": 180.156, "hexadecane": 226.45}[substrate]
    assert mass_of_cells / (oxygen * 31.998) == pytest.approx(on_oxygen, rel=0.005)


def test_growth_on_hexadecane_at_a_given_respiratory_quotient(ask):
    # printed 12.5, 2.13, 10.6, 5.37, 11.4 (from memory, 92 %); the digits here are computed
    run = ask(HERE / "respiratory-quotient.flux", maximise="X")
    assert run.rate("oxygen") == pytest.approx(12.488, abs=0.001)
    assert run.rate("ammonia") == pytest.approx(2.126, abs=0.001)
    assert run.rate("X") == pytest.approx(10.630, abs=0.001)
    assert run.rate("CO2") == pytest.approx(5.370, abs=0.001)
    assert _water(run) == pytest.approx(11.366, abs=0.001)
