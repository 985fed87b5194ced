"""Convex quadratic (and linear) programmes of small size, every answer checked.

daqp solves them in microseconds, but it has been seen to return a point outside the bounds
with a good flag, and where the objective is flat it stops at its own tolerance. So every
answer is polished on its active bounds and its optimality conditions are recomputed here;
what does not pass is solved again more carefully, and last by a slow method of our own.
"""

from __future__ import annotations

from dataclasses import dataclass

import daqp
import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.solving.linear import Outcome
from fluxnet.solving.nonnegative import find_least_distance

__all__ = ["Outcome", "QuadraticSolution", "solve_quadratic"]

Vector = NDArray[np.float64]

FEASIBLE = 1e-9
"""Largest accepted violation of a bound, relative to the sizes of the row's terms."""
OPTIMAL = 1e-8
"""Largest accepted gradient left, relative to the sizes of its terms."""
_NONE = 1e30


@dataclass(frozen=True, slots=True)
class QuadraticSolution:
    """A checked answer.

    ``prices`` holds one number a row: positive where the upper bound presses, negative where
    the lower one does, so that H x + f + A' prices = 0. ``active`` are the rows with a price.
    ``residual`` is the larger of the worst violation of a bound and the worst gradient left,
    both relative to the sizes of their terms. Without an optimum ``x`` is None; for an
    infeasible programme ``prices`` then prove it: the weighted bounds contradict each other.
    """

    outcome: Outcome
    x: Vector | None
    value: float
    prices: Vector
    residual: float

    @property
    def active(self) -> tuple[int, ...]:
        """The rows whose bound presses."""
        return tuple(np.flatnonzero(self.prices).tolist())


@dataclass(frozen=True, slots=True)
class _Programme:
    """One programme, its rows of norm 1: minimise x'Hx/2 + f'x, low <= A x <= high."""

    hessian: Vector | None
    gradient: Vector
    rows: Vector
    low: Vector
    high: Vector

    def slope(self, x: Vector) -> Vector:
        return self.gradient if self.hessian is None else self.hessian @ x + self.gradient

    def residual(self, x: Vector, prices: Vector) -> float:
        """The worst violation of a bound, and the worst gradient left, as relative sizes."""
        reach = self.rows @ x
        size = np.abs(self.rows) @ np.abs(x) + 1e-6 * float(np.abs(x).max(initial=0.0)) + 1e-30
        bound = np.where(prices > 0, self.high, np.where(prices < 0, self.low, reach))
        size = size + np.where(np.abs(bound) < _NONE, np.abs(bound), 0.0)
        gap = np.maximum(np.maximum(self.low - reach, reach - self.high), 0.0)
        slack = np.where(prices == 0, 0.0, np.abs(reach - bound))
        violation = float((np.maximum(gap, slack) / np.maximum(size, 1.0)).max(initial=0.0))
        left = self.slope(x) + self.rows.T @ prices
        terms = np.abs(self.gradient) + np.abs(self.rows).T @ np.abs(prices)
        if self.hessian is not None:
            terms = terms + np.abs(self.hessian) @ np.abs(x)
        scale = float(terms.max(initial=0.0)) or 1.0
        return max(violation / FEASIBLE, float(np.abs(left).max(initial=0.0)) / scale / OPTIMAL)


