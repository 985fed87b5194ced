"""models/hydroxypropionate.flux against numbers worked out by hand.

All answers are per mol of the substrate named, in a run in amounts; PN and PC stand at 0.6 and
0.8. No published set of measured rates with its errors was at hand for such a producer, so none
is reproduced.

In the comments p stands for 3-hydroxypropionate, z for zwf (2 NADPH and a CO2 each), T for the
trioses that gap turns over (an ATP, net of its kinases, and a NADH each).
"""

from __future__ import annotations

import pytest

P = "3-hydroxypropionate"
SUBSTRATES = ("glucose", "xylose", "glycerol")
# A way's NADPH for each p beside the NADH it spends.
NADPH = {"by-malonyl": 2, "by-aspartate": 1, "by-alanine": 1}


def only(substrate: str) -> dict[str, float]:
    return {f"{name} in": float(name == substrate) for name in SUBSTRATES}


def test_full_respiration(ask):
    # Substrate level: glk, pfk -2, gap and pyk 4, kgd 2: 4. NADH gap 2, pdh 2, kgd 2, mdh 2, from
    # icd by sth 2: 10 x 1.4. Quinol 2 x 0.8.
    run = ask("hydroxypropionate", only("glucose"), maximise="upkeep")
    assert run.optimum == pytest.approx(4 + 14 + 1.6, abs=1e-9)
    assert run.rate("oxygen") == pytest.approx(6, abs=1e-9)


def test_glycerol_respired(ask):
    # glpK -1 and a quinol 0.8; then half of a glucose without its two kinases: 0.5 x 21.6. gldA in
    # place of glpK makes NADH: 0.6 more.
    run = ask("hydroxypropionate", only("glycerol"), maximise="upkeep")
    assert run.optimum == pytest.approx(-1 + 1.4 + 0.5 * 21.6, abs=1e-9)


@pytest.mark.parametrize(("way", "nadph"), NADPH.items(), ids=list(NADPH))
def test_in_air_nadph_limits_three_of_the_ways(ask, way, nadph):
    # p takes half a glucose and its NADPH a twelfth each: 1 / (1/2 + n/12), 1.5 and 12/7.
    run = ask("hydroxypropionate", only("glucose"), variant=way, maximise=P)
    assert run.optimum == pytest.approx(1 / (1 / 2 + nadph / 12), abs=1e-9)


def test_in_air_atp_limits_the_way_by_glycerol(ask):
    # T to glycerol costs the NADH that the last step returns, and the ATP of the kinase: -1 a p. A
    # burnt glucose pays for 19.6: y = 2 / 21.6 of it is burnt, 2 (1 - y) = 49/27; 6 y of oxygen.
    run = ask("hydroxypropionate", only("glucose"), variant="by-glycerol", maximise=P)
    assert run.optimum == pytest.approx(49 / 27, abs=1e-9)
    assert run.rate("oxygen") == pytest.approx(6 * 2 / 21.6, abs=1e-9)


@pytest.mark.parametrize(("way", "nadph"), NADPH.items(), ids=list(NADPH))
def test_without_air_half_of_the_acetyl_becomes_ethanol(ask, way, nadph):
    # Carbon 6 = z + 3 T, where each T ends as p or, by pfl, as ethanol e and formate; by malonyl
    # p comes of acetyl-CoA and leaves a formate as well. NADPH n p = 2 z. NADH T = 2 e, so that
    # e = p and 6 = (n/2 + 6) p: 6/7 and 12/13.
    run = ask("hydroxypropionate", only("glucose"), variant=f"{way} * anaerobic", maximise=P)
    assert run.optimum == pytest.approx(6 / (6 + nadph / 2), abs=1e-9)
    assert run.rate("ethanol") == pytest.approx(run.optimum, abs=1e-9)


