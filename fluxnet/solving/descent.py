"""The best fit, with bounds lifted and kept: Gauss-Newton steps in the uncertain numbers.

At given numbers the fluxes are a linear (or quadratic) problem; so a step is judged by the h
that is left when the fluxes have followed, and is halved until h falls.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.solving.chart import Chart, Point, chart_at, point_at
from fluxnet.solving.region import Region, nearest, region_at
from fluxnet.solving.task import Task, least_squares_step

__all__ = ["fit_bounded", "fit_equalities"]

Vector = NDArray[np.float64]
_STEPS = 60
_HALVINGS = 30


def fit_equalities(task: Task, start: Vector | None = None) -> Point:
    """Minimise h over fluxes and uncertain numbers, all bounds lifted.

    Parameters
    ----------
    start
        Where the uncertain numbers start from; None starts from their own values.

    Returns
    -------
    Point
        In a chart of its own place. Directions that nothing sees stay at the shortest.
    """
    numbers = task.rows.start if start is None else start
    chart = chart_at(task, numbers)
    point = _follow(task, chart, numbers)
    for _ in range(_STEPS if task.numbers else 0):
        step = least_squares_step(point.design, point.residuals, task.seen + task.numbers)
        left = point.residuals - point.design @ step
        promised = point.h - float(left @ left)
        if promised <= 1e-15 * (1 + point.h):
            break
        better = _shorten(task, point, step[len(point.z) :], promised)
        if better is None:
            break
        chart = chart_at(task, better.numbers)
        point = _follow(task, chart, better.numbers)
    return point


def _shorten(task: Task, point: Point, step: Vector, promised: float) -> Point | None:
    """The first of the step, its half, its quarter ... that lowers h enough."""
    factor = 1.0
    for _ in range(_HALVINGS):
        try:
            trial = _follow(task, point.chart, point.numbers + factor * step)
        except (ZeroDivisionError, np.linalg.LinAlgError):
            trial = None
        if trial is not None and trial.h <= point.h - 1e-4 * factor * promised:
            return trial
        factor /= 2
    return None


def _follow(task: Task, chart: Chart, numbers: Vector) -> Point:
    """The best fluxes at given numbers."""
    free = chart.kernel.shape[1]
    start = point_at(task, chart, np.zeros(free), numbers)
    if not len(task.soft):
        return start
    measured = len(task.soft)
    step = least_squares_step(
        start.design[:measured, :free], start.residuals[:measured], task.seen
    )
    return point_at(task, chart, step, numbers)


def fit_bounded(task: Task, best: Point) -> tuple[Point, Region] | None:
    """Minimise h over fluxes and uncertain numbers with every bound kept.

    Parameters
    ----------
    best
        The fit of :func:`fit_equalities`.

    Returns
    -------
    Point, Region
        None where no fluxes meet the bounds, at the numbers that were tried: those of
        ``best``, their own values, and where the slopes at ``best`` lead.
    """
    region = region_at(task, best)
    found = nearest(region)
    if found.x is not None and not task.numbers:
        point = point_at(task, best.chart, best.z + region.step(found.x), best.numbers)
        return point, region_at(task, point)
    if found.x is not None:
        away = found.x[: region.dimension] - region.centre
        if float(away @ away) <= 1e-12 * (1 + best.h):
            step = region.step(found.x)[: len(best.z)]
            point = point_at(task, best.chart, best.z + step, best.numbers)
            return point, region_at(task, point)
    elif not task.numbers:
        return None
    entry = _entry(task, best, region, found.x)
    if entry is None:
        return None
    point = entry
    for _ in range(_STEPS):
        region = region_at(task, point)
        found = nearest(region)
        if found.x is None:
            break
        away = found.x[: region.dimension] - region.centre
        promised = point.h - region.floor - float(away @ away)
        if promised <= 1e-13 * (1 + point.h):
            break
        better = _bounded_step(task, point, region.step(found.x), promised)
        if better is None:
            break
        point = better
    return point, region_at(task, point)


def _entry(task: Task, best: Point, region: Region, place: Vector | None) -> Point | None:
    """A first point within the bounds."""
    inside = [np.clip(best.numbers, task.range_low, task.range_high)]
    if place is not None:
        led = best.numbers + region.step(place)[len(best.z) :]
        inside.insert(0, np.clip(led, task.range_low, task.range_high))
    inside.append(np.clip(task.rows.start, task.range_low, task.range_high))
    for numbers in inside:
        point = _follow_bounded(task, numbers)
        if point is not None:
            return point
    return None


def _bounded_step(task: Task, point: Point, step: Vector, promised: float) -> Point | None:
    """The first of the step, its half, its quarter ... that lowers h enough."""
    factor = 1.0
    for _ in range(_HALVINGS):
        numbers = point.numbers + factor * step[len(point.z) :]
        trial = _follow_bounded(task, np.clip(numbers, task.range_low, task.range_high))
        if trial is not None and trial.h <= point.h - 1e-4 * factor * promised:
            return trial
        factor /= 2
    return None


def _follow_bounded(task: Task, numbers: Vector) -> Point | None:
    """The best fluxes within the bounds at given numbers, or None where there are none."""
    try:
        chart = chart_at(task, numbers)
        start = point_at(task, chart, np.zeros(chart.kernel.shape[1]), numbers)
    except (ZeroDivisionError, np.linalg.LinAlgError):
        return None
    region = region_at(task, start, moving=False)
    found = nearest(region)
    if found.x is None:
        return None
    return point_at(task, chart, region.step(found.x), numbers)