def solve_quadratic(
    hessian: Vector | None,
    gradient: Vector,
    rows: Vector,
    low: Vector,
    high: Vector,
) -> QuadraticSolution:
    """Minimise x'Hx/2 + f'x subject to low <= A x <= high.

    Parameters
    ----------
    hessian
        H, symmetric and positive semi-definite; None for a linear programme.
    gradient
        f, one number an unknown.
    rows
        A, rows x unknowns; bounds on unknowns are rows too.
    low, high
        One number a row, infinite where there is no bound, equal for an equality.

    Raises
    ------
    MisuseError
        Where shapes do not fit, or NaN is among the numbers.

    Examples
    --------
    >>> found = solve_quadratic(
    ...     np.eye(2), np.array([-1.0, -1.0]), np.array([[1.0, 1.0]]),
    ...     np.array([-np.inf]), np.array([1.0]))
    >>> found.outcome.value, found.x.tolist(), found.prices.tolist()
    ('optimal', [0.5, 0.5], [0.5])
    """
    _refuse(hessian, gradient, rows, low, high)
    if (low > high).any():
        contradiction = np.where(low > high, 1.0, 0.0)
        return QuadraticSolution(Outcome.INFEASIBLE, None, np.inf, contradiction, 0.0)
    norms = np.sqrt(np.einsum("ij,ij->i", rows, rows))
    empty = norms == 0
    if empty.any() and ((low > 0) | (high < 0))[empty].any():
        contradiction = np.where(empty & ((low > 0) | (high < 0)), 1.0, 0.0)
        return QuadraticSolution(Outcome.INFEASIBLE, None, np.inf, contradiction, 0.0)
    units = _units(rows)
    inner = rows * units
    norms = np.where(empty, 1.0, np.sqrt(np.einsum("ij,ij->i", inner, inner)))
    inner /= norms[:, None]
    bent = None if hessian is None else hessian * np.outer(units, units)
    programme = _Programme(bent, gradient * units, inner, low / norms, high / norms)
    outcome, x, prices = _solve(programme)
    if x is None:
        return QuadraticSolution(outcome, None, np.nan, prices / norms, np.nan)
    residual = programme.residual(x, prices) * FEASIBLE
    x = x * units
    half = 0.0 if hessian is None else 0.5 * float(x @ hessian @ x)
    value = half + float(gradient @ x)
    return QuadraticSolution(Outcome.OPTIMAL, x, value, prices / norms, residual)


def _units(rows: Vector) -> Vector:
    """A unit for each unknown that brings its coefficients near one another.

    Powers of two, so that nothing is rounded. Bounds on single unknowns tell nothing of it.
    """
    units = np.ones(rows.shape[1])
    several = np.count_nonzero(rows, axis=1) > 1
    if not several.any():
        return units
    with np.errstate(divide="ignore"):
        sizes = np.log2(np.abs(rows[several]))
    there = np.isfinite(sizes)
    used = there.any(axis=0)
    low, high = np.where(there, sizes, np.inf), np.where(there, sizes, -np.inf)
    if high.max() - low.min() < 7:
        return units
    total = np.zeros(rows.shape[1])
    for _ in range(4):
        across = -(low.min(axis=1) + high.max(axis=1)) / 2
        low, high = low + across[:, None], high + across[:, None]
        down = np.zeros(rows.shape[1])
        down[used] = -(low[:, used].min(axis=0) + high[:, used].max(axis=0)) / 2
        low, high, total = low + down, high + down, total + down
    return np.exp2(np.round(total))


def _solve(programme: _Programme) -> tuple[Outcome, Vector | None, Vector]:
    """Solve, check, and try again until a way passes the check."""
    none = np.zeros(len(programme.low))
    verdict = Outcome.FAILED
    ways: tuple[dict[str, float], ...] = ({}, {"eps_prox": 1e-2, "primal_tol": 1e-9})
    for settings in ways:
        flag, x, prices = _ask(programme, settings)
        if flag == -3 and _is_unbounded(programme):
            return Outcome.UNBOUNDED, None, none
        if flag <= 0 or not np.isfinite(x).all():
            continue
        if programme.residual(x, prices) <= 1e-2:
            return Outcome.OPTIMAL, x, prices
        better, sharper = _polish(programme, x, prices)
        if programme.residual(better, sharper) <= 1.0:
            return Outcome.OPTIMAL, better, sharper
        if programme.residual(x, prices) <= 1.0:
            return Outcome.OPTIMAL, x, prices
    point = _nearest(programme, np.zeros(len(programme.gradient)), 1.0)
    if point[0] is None:
        return Outcome.INFEASIBLE, None, point[1]
    if _is_unbounded(programme):
        return Outcome.UNBOUNDED, None, none
    slow = _approach(programme)
    if slow is not None:
        return Outcome.OPTIMAL, *slow
    return verdict, None, none


def _ask(programme: _Programme, settings: dict[str, float]) -> tuple[int, Vector, Vector]:
    """One call of the fast solver: its flag, its point, its prices."""
    low = np.maximum(programme.low, -_NONE)
    high = np.minimum(programme.high, _NONE)
    sense = np.where(low == high, 5, 0).astype(np.int32)
    x, _, flag, info = daqp.solve(
        programme.hessian, programme.gradient, programme.rows, high, low, sense, **settings
    )
    prices = np.asarray(info["lam"], dtype=np.float64)
    return int(flag), np.asarray(x, dtype=np.float64), prices


