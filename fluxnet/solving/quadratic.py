"""Convex quadratic (and linear) programmes of small size, every answer checked.

daqp solves them in microseconds, but it has been seen to return a point outside the bounds
with a good flag, and where the objective is flat it stops at its own tolerance. So every
answer is polished on its active bounds and its optimality conditions are recomputed here;
what does not pass is solved again more carefully, and last by a slow method of our own.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.solving.careful import approach, is_unbounded, nearest_to
from fluxnet.solving.outcome import Outcome
from fluxnet.solving.small_programme import FEASIBLE, SmallProgramme, ask, polish

__all__ = ["Outcome", "QuadraticSolution", "solve_quadratic", "solve_scaled"]

Vector = NDArray[np.float64]


@record
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
    programme = SmallProgramme(
        bent, gradient * units, inner, low / norms, high / norms, np.abs(inner)
    )
    found = solve_scaled(programme)
    if found.x is None:
        return replace(found, prices=found.prices / norms)
    return replace(found, x=found.x * units, prices=found.prices / norms)


def solve_scaled(programme: SmallProgramme, enough: float = 1e-2) -> QuadraticSolution:
    """:func:`solve_quadratic` of a programme whose rows have norm 1, for calls by the hundred.

    Parameters
    ----------
    enough
        An answer is polished unless its residual is this part of what is accepted.
    """
    outcome, x, prices, residual = _solve(programme, enough)
    if x is None:
        return QuadraticSolution(outcome, None, np.nan, prices, np.nan)
    bent = programme.hessian
    half = 0.0 if bent is None else 0.5 * float(x @ bent @ x)
    value = half + float(programme.gradient @ x)
    return QuadraticSolution(Outcome.OPTIMAL, x, value, prices, residual * FEASIBLE)


def _units(rows: Vector) -> Vector:
    """A unit for each unknown that brings its coefficients near one another.

    Powers of two, so that nothing is rounded. Bounds on single unknowns tell nothing of it.
    """
    units = np.ones(rows.shape[1])
    sizes = np.abs(rows)
    # What is left of a difference that should be zero is no coefficient.
    sizes = np.where(sizes > 1e-12 * sizes.max(axis=1, initial=0.0, keepdims=True), sizes, 0.0)
    several = np.count_nonzero(sizes, axis=1) > 1
    if not several.any():
        return units
    with np.errstate(divide="ignore"):
        sizes = np.log2(sizes[several])
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


def _solve(
    programme: SmallProgramme, enough: float
) -> tuple[Outcome, Vector | None, Vector, float]:
    """Solve, check, and try again until a way passes the check."""
    none = np.zeros(len(programme.low))
    ways: tuple[dict[str, float], ...] = (
        {"primal_tol": 1e-9}, {"eps_prox": 1e-2, "primal_tol": 1e-9}
    )
    for settings in ways:
        flag, x, prices = ask(programme, settings)
        if flag == -3 and is_unbounded(programme):
            return Outcome.UNBOUNDED, None, none, np.nan
        if flag <= 0 or not np.isfinite(x).all():
            continue
        residual = programme.residual(x, prices)
        if residual <= enough:
            return Outcome.OPTIMAL, x, prices, residual
        better, sharper = polish(programme, x, prices)
        after = programme.residual(better, sharper)
        if after <= 1.0:
            return Outcome.OPTIMAL, better, sharper, after
        if residual <= 1.0:
            return Outcome.OPTIMAL, x, prices, residual
    point = nearest_to(programme, np.zeros(len(programme.gradient)), 1.0)
    if point[0] is None:
        return Outcome.INFEASIBLE, None, point[1], np.nan
    if is_unbounded(programme):
        return Outcome.UNBOUNDED, None, none, np.nan
    slow = approach(programme)
    if slow is not None:
        return Outcome.OPTIMAL, *slow, programme.residual(*slow)
    return Outcome.FAILED, None, none, np.nan


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
