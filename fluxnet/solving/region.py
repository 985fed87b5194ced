"""The bounds around one point of a fit, in coordinates in which h is a squared distance.

A step d in the point's coordinates is written d = P u + N t. u has one coordinate for every
direction that the measurements see, scaled so that h = floor + ||u - centre||^2; t holds the
directions that they do not see. The bounds become rows over (u, t). Where no uncertain number
moves this is no approximation.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.solving.chart import Point, flux_scale
from fluxnet.solving.quadratic import Outcome, QuadraticSolution, solve_scaled
from fluxnet.solving.small_programme import SmallProgramme
from fluxnet.solving.task import Task

__all__ = ["Bounds", "Region", "nearest", "region_at"]

Vector = NDArray[np.float64]

_FLAT = 1e-11
"""A row that a unit step changes by less than this part of its terms is a constant."""
_DUST = 1e-11
"""A coefficient below this part of its row's norm is what rounding left of none."""
_ALIKE = 10
"""Rows of norm 1 that agree to so many decimals are parallel."""
_CONSTANT = 1e-7
"""By how much of its terms a constant row may miss its bound and still be rounding."""


@record
class Bounds:
    """Rows over (u, t) with bounds; ``sources`` are their places in the task.

    Places count the task's bounded rows first, then the ranges of its uncertain numbers. Rows
    have norm 1; ``sizes`` are their absolute values, ``norms`` what they were divided by.
    """

    rows: Vector
    low: Vector
    high: Vector
    sources: NDArray[np.intp]
    sizes: Vector
    norms: Vector


@record
class Region:
    """Coordinates (u, t) around a point.

    ``seen`` (coordinates x u) is P, ``unseen`` (coordinates x t) is N, ``centre`` the u of
    least h, ``floor`` that h. ``broken`` are the sources of bounds that no step can meet.
    ``hessian`` is that of half the square of u, over (u, t).
    """

    point: Point
    seen: Vector
    unseen: Vector
    centre: Vector
    floor: float
    bounds: Bounds
    broken: tuple[int, ...]
    hessian: Vector

    @property
    def dimension(self) -> int:
        """How many coordinates u there are."""
        return int(self.seen.shape[1])

    def step(self, place: Vector) -> Vector:
        """The step in the point's own coordinates to a place (u, t)."""
        moved: Vector = self.seen @ place[: self.dimension] + self.unseen @ place[self.dimension :]
        return moved

    def gradients(self, slopes: Vector) -> Vector:
        """Slopes in the point's coordinates (functionals x coordinates) turned to (u, t)."""
        return np.hstack([slopes @ self.seen, slopes @ self.unseen])

    def programme(self, gradient: Vector) -> SmallProgramme:
        """Minimise half the square of u plus a linear form of (u, t), bounds kept."""
        bounds = self.bounds
        return SmallProgramme(
            self.hessian, gradient, bounds.rows, bounds.low, bounds.high, bounds.sizes, 1.0
        )


def region_at(task: Task, point: Point, *, moving: bool = True) -> Region:
    """The region around a point.

    Parameters
    ----------
    moving
        Whether the uncertain numbers may move; if not, only fluxes are coordinates.
    """
    free = len(point.z)
    numbers = task.numbers if moving else 0
    width = free + numbers
    design = point.design[:, :width]
    rank = task.seen + numbers
    left, sizes, right = np.linalg.svd(design, full_matrices=True)
    seen = right[:rank].T / sizes[:rank]
    unseen = right[rank:].T
    scale = flux_scale(task, point)
    reach = np.abs(point.tangent[:, :width] @ unseen).max(axis=0, initial=0.0)
    unseen = unseen * np.where(reach > 0, scale / np.where(reach > 0, reach, 1.0), 1.0)
    centre = left[:, :rank].T @ point.residuals
    floor = max(0.0, point.h - float(centre @ centre))
    bounds, broken = _bounds(task, point, seen, unseen, width)
    hessian = np.zeros((width, width))
    hessian[:rank, :rank] = np.eye(rank)
    return Region(point, seen, unseen, centre, floor, bounds, broken, hessian)


