"""One point among many best fits: that of the least total flux."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.solving.chart import point_at
from fluxnet.solving.quadratic import solve_quadratic
from fluxnet.solving.region import Region, region_at
from fluxnet.solving.task import Task

__all__ = ["take_least_flux"]

Vector = NDArray[np.float64]


def take_least_flux(task: Task, region: Region) -> Region:
    """Move to the fluxes with the least sum of absolute values among those with the same fit.

    What the measurements see, and the uncertain numbers, stay as they are. Several points may
    share the least sum; then this is one of them.
    """
    hidden = region.unseen.shape[1]
    if not hidden:
        return region
    point, bounds = region.point, region.bounds
    changes = point.tangent @ region.unseen[: point.tangent.shape[1]]
    changes[~task.open_fluxes] = 0.0
    changes[np.abs(changes) < 1e-11 * np.abs(changes).max()] = 0.0
    moving = np.flatnonzero(np.abs(changes).max(axis=1) > 0)
    low, high = _signs(task, moving)
    costs = changes[moving[low]].sum(axis=0) - changes[moving[high]].sum(axis=0)
    both = moving[~(low | high)]
    count = len(both)
    rows = bounds.rows[:, region.dimension :]
    # |v + change t| <= w, for each flux whose sign is open.
    grid = np.vstack(
        [
            np.hstack([rows, np.zeros((len(rows), count))]),
            np.hstack([changes[both], -np.eye(count)]),
            np.hstack([-changes[both], -np.eye(count)]),
        ]
    )
    there = point.fluxes[both]
    ceiling = np.concatenate([np.maximum(bounds.high, 0.0), -there, there])
    floor = np.concatenate([np.minimum(bounds.low, 0.0), np.full(2 * count, -np.inf)])
    found = solve_quadratic(None, np.concatenate([costs, np.ones(count)]), grid, floor, ceiling)
    if found.x is None:
        return region
    step = region.step(np.concatenate([np.zeros(region.dimension), found.x[:hidden]]))
    free = len(point.z)
    return region_at(task, point_at(task, point.chart, point.z + step[:free], point.numbers))


def _signs(task: Task, moving: NDArray[np.intp]) -> tuple[NDArray[np.bool_], NDArray[np.bool_]]:
    """Which of some fluxes can never be negative, and which never positive."""
    shift = len(task.rows.base) - task.rows.count
    low, high = np.full(task.rows.count, -np.inf), np.full(task.rows.count, np.inf)
    own = task.bounded >= shift
    low[task.bounded[own] - shift] = task.low[own]
    high[task.bounded[own] - shift] = task.high[own]
    return low[moving] >= 0, (high[moving] <= 0) & (low[moving] < 0)
