"""models/mixed-acid.flux against numbers worked out by hand.

A published balance is in tests/published/test_measured_sets.py.

All answers are per mol of glucose in a run in amounts. PN and PC stand at 0.6 and 0.8.
"""

from __future__ import annotations

import pytest

ONE = {"glucose in": 1}


def test_lactate_alone_gives_two_atp(ask):
    # pts pays with a PEP; pfk -1, gap 2, the other PEP by pyk 1: 2 ATP, 2 lactate.
    run = ask("mixed-acid", ONE | {"lactate out": 2}, variant="anaerobic", maximise="upkeep")
    assert run.optimum == pytest.approx(2, abs=1e-9)


def test_most_atp_without_air_is_three(ask):
    # Two acetyl-CoA by pfl: one acetate (1 ATP), one ethanol (takes the 2 NADH), on top of 2.
    # Sinking the 2 NADH in succinate costs 2 ATP of PEP and gives back PN = 0.6: worse.
    run = ask("mixed-acid", ONE, variant="anaerobic", maximise="upkeep")
    assert run.optimum == pytest.approx(3, abs=1e-9)
    assert run.rate("acetate") == pytest.approx(1, abs=1e-9)
    assert run.rate("ethanol") == pytest.approx(1, abs=1e-9)


def test_full_respiration(ask):
    # Substrate level 2 + kgd 2 = 4; NADH 2 + pdh 2 + icd 2 + kgd 2 + mdh 2 = 10, each PN;
    # quinol 10 + sdh 2 = 12, each PC and half an O2: 4 + 6 + 9.6.
    run = ask("mixed-acid", ONE, maximise="upkeep")
    assert run.optimum == pytest.approx(4 + 10 * 0.6 + 12 * 0.8, abs=1e-9)
    assert run.rate("oxygen") == pytest.approx(6, abs=1e-9)


def test_succinate_is_limited_by_the_pep_that_uptake_takes(ask):
    # Two PEP, one goes into pts; oxaloacetate comes only from PEP: 1.
    run = ask("mixed-acid", ONE, variant="anaerobic", maximise="succinate")
    assert run.optimum == pytest.approx(1, abs=1e-9)


def test_succinate_needs_acetate_beside_it_when_uptake_pays_with_atp(ask):
    # A glucose to 2 succinate is 2 NADH short; a glucose to 2 acetate by pdh leaves 4: two to one.
    run = ask("mixed-acid", ONE, variant="anaerobic * glucokinase", maximise="succinate")
    assert run.optimum == pytest.approx(4 / 3, abs=1e-9)
    assert run.rate("acetate") == pytest.approx(2 / 3, abs=1e-9)


def test_butanediol_without_air_needs_ethanol_beside_it(ask):
    # A glucose to butanediol leaves 1 NADH; a glucose to 2 ethanol by pfl takes 2 net. So two to
    # one: 2/3 butanediol and 2/3 ethanol; the electron limit would be 24/22.
    run = ask("mixed-acid", ONE, variant="diol", maximise="2,3-butanediol")
    assert run.optimum == pytest.approx(2 / 3, abs=1e-9)
    assert run.rate("ethanol") == pytest.approx(2 / 3, abs=1e-9)


def test_butanediol_with_air_is_limited_by_pyruvate(ask):
    # Two pyruvate make one; the NADH left goes to half an O2: 2 ATP + PN + PC.
    run = ask("mixed-acid", ONE, maximise="2,3-butanediol")
    assert run.optimum == pytest.approx(1, abs=1e-9)
    assert run.rate("oxygen") == pytest.approx(0.5, abs=1e-9)
    assert run.flux("upkeep") == pytest.approx(2 + 0.6 + 0.8, abs=1e-9)


def test_hydrogen_comes_from_formate_alone(ask):
    # One formate a pyruvate: 2, though the electrons would make 12.
    run = ask("mixed-acid", ONE, variant="anaerobic", maximise="hydrogen")
    assert run.optimum == pytest.approx(2, abs=1e-9)


def test_most_biomass_without_air(ask):
    # Per C-mol X: G6P 0.12 to growth, f through pfk, G = 0.12 + f; PEP 2 f = G (pts) + 0.08 (ppc)
    # + pyk; pyruvate 2 f - 0.08 = 0.04 (citrate) + a acetate + e ethanol, all by pfl.
    # NADH: 2 f + 0.04 (icd) - 0.14 (growth) - 2 e = 0, so e = f - 0.05 and a = f - 0.07.
    # ATP: -f + 2 f + (2 f - G - 0.08) + a - 2.1 = 3 f - 2.37 = 0: f = 0.79, G = 0.91.
    run = ask("mixed-acid", ONE, variant="anaerobic", maximise="X")
    assert run.optimum == pytest.approx(1 / 0.91, abs=1e-9)
    assert run.rate("ethanol") == pytest.approx(0.74 / 0.91, abs=1e-9)
    assert run.rate("acetate") == pytest.approx(0.72 / 0.91, abs=1e-9)


def test_a_rate_that_is_zero_is_not_told_as_reversed(ask):
    # the solver leaves some -1e-15 of succinate, which is no uptake
    rates = {"glucose in": 100, "lactate out": 150, "acetate out": 20, "ethanol out": 21}
    run = ask("mixed-acid", rates, variant="anaerobic", sd="5 %")
    assert not any(r.reversed_ for r in run.rates)
