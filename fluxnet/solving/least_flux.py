"""The fluxes with the smallest total among all that meet the bounds."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from fractions import Fraction
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.solving.linear import Outcome, Programme, worst_violation
from fluxnet.solving.problem import Problem

if TYPE_CHECKING:
    from fluxnet.exact.programme import ExactProgramme

__all__ = ["least_total_flux"]

_TRACE = 1e-13
"""What the solver's own sums leave of a flux that is zero, beside the largest flux."""


def least_total_flux(
    problem: Problem, exact: ExactProgramme | None = None
) -> NDArray[np.float64]:
    """Fluxes with the smallest sum of absolute values.

    min sum |v| subject to the problem's bounds, as a linear programme in which each flux that
    can go both ways is the difference of two. To ask for the least total among the optima of
    an aim, hold the aim at its optimum first (:func:`fluxnet.solving.alter.with_row`). Several
    fluxes may share the smallest total; this is one of them.

    Parameters
    ----------
    exact
        The problem from its decimals as written: see :class:`fluxnet.solving.linear.Programme`.

    Returns
    -------
    numpy.ndarray
        One flux a column, in the unit of the problem. A circle of reactions never runs in it.

    Raises
    ------
    MisuseError
        Where no fluxes meet the bounds.
    ArithmeticError
        Where the solver failed, or its answer does not meet the bounds.

    Examples
    --------
    >>> from fluxnet.solving.problem import Row, RowKind
    >>> problem = Problem(("long", "short", "back"), (Row(RowKind.BALANCE, "s"),),
    ...     np.array([[0.5, 1.0, -1.0]]), np.ones(1), np.ones(1),
    ...     np.array([0.0, 0.0, -np.inf]), np.full(3, np.inf))
    >>> least_total_flux(problem).tolist()
    [0.0, 1.0, 0.0]
    """
    low, high = problem.column_low, problem.column_high
    both = np.flatnonzero((low < 0) & (high > 0))
    ahead_low, ahead_high = low.copy(), high.copy()
    ahead_low[both] = 0.0
    count = len(both)
    split = replace(
        problem,
        columns=(*problem.columns, *(f"{problem.columns[j]} backwards" for j in both)),
        matrix=np.hstack([problem.matrix, -problem.matrix[:, both]]),
        column_low=np.append(ahead_low, np.zeros(count)),
        column_high=np.append(ahead_high, -low[both]),
    )
    costs = np.where(high <= 0, -1.0, 1.0)
    programme = Programme(split, _split_exactly(exact, both.tolist()))
    solution = programme.minimise(np.append(costs, np.ones(count)))
    if solution.outcome is Outcome.INFEASIBLE:
        raise MisuseError("no fluxes meet the bounds: there is no least total")
    fluxes = solution.fluxes[: len(low)].copy()
    fluxes[both] -= solution.fluxes[len(low) :]
    if not programme.is_exact:
        fluxes[np.abs(fluxes) <= _TRACE * np.abs(fluxes).max(initial=0.0)] = 0.0
    if solution.outcome is not Outcome.OPTIMAL or worst_violation(problem, fluxes) > 1e-7:
        raise ArithmeticError("the least total flux could not be found")
    fluxes.setflags(write=False)
    return fluxes


def _split_exactly(exact: ExactProgramme | None, both: Sequence[int]) -> ExactProgramme | None:
    """An exact problem in which the columns that go both ways are differences of two."""
    if exact is None:
        return None
    from fluxnet.exact.programme import to_flint

    count, zero = exact.columns, to_flint(Fraction(0))
    turned = {j: count + k for k, j in enumerate(both)}
    low, high = exact.low[:count], exact.high[:count]
    return replace(
        exact,
        columns=count + len(turned),
        rows=tuple(
            {**row, **{turned[j]: -a for j, a in row.items() if j in turned}} for row in exact.rows
        ),
        low=(
            *(zero if j in turned else end for j, end in enumerate(low)),
            *(zero for _ in turned),
            *exact.low[count:],
        ),
        high=(*high, *(None if low[j] is None else -low[j] for j in turned), *exact.high[count:]),
        costs={},
    )
