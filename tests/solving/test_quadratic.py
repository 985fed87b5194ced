"""Quadratic programmes: hand-worked ones, random ones against other solvers, and distrust."""

from __future__ import annotations

import numpy as np
import pytest
import scipy.optimize

from fluxnet.ground.errors import MisuseError
from fluxnet.solving import quadratic
from fluxnet.solving.nonnegative import find_least_distance, solve_nonnegative
from fluxnet.solving.quadratic import Outcome, solve_quadratic
from fluxnet.solving.small_programme import SmallProgramme, polish

INF = np.inf


def random_programme(rng, *, flat, widen=1.0):
    """A feasible programme with many ties among its bounds; ``flat`` unknowns cost nothing."""
    curved = int(rng.integers(1, 7))
    count = curved + flat
    rows = rng.integers(-2, 3, size=(30, count)) * (rng.random((30, count)) < 0.5)
    rows = np.vstack([rows[np.abs(rows).sum(axis=1) > 0], np.eye(count)]).astype(float)
    inside = rng.normal(size=count)
    low = rows @ inside - rng.choice([0.0, 0.0, 0.5, 3.0], size=len(rows)) * widen
    high = rows @ inside + rng.choice([0.0, 1.0, INF], size=len(rows)) * widen
    high[np.isnan(high)] = INF
    low[-count:], high[-count:] = -50.0, 50.0
    hessian = np.diag(np.r_[rng.uniform(0.1, 10, curved), np.zeros(flat)])
    return hessian, rng.normal(size=count), rows, low, high


def test_a_bound_that_presses_has_a_price_and_the_others_none():
    found = solve_quadratic(
        np.eye(2), np.array([-2.0, 0.0]), np.eye(2), np.array([-INF, -1.0]), np.array([1.5, INF])
    )
    assert found.x == pytest.approx([1.5, 0.0])
    assert found.prices == pytest.approx([0.5, 0.0])
    assert found.active == (0,)
    assert found.value == pytest.approx(1.125 - 3.0)


def test_an_equality_holds_and_keeps_its_price():
    found = solve_quadratic(
        np.eye(2), np.zeros(2), np.array([[3.0, 4.0]]), np.array([5.0]), np.array([5.0])
    )
    assert found.x == pytest.approx([0.6, 0.8])
    assert found.prices == pytest.approx([-0.2])


@pytest.mark.parametrize("flat", [0, 3])
def test_random_programmes_meet_the_conditions_of_an_optimum(flat):
    rng = np.random.default_rng(20 + flat)
    for _ in range(40):
        hessian, gradient, rows, low, high = random_programme(rng, flat=flat)
        found = solve_quadratic(hessian, gradient, rows, low, high)
        reach, prices = rows @ found.x, found.prices
        assert found.residual <= 1e-9
        assert (reach >= low - 1e-8).all()
        assert (reach <= high + 1e-8).all()
        assert hessian @ found.x + gradient + rows.T @ prices == pytest.approx(0, abs=1e-7)
        pressed = np.where(prices > 0, high, low)[prices != 0]
        assert reach[prices != 0] == pytest.approx(pressed, abs=1e-8)


def test_bounded_least_squares_agree_with_another_implementation():
    rng = np.random.default_rng(5)
    for _ in range(30):
        design, right = rng.normal(size=(9, 5)), rng.normal(size=9)
        low, high = rng.uniform(-0.3, 0.0, 5), rng.uniform(0.0, 0.3, 5)
        found = solve_quadratic(design.T @ design, -design.T @ right, np.eye(5), low, high)
        other = scipy.optimize.lsq_linear(design, right, (low, high), tol=1e-14)
        assert found.x == pytest.approx(other.x, abs=1e-6)


def test_a_linear_programme_gives_the_optimum_of_a_linear_solver():
    rng = np.random.default_rng(7)
    for _ in range(40):
        _, gradient, rows, low, high = random_programme(rng, flat=4)
        found = solve_quadratic(None, gradient, rows, low, high)
        sides = [rows[np.isfinite(high)], -rows[np.isfinite(low)]]
        bounds = np.r_[high[np.isfinite(high)], -low[np.isfinite(low)]]
        other = scipy.optimize.linprog(gradient, np.vstack(sides), bounds, bounds=(None, None))
        assert found.value == pytest.approx(other.fun, rel=1e-9, abs=1e-9)


@pytest.mark.parametrize("decades", [3, 6])
def test_the_units_of_the_unknowns_change_nothing(decades):
    rng = np.random.default_rng(decades)
    for _ in range(40):
        hessian, gradient, rows, low, high = random_programme(rng, flat=2)
        units = 10 ** rng.uniform(-decades, decades, len(gradient))
        plain = solve_quadratic(hessian, gradient, rows, low, high)
        scaled = solve_quadratic(
            hessian * np.outer(units, units), gradient * units, rows * units, low, high
        )
        assert scaled.outcome is Outcome.OPTIMAL
        assert scaled.value == pytest.approx(plain.value, rel=1e-6, abs=1e-6)


def test_what_rounding_left_of_a_zero_coefficient_changes_nothing():
    rng = np.random.default_rng(9)
    for _ in range(20):
        hessian, gradient, rows, low, high = random_programme(rng, flat=2)
        dust = 1e-15 * rng.normal(size=rows.shape) * (rows == 0)
        plain = solve_quadratic(hessian, gradient, rows, low, high)
        dusty = solve_quadratic(hessian, gradient, rows + dust, low, high)
        assert dusty.outcome is Outcome.OPTIMAL
        assert dusty.value == pytest.approx(plain.value, rel=1e-9, abs=1e-9)


