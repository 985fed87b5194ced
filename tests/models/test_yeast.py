"""models/yeast.flux against numbers worked out by hand.

Published yields are in tests/published/test_measured_sets.py.

All answers are per mol of glucose (or per C-mol of X) in a run in amounts, so that upkeep is
free. PO and K_X stand at 1.0 and 1.45.
"""

from __future__ import annotations

import pytest


def test_ethanol_fermentation_gives_two_atp_and_two_ethanol(ask):
    # hxk -1, pfk -1, lower 2 x 2: 2 ATP; two pyruvate, each one ethanol. Glycerol costs ATP, and
    # the oxidation to succinate leaves five NADH that only glycerol could take.
    run = ask("yeast", {"glucose in": 1}, variant="anaerobic", maximise="upkeep")
    assert run.optimum == pytest.approx(2, abs=1e-9)
    assert run.rate("ethanol") == pytest.approx(2, abs=1e-9)


def test_full_respiration_gives_sixteen_atp_for_six_oxygen(ask):
    # substrate level: hxk -1, pfk -1, lower 4, kgd 2: 4 ATP. Quinol: 2 NADH of lower, 2 of pdh,
    # 2 of idh, 2 of kgd, 2 of mdh, 2 of sdh: 12, each PO = 1 ATP and half an O2.
    run = ask("yeast", {"glucose in": 1}, maximise="upkeep")
    assert run.optimum == pytest.approx(4 + 12 * 1.0, abs=1e-9)
    assert run.rate("oxygen") == pytest.approx(6, abs=1e-9)


def test_ethanol_yield_is_the_electron_limit(ask):
    # 24 electrons of glucose over 12 of ethanol; the pathway makes two as well.
    run = ask("yeast", {"glucose in": 1}, maximise="ethanol")
    assert run.optimum == pytest.approx(24 / 12, abs=1e-9)


def test_glycerol_is_limited_by_atp_without_air(ask):
    # Glucose to two glycerol costs 2 ATP; glucose to pyruvate, ethanol or succinate gives 2. So
    # half of the glucose at most becomes glycerol: 1 mol, not the 24/14 of the electrons.
    run = ask("yeast", {"glucose in": 1}, variant="anaerobic", maximise="glycerol")
    assert run.optimum == pytest.approx(1, abs=1e-9)


def test_glycerol_is_limited_by_the_cytosol_with_air(ask):
    # Every glycerol takes one NADH of the cytosol; a triose that goes down gives one, and the
    # NADH of the mitochondria cannot come out: half of the trioses each way, 1 glycerol.
    run = ask("yeast", {"glucose in": 1}, maximise="glycerol")
    assert run.optimum == pytest.approx(1, abs=1e-9)


def test_growth_without_air_makes_at_least_this_glycerol(ask):
    # CO2 of one C-mol of X: acetyl-cyt 0.04 by pdc; 2-oxoglutarate 0.03 (pyc -1, pdh +1, idh +1);
    # NADPH 0.19 less 0.04 from acs = 0.15, two a CO2: 0.075. Together 0.145.
    # Electrons: 4 x 1.145 = 4.58 go in, 4.2 stay in X: 0.38 = 0.19 NADH = 0.19 glycerol.
    run = ask(
        "yeast", {"X out": 1, "succinate out": 0}, variant="anaerobic", minimise="glycerol"
    )
    assert run.optimum == pytest.approx(0.19, abs=1e-9)


def test_succinate_by_its_reductive_branch_could_take_the_place_of_glycerol(ask):
    # A triose gives 1 NADH on its way to pyruvate; pyc, mdh backwards and frd take 2: succinate
    # is a sink of one NADH as glycerol is.
    run = ask("yeast", {"X out": 1, "glycerol out": 0}, variant="anaerobic", minimise="succinate")
    assert run.optimum == pytest.approx(0.19, abs=1e-9)


def test_acetate_is_limited_by_the_need_for_nadph(ask):
    # Each acetate by ald leaves one NADPH, which only growth spends: 0.19 less the 0.04 of acs.
    run = ask("yeast", {"X out": 1}, maximise="acetate")
    assert run.optimum == pytest.approx(0.15, abs=1e-9)
    # The mitochondrial enzyme leaves NADH, which the air takes: two acetate a glucose.
    run = ask("yeast", {"glucose in": 1}, variant="acetate-nadh", maximise="acetate")
    assert run.optimum == pytest.approx(2, abs=1e-9)