def test_without_air_the_way_by_glycerol_wins(ask):
    # acetate + ethanol + 2 formate pay 3 ATP a glucose, the way costs 2: 0.6 glucose to p, 0.4 pay.
    variant = "by-glycerol * anaerobic"
    run = ask("hydroxypropionate", only("glucose"), variant=variant, maximise=P)
    assert run.optimum == pytest.approx(6 / 5, abs=1e-9)
    assert run.rate("acetate") == pytest.approx(0.4, abs=1e-9)


def test_glycerol_itself_without_air_gives_half_and_half(ask):
    # The NADH of the last step has one place to go: 1,3-propanediol.
    variant = "by-glycerol * anaerobic"
    run = ask("hydroxypropionate", only("glycerol"), variant=variant, maximise=P)
    assert run.optimum == pytest.approx(1 / 2, abs=1e-9)
    assert run.rate("1,3-propanediol") == pytest.approx(1 / 2, abs=1e-9)


def test_a_transhydrogenase_makes_the_way_by_alanine_a_lactate_fermentation(ask):
    # gap's NADH becomes the NADPH of msr: all of the sugar, 2 p, and no air. Glycolysis leaves
    # 2 ATP, the protons take 2 x 0.25.
    variant = "by-alanine * anaerobic * transhydrogenase"
    run = ask("hydroxypropionate", only("glucose"), variant=variant, maximise=P)
    assert run.optimum == pytest.approx(2, abs=1e-9)
    made = only("glucose") | {f"{P} out": 2}
    run = ask("hydroxypropionate", made, variant=variant, maximise="upkeep")
    assert run.optimum == pytest.approx(1.5, abs=1e-9)


def test_a_transhydrogenase_leaves_the_way_by_malonyl_short_of_atp(ask):
    # Per p: T 1, acc -1, protons 2 x 0.25: -0.5. A burnt glucose pays 19.6, and its 2 NADPH of icd
    # take the place of 2 from the protons: 20.1. So 1 - y = 20.1 y.
    variant = "by-malonyl * transhydrogenase"
    run = ask("hydroxypropionate", only("glucose"), variant=variant, maximise=P)
    assert run.optimum == pytest.approx(2 * 20.1 / 21.1, abs=1e-9)


@pytest.mark.parametrize("aeration", ["", " * anaerobic"], ids=["air", "no-air"])
@pytest.mark.parametrize("way", [*NADPH, "by-glycerol"])
def test_xylose_by_the_isomerase_is_worth_five_sixths_of_glucose(ask, way, aeration):
    # A kinase each, and 5 T of 3 pentoses with 2 more of pfk: an ATP a T, as from glucose.
    six, five = (
        ask("hydroxypropionate", only(sugar), variant=way + aeration, maximise=P).optimum
        for sugar in ("glucose", "xylose")
    )
    assert five == pytest.approx(5 / 6 * six, abs=1e-9)


@pytest.mark.parametrize(("way", "nadph"), NADPH.items(), ids=list(NADPH))
def test_xylose_by_the_reductase_costs_a_nadph_each(ask, way, nadph):
    # 5 = z + 3 p and 2 z = n p + 1: p = 4.5 / (3 + n/2), 9/8 and 9/7 in place of 5/4 and 10/7.
    run = ask("hydroxypropionate", only("xylose"), variant=f"{way} * reductase", maximise=P)
    assert run.optimum == pytest.approx(4.5 / (3 + nadph / 2), abs=1e-9)


def test_the_phosphoketolase_saves_the_carbon_of_acetyl_coa(ask):
    # acetate alone: xpk makes 3 of a glucose where pdh makes 2 (glk -1, ack 3: it pays for itself)
    run = ask("hydroxypropionate", only("glucose"), variant="phosphoketolase", maximise="acetate")
    assert run.optimum == pytest.approx(3, abs=1e-9)
    run = ask("hydroxypropionate", only("xylose"), variant="phosphoketolase", maximise="acetate")
    assert run.optimum == pytest.approx(5 / 2, abs=1e-9)
    run = ask("hydroxypropionate", only("glucose"), maximise="acetate")
    assert run.optimum == pytest.approx(2, abs=1e-9)