def _polish(programme: _Programme, x: Vector, prices: Vector) -> tuple[Vector, Vector]:
    """The optimum with the same bounds pressing, solved as linear equations."""
    count = len(x)
    on = np.flatnonzero(prices)
    target = np.where(prices[on] > 0, programme.high[on], programme.low[on])
    system = np.zeros((count + len(on), count + len(on)))
    if programme.hessian is not None:
        system[:count, :count] = programme.hessian
    system[count:, :count] = programme.rows[on]
    system[:count, count:] = programme.rows[on].T
    right = np.r_[
        -programme.slope(x) - programme.rows[on].T @ prices[on], target - programme.rows[on] @ x
    ]
    step = np.linalg.lstsq(system, right, rcond=1e-13)[0]
    sharper = prices.copy()
    sharper[on] += step[count:]
    turned = sharper * prices < 0
    turned &= programme.low != programme.high
    sharper[turned] = 0.0
    return x + step[:count], sharper


def _is_unbounded(programme: _Programme) -> bool:
    """Whether some direction lowers the objective for ever: a bounded programme decides."""
    count = len(programme.gradient)
    cone_low = np.where(np.isfinite(programme.low), 0.0, -np.inf)
    cone_high = np.where(np.isfinite(programme.high), 0.0, np.inf)
    parts, lows, highs = [programme.rows], [cone_low], [cone_high]
    if programme.hessian is not None:
        size = float(np.abs(programme.hessian).max(initial=0.0)) or 1.0
        parts.append(programme.hessian / size)
        lows.append(np.zeros(count))
        highs.append(np.zeros(count))
    parts.append(np.eye(count))
    lows.append(-np.ones(count))
    highs.append(np.ones(count))
    cone = _Programme(
        None, programme.gradient, np.vstack(parts), np.concatenate(lows), np.concatenate(highs)
    )
    flag, x, _ = _ask(cone, {})
    scale = float(np.abs(programme.gradient).max(initial=0.0))
    return flag > 0 and float(programme.gradient @ x) < -1e-9 * scale


def _nearest(
    programme: _Programme, centre: Vector, weight: float
) -> tuple[Vector | None, Vector]:
    """The optimum of the programme plus weight/2 ||x - centre||^2, by least distance."""
    count = len(centre)
    system = weight * np.eye(count)
    slope = -weight * centre
    if weight < 1.0:
        system = system + (0.0 if programme.hessian is None else programme.hessian)
        slope = slope + programme.gradient
    factor = np.linalg.cholesky(system)
    shift = np.linalg.solve(factor, slope)
    lower, upper = np.isfinite(programme.low), np.isfinite(programme.high)
    rows = np.vstack([programme.rows[lower], -programme.rows[upper]])
    bounds = np.r_[programme.low[lower], -programme.high[upper]]
    turned = np.linalg.solve(factor, rows.T).T
    limits = bounds + turned @ shift
    norms = np.maximum(np.linalg.norm(turned, axis=1), 1e-300)
    found = find_least_distance(turned / norms[:, None], limits / norms)
    weights = found.multipliers / norms
    prices = np.zeros(len(programme.low))
    prices[lower] -= weights[: int(lower.sum())]
    prices[upper] += weights[int(lower.sum()) :]
    if found.x is None:
        return None, prices
    return np.linalg.solve(factor.T, found.x - shift), prices


def _approach(programme: _Programme) -> tuple[Vector, Vector] | None:
    """Proximal steps with the slow solver until the check passes."""
    x = np.zeros(len(programme.gradient))
    for _ in range(60):
        point, prices = _nearest(programme, x, 1e-3)
        if point is None:
            return None
        for trial in ((point, prices), _polish(programme, point, prices)):
            if programme.residual(*trial) <= 1.0:
                return trial
        x = point
    return None


def _refuse(
    hessian: Vector | None, gradient: Vector, rows: Vector, low: Vector, high: Vector
) -> None:
    count = len(gradient)
    shapes = rows.shape == (len(low), count) and len(high) == len(low)
    if not shapes or (hessian is not None and hessian.shape != (count, count)):
        raise MisuseError("the parts of a programme do not fit together")
    arrays = [gradient, rows, low, high] + ([] if hessian is None else [hessian])
    if any(np.isnan(a).any() for a in arrays):
        raise MisuseError("a programme holds NaN")
