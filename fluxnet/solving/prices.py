"""What one unit more of each bound is worth at an optimum, and one unit less.

The prices that prove an optimum are those of one basis. Where the optimum leaves them free
(more bounds meet there than it needs), every price between two ends proves it as well; the ends
are what one unit more and one unit less change, for a small change.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from fluxnet.exact.programme import at_bounds
from fluxnet.exact.simplex import Place
from fluxnet.ground.progress import Progress, silent
from fluxnet.ground.record import record
from fluxnet.solving.problem import Problem, Row, RowKind
from fluxnet.solving.proof import Proven
from fluxnet.solving.ranges import find_ranges

__all__ = ["Price", "find_prices"]

Vector = NDArray[np.float64]

_SAME = 1e-9
"""Ends so near to one another, relative to the price, are one: what the solver leaves."""


@record
class Price:
    """The change of a least value per unit by which a bound is raised.

    ``value`` is the exact one of the proof, rounded; ``low`` and ``high`` (±inf where there is
    no end) are the least and largest that prove the optimum as well. ``high`` is the change for
    the first bit by which the bound is raised, ``low`` that (turned round) for the first bit by
    which it is lowered.
    """

    value: float
    low: float
    high: float


def find_prices(
    problem: Problem,
    costs: Vector,
    proven: Proven,
    asked: Sequence[int],
    *,
    progress: Progress = silent,
) -> tuple[Price, ...]:
    """The prices of some rows at a proven optimum.

    Which bounds the optimum stands at is decided exactly. Where every variable of the basis
    lies between its bounds the prices have no freedom; else their ends are sought on all the
    prices that prove the optimum, by the floating-point solver.

    Parameters
    ----------
    costs
        What is minimised, one number a column, in floats.
    proof
        A verified one of an optimum of this problem and costs.
    asked
        Places of rows.
    """
    solution = proven.solution
    exact = [float(solution.prices[i]) for i in asked]
    met = at_bounds(proven.programme, solution.fluxes)
    is_tight = [low or high for low, high in met]
    basic = (k for k, place in enumerate(solution.places) if place is Place.BASIC)
    if not any(is_tight[k] for k in basic):
        return tuple(Price(value, value, value) for value in exact)
    count = len(problem.columns)
    rows = [i for i in range(len(problem.rows)) if is_tight[count + i]]
    place_of = {i: k for k, i in enumerate(rows)}
    wanted = [i for i in asked if i in place_of]
    targets = np.zeros((len(wanted), len(rows)))
    for k, i in enumerate(wanted):
        targets[k, place_of[i]] = 1.0
    ranges = find_ranges(_all_proofs(problem, costs, met, rows), targets, progress=progress)
    pairs = zip(ranges.low.tolist(), ranges.high.tolist(), strict=True)
    ends = dict(zip(wanted, pairs, strict=True))
    return tuple(
        _price(value, *ends.get(i, (0.0, 0.0))) for i, value in zip(asked, exact, strict=True)
    )


def _all_proofs(
    problem: Problem, costs: Vector, met: Sequence[tuple[bool, bool]], rows: Sequence[int]
) -> Problem:
    """All prices of the rows (as variables) that prove the optimum.

    What stands between its bounds has no price; else a price pushes away from the bound it
    stands at: c - A' y is at least 0 for a flux at its lower bound, and y for such a row.
    """
    columns = [j for j in range(len(problem.columns)) if met[j] != (True, True)]
    low, high = np.full(len(columns), -np.inf), costs[columns].copy()
    for k, j in enumerate(columns):
        if not met[j][0]:
            low[k] = high[k]
            if met[j][1]:
                high[k] = np.inf
    lower = np.array([0.0 if met[len(problem.columns) + i] == (True, False) else -np.inf
                      for i in rows])  # fmt: skip
    upper = np.array([0.0 if met[len(problem.columns) + i] == (False, True) else np.inf
                      for i in rows])  # fmt: skip
    return Problem(
        columns=tuple(f"price {i}" for i in rows),
        rows=tuple(Row(RowKind.BALANCE, problem.columns[j]) for j in columns),
        matrix=problem.matrix[np.ix_(rows, columns)].T.copy(),
        row_low=low,
        row_high=high,
        column_low=lower,
        column_high=upper,
    )


def _price(value: float, low: float, high: float) -> Price:
    """The exact price with its ends, which never exclude it."""
    if low > high:  # the solver found no prices at all, though there are some
        low, high = -np.inf, np.inf
    low, high = min(low, value), max(high, value)
    near = _SAME * max(1.0, abs(value))
    return Price(
        value + 0.0,
        value + 0.0 if value - low <= near else low + 0.0,
        value + 0.0 if high - value <= near else high + 0.0,
    )
