"""The range of every flux, or of other functionals of the fluxes, on one warm model."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.progress import Progress, silent
from fluxnet.ground.record import record
from fluxnet.solving.linear import Outcome, Programme
from fluxnet.solving.problem import Problem
from fluxnet.solving.residuals import Entries

if TYPE_CHECKING:
    from fluxnet.exact.programme import ExactProgramme

__all__ = ["Ranges", "add_up", "find_ranges"]

Vector = NDArray[np.float64]

_ROUNDING = 1e-14
"""Of a sum, beside the sizes of its terms."""


@record
class Ranges:
    """Least and largest values, one pair a flux (or functional), ±inf where unbounded.

    ``outcome`` is OPTIMAL, or INFEASIBLE where no fluxes meet the bounds at all: then every
    range is empty (low inf, high -inf). FAILED: at least one end could not be found, and is
    given as unbounded. ``residual`` is the worst violation among all the solutions.
    """

    low: Vector
    high: Vector
    outcome: Outcome
    residual: float


def find_ranges(
    problem: Problem,
    rows: Vector | None = None,
    *,
    exact: ExactProgramme | None = None,
    progress: Progress = silent,
) -> Ranges:
    """Minimise and maximise each flux, or each functional, under all bounds of a problem.

    One model is kept warm: only costs change. A flux that stood at its own bound in any earlier
    solution cannot go further, and is not asked for again; nor is one that rows with equality
    leave a single value, one row after another. Both are exact.

    Parameters
    ----------
    problem
        What the fluxes must meet.
    rows
        Functionals, each a row over the columns; None asks for every flux.
    exact
        The problem from its decimals as written: see :class:`Programme`.

    Returns
    -------
    Ranges
        In the order of the columns, or of ``rows``.

    Raises
    ------
    MisuseError
        Where ``rows`` holds NaN or has not one number a column.

    Examples
    --------
    >>> from fluxnet.solving.problem import Row, RowKind
    >>> problem = Problem(("in", "a", "b"), (Row(RowKind.BALANCE, "s"),),
    ...     np.array([[1.0, -1.0, -1.0]]), np.zeros(1), np.zeros(1),
    ...     np.zeros(3), np.array([4.0, np.inf, 1.0]))
    >>> ranges = find_ranges(problem)
    >>> ranges.low.tolist(), ranges.high.tolist()
    ([0.0, 0.0, 0.0], [4.0, 4.0, 1.0])
    """
    columns = len(problem.columns)
    programme = Programme(problem, exact)
    if rows is None:
        targets = np.eye(columns)
        floor, ceiling = problem.column_low, problem.column_high
    else:
        targets = np.asarray(rows, dtype=np.float64)
        if targets.ndim != 2 or targets.shape[1] != columns or np.isnan(targets).any():
            raise MisuseError("each functional needs one number for every column")
        floor, ceiling = np.full(len(targets), -np.inf), np.full(len(targets), np.inf)
    low, high = np.full(len(targets), np.inf), np.full(len(targets), -np.inf)
    if not programme.is_feasible():
        return Ranges(low, high, Outcome.INFEASIBLE, 0.0)
    worst, outcome = 0.0, Outcome.OPTIMAL
    seen = add_up(targets, programme.fluxes())
    lowest, highest = seen.copy(), seen.copy()
    loose = ~_fixed_columns(problem)
    moves = (targets[:, loose] != 0).any(axis=1)
    for k, target in enumerate(targets):
        progress("ranges", k, len(targets))
        if not moves[k]:
            low[k] = high[k] = min(max(seen[k], floor[k]), ceiling[k]) + 0.0
            continue
        for sign, ends, reached, bound in (
            (1.0, low, lowest, floor),
            (-1.0, high, highest, ceiling),
        ):
            if sign * reached[k] <= sign * bound[k]:
                ends[k] = bound[k]
                continue
            programme.set_costs(sign * target)
            answer = programme.run()
            if answer is not Outcome.OPTIMAL:
                outcome = outcome if answer is Outcome.UNBOUNDED else Outcome.FAILED
                ends[k] = -sign * np.inf
                continue
            fluxes = programme.fluxes()
            worst = max(worst, programme.residual)
            values = fluxes if rows is None else add_up(targets, fluxes)
            np.minimum(lowest, values, out=lowest)
            np.maximum(highest, values, out=highest)
            value = sign * programme.value() if programme.is_exact else values[k]
            ends[k] = min(max(value, floor[k]), ceiling[k]) + 0.0
    for ends in (low, high):
        ends.setflags(write=False)
    return Ranges(low, high, outcome, worst)


def add_up(targets: Vector, fluxes: Vector) -> Vector:
    """Functionals at some fluxes: zero where only the rounding of their terms is left.

    Examples
    --------
    >>> add_up(np.array([[1.0, 1.0, -1.0]]), np.array([0.1, 0.2, 0.3])).tolist()
    [0.0]
    """
    sums: Vector = targets @ fluxes
    sums[np.abs(sums) <= _ROUNDING * (np.abs(targets) @ np.abs(fluxes))] = 0.0
    return sums


def _fixed_columns(problem: Problem) -> NDArray[np.bool_]:
    """The fluxes that their own bounds, or rows in which all others are fixed, leave one value."""
    fixed: NDArray[np.bool_] = problem.column_low == problem.column_high
    entries = Entries.of(problem.matrix)
    equal = (problem.row_low == problem.row_high)[entries.row]
    rows, columns = entries.row[equal], entries.column[equal]
    while True:
        left = ~fixed[columns]
        rows, columns = rows[left], columns[left]
        alone = np.bincount(rows, minlength=entries.rows)[rows] == 1
        if not alone.any():
            return fixed
        fixed[columns[alone]] = True
