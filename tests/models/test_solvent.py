"""models/solvent.flux against numbers worked out by hand.

Published balances are in tests/published/test_measured_sets.py.

All answers are per mol of glucose in a run in amounts.
"""

from __future__ import annotations

import pytest

ONE = {"glucose in": 1}


def test_acetate_gives_four_hydrogen_and_four_atp(ask):
    # pts, pfk -1, gap 2, pyk 1: 2 ATP; two acetate 2 more. 2 NADH and 2 Fd: 4 hydrogen.
    run = ask("solvent", ONE, maximise="hydrogen")
    assert run.optimum == pytest.approx(4, abs=1e-9)
    run = ask("solvent", ONE, maximise="upkeep")
    assert run.optimum == pytest.approx(4, abs=1e-9)


def test_butyrate_gives_two_hydrogen_and_three_atp(ask):
    # hbd 1 and bcd 2 NADH less the Fd that comes out: 2 of the 4 electron pairs; buk 1 ATP on top
    # of 2.
    run = ask("solvent", ONE | {"butyrate out": 1, "formate out": 0}, maximise="upkeep")
    assert run.optimum == pytest.approx(3, abs=1e-9)
    assert run.rate("hydrogen") == pytest.approx(2, abs=1e-9)


def test_butanol_takes_every_electron(ask):
    # hbd and bcd take 2 pairs, bdh 2: all four, so no hydrogen; 24/24 by electrons. 2 ATP.
    run = ask("solvent", ONE, maximise="butanol")
    assert run.optimum == pytest.approx(1, abs=1e-9)
    assert run.rate("hydrogen") == pytest.approx(0, abs=1e-9)
    assert run.flux("upkeep") == pytest.approx(2, abs=1e-9)


def test_acetone_leaves_all_electrons_as_hydrogen(ask):
    # glucose -> acetone + 3 CO2 + 4 H2 (24 = 16 + 8 electrons); the acid that lends its place to
    # the coenzyme comes back with 1 ATP: 3.
    run = ask("solvent", ONE | {"formate out": 0}, maximise="acetone")
    assert run.optimum == pytest.approx(1, abs=1e-9)
    assert run.rate("hydrogen") == pytest.approx(4, abs=1e-9)
    assert run.rate("CO2") == pytest.approx(3, abs=1e-9)
    assert run.flux("upkeep") == pytest.approx(3, abs=1e-9)


def test_without_hydrogen_formate_keeps_three_atp(ask):
    # pfl makes no Fd: the 2 NADH of gap go into one butyrate, or one ethanol beside one acetate.
    run = ask("solvent", ONE, variant="no-hydrogen", maximise="upkeep")
    assert run.optimum == pytest.approx(3, abs=1e-9)


def test_without_hydrogen_and_formate_every_mixture_gives_two_atp(ask):
    # With 2 acetyl-CoA and 4 pairs: acetate a, butyrate b, ethanol e, butanol l; a + 2 b + e + 2 l
    # = 2 and 2 b + 2 e + 4 l = 4 leave a = b = 0; lactate takes a pair and its Fd away together.
    rates = ONE | {"formate out": 0, "X out": 0}
    for way in ("maximise", "minimise"):
        run = ask("solvent", rates, variant="no-hydrogen", **{way: "upkeep"})
        assert run.optimum == pytest.approx(2, abs=1e-9)


def test_most_biomass(ask):
    # Per C-mol X: G6P 0.13667, acetyl-CoA 0.1; f through pfk, G = 0.13667 + f. PEP 2 f = G + pyk,
    # pyruvate 2 f, acetate 2 f - 0.1. ATP: -f + 2 f + (2 f - G) + 2 f - 0.1 - 2.3 = 0:
    # f = 0.634167, G = 0.770833 = 37/48.
    run = ask("solvent", ONE, maximise="X")
    assert run.optimum == pytest.approx(48 / 37, rel=1e-9)


def test_acids_fed_are_reduced_to_solvents(ask):
    # One butyrate to butanol takes 1 ATP (buk backwards) and 2 NADH; a glucose to acetate gives
    # 4 ATP and 4 pairs: two butyrate.
    rates = ONE | {"lactate in": 0, "acetate out": 2}
    run = ask("solvent", rates, variant="acids-fed", maximise="butanol")
    assert run.optimum == pytest.approx(2, abs=1e-9)
    assert run.rate("butyrate") == pytest.approx(-2, abs=1e-9)
