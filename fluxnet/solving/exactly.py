"""What a floating-point solver cannot tell of a linear programme, told by exact pivots."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from math import isfinite
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from fluxnet.solving.outcome import Outcome
from fluxnet.solving.problem import Problem

if TYPE_CHECKING:
    from fluxnet.exact.programme import ExactProgramme
    from fluxnet.exact.simplex import ExactSolution, Place

__all__ = ["Exactly", "outcome_of"]

_MOST_ROWS = 300
_MOST_STEPS = 20_000
"""Pivots times rows: some seconds at the worst."""
_ROUNDING = 1e-13


class Exactly:
    """A problem in exact numbers, written down when the first question is asked.

    Parameters
    ----------
    given
        The problem from its decimals as written; else those that its floats stand for.
    """

    def __init__(self, problem: Problem, given: ExactProgramme | None = None) -> None:
        self._problem = problem
        self._made = given
        self._changed: dict[int, tuple[float, float]] = {}

    def set_bounds(self, k: int, low: float, high: float) -> None:
        """Give a column, or (counted on from the columns) a row, other bounds."""
        self._changed[k] = low, high

    def solve(self, costs: NDArray[np.float64], places: Sequence[Place]) -> ExactSolution | None:
        """The least ``costs @ v``, from a basis; None where that is too large to find out.

        None, too, where the costs fall along a ray by no more than their own rounding.
        """
        rows = len(self._problem.rows)
        if rows > _MOST_ROWS:
            return None
        from fluxnet.exact.simplex import End, solve_from

        found = solve_from(self._programme(costs), places, _MOST_STEPS // max(rows, 10))
        if found.end is End.UNBOUNDED:
            ray = np.array([float(v) for v in found.ray])
            if abs(costs @ ray) <= _ROUNDING * (np.abs(costs) @ np.abs(ray)):
                return None
        return None if found.end is End.OPEN else found

    def _programme(self, costs: NDArray[np.float64]) -> ExactProgramme:
        from fluxnet.exact.programme import to_flint
        from fluxnet.solving.forms import as_fraction

        if self._made is None:
            from fluxnet.solving.proof import exact_programme

            self._made = exact_programme(self._problem)

        def bound(value: float) -> Any:
            return to_flint(as_fraction(value)) if isfinite(value) else None

        low, high = list(self._made.low), list(self._made.high)
        for k, ends in self._changed.items():
            low[k], high[k] = bound(ends[0]), bound(ends[1])
        return replace(
            self._made,
            low=tuple(low),
            high=tuple(high),
            costs={int(j): bound(float(costs[j])) for j in np.flatnonzero(costs)},
        )


def outcome_of(found: ExactSolution) -> Outcome:
    """What an exact end is among the outcomes of a solver."""
    from fluxnet.exact.simplex import End

    return {
        End.OPTIMAL: Outcome.OPTIMAL,
        End.INFEASIBLE: Outcome.INFEASIBLE,
        End.UNBOUNDED: Outcome.UNBOUNDED,
    }.get(found.end, Outcome.FAILED)
