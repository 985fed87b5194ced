"""Linear programmes: outcomes, prices, rays, silence, and what is refused."""

from __future__ import annotations

import subprocess
import sys

import numpy as np
import pytest

from fluxnet.ground.errors import MisuseError
from fluxnet.solving.linear import Outcome, Programme, worst_violation
from fluxnet.solving.problem import Problem, Row, RowKind

INF = np.inf


def problem_of(matrix, row_bounds, column_bounds) -> Problem:
    matrix = np.array(matrix, dtype=float).reshape(len(row_bounds), len(column_bounds))
    return Problem(
        tuple(f"r{j}" for j in range(len(column_bounds))),
        tuple(Row(RowKind.LIMIT, f"row {i}") for i in range(len(row_bounds))),
        matrix,
        np.array([b[0] for b in row_bounds], dtype=float),
        np.array([b[1] for b in row_bounds], dtype=float),
        np.array([b[0] for b in column_bounds], dtype=float),
        np.array([b[1] for b in column_bounds], dtype=float),
    )


def small() -> Problem:
    """Uptake a (at most 5) splits into b and c; b is worth more but limited to half of c."""
    return problem_of(
        [[1, -1, -1], [1, 0, 0], [0, 1, -0.5]],
        [(0, 0), (-INF, 5), (-INF, 0)],
        [(0, INF), (0, INF), (0, INF)],
    )


def test_an_optimum_has_its_value_its_fluxes_and_no_residual():
    solution = Programme(small()).maximise(np.array([0.0, 3.0, 1.0]))
    assert solution.outcome is Outcome.OPTIMAL
    assert solution.objective == pytest.approx(5 / 3 * 3 + 10 / 3, rel=1e-12)
    assert solution.fluxes == pytest.approx([5, 5 / 3, 10 / 3], rel=1e-12)
    assert solution.residual < 1e-12


@pytest.mark.parametrize("sign", [1.0, -1.0])
def test_prices_say_how_the_optimum_moves_with_each_bound(sign):
    cost = sign * np.array([0.0, 3.0, 1.0])
    programme = Programme(small())
    solve = programme.maximise if sign > 0 else programme.minimise
    solution = solve(cost)
    assert solution.outcome is Outcome.OPTIMAL
    assert small().matrix.T @ solution.row_prices + solution.column_prices == pytest.approx(cost)
    programme.set_row_bounds(1, -INF, 6.0)
    raised = solve(cost).objective - solution.objective
    assert solution.row_prices[1] == pytest.approx(raised, rel=1e-9)
    assert abs(raised) > 1
    programme.set_row_bounds(1, -INF, 5.0)
    programme.set_row_bounds(0, 0.1, 0.1)
    moved = (solve(cost).objective - solution.objective) / 0.1
    assert solution.row_prices[0] == pytest.approx(moved, rel=1e-9)


def test_a_column_price_says_what_forcing_a_flux_costs():
    programme = Programme(small())
    cost = np.array([0.0, 1.0, 3.0])
    solution = programme.maximise(cost)
    assert solution.fluxes[1] == 0
    programme.set_column_bounds(1, 0.5, INF)
    assert programme.maximise(cost).objective - solution.objective == pytest.approx(
        0.5 * solution.column_prices[1]
    )
    assert solution.column_prices[1] == pytest.approx(-2)


def test_infeasible_is_a_value_with_weights_that_prove_it():
    problem = problem_of([[1, -1], [1, 0], [0, 1]], [(0, 0), (4, INF), (-INF, 3)], [(0, INF)] * 2)
    programme = Programme(problem)
    solution = programme.minimise(np.zeros(2))
    assert solution.outcome is Outcome.INFEASIBLE
    assert solution.objective == INF
    ray = programme.dual_ray()
    assert ray is not None
    # With these weights the rows add up to nothing, and their bounds to a contradiction.
    assert ray @ problem.matrix == pytest.approx([0, 0])
    bounds = np.where(ray > 0, problem.row_low, problem.row_high)
    ends = ray * np.where(ray == 0, 0, bounds)
    assert abs(ends.sum()) > 1e-9


def test_unbounded_is_a_value_with_a_direction_that_never_ends():
    problem = problem_of([[1, -1]], [(0, 0)], [(0, INF), (0, INF)])
    programme = Programme(problem)
    solution = programme.maximise(np.array([1.0, 0.0]))
    assert (solution.outcome, solution.objective) == (Outcome.UNBOUNDED, INF)
    assert programme.minimise(np.array([-1.0, 0.0])).objective == -INF
    ray = programme.primal_ray()
    assert ray is not None
    assert ray[0] > 0
    assert problem.matrix @ ray == pytest.approx([0])


def test_nothing_is_written_to_the_terminal(capfd):
    programme = Programme(small())
    programme.maximise(np.array([0.0, 3.0, 1.0]))
    programme.set_row_bounds(1, 6.0, 5.5)
    programme.minimise(np.zeros(3))
    Programme(problem_of([], [], [(0, INF)])).maximise(np.ones(1))
    assert capfd.readouterr() == ("", "")


