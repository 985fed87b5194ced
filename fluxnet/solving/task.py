"""A fit in numbers: its rows, what is equal, measured or bounded, and the errors."""

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

__all__ = ["Task", "least_squares_step", "task_of", "whitening"]

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


def least_squares_step(design: Vector, residuals: Vector, rank: int) -> Vector:
    """The shortest step that minimises ||r - G d||, the rank of G being known."""
    left, sizes, right = np.linalg.svd(design, full_matrices=False)
    step: Vector = right[:rank].T @ ((left[:, :rank].T @ residuals) / sizes[:rank])
    return step
