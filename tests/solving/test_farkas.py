"""The exact multipliers of a conflict."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest

from fluxnet.solving.build import build_problem
from fluxnet.solving.conflict import find_conflict
from fluxnet.solving.farkas import find_contradiction
from fluxnet.solving.problem import Problem, Row, RowKind
from fluxnet.solving.proof import exact_programme, exact_sums

CELL = """
substrate glucose, oxygen
product ethanol, lactate
exchange CO2
biomass X
carrier ATP, NADH
inside pyruvate
glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
adh : pyruvate + NADH -> ethanol + CO2
ldh : pyruvate + NADH -> lactate
burn : pyruvate -> 3 CO2 + 5 NADH
oxphos : NADH + 0.5 oxygen -> 1.5 ATP
growth : 0.2 glucose + 2 ATP -> X + 0.2 CO2
upkeep : ATP -> nothing
"""


def prove(built, within=2.0):
    conflict = find_conflict(built.problem)
    exact = exact_programme(built.problem, exact_sums(built, ())[0], within=within)
    return find_contradiction(built.problem, exact, conflict.members)



def test_the_multipliers_are_the_hand_worked_ones(make_network, make_run):
    # 2 ATP a glucose without air: upkeep of 5 asks for 2.5 glucose, 2 are there
    network = make_network(CELL, ("oxygen <= 0", "glucose <= 2", "upkeep >= 5"))
    found = prove(build_problem(network, within=2.0))
    assert found.gap > 0
    scale = next(-w.factor for w in found.weights if w.member.name == "limit upkeep >= 5")
    by_name = {w.member.words: (w.factor / scale, w.end) for w in found.weights}
    assert by_name["limit upkeep >= 5"] == (-1, 5)
    assert by_name["limit glucose <= 2"] == (2, 2)
    assert by_name["balance of ATP"][0] == -1
    assert found.gap / scale == 1


def test_exact_values_that_contradict_one_another(make_network, make_run):
    network = make_network(CELL, ("oxygen <= 0", "growth <= 0"))
    run = make_run(network, "glucose in 1 ± 0", "ethanol out 1.5 ± 0", "lactate out 0.6 ± 0")
    found = prove(build_problem(network, run, within=2.0))
    scale = next(abs(w.factor) for w in found.weights if w.member.name == "ethanol out")
    # ethanol and lactate 2.1, of 2 that the glucose makes: a tenth too much, exactly
    assert found.gap / scale == Fraction(1, 10)


def test_a_gap_below_the_last_digit_of_floats_is_found_as_it_is(make_network, make_run):
    network = make_network(CELL, ("oxygen <= 0", "growth <= 0", "upkeep <= 1000000"))
    run = make_run(network, "glucose in 1 ± 0", "ethanol out 1.0001 ± 0", "lactate out 1 ± 0")
    found = prove(build_problem(network, run, within=2.0))
    scale = next(abs(w.factor) for w in found.weights if w.member.name == "lactate out")
    assert found.gap / scale == Fraction(1, 10000)


def test_a_ratio_counts_with_the_end_that_is_in_the_way(make_network, make_run):
    network = make_network(CELL, ("oxygen <= 0", "growth <= 0"))
    run = make_run(network, "CO2 out / glucose in 5 ± 0.1", "glucose in 1 ± 0.1")
    found = prove(build_problem(network, run, within=2.0))
    (ratio,) = [w for w in found.weights if w.member.name == "CO2 out / glucose in"]
    assert ratio.factor < 0  # the lower of its two rows: CO2 - 4.8 glucose >= 0
    assert ratio.end == 0


@pytest.mark.parametrize("size", [1e-6, 1e-3, 1.0, 1e3, 1e6])
def test_coefficients_far_apart_are_weighed_exactly(size):
    # in -> size a; a -> out: out = size in, asked for is twice as much
    rows = (
        Row(RowKind.BALANCE, "a"),
        Row(RowKind.LIMIT, "limit in <= 1"),
        Row(RowKind.LIMIT, "limit out >= 2 size"),
    )
    problem = Problem(
        ("in", "out"), rows, np.array([[size, -1.0], [1.0, 0.0], [0.0, 1.0]]),
        np.array([0.0, -np.inf, 2 * size]), np.array([0.0, 1.0, np.inf]),
        np.zeros(2), np.full(2, np.inf),
    )  # fmt: skip
    conflict = find_conflict(problem)
    assert conflict.verified
    assert len(conflict.members) == 3
    found = find_contradiction(problem, exact_programme(problem), conflict.members)
    price = Fraction(repr(size))
    by_name = {w.member.name: w.factor for w in found.weights}
    assert by_name["limit in <= 1"] / -by_name["limit out >= 2 size"] == price


def test_a_chain_of_large_and_small_coefficients_is_weighed_exactly():
    # 1e-6 s0 a step up, 1e6 a step down, six steps: s_k = 1e-6 ... exactly 1 in the end
    factors = [Fraction(1, 10**6), Fraction(10**6)] * 3
    count = len(factors) + 1
    matrix = np.zeros((count + 1, count))
    for k, factor in enumerate(factors):
        matrix[k, k], matrix[k, k + 1] = float(factor), -1.0
    matrix[count - 1, 0] = 1.0
    matrix[count, count - 1] = 1.0
    rows = tuple(Row(RowKind.BALANCE, f"s{k}") for k in range(count - 1))
    rows += (Row(RowKind.LIMIT, "first <= 1"), Row(RowKind.LIMIT, "last >= 1.5"))
    problem = Problem(
        tuple(f"v{k}" for k in range(count)), rows, matrix,
        np.array([0.0] * (count - 1) + [-np.inf, 1.5]),
        np.array([0.0] * (count - 1) + [1.0, np.inf]),
        np.full(count, -np.inf), np.full(count, np.inf),
    )  # fmt: skip
    conflict = find_conflict(problem)
    found = find_contradiction(problem, exact_programme(problem), conflict.members)
    weights = {w.member.name: w for w in found.weights}
    assert len(weights) == count + 1
    assert found.gap / abs(weights["last >= 1.5"].factor) == Fraction(1, 2)


def test_members_that_can_hold_together_prove_nothing(make_network):
    network = make_network(CELL, ("oxygen <= 0", "glucose <= 2", "upkeep >= 5"))
    built = build_problem(network, within=2.0)
    members = find_conflict(built.problem).members
    exact = exact_programme(built.problem, exact_sums(built, ())[0])
    for member in members:
        rest = [m for m in members if m is not member]
        assert find_contradiction(built.problem, exact, rest) is None
