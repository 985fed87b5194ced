"""The end of a 95 % interval where it is not linear: along moving numbers, or a quotient.

Fluxes are linear at given numbers, so the numbers alone make the way curved. First steps of
the whole linear problem are taken from point to point: they end after two or three. Where the
slopes mislead, the numbers are moved in steps that are judged by the end which the fluxes then
reach exactly, and halved until it is farther out.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.solving.chart import Point, chart_at, point_at
from fluxnet.solving.functionals import Functionals
from fluxnet.solving.reach import Reach, reach_far
from fluxnet.solving.region import Region, nearest, region_at
from fluxnet.solving.task import Task

__all__ = ["Curve", "follow_curve", "moved_by"]

Vector = NDArray[np.float64]

_STEPS = 12
_CLIMBS = 40
_NEAR = 1e-4
"""A step of this part of the way is the last: what it adds is added by the slope."""
_LESS = 1e-6
"""So is one after which the next, that grows shorter at the same ratio, is this part of it."""
_DUST = 1e-8
"""A step of this part of what one sd of the measurements brings is the solver's rounding."""
_LEFT, _BEYOND, _UNBALANCED = 1e-4, 1e-7, 1e-6
"""How near h must be to its level, values to their bounds, forces to balance, at an end."""


@record
class Curve:
    """One functional, the way it is to go, the level of h, and its value at the fit."""

    task: Task
    functional: Functionals
    sign: float
    level: float
    origin: float

    def gain(self, point: Point) -> float:
        """How far the functional has come at a point."""
        return self.sign * float(self.functional.values(point)[0] - self.origin)

    def gradient(self, region: Region) -> Vector:
        """Its slope at the point of a region, over (u, t)."""
        width = len(region.seen)
        slope = self.sign * self.functional.slopes(region.point)[0, :width]
        return np.asarray(region.gradients(slope[None, :])[0], dtype=np.float64)


def follow_curve(
    curve: Curve, start: Point, region: Region | None = None
) -> tuple[float, Point | None]:
    """How far the functional goes, and the point where it ends.

    Parameters
    ----------
    start
        A point within the bounds and below the level.
    region
        That of ``start``, where it is known.

    Returns
    -------
    value, point
        The point is None, and the value infinite, where nothing bounds the functional.
    """
    task, point = curve.task, start
    room = curve.level - start.h
    weight, before = 0.0, 0.0
    for _ in range(_STEPS):
        here = region_at(task, point) if region is None else region
        region = None
        left = curve.level - here.floor
        gain = curve.gain(point)
        if not np.isfinite(gain) or left <= 0 or here.broken:
            break
        gradient = curve.gradient(here)
        onward = reach_far(here, gradient, float(np.sqrt(left)), np.zeros(len(gradient)), weight)
        if onward.value == -np.inf:
            break
        if onward.place is None:
            return np.inf, None
        dust = max(_DUST * float(np.linalg.norm(gradient)), 1e-12 * abs(curve.origin))
        if abs(onward.value) <= dust:
            return gain, point
        size = abs(onward.value)
        if size <= _NEAR * abs(gain) or size**2 <= _LESS * abs(gain) * before:
            return gain + onward.value, point
        weight, before = onward.weight, size
        following = moved_by(task, point, here.step(onward.place))
        if following is None or following.h > curve.level + room:
            break
        rest = _rest(curve, here, gradient, onward, following)
        if rest is not None:
            return curve.gain(following) + rest, following
        point = following
    return _climb(curve, start)


