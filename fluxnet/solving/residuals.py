"""How far an answer leaves its bounds, reckoned by ourselves after every solve."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.solving.problem import Problem

__all__ = ["Entries", "Pair", "is_contradiction", "is_ray", "violation_of", "worst_violation"]

Vector = NDArray[np.float64]
Pair = tuple[Vector, Vector]


@record
class Entries:
    """The entries of a matrix that are not zero, row by row; most rows hold a handful."""

    row: NDArray[np.intp]
    column: NDArray[np.intp]
    value: Vector
    rows: int

    @classmethod
    def of(cls, matrix: Vector) -> Entries:
        """Those of a matrix."""
        row, column = np.nonzero(matrix)
        return cls(row, column, matrix[row, column], len(matrix))

    def add(self, terms: Vector) -> Vector:
        """The sum of each row's terms, given one an entry."""
        total = np.bincount(self.row, weights=terms, minlength=self.rows)
        return np.asarray(total, dtype=np.float64)

    def add_columns(self, terms: Vector, columns: int) -> Vector:
        """The sum of each column's terms, of so many columns."""
        total = np.bincount(self.column, weights=terms, minlength=columns)
        return np.asarray(total, dtype=np.float64)


def worst_violation(problem: Problem, fluxes: Vector) -> float:
    """How far fluxes leave the bounds of a problem, relative to what is added up.

    The violation of each row is divided by the larger of 1 and the sum of the absolute values
    of its terms (never by their signed sum), that of a column by the larger of 1 and the
    flux itself.

    Returns
    -------
    float
        0 where nothing is violated.
    """
    rows, columns = (problem.row_low, problem.row_high), (problem.column_low, problem.column_high)
    return violation_of(Entries.of(problem.matrix), fluxes, rows, columns)


def violation_of(entries: Entries, fluxes: Vector, rows: Pair, columns: Pair) -> float:
    """:func:`worst_violation` by parts."""
    terms = entries.value * fluxes[entries.column]
    values = entries.add(terms)
    magnitude = np.maximum(1.0, entries.add(np.abs(terms)))
    row = np.maximum(rows[0] - values, values - rows[1]) / magnitude
    column = np.maximum(columns[0] - fluxes, fluxes - columns[1])
    column = column / np.maximum(1.0, np.abs(fluxes))
    return float(max(0.0, row.max(initial=0.0), column.max(initial=0.0)))


def is_ray(entries: Entries, ray: Vector, rows: Pair, columns: Pair) -> bool:
    """Whether a direction can be followed for ever: it approaches no finite bound.

    Bounds of rows are judged relative to the sum of the absolute values of the terms, those
    of columns relative to the largest entry.
    """
    largest = float(np.abs(ray).max(initial=0.0))
    if largest == 0:
        return False
    terms = entries.value * ray[entries.column]
    for values, (low, high), room in (
        (entries.add(terms), rows, 1e-7 * entries.add(np.abs(terms))),
        (ray, columns, np.full(len(ray), 1e-9 * largest)),
    ):
        if (np.isfinite(low) & (values < -room)).any():
            return False
        if (np.isfinite(high) & (values > room)).any():
            return False
    return True


def is_contradiction(entries: Entries, weights: Vector, rows: Pair, columns: Pair) -> bool:
    """Whether weights of the rows prove that no fluxes meet all bounds (Farkas).

    The weighted sum of the rows, y' A v, must lie between the ends that the bounds of the rows
    allow it, and between those that the bounds of the fluxes allow: a proof has the two apart.
    """
    largest = float(np.abs(weights).max(initial=0.0))
    if largest == 0:
        return False
    kept = np.where(np.abs(weights) > 1e-11 * largest, weights, 0.0)
    terms, count = entries.value * kept[entries.row], len(columns[0])
    pull, sizes = (entries.add_columns(t, count) for t in (terms, np.abs(terms)))
    pull = np.where(np.abs(pull) > 1e-11 * sizes, pull, 0.0)
    row_low, row_high, row_size = _reach(kept, *rows)
    low, high, size = _reach(pull, *columns)
    room = 1e-9 * (row_size + size)
    return row_low - high > room or low - row_high > room


def _reach(weights: Vector, low: Vector, high: Vector) -> tuple[float, float, float]:
    """The ends of the weighted sum of values between low and high, and the terms' sizes added."""
    used = weights != 0
    w = weights[used]
    ends = np.sort(np.vstack([w * low[used], w * high[used]]), axis=0)
    sizes = np.where(np.isfinite(ends), np.abs(ends), 0.0).max(axis=0)
    return float(ends[0].sum()), float(ends[1].sum()), float(sizes.sum())
