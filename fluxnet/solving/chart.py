"""The fluxes that meet all equalities, and how far they are from the data.

Fluxes v and uncertain numbers p meet E(p) v = e. The solutions are written in coordinates:
z within the null space of E at one place, and p itself; what is left of v then follows from
E. So every point of a fit balances to rounding, wherever p has moved to.

Only a few coefficients move, so that E(p) = E + B C R with a small core C (see
:mod:`fluxnet.solving.moving`). With G a generalised inverse of E, the fluxes at p are

    v = K z + G e - G B C w,    w = R v = (1 + R G B C)^-1 R (K z + G e)

(Sherman, Morrison and Woodbury, from memory), which takes one small system of equations at
each place, however large the network is.
"""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.solving.task import Task

__all__ = ["Chart", "Point", "chart_at", "flux_scale", "point_at", "points_at"]

Vector = NDArray[np.float64]


@record
class Chart:
    """Coordinates around one place: the fluxes of least size that meet E v = e, plus K z.

    ``left`` picks independent combinations of the equalities, ``core`` is that of the moving
    rows at the place. ``kernel`` is K, ``origin`` is G e and ``push`` is G B. The ``values`` of
    all rows are ``by_kernel`` z + ``values`` at the place, and ``by_core`` C w more elsewhere;
    ``inner_kernel``, ``inner_origin`` and ``inner_push`` are R times K, G e and G B.
    """

    left: Vector
    core: Vector
    kernel: Vector
    origin: Vector
    push: Vector
    by_kernel: Vector
    values: Vector
    by_core: Vector
    inner_kernel: Vector
    inner_origin: Vector
    inner_push: Vector


def chart_at(task: Task, numbers: Vector) -> Chart:
    """Coordinates around given values of the uncertain numbers."""
    moving = task.rows
    rows = moving.at(numbers)
    equalities = rows[task.equal]
    by_row, by_column = _equilibrate(equalities)
    left, sizes, right = np.linalg.svd(
        equalities * by_row[:, None] * by_column, full_matrices=True
    )
    rank = task.rank
    kernel = right[rank:].T * by_column[:, None]
    image = right[:rank].T * by_column[:, None]
    left = left[:, :rank].T * by_row

    def solved(right_sides: Vector) -> Vector:
        """G times right sides, with what rounding left mended once."""
        found = image @ ((left @ right_sides).T / sizes[:rank]).T
        again = left @ (right_sides - equalities @ found)
        mended: Vector = found + image @ (again.T / sizes[:rank]).T
        return mended

    origin, push = solved(task.equal_values), solved(moving.outer[task.equal])
    return Chart(
        left=left,
        core=moving.change(numbers).core,
        kernel=kernel,
        origin=origin,
        push=push,
        by_kernel=rows @ kernel,
        values=rows @ origin,
        by_core=moving.outer - rows @ push,
        inner_kernel=moving.inner @ kernel,
        inner_origin=moving.inner @ origin,
        inner_push=moving.inner @ push,
    )


def _equilibrate(matrix: Vector) -> tuple[Vector, Vector]:
    """Factors for rows and columns that bring all entries near 1: powers of two."""
    rows, columns = np.zeros(matrix.shape[0]), np.zeros(matrix.shape[1])
    if not matrix.size:
        return np.exp2(rows), np.exp2(columns)
    with np.errstate(divide="ignore"):
        sizes = np.log2(np.abs(matrix))
    there = np.isfinite(sizes)
    sizes = np.where(there, sizes, 0.0)
    by_row, by_column = np.maximum(there.sum(axis=1), 1), np.maximum(there.sum(axis=0), 1)
    for _ in range(6):
        rows = -((sizes + columns) * there).sum(axis=1) / by_row
        columns = -((sizes + rows[:, None]) * there).sum(axis=0) / by_column
    return np.exp2(np.round(rows)), np.exp2(np.round(columns))


