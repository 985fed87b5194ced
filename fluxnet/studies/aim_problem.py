"""The linear problem of an aim: its cost, carriers that may leave, the set of its optima."""

from __future__ import annotations

from dataclasses import replace
from math import inf

import numpy as np

from fluxnet.network.model import QuantityKind
from fluxnet.solving.alter import with_row
from fluxnet.solving.build import Built
from fluxnet.solving.linear import LinearSolution
from fluxnet.solving.problem import Problem, Row, RowKind
from fluxnet.solving.quantities import quantity_row
from fluxnet.studies.aims import Aim, Sense
from fluxnet.studies.settling import Array

__all__ = ["PRICE", "aim_cost", "hold_optimum", "open_carriers"]

PRICE = 1e-8
"""A price below this is the solver's own tolerance, where none is proven."""


def aim_cost(built: Built, aim: Aim) -> Array:
    """What one unit of each flux adds to the aim (one number a reaction)."""
    cost = np.zeros(len(built.problem.columns))
    for weight, quantity in aim.terms:
        row = quantity_row(
            built.network, built.stoichiometry, quantity, built.values, basis=built.basis
        )
        cost += float(weight) * row
    return cost


def open_carriers(built: Built, aim: Aim) -> Problem:
    """The problem in which an aimed-at carrier may leave, for this question only.

    Its balance becomes "made at least as much as spent", and reactions that do nothing but
    spend it stand at their lower limit or measured value: else they would take the surplus, or
    leave some sds of what they are known to need.
    """
    problem = built.problem
    low, high = problem.row_low.copy(), problem.row_high.copy()
    column_high = problem.column_high.copy()
    for name in aim.surplus:
        for i, row in enumerate(problem.rows):
            if row.kind is RowKind.BALANCE and row.name == name:
                high[i] = np.inf
        for j, reaction in enumerate(built.network.reactions):
            only = not reaction.right and [t.species for t in reaction.left] == [name]
            if only:
                place, least = _least_of(problem, j)
                # Where a row says so, its own bound keeps it: that bound has the price.
                if place is None:
                    column_high[j] = least
                else:
                    low[place] = high[place] = least
    return replace(problem, row_low=low, row_high=high, column_high=column_high)


def _least_of(problem: Problem, j: int) -> tuple[int | None, float]:
    """The lower limit or measured value of one flux with its row, else what its arrow says."""
    place, least = None, max(0.0, float(problem.column_low[j]))
    for i, row in enumerate(problem.rows):
        if row.quantity is None or row.quantity.kind is not QuantityKind.FLUX:
            continue
        if row.quantity.name == problem.columns[j]:
            held = row.value if row.value is not None else float(problem.row_low[i])
            if np.isfinite(held) and held > least:
                place, least = i, held
    return place, least


def hold_optimum(
    problem: Problem, cost: Array, best: LinearSolution, sense: Sense, fraction: float
) -> Problem:
    """The problem with the aim held at its optimum, or at that fraction of it or better.

    All optima, and nothing else, meet the bounds of the rows and columns with a price exactly
    (complementary slackness): holding these asks for no tolerance. A fraction of a least value
    is told the other way: 0.9 allows values up to the least over 0.9.
    """
    if fraction < 1:
        worst = _worst_allowed(best.objective, sense, fraction)
        low, high = sorted((worst, best.objective))
        return with_row(problem, Row(RowKind.LIMIT, "the aim near its optimum"), cost, low, high)
    values = problem.matrix @ best.fluxes
    rows = _pressed(problem.row_low, problem.row_high, values, best.row_prices)
    columns = _pressed(
        problem.column_low, problem.column_high, best.fluxes, best.column_prices
    )
    return replace(
        problem, row_low=rows[0], row_high=rows[1], column_low=columns[0], column_high=columns[1]
    )


def _worst_allowed(optimum: float, sense: Sense, fraction: float) -> float:
    """The worst value of the aim that is still so good a fraction of the optimum."""
    is_gain = (optimum > 0) is (sense is Sense.MAXIMISE)
    if is_gain or optimum == 0:
        return optimum * fraction
    return optimum / fraction if fraction else inf if optimum > 0 else -inf


def _pressed(low: Array, high: Array, values: Array, prices: Array) -> tuple[Array, Array]:
    """Bounds that hold what has a price at the bound where it stands."""
    low, high = low.copy(), high.copy()
    for i in np.flatnonzero(np.abs(prices) > PRICE):
        if abs(values[i] - low[i]) <= abs(high[i] - values[i]):
            high[i] = low[i]
        else:
            low[i] = high[i]
    return low, high
