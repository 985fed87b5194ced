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
from fluxnet.solving.forces import Forces, forces_of, missing_at
from fluxnet.solving.functionals import Functionals
from fluxnet.solving.reach import reach_far
from fluxnet.solving.region import Region, nearest, region_at
from fluxnet.solving.task import Task

__all__ = ["Curve", "End", "follow_curve", "moved_by"]

Vector = NDArray[np.float64]

_STEPS = 12
_CLIMBS = 40
_NEAR = 1e-6
"""A step of this part of the way is the last: what it adds is added by the slope."""
_LESS = 1e-12
"""So is one after which the next, that grows shorter at the same ratio, is this part of it."""
_DUST = 1e-8
"""A step of this part of what one sd of the measurements brings is the solver's rounding."""


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

    def missing(self, forces: Forces, point: Point) -> float | None:
        """What it lacks at a point to its end, None where that is not known."""
        slope = self.sign * self.functional.slopes(point)[0]
        return missing_at(self.task, forces, point, self.level, slope)

    def gradient(self, region: Region) -> Vector:
        """Its slope at the point of a region, over (u, t)."""
        width = len(region.seen)
        slope = self.sign * self.functional.slopes(region.point)[0, :width]
        return np.asarray(region.gradients(slope[None, :])[0], dtype=np.float64)


@record
class End:
    """Where a functional ends: how far it goes, and the point and forces there.

    ``point`` is None where nothing bounds the functional (the value is infinite), ``forces``
    where they were not needed to tell.
    """

    value: float
    point: Point | None = None
    forces: Forces | None = None


def follow_curve(curve: Curve, region: Region, place: Vector) -> End:
    """How far the functional goes, and the point where it ends.

    Parameters
    ----------
    region
        That of a point within the bounds and below the level.
    place
        A place within the region and as near to its centre, from which it is to go on.
    """
    task, point, here = curve.task, region.point, region
    room = curve.level - point.h
    weight, before = 0.0, 0.0
    for _ in range(_STEPS):
        left = curve.level - here.floor
        gain = curve.gain(point)
        if not np.isfinite(gain) or left <= 0 or here.broken:
            break
        gradient, radius = curve.gradient(here), float(np.sqrt(left))
        onward = reach_far(here, gradient, radius, place, weight)
        if onward.value == -np.inf:
            break
        if onward.place is None:
            return End(np.inf)
        dust = max(_DUST * float(np.linalg.norm(gradient)), 1e-12 * abs(curve.origin))
        if abs(onward.value) <= dust:
            return End(gain, point)
        forces = forces_of(here, onward.prices, radius)
        size = abs(onward.value)
        if size <= _NEAR * abs(gain) or size**2 <= _LESS * abs(gain) * before:
            return End(gain + onward.value, point, forces)
        weight, before = onward.weight, size
        following = moved_by(task, point, here.step(onward.place))
        if following is None or following.h > curve.level + room:
            break
        missing = curve.missing(forces, following)
        if missing is not None:
            return End(curve.gain(following) + missing, following, forces)
        point = following
        here, place = region_at(task, point), np.zeros(len(gradient))
    return _climb(curve, region.point)


def moved_by(task: Task, point: Point, step: Vector) -> Point | None:
    """The point a step away, its numbers kept within their ranges; None where there is none."""
    free = len(point.z)
    numbers = np.clip(point.numbers + step[free:], task.range_low, task.range_high)
    try:
        return point_at(task, point.chart, point.z + step[:free], numbers)
    except (ZeroDivisionError, np.linalg.LinAlgError):
        return None


def _climb(curve: Curve, start: Point) -> End:
    """Move the numbers in steps that each bring the functional farther out."""
    task = curve.task
    point = _outermost(curve, start.numbers)
    if point is None:
        return End(np.inf)
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
            return End(np.inf)
        if onward.value <= _NEAR * max(abs(gain), 1e-12):
            return End(gain + max(onward.value, 0.0), point)
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
    return End(gain, point)


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
