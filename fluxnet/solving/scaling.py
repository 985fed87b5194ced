"""Powers of two that bring a problem to the sizes at which a solver's tolerances make sense."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.solving.problem import Problem

__all__ = ["find_scales"]

Vector = NDArray[np.float64]


def find_scales(problem: Problem, sizes: Vector) -> tuple[Vector, Vector]:
    """Powers of two for rows and columns, which change no digit.

    A badly spread matrix is brought together; bounds that are all huge or all tiny are brought
    to a size at which the solver's tolerances make sense. Ordinary problems are left alone.
    """
    rows, columns = np.zeros(sizes.shape[0]), np.zeros(sizes.shape[1])
    used = sizes > 0
    if used.any() and sizes[used].max() / sizes[used].min() >= 1e4:
        logs = np.where(used, np.log2(np.where(used, sizes, 1.0)), 0.0)
        in_row, in_column = np.maximum(used.sum(1), 1), np.maximum(used.sum(0), 1)
        for _ in range(10):
            rows = -((logs + columns * used).sum(1)) / in_row
            columns = -((logs + rows[:, None] * used).sum(0)) / in_column
        rows, columns = np.round(rows), np.round(columns)
    bounds = [np.ldexp(b, rows.astype(int)) for b in (problem.row_low, problem.row_high)]
    bounds += [
        np.ldexp(b, -columns.astype(int)) for b in (problem.column_low, problem.column_high)
    ]
    ends = np.abs(np.concatenate(bounds))
    largest = ends[np.isfinite(ends)].max(initial=0.0)
    if largest and not 1e-2 < largest < 1e4:
        shift = np.round(np.log2(largest))
        rows, columns = rows - shift, columns + shift
    return np.exp2(rows), np.exp2(columns)