def _bounds(
    task: Task, point: Point, seen: Vector, unseen: Vector, width: int
) -> tuple[Bounds, tuple[int, ...]]:
    slopes = point.slopes[task.bounded, :width]
    values = point.values[task.bounded]
    low, high = task.low - values, task.high - values
    terms = np.abs(task.rows.base[task.bounded]) @ np.abs(point.fluxes)
    moved = width - len(point.z)
    if moved:
        own = np.zeros((moved, width))
        own[:, len(point.z) :] = np.eye(moved)
        slopes = np.vstack([slopes, own])
        low = np.concatenate([low, task.range_low - point.numbers])
        high = np.concatenate([high, task.range_high - point.numbers])
        terms = np.concatenate([terms, np.abs(point.numbers) + task.sd])
    rows = np.hstack([slopes @ seen, slopes @ unseen])
    closed = np.ones(len(rows), dtype=bool)
    closed[: len(task.bounded)] = ~task.open_bounds
    rows[closed, seen.shape[1] :] = 0.0
    sizes = np.sqrt(np.einsum("ij,ij->i", rows, rows))
    scale = flux_scale(task, point)
    flat = sizes <= _FLAT * np.maximum(terms, 1e-3 * scale)
    missed = np.maximum(np.maximum(low, -high), 0.0)
    broken = np.flatnonzero(flat & (missed > _CONSTANT * np.maximum(terms, 1e-3 * scale)))
    kept = np.flatnonzero(~flat & (np.isfinite(low) | np.isfinite(high)))
    norms = sizes[kept]
    rows = rows[kept] / norms[:, None]
    rows[np.abs(rows) < _DUST] = 0.0
    low, high = low[kept] / norms, high[kept] / norms
    some = _tightest(rows, low, high)
    rows = rows[some]
    bounds = Bounds(rows, low[some], high[some], kept[some], np.abs(rows), norms[some])
    return bounds, tuple(broken.tolist())


def _tightest(rows: Vector, low: Vector, high: Vector) -> list[int]:
    """The rows that bound anything beside those that are parallel to them.

    The fluxes of a chain of reactions are all parallel, so that few of them are left.
    """
    if not rows.size:
        return list(range(len(rows)))
    sizes = np.abs(rows)
    lead = rows[np.arange(len(rows)), (sizes > 0.3 * sizes.max(axis=1)[:, None]).argmax(axis=1)]
    turned = lead < 0
    keys = np.round(rows / np.where(turned, -1.0, 1.0)[:, None], _ALIKE) + 0.0
    floors = np.where(turned, -high, low).tolist()
    ceilings = np.where(turned, -low, high).tolist()
    below: dict[bytes, int] = {}
    above: dict[bytes, int] = {}
    for i, key in enumerate(map(bytes, keys)):
        if floors[i] > floors[below.setdefault(key, i)]:
            below[key] = i
        if ceilings[i] < ceilings[above.setdefault(key, i)]:
            above[key] = i
    return sorted({*below.values(), *above.values()})


def nearest(region: Region, target: Vector | None = None) -> QuadraticSolution:
    """The place within the bounds whose u is nearest to the centre (or another target).

    The value of the answer is half the squared distance, less half of ``target`` squared. The
    outcome is OPTIMAL or INFEASIBLE.

    Raises
    ------
    ArithmeticError
        Where no solver's answer passes its check: then nothing may be concluded.
    """
    if region.broken:
        nothing = np.zeros(len(region.bounds.low))
        return QuadraticSolution(Outcome.INFEASIBLE, None, np.nan, nothing, np.nan)
    centre = region.centre if target is None else target
    hidden = region.unseen.shape[1]
    found = solve_scaled(region.programme(np.concatenate([-centre, np.zeros(hidden)])))
    if found.outcome not in (Outcome.OPTIMAL, Outcome.INFEASIBLE):
        raise ArithmeticError("the nearest fluxes within the bounds could not be found")
    return found
