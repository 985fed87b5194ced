"""models/methylotroph.flux against numbers worked out by hand.

All answers are per mol of methanol in a run in amounts; PN, PB and PC stand at 0.6, 0.3 and 0.7: a
NADH is worth 1.6 ATP, a pair of cytochromes 0.7. No published set of measured rates with its
errors was at hand for such a bacterium, so none is reproduced.
"""

from __future__ import annotations

import pytest

ONE = {"methanol in": 1}
PHB = "polyhydroxybutyrate"


@pytest.mark.parametrize("cycle", ["base", "RuMP"])
def test_full_respiration(ask, cycle):
    # cytochrome 0.7, NADPH by sth and NADH 2 x 1.6
    run = ask("methylotroph", ONE, variant=cycle, maximise="upkeep")
    assert run.optimum == pytest.approx(3.9, abs=1e-9)
    assert run.rate("oxygen") == pytest.approx(1.5, abs=1e-9)


def test_full_respiration_where_methanol_reduces_nad(ask):
    run = ask("methylotroph", ONE, variant="nad-dehydrogenase", maximise="upkeep")
    assert run.optimum == pytest.approx(3 * 1.6, abs=1e-9)


def test_oxidation_to_formate(ask):
    run = ask("methylotroph", ONE | {"formate out": 1}, maximise="upkeep")
    assert run.optimum == pytest.approx(0.7 + 1.6, abs=1e-9)
    assert run.rate("oxygen") == pytest.approx(1, abs=1e-9)


def test_storage_by_the_serine_cycle_is_short_of_atp(ask):
    # An acetyl-CoA: one methanol as far as formate and back (NADPH 0, cytochrome 1), a CO2, NADH 2
    # (hpr, mdh), ATP 3 (ftl, gck, mtk). The polymer: twice that and a NADPH; NADH and NADPH 5 of
    # 5/2 methanol burnt. Cytochromes 9/2 x 0.7 = 3.15 of 6 ATP; the rest at 3.9 a methanol.
    run = ask("methylotroph", ONE, maximise=PHB)
    assert run.optimum == pytest.approx(1 / (2 + 5 / 2 + 2.85 / 3.9), abs=1e-9)


def test_storage_by_the_serine_cycle_where_methanol_reduces_nad(ask):
    # NADH 2 of the 4 come from the methanol that is built in, the rest and the NADPH from one
    # burnt; all 6 ATP at 4.8.
    run = ask("methylotroph", ONE, variant="nad-dehydrogenase", maximise=PHB)
    assert run.optimum == pytest.approx(1 / (2 + 1 + 6 / 4.8), abs=1e-9)


@pytest.mark.parametrize("variant", ["RuMP", "RuMP * nad-dehydrogenase"])
def test_storage_by_the_monophosphate_cycle_is_short_of_carbon(ask, variant):
    # An acetyl-CoA: three formaldehyde, of which pdh gives off one as CO2. The NADPH: one more.
    run = ask("methylotroph", ONE, variant=variant, maximise=PHB)
    assert run.optimum == pytest.approx(1 / 7, abs=1e-9)


def test_the_monophosphate_cycle_leaves_atp_over(ask):
    # Of 7 methanol: cytochrome 7 x 0.7; ATP 2 x (-1 pfk + 1 gap + 1 pyk); NADH 4 and one of fdh.
    run = ask("methylotroph", ONE | {f"{PHB} out": 1 / 7}, variant="RuMP", maximise="upkeep")
    assert run.optimum == pytest.approx((4.9 + 2 + 5 * 1.6) / 7, abs=1e-6)
