"""Published yields through comparisons: the variants, their order, and the electron limit.

Sources and how each value was got stand in the headers of the models beside this file and in
``test_most_yields.py``.
"""

from __future__ import annotations

from fractions import Fraction
from pathlib import Path

import pytest

import fluxnet as fx
from fluxnet.studies.compare_words import holding_words
from tests.published.test_most_yields import ELECTRON_LIMITED

HERE = Path(__file__).parent
MODELS = HERE.parents[1] / "models"


def test_four_networks_for_succinate_are_ranked_exactly() -> None:
    # BioMed Res Int 2013:538790, table 2: 1.71, 1.33, 1.2 and 1 mol/mol
    found = fx.compare(
        fx.read_model(HERE / "succinate.flux"), "succinate", "glucose",
        ["pts|glk", "base|reductive"],
    )  # fmt: skip

    assert [(a.name, a.final.moles) for a in found.abilities] == [
        ("glk", Fraction(12, 7)),
        ("glk * reductive", Fraction(4, 3)),
        ("pts", Fraction(6, 5)),
        ("pts * reductive", Fraction(1)),
    ]
    beside = {
        a.name: {b.species: (b.least, b.most) for b in a.facts.by_products}
        for a in found.abilities
    }
    assert beside["glk"] == {}
    # two thirds of an acetate per glucose
    assert beside["glk * reductive"] == {"acetate": pytest.approx((0.5, 0.5))}
    assert beside["pts"]["ethanol"] == pytest.approx((0, 0.5))
    # net CO2 -6/7 and -2/3 per glucose
    taken = {a.name: a.facts.carbon_dioxide * float(a.final.moles) for a in found.abilities}
    assert taken["glk"] == pytest.approx(-6 / 7)
    assert taken["glk * reductive"] == pytest.approx(-2 / 3)
    assert [holding_words(a.facts.holding) for a in found.abilities] == [
        "electrons", "electrons (NADH)", "carbon", "carbon",
    ]  # fmt: skip


@pytest.mark.parametrize("product", ELECTRON_LIMITED)
def test_the_electron_limit_is_gamma_over_gamma(product: str) -> None:
    moles, carbon_dioxide, mass = ELECTRON_LIMITED[product]
    found = fx.compare(
        fx.read_model(HERE / "electron-limited.flux"), product, "glucose", ["base"], staircase=True
    )
    (ability,) = found.abilities

    assert float(ability.ceiling) == pytest.approx(moles, abs=1e-4)
    assert ability.final.moles == ability.ceiling
    assert ability.facts.carbon_dioxide * moles == pytest.approx(carbon_dioxide, abs=1e-3)
    assert ability.staircase.reached == ability.ceiling
    if mass is not None:
        assert ability.final.mass == pytest.approx(mass, abs=1e-4)


def test_lysine_by_its_pathway_reaches_seven_eighths_of_the_electron_limit() -> None:
    # 0.75 of 6/7 C-mol/C-mol (a textbook's page 77, read in print)
    found = fx.compare(fx.read_model(MODELS / "amino-acid.flux"), "lysine", "glucose", ["base"])
    (ability,) = found.abilities

    assert ability.yields[0].carbon == Fraction(3, 4)
    assert ability.yields[0].share == Fraction(7, 8)


def test_xylose_gives_five_thirds_of_ethanol() -> None:
    found = fx.compare(fx.read_model(HERE / "xylose.flux"), "ethanol", "xylose")
    (ability,) = found.abilities

    assert ability.final.moles == Fraction(5, 3)
    assert ability.final.mass == pytest.approx(0.51, abs=0.005)
    assert ability.final.share == 1


def test_a_measured_acetate_yield_against_its_route_and_the_electrons() -> None:
    # 333 mM glucose gave 572 mM acetate: 1.718 mol/mol, 57.3 % of the carbon, 85.9 % of the two
    # that the route allows. Causey et al. 2003, PNAS 100:825 (read in print).
    from tests.studies.pathways import ACETATE

    measured = Fraction(572, 333)
    found = fx.compare(
        fx.read_model_text(ACETATE), "acetate", "glucose", ["base"], measured=measured
    )
    stairs = found.abilities[0].staircase

    assert float(stairs.reached) == pytest.approx(1.718, abs=5e-4)
    assert float(stairs.reached * stairs.carbon) == pytest.approx(0.573, abs=5e-4)
    assert float(measured / found.abilities[0].final.moles) == pytest.approx(0.859, abs=5e-4)
    assert stairs.steps[-1].lost == 2 - measured
    assert stairs.adds_up
