"""The set of the optima of an aim, held by the prices that prove it."""

from __future__ import annotations

from dataclasses import replace
from math import isfinite
from typing import Any

import numpy as np

from fluxnet.exact.programme import ExactProgramme, to_flint
from fluxnet.ground.record import record
from fluxnet.solving.forms import as_fraction
from fluxnet.solving.linear import LinearSolution
from fluxnet.solving.problem import Problem
from fluxnet.solving.proof import Proven
from fluxnet.studies.aim_problem import hold_optimum
from fluxnet.studies.aims import Sense
from fluxnet.studies.settling import Array

__all__ = ["Optima", "hold_proven"]


@record
class Optima:
    """All optima of an aim, or all that is nearly as good: in floats, and exactly if proven."""

    problem: Problem
    exact: ExactProgramme | None = None


def hold_proven(
    problem: Problem,
    cost: Array,
    best: LinearSolution,
    proven: Proven,
    sense: Sense,
    fraction: float,
) -> Optima:
    """The problem with the aim held at its optimum, or at that fraction of it or better.

    Whatever has an exact price other than zero, however small, stands at its bound in every
    optimum, and nothing else is asked of one (complementary slackness).
    """
    if not proven.proof.verified:
        return Optima(hold_optimum(problem, cost, best, sense, fraction))
    exact, solution = proven.programme, proven.solution
    if fraction < 1:
        near = hold_optimum(problem, cost, best, sense, fraction)
        sign = -1 if sense is Sense.MAXIMISE else 1
        return Optima(
            near,
            replace(
                exact,
                rows=(*exact.rows, {j: sign * c for j, c in exact.costs.items()}),
                low=(*exact.low, _bound(near.row_low[-1])),
                high=(*exact.high, _bound(near.row_high[-1])),
            ),
        )
    worth = [*solution.gains, *solution.prices]
    count = len(problem.columns)
    lows, highs = list(exact.low), list(exact.high)
    low = np.append(problem.column_low, problem.row_low)
    high = np.append(problem.column_high, problem.row_high)
    for k, price in enumerate(worth):
        if price > 0:
            highs[k], high[k] = lows[k], low[k]
        elif price < 0:
            lows[k], low[k] = highs[k], high[k]
    return Optima(
        replace(
            problem,
            column_low=low[:count], column_high=high[:count],
            row_low=low[count:], row_high=high[count:],
        ),
        replace(exact, low=tuple(lows), high=tuple(highs)),
    )  # fmt: skip


def _bound(value: float) -> Any:
    return to_flint(as_fraction(value)) if isfinite(value) else None
