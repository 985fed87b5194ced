"""Ranges of fluxes and functionals, and the least total flux."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from scipy.optimize import linprog

from fluxnet.ground.errors import MisuseError
from fluxnet.network.model import Direction, Quantity, QuantityKind
from fluxnet.reading.model import read_model
from fluxnet.solving.alter import with_row
from fluxnet.solving.build import build_problem, quantity_row
from fluxnet.solving.least_flux import least_total_flux
from fluxnet.solving.linear import Outcome, Programme, worst_violation
from fluxnet.solving.problem import Problem, Row, RowKind
from fluxnet.solving.ranges import find_ranges

TWO_WAYS = """
substrate glucose, oxygen
product ethanol, lactate
exchange CO2
biomass X
carrier ATP, NADH
inside pyruvate, NADPH
glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
adh : pyruvate + NADH <-> ethanol + CO2
ldh : pyruvate + NADH <-> lactate
burn : pyruvate + 2.5 oxygen -> 3 CO2 + 5 ATP
oxphos : NADH + 0.5 oxygen -> 1.4 ATP
growth : 0.2 glucose + 2 ATP -> X + 0.2 CO2
upkeep : ATP -> nothing
circle : NADH -> NADPH
back : NADPH -> NADH
"""
LIMITS = ("glucose <= 10", "oxygen <= 6", "upkeep >= 1")


def by_linprog(problem, cost):
    """The least value of cost @ v by another programme."""
    low, high, matrix = problem.row_low, problem.row_high, problem.matrix
    equal = low == high
    up, down = ~equal & np.isfinite(high), ~equal & np.isfinite(low)
    answer = linprog(
        cost,
        np.vstack([matrix[up], -matrix[down]]),
        np.concatenate([high[up], -low[down]]),
        matrix[equal],
        low[equal],
        bounds=list(zip(problem.column_low, problem.column_high, strict=True)),
    )
    return {0: answer.fun, 3: -np.inf}[answer.status]


def test_ranges_are_those_of_another_solver(make_network):
    problem = build_problem(make_network(TWO_WAYS, LIMITS)).problem
    ranges = find_ranges(problem)
    assert ranges.outcome is Outcome.OPTIMAL
    assert ranges.residual < 1e-9
    for j, unit in enumerate(np.eye(len(problem.columns))):
        assert ranges.low[j] == pytest.approx(by_linprog(problem, unit), abs=1e-8)
        assert ranges.high[j] == pytest.approx(-by_linprog(problem, -unit), abs=1e-8)
    assert ranges.high[problem.column("circle")] == np.inf
    assert ranges.low[problem.column("upkeep")] == 1


def test_a_functional_has_a_range_of_its_own(make_network):
    network = make_network(TWO_WAYS, LIMITS)
    built = build_problem(network)
    rows = np.vstack(
        [
            quantity_row(network, built.stoichiometry, quantity, {})
            for quantity in (
                Quantity(QuantityKind.RATE, "CO2", Direction.OUT),
                Quantity(QuantityKind.MU),
                Quantity(QuantityKind.SURPLUS, "ATP"),
            )
        ]
    )
    ranges = find_ranges(built.problem, rows)
    for k, row in enumerate(rows):
        assert ranges.low[k] == pytest.approx(by_linprog(built.problem, row), abs=1e-8)
        assert ranges.high[k] == pytest.approx(-by_linprog(built.problem, -row), abs=1e-8)
    assert [ranges.low[2], ranges.high[2]] == pytest.approx([0, 0], abs=1e-12)


def test_a_flux_that_is_fixed_has_a_range_of_one_point(make_network):
    problem = build_problem(
        make_network(TWO_WAYS, ("glucose = 10", "oxygen <= 0", "mu <= 0", "upkeep = 20"))
    ).problem
    ranges = find_ranges(problem)
    j = problem.column("glycolysis")
    assert ranges.low[j] == pytest.approx(10)
    assert ranges.high[j] == pytest.approx(10)


def test_the_ranges_of_what_cannot_be_are_empty(make_network):
    problem = build_problem(make_network(TWO_WAYS, ("glucose <= 0", "upkeep >= 1"))).problem
    ranges = find_ranges(problem)
    assert ranges.outcome is Outcome.INFEASIBLE
    assert (ranges.low == np.inf).all()
    assert (ranges.high == -np.inf).all()


def test_functionals_must_fit_the_columns(make_network):
    problem = build_problem(make_network(TWO_WAYS, LIMITS)).problem
    with pytest.raises(MisuseError):
        find_ranges(problem, np.ones((1, 2)))
    with pytest.raises(MisuseError):
        find_ranges(problem, np.full((1, len(problem.columns)), np.nan))


def test_ranges_at_an_optimum_lie_inside_the_whole_ranges_and_reach_it(make_network):
    network = make_network(TWO_WAYS, LIMITS)
    built = build_problem(network)
    mu = quantity_row(network, built.stoichiometry, Quantity(QuantityKind.MU), {})
    best = Programme(built.problem).maximise(mu).objective
    held = with_row(built.problem, Row(RowKind.LIMIT, "aim"), mu, best, best)
    whole, inner = find_ranges(built.problem), find_ranges(held)
    assert (inner.low >= whole.low - 1e-8).all()
    assert (inner.high <= whole.high + 1e-8).all()
    j = built.problem.column("growth")
    assert inner.low[j] == pytest.approx(whole.high[j], rel=1e-9)


def test_the_least_total_flux_meets_all_bounds_and_runs_in_no_circle(make_network):
    network = make_network(TWO_WAYS, LIMITS)
    built = build_problem(network)
    problem = built.problem
    mu = quantity_row(network, built.stoichiometry, Quantity(QuantityKind.MU), {})
    best = Programme(problem).maximise(mu).objective
    held = with_row(problem, Row(RowKind.LIMIT, "aim"), mu, best, best)
    fluxes = least_total_flux(held)
    assert worst_violation(held, fluxes) < 1e-9
    assert mu @ fluxes == pytest.approx(best)
    assert min(fluxes[problem.column("circle")], fluxes[problem.column("back")]) == 0
    size = len(problem.columns)
    # Against another programme: |v| written as t with -t <= v <= t.
    both = np.eye(size)
    equal = held.row_low == held.row_high
    up, down = ~equal & np.isfinite(held.row_high), ~equal & np.isfinite(held.row_low)
    nothing = np.zeros((1, size))
    answer = linprog(
        np.concatenate([np.zeros(size), np.ones(size)]),
        np.vstack(
            [
                np.hstack([held.matrix[up], np.repeat(nothing, up.sum(), 0)]),
                np.hstack([-held.matrix[down], np.repeat(nothing, down.sum(), 0)]),
                np.hstack([both, -both]),
                np.hstack([-both, -both]),
            ]
        ),
        np.concatenate([held.row_high[up], -held.row_low[down], np.zeros(2 * size)]),
        np.hstack([held.matrix[equal], np.repeat(nothing, equal.sum(), 0)]),
        held.row_low[equal],
        bounds=[*zip(held.column_low, held.column_high, strict=True), *[(0, None)] * size],
    )
    assert np.abs(fluxes).sum() == pytest.approx(answer.fun, rel=1e-8)


def test_there_is_no_least_total_where_nothing_is_feasible(make_network):
    problem = build_problem(make_network(TWO_WAYS, ("glucose <= 0", "upkeep >= 1"))).problem
    with pytest.raises(MisuseError):
        least_total_flux(problem)


def test_the_ranges_of_sixty_reactions_are_those_of_another_solver():
    folder = Path(__file__).resolve().parent.parent / "benchmarks"
    network = read_model(folder / "sixty.flux").network
    problem = build_problem(network).problem
    ranges = find_ranges(problem)
    assert len(problem.columns) == 60
    assert ranges.residual < 1e-9
    for j, unit in enumerate(np.eye(60)):
        for mine, other in (
            (ranges.low[j], by_linprog(problem, unit)),
            (ranges.high[j], -by_linprog(problem, -unit)),
        ):
            assert mine == other or abs(mine - other) < 1e-8, problem.columns[j]
    assert np.isinf(ranges.high[[problem.column("sdh"), problem.column("frd")]]).all()


def test_what_equalities_fix_one_after_another_is_not_asked_of_the_solver(monkeypatch) -> None:
    # in -> a -> b -> out with the uptake held, and a circle beside it that nothing holds.
    count, asked = 300, []
    matrix = np.zeros((count, count + 2))
    for i in range(count):
        matrix[i, i], matrix[i, i + 1] = 1.0, -1.0
    low, high = np.zeros(count + 2), np.full(count + 2, np.inf)
    low[0] = high[0] = 2.0
    high[-1] = 7.0
    problem = Problem(
        tuple(f"r{j}" for j in range(count + 2)),
        tuple(Row(RowKind.BALANCE, f"s{i}") for i in range(count)),
        matrix, np.zeros(count), np.zeros(count), low, high,
    )  # fmt: skip
    run = Programme.run
    monkeypatch.setattr(Programme, "run", lambda self: asked.append(1) or run(self))
    ranges = find_ranges(problem)

    assert ranges.low[:-1].tolist() == ranges.high[:-1].tolist()
    assert ranges.high[count] == 2.0
    assert (ranges.low[-1], ranges.high[-1]) == (0.0, 7.0)
    assert len(asked) <= 3
