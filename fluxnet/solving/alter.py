"""Problems made from problems: a row more, other bounds."""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from fluxnet.solving.problem import Problem, Row, RowKind

__all__ = ["hard_part", "with_row", "without_bounds"]


def with_row(
    problem: Problem, row: Row, coefficients: NDArray[np.float64], low: float, high: float
) -> Problem:
    """The problem with one row more, behind the others.

    Parameters
    ----------
    coefficients
        One number a column.
    low, high
        The row's bounds; an aim is held at its optimum by giving it as both.
    """
    return replace(
        problem,
        rows=(*problem.rows, row),
        matrix=np.vstack([problem.matrix, coefficients]),
        row_low=np.append(problem.row_low, low),
        row_high=np.append(problem.row_high, high),
    )


def without_bounds(problem: Problem, rows: Collection[int]) -> Problem:
    """The problem with the bounds of some rows lifted; the rows stay, with their labels."""
    low, high = problem.row_low.copy(), problem.row_high.copy()
    places = list(rows)
    low[places], high[places] = -np.inf, np.inf
    return replace(problem, row_low=low, row_high=high)


def hard_part(problem: Problem) -> Problem:
    """The problem without its measured values: those that are exact (sd 0) stay."""
    kinds = (RowKind.MEASUREMENT, RowKind.MEASURED_LIMIT)
    soft = [i for i, row in enumerate(problem.rows) if row.kind in kinds and row.sd != 0]
    return without_bounds(problem, soft)
