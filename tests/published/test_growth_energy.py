"""ATP per dry weight (Verduyn 1991, Bauchop 1960, Stouthamer 1973): see growth-energy.flux.

The ledger tells how much ATP growth spends; the price of ATP at the most growth tells the
same the other way round: one mole of it is worth Y_ATP grams.
"""

from __future__ import annotations

from pathlib import Path

import pytest

MODEL = Path(__file__).parent / "growth-energy.flux"

PUBLISHED = [
    ("base", 10.5, 95.2),
    ("bauchop-least", 8.3, 120.5),
    ("bauchop-most", 12.6, 79.4),
    ("monomers", 31.9, 31.3),
    ("acetate", 26.4, 37.9),
    ("salts", 28.8, 34.7),
    ("utilis", 20.8, 48.08),
    ("cerevisiae", 28.1, 35.59),
    ("cerevisiae-measured", 16.0, 62.50),
]


def atp_per_gram(run) -> float:
    spent = -sum(x.net for x in run.ledger if (x.carrier, x.compartment) == ("ATP", "anabolism"))
    return spent / run.optimum


@pytest.mark.parametrize(("variant", "grams", "atp"), PUBLISHED, ids=[e[0] for e in PUBLISHED])
def test_growth_spends_the_published_atp_per_gram(ask, variant, grams, atp):
    run = ask(MODEL, variant=variant, maximise="mu")
    digits = len(str(atp).partition(".")[2])

    # As many digits as were printed.
    assert atp_per_gram(run) == pytest.approx(atp, abs=0.501 * 10.0**-digits)
    assert run.proof.verified


@pytest.mark.parametrize(("variant", "grams", "atp"), PUBLISHED, ids=[e[0] for e in PUBLISHED])
def test_one_mole_of_atp_is_worth_the_published_grams(ask, variant, grams, atp):
    run = ask(MODEL, variant=variant, maximise="mu")
    (price,) = (p for p in run.prices if p.species == "ATP")

    # mu [1/h] per ATP [mmol/g/h] is g/mmol; the mole's mass is rounded to five digits.
    assert 1000 * price.price == pytest.approx(grams, rel=1e-4)
    assert price.price_low == price.price == price.price_high


def test_theory_asks_for_a_third_more_of_utilis_and_leaves_27_mmol_of_a_measured_need(ask):
    need = {
        name: atp_per_gram(ask(MODEL, variant=name, maximise="mu"))
        for name in ("utilis", "cerevisiae", "cerevisiae-measured")
    }

    assert need["utilis"] / need["cerevisiae"] == pytest.approx(1.351, abs=0.0005)
    assert need["cerevisiae-measured"] - need["cerevisiae"] == pytest.approx(26.91, abs=0.005)