def test_contradicting_bounds_are_proved_by_their_weights():
    rows = np.array([[1.0, 1.0], [1.0, 0.0], [0.0, 1.0]])
    low, high = np.array([4.0, -INF, -INF]), np.array([INF, 1.0, 2.0])
    found = solve_quadratic(np.eye(2), np.zeros(2), rows, low, high)
    assert found.outcome is Outcome.INFEASIBLE
    assert found.x is None
    weights = found.prices
    assert np.abs(rows.T @ weights).max() < 1e-9 * np.abs(weights).max()
    promised = sum(w * (h if w > 0 else lo) for w, lo, h in zip(weights, low, high, strict=True))
    assert promised < 0


def test_bounds_that_cross_or_ask_for_something_out_of_nothing_are_infeasible():
    crossed = solve_quadratic(np.eye(1), np.zeros(1), np.eye(1), np.array([2.0]), np.array([1.0]))
    assert crossed.outcome is Outcome.INFEASIBLE
    nothing = np.zeros((1, 1))
    empty = solve_quadratic(np.eye(1), np.zeros(1), nothing, np.array([2.0]), np.array([3.0]))
    assert empty.outcome is Outcome.INFEASIBLE


def test_an_objective_that_falls_for_ever_is_unbounded():
    hessian = np.diag([1.0, 0.0])
    rows, low = np.array([[0.0, 1.0]]), np.array([0.0])
    falling = solve_quadratic(hessian, np.array([0.0, -1.0]), rows, low, np.array([INF]))
    assert falling.outcome is Outcome.UNBOUNDED
    stopped = solve_quadratic(hessian, np.array([0.0, 1.0]), rows, low, np.array([INF]))
    assert stopped.outcome is Outcome.OPTIMAL
    assert stopped.x[1] == pytest.approx(0.0)


@pytest.mark.parametrize("lie", ["outside the bounds", "not the optimum", "infeasible"])
def test_a_wrong_answer_of_the_fast_solver_is_noticed_and_replaced(monkeypatch, lie):
    rng = np.random.default_rng(3)
    honest = quadratic.ask

    def lying(programme, settings):
        flag, x, prices = honest(programme, settings)
        if lie == "outside the bounds":
            return flag, x + 1.0, prices
        if lie == "not the optimum":
            return flag, x, np.zeros_like(prices)
        return -1, x, prices

    for _ in range(6):
        programme = random_programme(rng, flat=2)
        expected = solve_quadratic(*programme)
        monkeypatch.setattr(quadratic, "ask", lying)
        found = solve_quadratic(*programme)
        monkeypatch.setattr(quadratic, "ask", honest)
        assert found.outcome is Outcome.OPTIMAL
        assert found.value == pytest.approx(expected.value, rel=1e-7, abs=1e-7)
        assert found.residual <= 1e-9


def test_nan_and_parts_that_do_not_fit_are_refused():
    one = np.eye(1)
    with pytest.raises(MisuseError):
        solve_quadratic(one, np.array([np.nan]), one, np.zeros(1), np.zeros(1))
    with pytest.raises(MisuseError):
        solve_quadratic(one, np.zeros(2), one, np.zeros(1), np.zeros(1))


def test_non_negative_least_squares_agrees_with_another_implementation():
    rng = np.random.default_rng(11)
    for _ in range(60):
        rows, count = rng.integers(1, 12, 2)
        matrix = rng.integers(-2, 3, size=(rows, count)).astype(float)
        right = rng.normal(size=rows)
        x, residual = solve_nonnegative(matrix, right)
        assert (x >= 0).all()
        assert residual == pytest.approx(right - matrix @ x, abs=1e-12)
        expected = scipy.optimize.nnls(matrix, right)[1]
        assert np.linalg.norm(residual) == pytest.approx(expected, abs=1e-10)


def test_the_nearest_point_is_a_combination_of_the_rows_that_press():
    rows = np.array([[0.6, 0.8], [1.0, 0.0], [0.0, -1.0]])
    found = find_least_distance(rows, np.array([1.0, 1.2, -9.0]))
    assert found.x == pytest.approx([1.2, 0.35])
    assert found.multipliers @ rows == pytest.approx(found.x)
    assert found.multipliers[2] == 0


def test_a_price_on_a_bound_that_is_not_there_never_passes() -> None:
    rows = np.eye(2)
    programme = SmallProgramme(
        np.eye(2), np.array([-1.0, 0.0]), rows, np.array([-np.inf, 0.0]),
        np.array([np.inf, np.inf]), rows,
    )  # fmt: skip
    x, prices = np.array([0.0, 0.0]), np.array([1.0, 0.0])

    assert programme.residual(x, prices) == np.inf
    better, left = polish(programme, x, prices)
    assert better == pytest.approx([1.0, 0.0])
    assert left.tolist() == [0.0, 0.0]


def test_a_contradiction_by_a_hair_is_weighed_without_a_wrong_sign():
    rng = np.random.default_rng(10)
    for _ in range(100):
        rows = rng.normal(size=(3, int(rng.integers(2, 8))))
        rows /= np.linalg.norm(rows, axis=1)[:, None]
        hair = 10.0 ** -rng.uniform(6, 10)
        bounds = np.concatenate([np.ones(3), np.full(3, hair - 1.0)])
        with np.errstate(all="raise"):
            found = find_least_distance(np.vstack([rows, -rows]), bounds)
        assert (found.multipliers >= 0).all()
        assert np.isfinite(found.multipliers).all()