def test_most_biomass_without_air(ask):
    # Per C-mol X: G6P 0.12833 to growth and 0.025 through the pentoses (3 G6P -> 3 CO2 + 6 NADPH +
    # 2 G6P + T3P, so 0.15 NADPH cost 0.025 G6P and leave 0.025 T3P); r through pfk. Trioses:
    # 2 r + 0.025 = 0.19 glycerol + 0.04 acs + 2 x 0.03 2-oxoglutarate + e ethanol.
    # ATP: -(0.15333 + r) - r + 2 (0.10 + e) - 2 x 0.04 - 0.03 - 1.45 = 0, so e = 1.77833,
    # r = 1.02167 and glucose = 1.175.
    rates = {"glucose in": 1, "succinate out": 0}
    run = ask("yeast", rates, variant="anaerobic", maximise="X")
    assert run.optimum == pytest.approx(1 / 1.175, abs=1e-9)
    assert run.rate("ethanol") == pytest.approx(1.778333333333 / 1.175, abs=1e-6)


def test_most_biomass_with_air(ask):
    # As above without glycerol and ethanol, with o pyruvate burnt: r = (0.075 + o) / 2; quinol:
    # cytosol 0.10 + o + 0.03, mitochondria 0.06 + 4 o, sdh o: 0.19 + 6 o, each 1 ATP.
    # ATP: -(0.15333 + r) - r + 2 (0.10 + o) + o - 0.11 - 1.45 + 0.19 + 6 o = 0: o = 0.174792,
    # glucose = 0.15333 + r = 0.278229: 0.599 C-mol X per C-mol glucose.
    run = ask("yeast", {"glucose in": 1}, maximise="X")
    assert run.optimum == pytest.approx(1 / 0.27822916667, rel=1e-9)


XYLOSE = {"glucose in": 0, "xylose in": 1}


@pytest.mark.parametrize("aeration", ["", " * anaerobic"], ids=["air", "no-air"])
def test_xylose_by_the_isomerase_ferments_like_glucose(ask, aeration):
    # 5/3 triose of a xylose, each with a NADH for its ethanol; ATP xks -1, pfk -2/3, lower 10/3.
    variant = "xylose-isomerase" + aeration
    run = ask("yeast", XYLOSE, variant=variant, maximise="ethanol")
    assert run.optimum == pytest.approx(5 / 3, abs=1e-9)
    made = XYLOSE | {"ethanol out": 5 / 3, "CO2 out": 5 / 3}
    run = ask("yeast", made, variant=variant, maximise="upkeep")
    assert run.optimum == pytest.approx(5 / 3, abs=1e-9)


def test_xylose_by_the_reductase_leaves_a_nadh_that_air_can_take(ask):
    # The NADPH of xr is half a turn of zwf, a CO2: 5 - 1/2 = 3 x 3/2 trioses; the NADH of xdh takes
    # half an oxygen.
    run = ask("yeast", XYLOSE, variant="xylose-reductase", maximise="ethanol")
    assert run.optimum == pytest.approx(3 / 2, abs=1e-9)
    assert run.rate("oxygen") == pytest.approx(1 / 2, abs=1e-9)


def test_without_air_that_nadh_costs_a_triose(ask):
    # It ends in glycerol, or in succinate, which takes one NADH more than pyruvate made as well:
    # 3/2 - 1 trioses are left for ethanol.
    variant = "xylose-reductase * anaerobic"
    run = ask("yeast", XYLOSE, variant=variant, maximise="ethanol")
    assert run.optimum == pytest.approx(1 / 2, abs=1e-9)
    sinks = run.rate("glycerol") + run.rate("succinate")
    assert sinks == pytest.approx(1, abs=1e-9)


def test_xylose_respired(ask):
    # isomerase: substrate level 5/3 and 5/3 of kgd, quinol 10 x PO = 1. The reductase turns two
    # electrons from NADPH to NADH, and the CO2 of zwf was never a triose: 3/2 x 2 - 1/2 - 1 + 3/2.
    for variant, level in (("xylose-isomerase", 10 / 3), ("xylose-reductase", 3)):
        run = ask("yeast", XYLOSE, variant=variant, maximise="upkeep")
        assert run.optimum == pytest.approx(level + 10, abs=1e-9)
