"""The solver's answers in exact arithmetic: random problems, crowded corners, wrong answers."""

from __future__ import annotations

import random
from fractions import Fraction

import numpy as np
import pytest
from scipy.optimize import linprog

from fluxnet.exact.simplex import End, Place
from fluxnet.reading.model import read_model_text
from fluxnet.solving.build import Built, build_problem
from fluxnet.solving.linear import Outcome, Programme
from fluxnet.solving.prices import find_prices
from fluxnet.solving.problem import Problem, Row, RowKind
from fluxnet.solving.proof import (
    Proven,
    exact_programme,
    exact_rows,
    exact_sums,
    prove_infeasible,
    prove_outcome,
)
from fluxnet.solving.quantities import quantity_row
from fluxnet.studies.aims import Sense, read_aim

INF = np.inf


def network_like(dice: random.Random) -> Problem:
    """Balances of some species over reactions with two to four terms, uptake limited."""
    species, reactions = dice.randint(3, 8), dice.randint(6, 14)
    matrix = np.zeros((species + 2, reactions))
    for j in range(reactions):
        for i in dice.sample(range(species), min(species, dice.randint(1, 3))):
            matrix[i, j] = dice.choice([-2, -1, -1, 1, 1, 2, -0.333333, 0.1])
    matrix[species, 0] = matrix[species + 1, 1] = 1.0
    low, high = np.zeros(species + 2), np.zeros(species + 2)
    low[species:], high[species:] = -INF, (dice.choice([5.0, 7.5]), 3.3)
    kinds = [RowKind.BALANCE] * species + [RowKind.LIMIT] * 2
    return Problem(
        tuple(f"r{j}" for j in range(reactions)),
        tuple(Row(kind, str(i)) for i, kind in enumerate(kinds)),
        matrix, low, high,
        np.array([dice.choice([0.0, 0.0, -10.0]) for _ in range(reactions)]),
        np.full(reactions, 40.0),
    )  # fmt: skip


def prove(problem: Problem, cost: np.ndarray) -> tuple[float, Proven]:
    programme = Programme(problem)
    solution = programme.minimise(cost)
    costs = {j: Fraction(repr(float(c))) for j, c in enumerate(cost) if c}
    exact = exact_programme(problem, costs=costs)
    return solution.objective, prove_outcome(exact, programme.places(), solution.outcome)


@pytest.mark.parametrize("method", ["highs-ds", "highs-ipm"])
def test_200_random_networks_have_the_optimum_of_an_independent_solver(method: str) -> None:
    dice = random.Random(f"proven optima against {method}")
    used = 0
    for _ in range(200):
        problem = network_like(dice)
        cost = np.array([float(dice.randint(-3, 3)) for _ in problem.columns])
        _, proven = prove(problem, cost)
        equal = problem.row_low == problem.row_high
        answer = linprog(
            cost, problem.matrix[~equal], problem.row_high[~equal],
            problem.matrix[equal], problem.row_low[equal],
            bounds=list(zip(problem.column_low, problem.column_high, strict=True)), method=method,
        )  # fmt: skip
        assert answer.status == 0
        assert proven.proof.verified
        assert proven.solution.end is End.OPTIMAL
        assert float(proven.solution.objective) == pytest.approx(answer.fun, abs=1e-6)
        used += abs(answer.fun) > 1e-6
    assert used > 100


def corner() -> Problem:
    """Uptake of a splits into two ways; three bounds meet where two would hold the optimum."""
    return Problem(
        ("in", "out", "waste"),
        (Row(RowKind.BALANCE, "a"), Row(RowKind.LIMIT, "in"), Row(RowKind.LIMIT, "out")),
        np.array([[1.0, -1.0, -1.0], [1.0, 0.0, 0.0], [0.0, 1.0, 0.0]]),
        np.array([0.0, -INF, -INF]), np.array([0.0, 5.0, 5.0]),
        np.zeros(3), np.full(3, INF),
    )  # fmt: skip


def test_where_too_many_bounds_meet_prices_have_ranges() -> None:
    cost = np.array([0.0, -1.0, 0.0])
    _, proven = prove(corner(), cost)
    species, uptake, product = find_prices(corner(), cost, proven, [0, 1, 2])

    assert proven.solution.objective == -5
    # One more of the uptake goes to waste; one less costs its whole worth, and so on.
    assert (species.low, species.high) == (0.0, 1.0)
    assert (uptake.low, uptake.high) == (-1.0, 0.0)
    assert (product.low, product.high) == (-1.0, 0.0)