@record
class Point:
    """Fluxes and numbers that meet all equalities, with their slopes and distances.

    ``tangent`` (fluxes x coordinates) is the derivative of the fluxes by z and the numbers;
    ``slopes`` (rows x coordinates) that of every row's value. ``residuals`` are the whitened
    distances of measured rows and numbers, ``design`` their negative derivative; ``h`` the sum
    of their squares. Many points of one chart are one point whose arrays (but the chart's)
    have one axis more, the first.
    """

    chart: Chart
    z: Vector
    numbers: Vector
    fluxes: Vector
    values: Vector
    tangent: Vector
    slopes: Vector
    residuals: Vector
    design: Vector

    @property
    def h(self) -> float:
        """The weighted sum of squares."""
        return float(self.residuals @ self.residuals)

    def some(self, wanted: NDArray[Any]) -> Point:
        """Some of many points."""
        return Point(
            self.chart, self.z[wanted], self.numbers[wanted], self.fluxes[wanted],
            self.values[wanted], self.tangent[wanted], self.slopes[wanted],
            self.residuals[wanted], self.design[wanted],
        )  # fmt: skip


def point_at(task: Task, chart: Chart, z: Vector, numbers: Vector) -> Point:
    """The point of given coordinates.

    Raises
    ------
    ZeroDivisionError, numpy.linalg.LinAlgError
        Where the numbers are so far from the chart's that there is none.
    """
    return points_at(task, chart, z, numbers)


def points_at(task: Task, chart: Chart, z: Vector, numbers: Vector) -> Point:
    """Many points of one chart (the first axis of ``z`` and ``numbers``).

    Raises
    ------
    ZeroDivisionError, numpy.linalg.LinAlgError
        Where the numbers of one are so far from the chart's that there is none.
    """
    free, moved, many = z.shape[-1], task.numbers, z.shape[:-1]
    change = task.rows.change(numbers)
    core = change.core - chart.core
    inner: Vector = z @ chart.inner_kernel.T + chart.inner_origin
    turns: Vector = np.zeros((*inner.shape, free + moved))
    turns[..., :free] = chart.inner_kernel
    steps = np.zeros((*many, core.shape[-2], free + moved))
    if moved:
        system = np.eye(inner.shape[-1]) + chart.inner_push @ core
        inner = np.asarray(np.linalg.solve(system, inner[..., None])[..., 0], dtype=np.float64)
        by_number = (change.slopes @ inner[..., None, :, None])[..., 0]
        steps[..., free:] = by_number.swapaxes(-1, -2)
        turns[..., free:] = -chart.inner_push @ steps[..., free:]
        turns = np.asarray(np.linalg.solve(system, turns), dtype=np.float64)
        steps += core @ turns
    push = (core @ inner[..., None])[..., 0]
    fluxes = z @ chart.kernel.T + chart.origin - push @ chart.push.T
    values = z @ chart.by_kernel.T + chart.values + push @ chart.by_core.T
    tangent = -chart.push @ steps
    tangent[..., :free] += chart.kernel
    slopes = chart.by_core @ steps
    slopes[..., :free] += chart.by_kernel
    soft = len(task.soft)
    residuals = np.empty((*many, soft + moved))
    residuals[..., :soft] = (task.measured - values[..., task.soft]) @ task.whitening.T
    residuals[..., soft:] = (task.rows.start - numbers) / task.sd
    design = np.zeros((*many, soft + moved, free + moved))
    design[..., :soft, :] = task.whitening @ slopes[..., task.soft, :]
    design[..., soft:, free:] = np.diag(1 / task.sd)
    return Point(chart, z, numbers, fluxes, values, tangent, slopes, residuals, design)


def flux_scale(task: Task, point: Point) -> float:
    """The size of the largest flux of a point; of a usual one where all are zero."""
    largest = float(np.abs(point.fluxes).max(initial=0.0))
    return largest if largest > 1e-9 * task.scale else task.scale
