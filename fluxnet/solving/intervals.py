"""The ranges of functionals of a fit: at the best fit, and at 95 %.

A value belongs to the 95 % interval when some fluxes within all bounds take it with
h - h_min <= 3.84 (profile likelihood; for a determined value away from bounds that is
value ± 1.96 sd). Where uncertain numbers move, or the functional is a quotient, the end of an
interval is approached by steps that are linear each, until it no longer moves.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fluxnet.solving.functionals import Functionals, Ratios
from fluxnet.solving.reach import Reach, reach_far, reach_flat
from fluxnet.solving.region import Region, region_at
from fluxnet.solving.statistics import chi_squared_quantile
from fluxnet.solving.task import Point, Task, point_at

__all__ = ["Intervals", "find_intervals"]

Vector = NDArray[np.float64]

_STEPS = 25
_NEAR = 1e-3


@dataclass(frozen=True, slots=True)
class Intervals:
    """One entry a functional; infinite where nothing bounds it.

    ``sd`` is that of the linear formula, NaN where the functional is not determined.
    """

    values: Vector
    sd: Vector
    low: Vector
    high: Vector
    best_low: Vector
    best_high: Vector


@dataclass(frozen=True, slots=True)
class _Search:
    """What all searches of one call share."""

    task: Task
    region: Region
    functionals: Functionals
    level: float
    gradients: Vector
    values: Vector


def find_intervals(
    task: Task,
    region: Region,
    functionals: Functionals,
    determined: NDArray[np.bool_] | None = None,
) -> Intervals:
    """The sd and ranges of functionals around a fit.

    Parameters
    ----------
    region
        That of the fit with bounds: see :func:`fluxnet.solving.descent.fit_bounded`.
    determined
        Whether each functional is determined, where that was decided exactly; None decides by
        the slopes.
    """
    point = region.point
    level = point.h + chi_squared_quantile(0.95, 1)
    values = functionals.values(point)
    gradients = region.gradients(functionals.slopes(point))
    seen = region.dimension
    sizes = np.linalg.norm(gradients, axis=1)
    hidden = np.abs(gradients[:, seen:]).max(axis=1, initial=0.0) > 1e-10 * sizes
    if determined is not None:
        hidden = ~determined
    gradients[~hidden, seen:] = 0.0
    sd = np.where(hidden, np.nan, np.linalg.norm(gradients[:, :seen], axis=1))
    search = _Search(task, region, functionals, level, gradients, values)
    ends = np.tile(values[:, None], (1, 4))
    constant = sizes <= 1e-12 * np.maximum(np.abs(values), 1e-3 * _scale(point))
    sd[constant] = 0.0
    for members in _alike(gradients, ~constant & np.isfinite(values)):
        _fill(search, members, ends, hidden)
    return Intervals(values, sd, ends[:, 0], ends[:, 1], ends[:, 2], ends[:, 3])


def _scale(point: Point) -> float:
    return float(np.abs(point.fluxes).max(initial=0.0)) or 1.0


def _alike(gradients: Vector, wanted: NDArray[np.bool_]) -> list[list[tuple[int, float]]]:
    """Groups of functionals with the same gradient up to a factor, with the factors."""
    groups: dict[bytes, list[tuple[int, float]]] = {}
    for i in np.flatnonzero(wanted).tolist():
        lead = gradients[i, int(np.argmax(np.abs(gradients[i]) > 0.3 * np.abs(gradients[i]).max()))]
        key = (np.round(gradients[i] / lead, 8) + 0.0).tobytes()
        groups.setdefault(key, []).append((i, float(lead)))
    return list(groups.values())


def _fill(
    search: _Search, members: list[tuple[int, float]], ends: Vector, hidden: NDArray[np.bool_]
) -> None:
    """The ends of the intervals of functionals that go up and down together."""
    first, lead = members[0]
    origin = np.zeros(search.gradients.shape[1])
    for sign in (-1.0, 1.0):
        best = origin
        if hidden[first]:
            flat = _flat_end(search, first, sign)
            _note(search, members, ends, 2, sign, flat.value)
            if flat.place is None:
                _note(search, members, ends, 0, sign, np.inf)
                continue
            best = flat.place
        reach, there = _end(search, first, sign, best)
        _note(search, members, ends, 0, sign, reach)
        if there is None or not _is_curved(search):
            continue
        values, slopes = search.functionals.values(there), search.functionals.slopes(there)
        for i, other in members[1:]:
            factor = other / lead
            moved = factor * (values[first] - search.values[first])
            parallel = np.allclose(
                slopes[i], factor * slopes[first], rtol=0,
                atol=1e-6 * float(np.abs(slopes[i]).max(initial=0.0)),
            )
            if not parallel or abs(values[i] - search.values[i] - moved) > 1e-6 * abs(moved):
                turn = sign if factor > 0 else -sign
                own, _ = _end(search, i, turn, best)
                ends[i, 1 if turn > 0 else 0] = search.values[i] + turn * own


def _note(
    search: _Search,
    members: list[tuple[int, float]],
    ends: Vector,
    column: int,
    sign: float,
    reach: float,
) -> None:
    """Write down an end for all functionals of a group."""
    lead = members[0][1]
    for i, other in members:
        factor = other / lead
        turn = sign if factor > 0 else -sign
        ends[i, column + (1 if turn > 0 else 0)] = search.values[i] + turn * abs(factor) * reach


def _is_curved(search: _Search) -> bool:
    return search.task.numbers > 0 or isinstance(search.functionals, Ratios)


def _flat_end(search: _Search, i: int, sign: float) -> Reach:
    """How far a functional goes at the best fit."""
    origin = np.zeros(search.gradients.shape[1])
    flat = reach_flat(search.region, sign * search.gradients[i], origin)
    if flat.place is None or not isinstance(search.functionals, Ratios):
        return flat
    point = search.region.point
    step = search.region.step(flat.place)[: len(point.z)]
    there = point_at(search.task, point.chart, point.z + step, point.numbers)
    value = float(search.functionals.values(there)[i])
    return Reach(sign * (value - search.values[i]), flat.place, flat.pressed)


def _end(
    search: _Search, i: int, sign: float, start: Vector
) -> tuple[float, Point | None]:
    """How far a functional goes at 95 %, and the point where it ends."""
    task, region = search.task, search.region
    radius = np.sqrt(max(search.level - region.floor, 1e-12))
    reach = reach_far(region, sign * search.gradients[i], float(radius), start)
    if reach.place is None or not _is_curved(search):
        return reach.value, None
    origin = region.point
    best: tuple[float, Point] = (0.0, origin)
    centre, step = origin, region.step(reach.place)
    factor = 1.0
    for _ in range(_STEPS):
        point = _moved(task, centre, factor * step)
        if point is None or point.h > search.level + 0.5 * (search.level - origin.h) / factor:
            factor /= 2
            if factor < 1e-4:
                break
            continue
        value = sign * float(search.functionals.values(point)[i] - search.values[i])
        here = region_at(task, point)
        room = search.level - here.floor
        if not np.isfinite(value) or room <= 0 or here.broken:
            factor /= 2
            continue
        slope = sign * search.functionals.slopes(point)[i]
        gradient = here.gradients(slope[None, :])[0]
        onward = reach_far(here, gradient, float(np.sqrt(room)), np.zeros(len(gradient)))
        if onward.place is None:
            return np.inf, None
        if point.h <= search.level * (1 + 1e-9) + 1e-9 and value > best[0]:
            best = (value, point)
        width = max(abs(value), abs(onward.value), 1e-12)
        if abs(onward.value) <= _NEAR * width:
            # What is left is added by the slope: the error is of the order of its square.
            return value + onward.value, point
        centre, step, factor = point, here.step(onward.place), 1.0
    return best


def _moved(task: Task, point: Point, step: Vector) -> Point | None:
    """The point a step away, its numbers kept within their ranges."""
    free = len(point.z)
    numbers = np.clip(point.numbers + step[free:], task.range_low, task.range_high)
    try:
        return point_at(task, point.chart, point.z + step[:free], numbers)
    except (ZeroDivisionError, np.linalg.LinAlgError):
        return None