def test_a_price_that_the_solver_takes_for_zero_is_mended_by_exact_pivots() -> None:
    # ATP made by the 1e12 and spent by 1e-12: the float solver alone gives up.
    matrix = np.array(
        [
            [2.0, 0.0, 1.0, 1e12, -1.8, -1e-12],
            [2.0, -1.0, 5.0, -1.0, 0.1, 0.0],
            [2.0, -1.0, -1.0, 0.0, 0.0, 0.0],
            [1.0, 0.0, 0.0, 0.0, 0.75, 0.0],
        ]
    )
    kinds = (RowKind.BALANCE, RowKind.BALANCE, RowKind.BALANCE, RowKind.LIMIT)
    problem = Problem(
        ("glycolysis", "ferment", "burn", "oxphos", "growth", "upkeep"),
        tuple(Row(kind, str(i)) for i, kind in enumerate(kinds)),
        matrix, np.array([0.0, 0.0, 0.0, -INF]), np.array([0.0, 0.0, 0.0, 10.0]),
        np.zeros(6), np.full(6, INF),
    )  # fmt: skip
    programme = Programme(problem)
    cost = np.array([0.0, 0.0, 0.0, 0.0, -1.0, 0.0])
    assert programme.minimise(cost).objective == pytest.approx(-40 / 3, rel=1e-15)
    exact = exact_programme(problem, costs={4: Fraction(-1)})
    slack = [Place.LOW] * 6 + [Place.BASIC] * 4
    proven = prove_outcome(exact, slack, Outcome.FAILED)

    assert proven.proof.verified
    assert proven.solution.end is End.OPTIMAL
    assert proven.solution.objective == Fraction(-40, 3)


def test_what_the_solver_says_wrongly_is_not_proven() -> None:
    problem = corner()
    exact = exact_programme(problem, costs={1: Fraction(-1)})
    slack = [Place.LOW] * 3 + [Place.BASIC] * 3

    for outcome in (Outcome.INFEASIBLE, Outcome.UNBOUNDED):
        proven = prove_outcome(exact, slack, outcome)
        assert not proven.proof.verified
        assert "Not proven: in exact arithmetic there is an optimum" in proven.proof.words


def test_numbers_that_contradict_one_another_in_the_twelfth_digit_are_told() -> None:
    problem = Problem(
        ("a",), (Row(RowKind.LIMIT, "one"), Row(RowKind.LIMIT, "other")),
        np.array([[1.0], [1.0]]), np.array([1.0, 1.000000000001]),
        np.array([1.0, 1.000000000001]), np.zeros(1), np.full(1, INF),
    )  # fmt: skip
    _, proven = prove(problem, np.ones(1))

    assert not proven.proof.verified
    assert proven.proof.gap == pytest.approx(1e-12)
    assert "no fluxes meet everything (off by 1e-12)" in proven.proof.words


TEXT = """
substrate glucose C6H12O6
product ethanol C2H6O
exchange CO2 CO2
biomass X CH1.8O0.5N0.2
exchange ammonia NH3
carrier ATP carries energy
carrier NADH
inside pyruvate C3H4O3
parameter K = 0.1
compartment a
    g : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    f : pyruvate + NADH -> ethanol + CO2
    build : 0.4 pyruvate + K ATP + ? NADH + ? ammonia -> X + ? CO2
compartment m
    upkeep : ATP -> nothing
limit glucose <= 0.3
"""


def built() -> Built:
    network = read_model_text(TEXT).network
    assert network is not None
    return build_problem(network)


def test_rows_are_those_of_the_decimals_as_written() -> None:
    problem = built()
    atp = next(i for i, r in enumerate(problem.problem.rows) if r.name == "ATP")
    pyruvate = next(i for i, r in enumerate(problem.problem.rows) if r.name == "pyruvate")
    rows, (cost,) = exact_sums(problem, [read_aim("mu", Sense.MAXIMISE, problem.network).terms])

    assert rows[atp] == {0: 2, 2: Fraction(-1, 10), 3: -1}
    assert rows[pyruvate][2] == Fraction(-2, 5)
    assert all(
        float(value) == problem.problem.matrix[i, j]
        for i, row in enumerate(rows)
        for j, value in row.items()
    )
    (_, quantity), = read_aim("mu", Sense.MAXIMISE, problem.network).terms
    floats = quantity_row(
        problem.network, problem.stoichiometry, quantity, problem.values, basis=problem.basis
    )
    assert {j: float(v) for j, v in cost.items()} == pytest.approx(
        {j: v for j, v in enumerate(floats) if v}, rel=1e-15
    )


def test_the_rows_of_bare_floats_are_the_shortest_decimals() -> None:
    assert exact_rows(network_like(random.Random("shortest decimals")))[-2] == {0: 1}
    problem = built().problem
    bound = exact_programme(problem).high[-1]
    assert (int(bound.p), int(bound.q)) == (3, 10)


def test_weights_that_prove_nothing_feasible_are_checked_to_the_last_digit() -> None:
    problem = Problem(
        ("a", "b"),
        (Row(RowKind.LIMIT, "a + b"), Row(RowKind.LIMIT, "a"), Row(RowKind.LIMIT, "b")),
        np.array([[1.0, 1.0], [1.0, 0.0], [0.0, 1.0]]),
        np.array([3.0, -INF, -INF]), np.array([INF, 1.0, 1.9]), np.zeros(2), np.full(2, INF),
    )  # fmt: skip
    exact = exact_programme(problem)

    assert prove_infeasible(exact, [Fraction(1), Fraction(-1), Fraction(-1)])
    assert prove_infeasible(exact, [Fraction(-1), Fraction(1), Fraction(1)])
    assert not prove_infeasible(exact, [Fraction(1), Fraction(-1), Fraction(-9, 10)])
    assert not prove_infeasible(exact, [Fraction(1), Fraction(-1), Fraction(-2)])