def test_the_first_programme_of_a_process_writes_nothing_either():
    # Some releases of the solver greet on standard output when they are first called.
    lines = (
        "import numpy as np",
        "from fluxnet.solving.linear import Programme",
        "from fluxnet.solving.problem import Problem",
        "e = np.empty(0)",
        "p = Problem(('r',), (), np.empty((0, 1)), e, e, np.zeros(1), np.ones(1))",
        "assert Programme(p).maximise(np.ones(1)).objective == 1",
    )
    done = subprocess.run(
        [sys.executable, "-c", "\n".join(lines)], capture_output=True, text=True, check=True
    )
    assert (done.stdout, done.stderr) == ("", "")


def test_bounds_that_change_give_what_a_fresh_programme_gives():
    programme = Programme(small())
    cost = np.array([0.0, 3.0, 1.0])
    programme.maximise(cost)
    programme.set_row_bounds(1, 1.0, 2.0)
    programme.set_column_bounds(2, 0.5, 1.0)
    fresh = problem_of(
        [[1, -1, -1], [1, 0, 0], [0, 1, -0.5]],
        [(0, 0), (1, 2), (-INF, 0)],
        [(0, INF), (0, INF), (0.5, 1)],
    )
    assert programme.maximise(cost).objective == pytest.approx(
        Programme(fresh).maximise(cost).objective, rel=1e-12
    )


def test_nan_is_refused_everywhere():
    programme = Programme(small())
    nan = float("nan")
    with pytest.raises(MisuseError):
        programme.minimise(np.array([0.0, nan, 0.0]))
    with pytest.raises(MisuseError):
        programme.set_row_bounds(0, nan, 1.0)
    with pytest.raises(MisuseError):
        programme.set_column_bounds(0, 0.0, nan)
    with pytest.raises(ValueError, match="NaN"):
        problem_of([[nan]], [(0, 0)], [(0, INF)])
    with pytest.raises(ValueError, match="NaN"):
        problem_of([[1]], [(0, nan)], [(0, INF)])
    with pytest.raises(MisuseError):
        programme.minimise(np.zeros(2))


def test_the_violation_is_relative_to_the_terms_that_are_added_up():
    problem = problem_of([[1e6, -1e6], [1, 0]], [(0, 0), (-INF, 2)], [(0, INF), (-1, INF)])
    assert worst_violation(problem, np.array([1.0, 1.0])) == 0
    assert worst_violation(problem, np.array([1.0, 1.001])) == pytest.approx(1e3 / 2.001e6)
    assert worst_violation(problem, np.array([3.0, 3.0])) == pytest.approx(1 / 3)
    assert worst_violation(problem, np.array([-0.25, -0.25])) == pytest.approx(0.25)


@pytest.mark.parametrize("spread", [1.0, 1e3, 1e6, 1e9])
def test_badly_scaled_coefficients_leave_the_answer_exact(spread):
    # A chain: spread a -> b/spread..., so that the last flux is 7 spread**2 exactly.
    problem = problem_of(
        [[spread, -1 / spread, 0], [0, 1 / spread, -spread], [1, 0, 0]],
        [(0, 0), (0, 0), (-INF, 7)],
        [(0, INF)] * 3,
    )
    solution = Programme(problem).maximise(np.array([0.0, 0.0, 1.0]))
    assert solution.outcome is Outcome.OPTIMAL
    assert solution.objective == pytest.approx(7, rel=1e-12)
    assert solution.fluxes[1] == pytest.approx(7 * spread**2, rel=1e-12)
    assert solution.residual < 1e-12


def test_coefficients_of_1e12_beside_1e_minus_12_are_not_dropped():
    problem = problem_of([[1e12, -1e-12], [0, 1e-12]], [(0, 0), (-INF, 3)], [(0, INF)] * 2)
    solution = Programme(problem).maximise(np.array([1.0, 0.0]))
    assert solution.outcome is Outcome.OPTIMAL
    assert solution.objective == pytest.approx(3e-12, rel=1e-9)


def test_repeated_and_redundant_rows_change_nothing():
    once = small()
    thrice = problem_of(
        np.vstack([once.matrix, once.matrix, 2 * once.matrix[:1]]),
        [*zip(once.row_low, once.row_high, strict=True)] * 2 + [(0, 0)],
        [(0, INF)] * 3,
    )
    cost = np.array([0.0, 3.0, 1.0])
    assert Programme(thrice).maximise(cost).objective == pytest.approx(
        Programme(once).maximise(cost).objective, rel=1e-12
    )


def test_a_problem_without_rows_is_only_its_columns():
    programme = Programme(problem_of([], [], [(0, 2), (-1, INF)]))
    assert programme.maximise(np.array([1.0, -1.0])).objective == 3
    assert programme.maximise(np.array([0.0, 1.0])).outcome is Outcome.UNBOUNDED
