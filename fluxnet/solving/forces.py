"""Whether a point is the end of an interval: the forces on it balance there.

At the end of an interval a functional f is pulled against the slope of h and the bounds that
press, grad f = y grad h / 2 + sum of price x grad of bound. Where that holds at a point that
meets level and bounds nearly, what is still missing is y (level - h) / 2 + sum of price x slack
(the value of Lagrange's function, whose error is of second order in all of them).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.solving.chart import Point
from fluxnet.solving.region import Region
from fluxnet.solving.task import Task

__all__ = ["Forces", "forces_of", "missing_at"]

Vector = NDArray[np.float64]

_LEFT, _UNBALANCED = 1e-6, 1e-6
"""How near h must be to its level, bounds to their values, forces to balance.

Where a functional is nearly held by bounds, their prices are large: with 1e-4 ends were seen to
be wrong by 4e-4 of the interval.
"""
_BEYOND, _UNSEEN = 1e-7, 1e-7
"""The same for bounds that do not press, and for forces that no slope of h can balance."""
_STIFF = 1e3


@record
class Forces:
    """What presses at the end of a linear problem.

    ``active`` are places among the bounds of ``region``, ``upper`` marks those that press from
    above; ``radius`` is the distance that the level leaves.
    """

    region: Region
    active: NDArray[np.intp]
    upper: NDArray[np.bool_]
    radius: float


def forces_of(region: Region, prices: Vector | None, radius: float) -> Forces:
    """What presses, by the prices of a region's bounds (None where none does)."""
    active = np.flatnonzero(prices) if prices is not None else np.zeros(0, dtype=np.intp)
    upper = np.zeros(0, dtype=bool) if prices is None else prices[active] > 0
    return Forces(region, active, upper, radius)


def missing_at(
    task: Task, forces: Forces, point: Point, level: float, slope: Vector
) -> float | None:
    """What a functional lacks at a point to its end; None where that is not near, or not known.

    Parameters
    ----------
    slope
        Of the functional, by the coordinates of the point, towards the end.
    """
    region, radius = forces.region, forces.radius
    left = level - point.h
    slack = _slack(task, forces, point)
    if slack is None or left < -_LEFT * radius**2:
        return None
    held = abs(left) <= _LEFT * radius**2  # else the bounds alone hold it
    slopes = [slope[None, :], _bound_slopes(task, forces, point)]
    if held:
        slopes.insert(1, -(point.design.T @ point.residuals)[None, :])
    turned = region.gradients(np.vstack(slopes))
    pull, against = turned[0], turned[1:]
    if not len(against):
        return None
    stiff = np.ones(len(pull))
    stiff[region.dimension :] = _STIFF
    weights = np.linalg.lstsq((against * stiff).T, pull * stiff, rcond=1e-11)[0]
    prices = weights[1:] if held else weights
    if (np.where(forces.upper, prices, -prices) < 0).any() or (held and weights[0] <= 0):
        return None
    rest = np.abs(pull - weights @ against)
    if held:
        most = np.array([_UNBALANCED, _UNSEEN]) * radius * weights[0]
    else:
        most = np.full(2, 1e-6 * float(np.abs(pull).max()))
    if rest[: region.dimension].max(initial=0.0) > most[0]:
        return None
    if rest[region.dimension :].max(initial=0.0) > most[1]:
        return None
    return float((weights[0] * left / 2 if held else 0.0) + prices @ slack)


def _slack(task: Task, forces: Forces, point: Point) -> Vector | None:
    """How far each pressing bound is from being met; None where one, or another, is far off."""
    bounds = forces.region.bounds
    values = np.concatenate([point.values[task.bounded], point.numbers])[bounds.sources]
    low = np.concatenate([task.low, task.range_low])[bounds.sources]
    high = np.concatenate([task.high, task.range_high])[bounds.sources]
    beyond = np.maximum(low - values, values - high) / bounds.norms
    active = forces.active
    beyond[active] = 0.0
    if beyond.max(initial=0.0) > _BEYOND * forces.radius:
        return None
    met = np.where(forces.upper, high[active], low[active])
    slack: Vector = (met - values[active]) / bounds.norms[active]
    return slack if np.abs(slack).max(initial=0.0) <= _LEFT * forces.radius else None


def _bound_slopes(task: Task, forces: Forces, point: Point) -> Vector:
    """The slopes of the pressing bounds' values, each over the norm of its row."""
    bounds = forces.region.bounds
    sources, count = bounds.sources[forces.active], len(task.bounded)
    slopes = np.zeros((len(sources), point.slopes.shape[1]))
    rows = sources < count
    slopes[rows] = point.slopes[task.bounded[sources[rows]]]
    own = np.flatnonzero(~rows)
    slopes[own, len(point.z) + sources[own] - count] = 1.0
    slopes /= bounds.norms[forces.active, None]
    return slopes