def _rest(
    curve: Curve, region: Region, gradient: Vector, reach: Reach, point: Point
) -> float | None:
    """What is left to add at the end of the linear problem, where that is the curved one's too.

    It is where the pull, the slopes of h and the prices balance with the slopes that the point
    itself has, and its bounds hold: often, because not all functionals feel the numbers. None
    where they do not, or it cannot be told.
    """
    task, bounds = curve.task, region.bounds
    radius = float(np.sqrt(max(curve.level - region.floor, 0.0)))
    pull = reach.weight / float(np.linalg.norm(gradient))
    left = curve.level - point.h
    if reach.place is None or pull == 0 or abs(left) > _LEFT * radius**2:
        return None
    count = len(task.bounded)
    fluxes = bounds.sources < count
    values = point.values[task.bounded]
    beyond = np.maximum(task.low - values, values - task.high)[bounds.sources[fluxes]]
    if (beyond / bounds.norms[fluxes]).max(initial=0.0) > _BEYOND * radius:
        return None
    width = len(point.tangent[0])
    balance = point.design.T @ point.residuals
    balance += pull * curve.sign * curve.functional.slopes(point)[0]
    prices = np.zeros(len(bounds.norms)) if reach.prices is None else reach.prices / bounds.norms
    for i in np.flatnonzero(prices).tolist():
        source, price = int(bounds.sources[i]), prices[i]
        if source < count:
            balance -= price * point.slopes[task.bounded[source]]
        else:
            balance[width - task.numbers + source - count] -= price
    unbalanced = float(np.abs(region.gradients(balance[None, :])).max(initial=0.0))
    return left / (2 * pull) if unbalanced <= _UNBALANCED * radius else None


def moved_by(task: Task, point: Point, step: Vector) -> Point | None:
    """The point a step away, its numbers kept within their ranges; None where there is none."""
    free = len(point.z)
    numbers = np.clip(point.numbers + step[free:], task.range_low, task.range_high)
    try:
        return point_at(task, point.chart, point.z + step[:free], numbers)
    except (ZeroDivisionError, np.linalg.LinAlgError):
        return None


def _climb(curve: Curve, start: Point) -> tuple[float, Point | None]:
    """Move the numbers in steps that each bring the functional farther out."""
    task = curve.task
    point = _outermost(curve, start.numbers)
    if point is None:
        return np.inf, None
    gain = curve.gain(point)
    for _ in range(_CLIMBS):
        here = region_at(task, point)
        left = curve.level - here.floor
        if left <= 0:
            break
        gradient = curve.gradient(here)
        onward = reach_far(here, gradient, float(np.sqrt(left)), np.zeros(len(gradient)))
        if onward.value == -np.inf:
            break
        if onward.place is None:
            return np.inf, None
        if onward.value <= _NEAR * max(abs(gain), 1e-12):
            return gain + max(onward.value, 0.0), point
        step = here.step(onward.place)[len(point.z) :]
        better = None
        factor = 1.0
        while better is None and factor > 1e-4:
            numbers = np.clip(
                point.numbers + factor * step, task.range_low, task.range_high
            )
            trial = _outermost(curve, numbers)
            if trial is not None and curve.gain(trial) >= gain + 0.1 * factor * onward.value:
                better = trial
            factor /= 2
        if better is None:
            break
        point, gain = better, curve.gain(better)
    return gain, point


def _outermost(curve: Curve, numbers: Vector) -> Point | None:
    """The point of given numbers at which the functional is farthest out, or None.

    Exact in one step, unless the functional is a quotient: then in a few.
    """
    task = curve.task
    try:
        chart = chart_at(task, numbers)
        point = point_at(task, chart, np.zeros(chart.kernel.shape[1]), numbers)
    except (ZeroDivisionError, np.linalg.LinAlgError):
        return None
    region = region_at(task, point, moving=False)
    try:
        found = nearest(region)
    except ArithmeticError:  # nothing is known there: the end is given as open, not as near
        return None
    if found.x is None:
        return None
    place = found.x
    point = point_at(task, chart, region.step(place), numbers)
    for _ in range(_STEPS):
        region = region_at(task, point, moving=False)
        left = curve.level - region.floor
        if left <= 0:
            return None
        gradient = curve.gradient(region)
        reach = reach_far(region, gradient, float(np.sqrt(left)), np.zeros(len(gradient)))
        if reach.place is None:
            return None
        before = curve.gain(point)
        point = point_at(task, chart, point.z + region.step(reach.place), numbers)
        if not curve.functional.curved[0]:
            break
        if abs(curve.gain(point) - before) <= 1e-9 * max(abs(before), 1e-12):
            break
    return point
