"""Powers of two that bring a problem to the sizes at which a solver's tolerances make sense."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.solving.problem import Problem

__all__ = ["find_scales", "median_of"]

Vector = NDArray[np.float64]


def find_scales(problem: Problem, sizes: Vector) -> tuple[Vector, Vector]:
    """Powers of two for rows and columns, which change no digit.

    A badly spread matrix is brought together; bounds that are all huge or all tiny are brought
    to a size at which the solver's tolerances make sense. Ordinary problems are left alone.
    """
    rows, columns = np.zeros(sizes.shape[0]), np.zeros(sizes.shape[1])
    used = sizes > 0
    if used.any() and sizes[used].max() / sizes[used].min() >= 1e3:
        logs = np.where(used, np.log2(np.where(used, sizes, 1.0)), 0.0)
        in_row, in_column = np.maximum(used.sum(1), 1), np.maximum(used.sum(0), 1)
        for _ in range(10):
            rows = -((logs + columns * used).sum(1)) / in_row
            columns = -((logs + rows[:, None] * used).sum(0)) / in_column
        rows, columns = np.round(rows), np.round(columns)
    widest = np.maximum(_size(problem.column_low), _size(problem.column_high))
    alone = ~used.any(0) & (widest > 0)
    columns[alone] = np.round(np.log2(widest[alone]))
    ends = np.concatenate(
        [
            np.exp2(rows) * _size(problem.row_low),
            np.exp2(rows) * _size(problem.row_high),
            _size(problem.column_low) / np.exp2(columns),
            _size(problem.column_high) / np.exp2(columns),
        ]
    )
    ends = ends[ends > 0]
    middle = median_of(np.log2(ends)) if ends.size else 0.0
    if not -7 < middle < 13:
        shift = np.round(middle)
        rows, columns = rows - shift, columns + shift
    return np.exp2(rows), np.exp2(columns)


def _size(bounds: Vector) -> Vector:
    """The size of each bound, 0 where there is none."""
    size: Vector = np.where(np.isfinite(bounds), np.abs(bounds), 0.0)
    return size


def median_of(values: Vector) -> float:
    """The median of at least one number; numpy's own would load its masked arrays first."""
    ordered = np.sort(values)
    return float(ordered[(len(ordered) - 1) // 2] + ordered[len(ordered) // 2]) / 2
