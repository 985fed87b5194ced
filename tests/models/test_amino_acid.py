"""models/amino-acid.flux against numbers worked out by hand.

All answers are per mol of glucose in a run in amounts; PO stands at 1.3. No published set of
measured rates with its errors was at hand for such a producer, so none is reproduced; the yield
of 0.75 is a published number (a textbook's page 77, read in print).
"""

from __future__ import annotations

import pytest

ONE = {"glucose in": 1}


def test_lysine_from_glucose_is_limited_by_nadph(ask):
    # One lysine: 2 pyruvate (1 glucose; the CO2 that pyc takes lysA gives back) and 4 NADPH: gdh,
    # ask, dap, ddh. The pentose way gives 12 NADPH a glucose: 1 / (1 + 4/12) = 3/4.
    run = ask("amino-acid", ONE, maximise="lysine")
    assert run.optimum == pytest.approx(3 / 4, abs=1e-9)
    # Electrons left: 24 - 0.75 x 28 = 3 = 0.75 O2; carbon left: 6 - 4.5 = 1.5 CO2.
    assert run.rate("oxygen") == pytest.approx(0.75, abs=1e-9)
    assert run.rate("CO2") == pytest.approx(1.5, abs=1e-9)


def test_atp_left_at_most_lysine(ask):
    # Per lysine G = 4/3 glucose, zwf 2, so T3P 2/3 from the pentoses and pfk 2/3: -2/3; gap 2; pyk
    # 2 - 4/3 = 2/3; pyc -1, ask -1; 2 NADH x 1.3: 2.6. Times 0.75: 1.95.
    run = ask("amino-acid", ONE | {"lysine out": 0.75}, maximise="upkeep")
    assert run.optimum == pytest.approx(1.95, abs=1e-9)


def test_the_succinylase_costs_one_more_atp(ask):
    # The succinyl group comes back as succinate and needs 1 ATP to be lent again: 2.6 - 1 a lysine.
    run = ask("amino-acid", ONE | {"lysine out": 0.75}, variant="succinylase", maximise="upkeep")
    assert run.optimum == pytest.approx(0.75 * 1.6, abs=1e-9)


def test_a_free_transhydrogenase_reaches_the_electron_limit(ask):
    # The 2 NADH of gap become NADPH, the other 2 come from 1/6 glucose: 1 / (1 + 1/6) = 6/7, the
    # 24/28 of the electrons.
    # ATP: pfk -5/6, gap 2, pyk 2 - 7/6, pyc -1, ask -1: exactly 0 is left.
    run = ask("amino-acid", ONE, variant="transhydrogenase", maximise="lysine")
    assert run.optimum == pytest.approx(6 / 7, abs=1e-9)
    assert run.flux("upkeep") == pytest.approx(0, abs=1e-9)


@pytest.mark.parametrize("variant", ["gapN", "malic-enzyme"])
def test_nadph_that_costs_atp_gives_a_yield_between(ask, variant):
    # n NADH become NADPH, each for 1 ATP (gapN loses that of gap, the circle that of pyc); a NADH
    # not turned gives 1.3. ATP a lysine: 2 (gap) + 2 - G (pyk) - pfk - 2 + 1.3 (2 - n) - n, where
    # G + pfk = 2: 2.6 - 2.3 n = 0, n = 26/23. NADPH from pentoses 4 - n = 66/23, 12 a glucose:
    # G = 1 + 66/276 = 57/46.
    run = ask("amino-acid", ONE, variant=variant, maximise="lysine")
    assert run.optimum == pytest.approx(46 / 57, abs=1e-9)


def test_full_respiration(ask):
    # Substrate level: pfk -1, gap 2, pyk 2 - 1 (pts), scs 2: 4. Quinol: NADH 2 gap, 2 pdh, 2 kgd,
    # 2 mdh; NADPH 2 icd; 2 sdh: 12 x 1.3.
    run = ask("amino-acid", ONE, maximise="upkeep")
    assert run.optimum == pytest.approx(4 + 12 * 1.3, abs=1e-9)
    assert run.rate("oxygen") == pytest.approx(6, abs=1e-9)


def test_acetate_without_the_citric_acid_cycle(ask):
    # 2 ATP of glycolysis, 2 of ack, 4 NADH x 1.3; 2 O2.
    run = ask("amino-acid", ONE | {"acetate out": 2}, maximise="upkeep")
    assert run.optimum == pytest.approx(2 + 2 + 4 * 1.3, abs=1e-9)
    assert run.rate("oxygen") == pytest.approx(2, abs=1e-9)


def test_lactate_when_there_is_no_oxygen(ask):
    # NADH 2 into lactate 2: 2 ATP, and no lysine, whose NADH would have nowhere to go.
    run = ask("amino-acid", ONE | {"oxygen in": 0}, maximise="upkeep")
    assert run.optimum == pytest.approx(2, abs=1e-9)
