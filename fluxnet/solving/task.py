"""A fit in numbers: the fluxes that meet all equalities, and how far they are from the data.

Fluxes v and uncertain numbers p meet E(p) v = e. The solutions are written in coordinates:
z within the null space of E at one place, and p itself; what is left of v then follows from
E. So every point of a fit balances to rounding, wherever p has moved to.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.solving.build import Built
from fluxnet.solving.classify import Structure
from fluxnet.solving.forms import Form
from fluxnet.solving.moving import MovingRows, moving_rows
from fluxnet.solving.scaling import median_of

__all__ = [
    "Chart", "Point", "Task", "chart_at", "flux_scale", "least_squares_step", "point_at", "task_of",
    "whitening",
]

Vector = NDArray[np.float64]
Places = NDArray[np.intp]


@record
class Task:
    """What is to be fitted.

    ``equal`` are the places of equalities among ``rows``, with their ``equal_values``;
    ``soft`` those of measured rows, with their values ``measured`` and ``whitening``, the
    inverse of the Cholesky factor of their covariance; ``bounded`` those of rows with bounds
    ``low`` and ``high``. The uncertain numbers have ``sd`` and a range. ``rank`` of the
    equalities, and how many directions the soft rows have ``seen``, are known exactly.
    ``scale`` is the size of a usual flux, as values and bounds tell it. ``open_bounds`` and
    ``open_fluxes`` mark bounded rows and fluxes that are not determined, as decided exactly.
    """

    rows: MovingRows
    equal: Places
    equal_values: Vector
    soft: Places
    measured: Vector
    whitening: Vector
    bounded: Places
    low: Vector
    high: Vector
    sd: Vector
    range_low: Vector
    range_high: Vector
    rank: int
    seen: int
    scale: float
    open_bounds: NDArray[np.bool_]
    open_fluxes: NDArray[np.bool_]

    @property
    def numbers(self) -> int:
        """How many uncertain numbers there are."""
        return len(self.sd)


def task_of(built: Built, structure: Structure, extra: tuple[Form, ...] = ()) -> Task:
    """The fit of a problem whose structure is known.

    Raises
    ------
    MisuseError
        Where the covariance of the measured rows is not positive definite.
    """
    problem, exact = built.problem, structure.exact
    equal = [e.place for e in exact.equalities]
    held = set(equal) | set(built.measured)
    rows = moving_rows(built, extra)
    shift = len(extra)
    low = np.concatenate([problem.row_low, problem.column_low])
    high = np.concatenate([problem.row_high, problem.column_high])
    bounded = [
        i for i in range(len(low))
        if i not in held and exact.rows[i] and (np.isfinite(low[i]) or np.isfinite(high[i]))
    ]
    sds = np.array([u.sd for u in built.uncertain])

    def stacked(places: list[int]) -> Places:
        return np.array(
            [i if i < len(problem.rows) else i + shift for i in places], dtype=np.intp
        )

    equal_values = np.array([e.value for e in exact.equalities])
    sizes = np.abs(rows.base).max(axis=1, initial=0.0)
    sizes[sizes == 0] = 1.0
    told = [
        np.abs(equal_values) / sizes[stacked(equal)],
        np.abs(built.measured_values) / sizes[list(built.measured)],
        np.abs(low[bounded]) / sizes[stacked(bounded)],
        np.abs(high[bounded]) / sizes[stacked(bounded)],
    ]
    known = np.concatenate(told)
    known = known[np.isfinite(known) & (known > 0)]
    return Task(
        rows=rows,
        equal=stacked(equal),
        equal_values=equal_values,
        soft=np.array(built.measured, dtype=np.intp),
        measured=built.measured_values,
        whitening=whitening(built.covariance),
        bounded=stacked(bounded),
        low=low[bounded],
        high=high[bounded],
        sd=sds,
        range_low=np.array([u.low for u in built.uncertain]),
        range_high=np.array([u.high for u in built.uncertain]),
        rank=structure.rank,
        seen=structure.seen,
        scale=median_of(known) if len(known) else 1.0,
        open_bounds=np.array(
            [not structure.is_determined(exact.rows[i]) for i in bounded], dtype=bool
        ),
        open_fluxes=~np.array(structure.determined, dtype=bool),
    )


def whitening(covariance: Vector) -> Vector:
    """The matrix that turns errors with this covariance into independent ones of sd 1.

    Raises
    ------
    MisuseError
        Where the covariance is not positive definite.
    """
    if not len(covariance):
        return np.zeros((0, 0))
    sd = np.sqrt(np.diag(covariance))
    try:
        factor = np.linalg.cholesky(covariance / np.outer(sd, sd))
    except np.linalg.LinAlgError:
        raise MisuseError("the covariance of the measured rates is not positive") from None
    inverse: Vector = np.linalg.solve(factor, np.eye(len(sd))) / sd
    return inverse


@record
class Chart:
    """Coordinates around one place: v = kernel z + image y, where E(p) v = e gives y.

    ``left`` picks independent combinations of the equalities.
    """

    kernel: Vector
    image: Vector
    left: Vector


def chart_at(task: Task, numbers: Vector) -> Chart:
    """Coordinates around given values of the uncertain numbers."""
    equalities = task.rows.at(numbers)[task.equal]
    rows, columns = _equilibrate(equalities)
    scaled = equalities * rows[:, None] * columns
    left, _, right = np.linalg.svd(scaled, full_matrices=True)
    image = right[: task.rank].T * columns[:, None]
    kernel = right[task.rank :].T * columns[:, None]
    return Chart(kernel, image, left[:, : task.rank].T * rows)


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
    of their squares.
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


def point_at(task: Task, chart: Chart, z: Vector, numbers: Vector) -> Point:
    """The point of given coordinates.

    Raises
    ------
    ZeroDivisionError, numpy.linalg.LinAlgError
        Where the numbers are so far from the chart's that there is none.
    """
    rows = task.rows.at(numbers)
    equalities = chart.left @ rows[task.equal]
    inner = equalities @ chart.image
    across = equalities @ chart.kernel
    moved = task.numbers
    particular = chart.left @ task.equal_values
    y = np.linalg.solve(inner, particular - across @ z)
    fluxes = chart.kernel @ z + chart.image @ y
    by_number = task.rows.slopes_at(numbers, fluxes)
    push = np.hstack([across, chart.left @ by_number[task.equal]])
    tangent = -chart.image @ np.linalg.solve(inner, push)
    tangent[:, : len(z)] += chart.kernel
    slopes = rows @ tangent
    if moved:
        slopes[:, len(z) :] += by_number
    values = rows @ fluxes
    residuals = task.whitening @ (task.measured - values[task.soft])
    design = task.whitening @ slopes[task.soft]
    if moved:
        residuals = np.concatenate([residuals, (task.rows.start - numbers) / task.sd])
        own = np.zeros((moved, design.shape[1]))
        own[:, len(z) :] = np.diag(1 / task.sd)
        design = np.vstack([design, own])
    return Point(
        chart, z, numbers, fluxes, values, tangent, slopes, residuals, design
    )


def flux_scale(task: Task, point: Point) -> float:
    """The size of the largest flux of a point; of a usual one where all are zero."""
    largest = float(np.abs(point.fluxes).max(initial=0.0))
    return largest if largest > 1e-9 * task.scale else task.scale


def least_squares_step(design: Vector, residuals: Vector, rank: int) -> Vector:
    """The shortest step that minimises ||r - G d||, the rank of G being known."""
    left, sizes, right = np.linalg.svd(design, full_matrices=False)
    step: Vector = right[:rank].T @ ((left[:, :rank].T @ residuals) / sizes[:rank])
    return step
