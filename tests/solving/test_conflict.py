"""Conflicts: irreducible, told in words, and with the least change that ends them."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from fluxnet.network.model import Basis
from fluxnet.solving.alter import hard_part
from fluxnet.solving.build import build_problem
from fluxnet.solving.conflict import find_conflict, least_change
from fluxnet.solving.linear import Programme
from fluxnet.solving.members import MemberKind, list_members
from fluxnet.solving.problem import Problem
from fluxnet.solving.violations import find_violations

CELL = """
substrate glucose, oxygen
product ethanol, lactate
exchange CO2
biomass X
carrier ATP, NADH
inside pyruvate
glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
adh : pyruvate + NADH <-> ethanol + CO2
ldh : pyruvate + NADH -> lactate
burn : pyruvate -> 3 CO2 + 5 NADH
oxphos : NADH + 0.5 oxygen -> 1.5 ATP
growth : 0.2 glucose + 2 ATP -> X + 0.2 CO2
upkeep : ATP -> nothing
"""


def only(problem: Problem, members) -> Problem:
    """The problem with no bounds but those of some members."""
    rows = {i for m in members for i in m.rows}
    columns = {m.column for m in members}

    def kept(bounds, places, absent):
        return np.array([b if k in places else absent for k, b in enumerate(bounds)])

    return replace(
        problem,
        row_low=kept(problem.row_low, rows, -np.inf),
        row_high=kept(problem.row_high, rows, np.inf),
        column_low=kept(problem.column_low, columns, -np.inf),
        column_high=kept(problem.column_high, columns, np.inf),
    )


def assert_irreducible(problem, conflict):
    assert conflict.members
    assert not Programme(only(problem, conflict.members)).is_feasible()
    for member in conflict.members:
        rest = [m for m in conflict.members if m is not member]
        assert Programme(only(problem, rest)).is_feasible(), member.words


def test_a_conflict_names_what_cannot_hold_together_in_words(make_network, make_run):
    network = make_network(CELL, ("oxygen <= 0", "upkeep >= 1"))
    run = make_run(network, "glucose in 1 ± 0.05", "ethanol out 2.1 ± 0.1", "lactate out 0.7 ± 0.1")
    problem = build_problem(network, run, within=2).problem
    conflict = find_conflict(problem, unit="mmol/g/h")
    assert_irreducible(problem, conflict)
    assert conflict.verified
    assert not conflict.is_hard
    words = [m.words for m in conflict.given]
    assert words == [
        "glucose in, measured 1 ± 0.05 mmol/g/h",
        "ethanol out, measured 2.1 ± 0.1 mmol/g/h",
        "lactate out, measured 0.7 ± 0.1 mmol/g/h",
    ]
    rest = {m.words for m in conflict.members} - set(words)
    assert "balance of pyruvate" in rest
    assert "reaction growth runs one way" in rest
    kinds = [list(MemberKind).index(m.kind) for m in conflict.members]
    assert kinds == sorted(kinds)


def test_no_given_member_can_be_left_out_while_the_network_stands(make_network, make_run):
    network = make_network(CELL, ("oxygen <= 1", "upkeep >= 1", "CO2 out <= 3"))
    run = make_run(network, "glucose in 1 ± 0.05", "mu 0.1 ± 0.002", "ethanol out 1 ± 0.1")
    problem = build_problem(network, run, within=2).problem
    conflict = find_conflict(problem)
    assert_irreducible(problem, conflict)
    making = [m for m in list_members(problem) if not m.kind.is_given]
    for member in conflict.given:
        rest = [m for m in conflict.given if m is not member]
        assert Programme(only(problem, making + rest)).is_feasible(), member.words


def test_limits_that_contradict_each_other_need_no_measurement(make_network, make_run):
    network = make_network(CELL, ("glucose <= 1", "upkeep >= 100", "oxygen <= 2"))
    run = make_run(network, "glucose in 5 ± 0.1", "ethanol out 50 ± 0.1")
    problem = build_problem(network, run, within=2).problem
    conflict = find_conflict(problem)
    assert conflict.is_hard
    assert_irreducible(problem, conflict)
    assert {m.kind for m in conflict.given} == {MemberKind.LIMIT}
    change = least_change(problem)
    assert not change.possible
    assert (change.changes, change.total, change.common_k) == ((), None, None)


def test_an_exact_value_is_hard_and_told_as_exact(make_network, make_run):
    network = make_network(CELL, ("glucose <= 1", "upkeep >= 0"))
    run = make_run(network, "glucose in 2 ± 0", "ethanol out 1 ± 0.1")
    problem = build_problem(network, run, within=2).problem
    conflict = find_conflict(problem, unit="mmol/g/h")
    assert conflict.is_hard
    assert [m.words for m in conflict.members] == [
        "glucose in, exactly 2 mmol/g/h", "limit glucose <= 1",
    ]


def test_a_feasible_problem_has_no_conflict(make_network, make_run):
    network = make_network(CELL, ("oxygen <= 5",))
    run = make_run(network, "glucose in 1 ± 0.05")
    problem = build_problem(network, run, within=2).problem
    assert find_conflict(problem).members == ()
    change = least_change(problem)
    assert change.total == pytest.approx(0, abs=1e-12)
    assert change.common_k == pytest.approx(0, abs=1e-9)


def test_the_direction_of_a_reaction_can_be_what_is_in_the_way(make_network, make_run):
    network = make_network(CELL, ("growth <= 0",))
    run = make_run(network, "ethanol out 1 ± 0.1", "glucose in 0 ± 0", "lactate out 0 ± 0.1")
    problem = build_problem(network, run, within=2).problem
    conflict = find_conflict(problem)
    assert_irreducible(problem, conflict)
    assert "reaction ldh runs one way" in [m.words for m in conflict.members]


def test_a_measured_ratio_is_one_member(make_network, make_run):
    network = make_network(CELL, ("oxygen <= 0", "growth <= 0"))
    run = make_run(network, "CO2 out / glucose in 5 ± 0.1", "glucose in 1 ± 0.1")
    problem = build_problem(network, run, within=2).problem
    conflict = find_conflict(problem, unit="mmol/g/h")
    assert_irreducible(problem, conflict)
    assert "CO2 out / glucose in, measured 5 ± 0.1" in [m.words for m in conflict.given]


def test_the_least_change_is_the_hand_worked_one(make_network, make_run):
    # Without air and growth: ethanol + lactate = 2 glucose. Measured 2 x 1 against 2.6.
    network = make_network(CELL, ("oxygen <= 0", "growth <= 0"))
    run = make_run(network, "glucose in 1 ± 0.1", "ethanol out 2 ± 0.1", "lactate out 0.6 ± 0.2")
    problem = build_problem(network, run, within=2).problem
    change = least_change(problem)
    # min of the squares of (2 dg - de - dl = 0.6) in sds: gains 0.2, 0.1, 0.2 per sd.
    gains = np.array([0.2, -0.1, -0.2])
    in_sd = 0.6 * gains / (gains @ gains)
    assert [c.in_sd for c in change.changes] == pytest.approx(in_sd, rel=1e-8)
    assert change.total == pytest.approx(0.36 / 0.09, rel=1e-8)
    assert change.common_k == pytest.approx(0.6 / 0.5, rel=1e-8)
    assert [c.name for c in change.changes] == ["glucose in", "ethanol out", "lactate out"]
    assert change.changes[0].measured == 1
    assert change.changes[0].changed == pytest.approx(1 + 0.1 * in_sd[0])


def test_limits_do_not_give_way_in_the_least_change(make_network, make_run):
    network = make_network(CELL, ("oxygen <= 0", "growth <= 0", "lactate <= 0.4"))
    run = make_run(network, "glucose in 1 ± 0.1", "lactate out 0.6 ± 0.1", "ethanol out 1.6 ± 0")
    problem = build_problem(network, run, within=2).problem
    change = least_change(problem)
    assert {c.name: c.changed for c in change.changes} == pytest.approx(
        {"glucose in": 1.0, "lactate out": 0.4}, rel=1e-9
    )
    assert change.total == pytest.approx(4)
    assert change.common_k == pytest.approx(2)


def test_all_measured_values_hold_within_the_common_k_and_no_less(make_network, make_run):
    network = make_network(CELL, ("oxygen <= 1", "upkeep >= 1", "CO2 out / oxygen = 1.2 ± 0.05"))
    run = make_run(
        network, "glucose in 1 ± 0.05", "mu 0.1 ± 0.002", "ethanol out 1 ± 0.1",
        "oxygen in 2 ± 0.1",
    )
    problem = build_problem(network, run).problem
    k = least_change(problem).common_k
    assert k > 1
    for factor, holds in ((1 + 1e-6, True), (1 - 1e-4, False)):
        inside = build_problem(network, run, within=k * factor).problem
        assert Programme(inside).is_feasible() is holds


def test_a_changed_ratio_is_told_as_a_ratio_at_the_denominator_found(make_network, make_run):
    network = make_network(CELL, ("oxygen <= 0", "growth <= 0", "lactate <= 0"))
    run = make_run(network, "CO2 out / glucose in 2.5 ± 0.1", "glucose in 3 ± 0.2")
    change = least_change(build_problem(network, run).problem)
    ratio = change.changes[0]
    assert (ratio.measured, ratio.changed) == pytest.approx((2.5, 2.0))
    assert ratio.in_sd == pytest.approx(-5)
    assert change.total == pytest.approx(25)  # glucose itself need not move
    assert change.common_k == pytest.approx(5, rel=1e-6)


def test_a_measured_value_beyond_its_own_limit_is_named(make_network, make_run):
    network = make_network(CELL, ("oxygen <= 1", "CO2 in <= 1", "upkeep >= 1"))
    run = make_run(network, "oxygen in 2 ± 0.1", "CO2 out 3 ± 0.1", "upkeep 0.9 ± 0.1")
    found = find_violations(build_problem(network, run).problem)
    assert [(v.limit.name, v.measured.name) for v in found] == [
        ("limit oxygen <= 1", "oxygen in")
    ]
    assert found[0].in_sd == pytest.approx(10)


def test_the_hard_part_keeps_exact_values_only(make_network, make_run):
    network = make_network(CELL, ("upkeep = 1.2 ± 0.3",))
    run = make_run(network, "glucose in 1 ± 0.05", "oxygen in 2 ± 0")
    built = build_problem(network, run, within=2)
    hard = hard_part(built.problem)
    bounded = [
        row.name
        for row, low in zip(hard.rows, hard.row_low, strict=True)
        if row.value is not None and np.isfinite(low)
    ]
    assert bounded == ["oxygen in"]


def test_a_ratio_changes_by_as_much_where_rates_count_carbon(make_network, make_run):
    limits = ("oxygen <= 0", "growth <= 0", "lactate <= 0")
    answers = []
    for basis, rate in (
        (Basis.SPECIFIC, "glucose in 3 ± 0.2"),
        (Basis.CARBON, "glucose in 18 ± 1.2"),
    ):
        network = make_network(CELL, limits, basis=basis)
        run = make_run(network, "ethanol out / glucose in 2.5 ± 0.1", rate)
        change = least_change(build_problem(network, run).problem)
        answers.append((change.total, change.common_k, change.changes[0].changed))
    assert answers[0] == pytest.approx(answers[1], rel=1e-6)
    assert answers[0] == pytest.approx((25.0, 5.0, 2.0), rel=1e-6)


def test_ratios_that_hold_need_no_change(make_network, make_run):
    network = make_network(CELL, ("oxygen <= 5",))
    run = make_run(network, "CO2 out / glucose in 0.7 ± 0.1", "glucose in 1 ± 0.1")
    change = least_change(build_problem(network, run).problem)
    assert change.total == pytest.approx(0, abs=1e-9)
    assert change.common_k == pytest.approx(0, abs=1e-6)


def test_the_least_change_is_found_however_small_the_sds_are(make_network, make_run):
    # ethanol + lactate = 2 glucose, measured 4 against 2: (2, 2, 1) per sd, squared 9.
    network = make_network(CELL, ("oxygen <= 0", "growth <= 0"))
    for sd in (1.0, 1e-6, 1e-9):
        measured = ("glucose in 1 ± {0}", "ethanol out 3 ± {1}", "lactate out 1 ± {0}")
        run = make_run(network, *(text.format(sd, 2 * sd) for text in measured))
        change = least_change(build_problem(network, run).problem)
        assert change.total * sd**2 == pytest.approx(4 / 9, rel=1e-6)
        assert [c.changed for c in change.changes] == pytest.approx([13 / 9, 19 / 9, 7 / 9])


def test_a_measured_ratio_over_a_rate_that_must_be_zero_is_no_fault(make_network):
    # Without respiration CO2 / oxygen has no value: its row only says that there is no CO2.
    network = make_network(
        CELL, ("oxphos <= 0", "CO2 / oxygen = 1.2 ± 0.2", "upkeep = 2 ± 0.1", "glucose <= 0.5")
    )
    for within in (None, 2.0):
        change = least_change(build_problem(network, within=within).problem)
        assert change.possible
        (ratio, upkeep) = change.changes
        assert ratio.changed == pytest.approx(1.2)
        assert upkeep.changed == pytest.approx(1.0)  # two ATP a glucose, all of it to lactate


def test_a_measured_ratio_beyond_a_limit_on_it_is_named(make_network, make_run):
    network = make_network(CELL, ("CO2 out / oxygen <= 1.1", "lactate / glucose >= 0.5"))
    run = make_run(network, "CO2 out / oxygen in 1.3 ± 0.05", "lactate out / glucose in 0.45 ± 0.1")
    found = find_violations(build_problem(network, run).problem)
    assert [v.limit.name for v in found] == ["limit CO2 out / oxygen <= 1.1"]
    assert found[0].in_sd == pytest.approx(4)
    assert found[0].value == 1.3


def test_violations_are_the_same_with_an_aim_and_without(make_network, make_run):
    network = make_network(CELL, ("oxygen <= 1", "CO2 out / oxygen <= 1.1"))
    run = make_run(network, "oxygen in 2 ± 0.1", "CO2 out / oxygen in 1.3 ± 0.05")
    problems = [build_problem(network, run, within=k).problem for k in (None, 2.0)]
    told = [[(v.limit.name, v.in_sd) for v in find_violations(p)] for p in problems]
    assert told[0] == told[1]
    assert len(told[0]) == 2
