"""Measured ratios whose denominator nothing determines: at which size they are met best.

A ratio A / B = r ± s weighs A - r B with s times B. Where B is free a fit that weighs with one
guess of it finds B far below the guess, where any ratio is cheap. So B is held at sizes ten
times apart, where the weight is right; of those that fit about equally well the smallest is
taken: larger ones only make what is fixed matter less.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from fluxnet.ground.record import record
from fluxnet.network.model import Quantity
from fluxnet.solving.build import rebuild
from fluxnet.solving.chart import Point, point_at
from fluxnet.solving.descent import fit_bounded, fit_equalities
from fluxnet.solving.region import Region, region_at
from fluxnet.solving.representative import take_least_flux
from fluxnet.solving.task import Task, whitening
from fluxnet.solving.weighing import Weighed

__all__ = ["AtScale", "find_scale", "is_met"]

_SIZES = tuple(10.0**k for k in range(-2, 4))
_ALIKE = 0.5
"""Sizes whose h differ by less than this fit about equally well."""
_FAR = 1.0
"""A ratio within so many of its sd is met."""


@record
class AtScale:
    """A fit with the weights of the sizes that it shows, and its region.

    ``held`` is the region with the denominator held where it is.
    """

    weighed: Weighed
    region: Region
    held: Region


def is_met(weighed: Weighed, point: Point, place: int) -> bool:
    """Whether a measured ratio is within one sd at a point, its denominator as it is there."""
    row = weighed.built.problem.rows[place]
    over, below = (float(point.values[i]) for i in weighed.ratios[place])
    if row.ratio is None or row.sd is None or not row.denominator:
        return True
    sd = row.sd / row.denominator
    return abs(over - row.ratio * below) <= _FAR * sd * abs(below)


def find_scale(weighed: Weighed, place: int) -> AtScale | None:
    """The fit with the denominator of one measured ratio held at the best of several sizes.

    Parameters
    ----------
    place
        Of the ratio's row; its present denominator is a guess of the order of the other rates.

    Returns
    -------
    AtScale or None
        None where no size is possible.
    """
    row = weighed.built.problem.rows[place]
    if row.quantity is None or row.quantity.denominator is None or not row.denominator:
        return None
    tried: list[tuple[float, AtScale]] = []
    for factor in _SIZES:
        try:
            found = _held_at(weighed, place, row.quantity.denominator, factor * row.denominator)
        except ArithmeticError:
            continue  # no answer at this size passed its check; the others tell
        if found is not None:
            tried.append((found.region.point.h, found))
    if not tried:
        return None
    least = min(h for h, _ in tried)
    return next(found for h, found in tried if h <= least + _ALIKE)


def _held_at(weighed: Weighed, place: int, below: Quantity, size: float) -> AtScale | None:
    """The fit with a denominator held at a size, and weighed with it."""
    estimated = weighed.built.estimated
    built = replace(rebuild(weighed.built, denominators={below: size}), estimated=estimated)
    task = replace(weighed.task, whitening=whitening(built.covariance))
    best = fit_equalities(task, weighed.best.numbers)
    held = _with_bound(task, weighed.ratios[place][1], size)
    bounded = fit_bounded(held, best)
    if bounded is None:
        return None
    inside = take_least_flux(held, bounded[1])
    point = inside.point
    free = region_at(task, point_at(task, point.chart, point.z, point.numbers))
    return AtScale(Weighed(built, task, best, weighed.ratios), free, inside)


def _with_bound(task: Task, row: int, size: float) -> Task:
    """The task with one more bound: a row held at a size."""
    return replace(
        task,
        bounded=np.append(task.bounded, row),
        low=np.append(task.low, size),
        high=np.append(task.high, size),
        open_bounds=np.append(task.open_bounds, True),
    )
