"""What must hold of every linear programme and every conflict, whatever the network."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from scipy.optimize import linprog

from fluxnet.exact.programme import at_bounds, excludes, is_endless, least_value, meets
from fluxnet.solving.alter import with_row
from fluxnet.solving.conflict import find_conflict
from fluxnet.solving.forms import as_fraction
from fluxnet.solving.least_flux import least_total_flux
from fluxnet.solving.linear import Outcome, Programme, worst_violation
from fluxnet.solving.prices import find_prices
from fluxnet.solving.problem import Problem, Row, RowKind
from fluxnet.solving.proof import exact_programme, prove_outcome
from fluxnet.solving.ranges import find_ranges

INF = np.inf
COEFFICIENTS = [-2.0, -1.0, -0.5, 0.0, 0.0, 0.0, 0.5, 1.0, 2.0]


@st.composite
def problems(draw: st.DrawFn, capped: bool = True) -> Problem:
    """Balances over a few fluxes, with limits and measured rows on some functionals."""
    columns = draw(st.integers(3, 8))
    balances = draw(st.integers(1, 4))
    others = draw(st.integers(1, 4))
    line = st.lists(st.sampled_from(COEFFICIENTS), min_size=columns, max_size=columns)
    matrix = np.array([draw(line) for _ in range(balances + others)])
    low, high = np.zeros(balances + others), np.zeros(balances + others)
    rows = [Row(RowKind.BALANCE, f"s{i}") for i in range(balances)]
    for i in range(balances, balances + others):
        middle = draw(st.integers(-8, 8))
        half = draw(st.sampled_from([0.25, 1.0, 4.0]))
        measured = draw(st.booleans())
        kind = RowKind.MEASUREMENT if measured else RowKind.LIMIT
        rows.append(
            Row(kind, f"q{i}", None, float(middle) if measured else None,
                half / 2 if measured else None)
        )
        low[i], high[i] = middle - half, middle + half
    both_ways = np.array(draw(st.lists(st.booleans(), min_size=columns, max_size=columns)))
    end = 10.0 if capped else INF
    return Problem(
        tuple(f"r{j}" for j in range(columns)),
        tuple(rows), matrix, low, high,
        np.where(both_ways, -end, 0.0), np.full(columns, end),
    )


def by_linprog(problem: Problem, cost, method: str):
    equal = problem.row_low == problem.row_high
    up, down = ~equal & np.isfinite(problem.row_high), ~equal & np.isfinite(problem.row_low)
    return linprog(
        cost,
        np.vstack([problem.matrix[up], -problem.matrix[down]]),
        np.concatenate([problem.row_high[up], -problem.row_low[down]]),
        problem.matrix[equal],
        problem.row_low[equal],
        bounds=list(zip(problem.column_low, problem.column_high, strict=True)),
        method=method,
    )


def costs_for(problem: Problem) -> np.ndarray:
    return np.array([1.0 + (j * 7) % 5 for j in range(len(problem.columns))])


@settings(deadline=None, derandomize=True, max_examples=150)
@given(problems())
def test_simplex_and_interior_point_agree_with_the_warm_programme(problem):
    cost = costs_for(problem)
    solution = Programme(problem).minimise(cost)
    for method in ("highs-ds", "highs-ipm"):
        answer = by_linprog(problem, cost, method)
        assert (answer.status == 2) is (solution.outcome is Outcome.INFEASIBLE)
        if answer.status == 0:
            assert solution.objective == pytest.approx(answer.fun, abs=1e-6)
    if solution.outcome is Outcome.OPTIMAL:
        assert solution.residual < 1e-9
        slack = solution.row_prices @ problem.matrix + solution.column_prices - cost
        assert np.abs(slack).max() < 1e-9


@settings(deadline=None, derandomize=True, max_examples=100)
@given(problems())
def test_the_prices_of_the_bounds_add_up_to_the_optimum(problem):
    cost = costs_for(problem)
    solution = Programme(problem).minimise(cost)
    assume(solution.outcome is Outcome.OPTIMAL)
    y, d = solution.row_prices, solution.column_prices
    worth = np.where(y > 0, problem.row_low, problem.row_high) @ y
    worth += np.where(d > 0, problem.column_low, problem.column_high) @ d
    assert worth == pytest.approx(solution.objective, abs=1e-7)


@settings(deadline=None, derandomize=True, max_examples=100)
@given(problems(), st.lists(st.sampled_from([-1.0, 0.0, 1.0, 3.0]), min_size=8, max_size=8))
def test_no_flux_lies_outside_its_range(problem, weights):
    ranges = find_ranges(problem)
    cost = np.array(weights[: len(problem.columns)])
    solution = Programme(problem).maximise(cost)
    assert (ranges.outcome is Outcome.INFEASIBLE) is (solution.outcome is Outcome.INFEASIBLE)
    if solution.outcome is Outcome.OPTIMAL:
        assert ranges.residual < 1e-9
        assert (solution.fluxes >= ranges.low - 1e-7).all()
        assert (solution.fluxes <= ranges.high + 1e-7).all()
        assert (least_total_flux(problem) >= ranges.low - 1e-7).all()


@settings(deadline=None, derandomize=True, max_examples=60)
@given(problems())
def test_both_ends_of_a_range_are_reached_and_cannot_be_passed(problem):
    ranges = find_ranges(problem)
    assume(ranges.outcome is Outcome.OPTIMAL)
    size = len(problem.columns)
    for j in range(size):
        for end, sign in ((ranges.low[j], -1.0), (ranges.high[j], 1.0)):
            beyond = end + sign * 1e-4
            for low, high, there in (
                (end - 1e-7, end + 1e-7, True),
                (min(beyond, sign * INF), max(beyond, sign * INF), False),
            ):
                held = with_row(problem, Row(RowKind.LIMIT, "end"), np.eye(size)[j], low, high)
                assert Programme(held).is_feasible() is there


@settings(deadline=None, derandomize=True, max_examples=100)
@given(problems(capped=False), st.integers(0, 7), st.sampled_from([1e-6, 1e-3, 0.5, 7.0, 1e3, 1e6]))
def test_scaling_a_reaction_divides_its_flux(problem, which, factor):
    j = which % len(problem.columns)
    matrix = problem.matrix.copy()
    matrix[:, j] *= factor
    scaled = replace(problem, matrix=matrix)
    cost = costs_for(problem)
    changed = cost.copy()
    changed[j] *= factor
    one, other = Programme(problem).minimise(cost), Programme(scaled).minimise(changed)
    assert one.outcome is other.outcome
    if one.outcome is Outcome.OPTIMAL:
        assert other.objective == pytest.approx(one.objective, abs=1e-6)
        back = other.fluxes.copy()
        back[j] *= factor
        assert worst_violation(problem, back) < 1e-7
    before, after = find_ranges(problem), find_ranges(scaled)
    factors = np.ones(len(problem.columns))
    factors[j] = factor
    assert after.low * factors == pytest.approx(before.low, rel=1e-6, abs=1e-6)
    assert after.high * factors == pytest.approx(before.high, rel=1e-6, abs=1e-6)


DECADES = st.lists(st.integers(-6, 6), min_size=8, max_size=8)


@settings(deadline=None, derandomize=True, max_examples=100)
@given(problems(), DECADES, DECADES)
def test_coefficients_of_1e_minus_6_beside_1e6_change_no_answer(problem, for_rows, for_columns):
    rows = np.array([10.0**k for k in for_rows])[: len(problem.rows)]
    columns = np.array([10.0**k for k in for_columns])[: len(problem.columns)]
    wild = replace(
        problem,
        matrix=problem.matrix * rows[:, None] * columns,
        row_low=problem.row_low * rows,
        row_high=problem.row_high * rows,
        column_low=problem.column_low / columns,
        column_high=problem.column_high / columns,
    )
    cost = costs_for(problem)
    tame, other = Programme(problem).minimise(cost), Programme(wild).minimise(cost * columns)
    assert tame.outcome is other.outcome
    if tame.outcome is Outcome.OPTIMAL:
        assert other.objective == pytest.approx(tame.objective, abs=1e-6)
        assert worst_violation(problem, other.fluxes * columns) < 1e-7


@settings(deadline=None, derandomize=True, max_examples=200)
@given(problems(capped=False))
def test_every_conflict_is_irreducible_and_infeasible(problem):
    programme = Programme(problem)
    conflict = find_conflict(problem)
    assert bool(conflict.members) is not programme.is_feasible()
    assume(conflict.members)
    assert conflict.verified
    for left_out in (None, *conflict.members):
        kept = [m for m in conflict.members if m is not left_out]
        rows = {i for m in kept for i in m.rows}
        columns = {m.column for m in kept}
        only = replace(
            problem,
            row_low=np.array([b if i in rows else -INF for i, b in enumerate(problem.row_low)]),
            row_high=np.array([b if i in rows else INF for i, b in enumerate(problem.row_high)]),
            column_low=np.array(
                [b if j in columns else -INF for j, b in enumerate(problem.column_low)]
            ),
        )
        # Another programme is the judge, from a cold start.
        answer = by_linprog(only, np.zeros(len(problem.columns)), "highs-ds")
        assert answer.status == (2 if left_out is None else 0)
    if conflict.is_hard:
        assert not any(m.kind.is_measured for m in conflict.members)


def prove(problem: Problem, cost: np.ndarray):
    """The outcome of a warm programme with what exact arithmetic says of it."""
    programme = Programme(problem)
    solution = programme.minimise(cost)
    costs = {j: as_fraction(c) for j, c in enumerate(cost.tolist()) if c}
    exact = exact_programme(problem, costs=costs)
    return solution, prove_outcome(exact, programme.places(), solution.outcome)


@settings(deadline=None, derandomize=True, max_examples=200)
@given(problems(capped=False))
def test_every_outcome_is_proven_exactly_by_prices_weights_or_a_ray(problem):
    solution, proven = prove(problem, costs_for(problem))
    found, programme = proven.solution, proven.programme

    assert proven.proof.verified
    assert proven.proof.gap == 0
    match solution.outcome:
        case Outcome.OPTIMAL:
            assert meets(programme, found.fluxes)
            assert least_value(programme, found.prices) == found.objective
            assert solution.objective == pytest.approx(float(found.objective), abs=1e-6)
        case Outcome.INFEASIBLE:
            assert excludes(programme, found.weights)
        case _:
            assert meets(programme, found.fluxes)
            assert is_endless(programme, found.ray)


@settings(deadline=None, derandomize=True, max_examples=150)
@given(problems(), st.integers(0, 3))
def test_redundant_rows_change_no_proof_and_no_value(problem, place):
    cost = costs_for(problem)
    solution, proven = prove(problem, cost)
    k = place % len(problem.rows)
    twice = with_row(
        problem, Row(RowKind.LIMIT, "again"), 2 * problem.matrix[k],
        2 * problem.row_low[k], 2 * problem.row_high[k],
    )
    again, other = prove(twice, cost)

    assert other.proof.verified
    assert again.outcome is solution.outcome
    if solution.outcome is Outcome.OPTIMAL:
        assert other.solution.objective == proven.solution.objective


@settings(deadline=None, derandomize=True, max_examples=150)
@given(problems(), DECADES, DECADES)
def test_coefficients_far_apart_are_proven_all_the_same(problem, for_rows, for_columns):
    rows = np.array([10.0**k for k in for_rows])[: len(problem.rows)]
    columns = np.array([10.0**k for k in for_columns])[: len(problem.columns)]
    wild = replace(
        problem,
        matrix=problem.matrix * rows[:, None] * columns,
        row_low=problem.row_low * rows,
        row_high=problem.row_high * rows,
        column_low=problem.column_low / columns,
        column_high=problem.column_high / columns,
    )
    cost = costs_for(problem)
    (_, tame), (solution, other) = prove(problem, cost), prove(wild, cost * columns)

    assert other.proof.verified
    if solution.outcome is Outcome.OPTIMAL:
        assert float(other.solution.objective) == pytest.approx(
            float(tame.solution.objective), rel=1e-9, abs=1e-9
        )


STEP = 2.0**-20


@settings(deadline=None, derandomize=True, max_examples=150)
@given(problems(), st.integers(0, 7))
def test_the_ends_of_a_price_are_what_one_bit_more_and_one_bit_less_change(problem, place):
    # A programme's value is straight on both sides of its corners, and a corner is met exactly.
    cost = costs_for(problem)
    solution, proven = prove(problem, cost)
    assume(solution.outcome is Outcome.OPTIMAL)
    i = place % len(problem.rows)
    (price,) = find_prices(problem, cost, proven, [i])
    met = at_bounds(proven.programme, proven.solution.fluxes)
    at_low, at_high = met[len(problem.columns) + i]
    changes = []
    for step in (STEP, -STEP):
        low, high = problem.row_low.copy(), problem.row_high.copy()
        if at_low:
            low[i] += step
        if at_high:
            high[i] += step
        moved, _ = prove(replace(problem, row_low=low, row_high=high), cost)
        changes.append((moved.objective - solution.objective) / step)

    assert price.low <= price.value <= price.high
    assert changes[0] == pytest.approx(price.high, abs=1e-3)
    assert changes[1] == pytest.approx(price.low, abs=1e-3)
