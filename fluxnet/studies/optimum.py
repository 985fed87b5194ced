"""The best value of an aim, the range of every flux there, and what holds it back."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from fluxnet.network.model import Network, QuantityKind
from fluxnet.rates.measured import Run
from fluxnet.solving.build import Built, build_problem
from fluxnet.solving.conflict import find_conflict, least_change
from fluxnet.solving.least_flux import least_total_flux
from fluxnet.solving.linear import LinearSolution, Outcome, Programme
from fluxnet.solving.problem import Problem, Row, RowKind
from fluxnet.solving.quantities import quantity_row
from fluxnet.solving.ranges import find_ranges
from fluxnet.solving.unbounded import explain_unbounded
from fluxnet.studies.aims import Aim, Sense
from fluxnet.studies.settling import settle
from fluxnet.studies.solution import (
    BindingLimit,
    FluxEstimate,
    FluxKind,
    FluxSolution,
    SolveStatus,
)
from fluxnet.studies.telling import tell_infeasible, tell_optimum, tell_unbounded

__all__ = ["optimise"]

Array = NDArray[np.float64]

# How far the aim may fall short of its optimum while ranges are searched, relative to it:
# as much as the solver itself leaves open.
_SLACK = 1e-9


def optimise(
    network: Network, run: Run | None, aim: Aim, *, within: float = 2.0, fraction: float = 1.0
) -> FluxSolution:
    """Solve for an aim under the limits, with measured rates held within ``within`` sds.

    Parameters
    ----------
    fraction
        The share of the optimum at which ranges are searched: 1 is the optimum itself.

    Returns
    -------
    FluxSolution
        With status OPTIMAL, INFEASIBLE or UNBOUNDED.
    """
    built = build_problem(network, run, within=within)
    problem = _open_carriers(built, aim)
    cost = _cost(built, aim)
    programme = Programme(problem)
    best = programme.maximise(cost) if aim.sense is Sense.MAXIMISE else programme.minimise(cost)
    frame = FluxSolution(
        run=run.name if run else None,
        variant=network.variant,
        status=SolveStatus.OPTIMAL,
        unit=run.unit if run else network.basis.value,
        words="",
        aim=aim,
        within=within,
        left_free=built.left_free,
        left_out=built.left_out,
        replaced=built.replaced,
        notes=built.notes,
    )
    if best.outcome is Outcome.UNBOUNDED:
        reason = explain_unbounded(problem, cost if aim.sense is Sense.MAXIMISE else -cost)
        return replace(
            frame, status=SolveStatus.UNBOUNDED, unbounded=reason, words=tell_unbounded(aim, reason)
        )
    if best.outcome is not Outcome.OPTIMAL:
        conflict = find_conflict(problem)
        change = least_change(build_problem(network, run))
        return replace(
            frame,
            status=SolveStatus.INFEASIBLE,
            conflict=conflict,
            least_change=change,
            words=tell_infeasible(conflict, change, within),
        )
    return _at_optimum(frame, built, problem, cost, best, fraction)


def _at_optimum(
    frame: FluxSolution,
    built: Built,
    problem: Problem,
    cost: Array,
    best: LinearSolution,
    fraction: float,
) -> FluxSolution:
    at_best = _hold(problem, cost, best.objective, fraction)
    fluxes = least_total_flux(at_best)
    ranges = find_ranges(at_best)
    width = np.maximum(1.0, np.abs(fluxes)) * 1e-7
    estimates = tuple(
        FluxEstimate(
            reaction=reaction.name,
            compartment=reaction.compartment,
            value=float(fluxes[j]),
            sd=None,
            low=float(ranges.low[j]),
            high=float(ranges.high[j]),
            best_low=float(ranges.low[j]),
            best_high=float(ranges.high[j]),
            kind=FluxKind.DETERMINED
            if ranges.high[j] - ranges.low[j] <= width[j]
            else FluxKind.UNDETERMINED,
        )
        for j, reaction in enumerate(built.network.reactions)
    )
    solution = replace(
        frame,
        optimum=best.objective,
        fluxes=estimates,
        limits=_binding(problem, best),
        residual=max(best.residual, ranges.residual),
    )
    settled = settle(solution, built, fluxes, lambda rows: find_ranges(at_best, rows))
    return replace(settled, words=tell_optimum(settled))


def _cost(built: Built, aim: Aim) -> Array:
    cost = np.zeros(len(built.problem.columns))
    for weight, quantity in aim.terms:
        row = quantity_row(
            built.network, built.stoichiometry, quantity, built.values, basis=built.basis
        )
        cost += float(weight) * row
    return cost


def _open_carriers(built: Built, aim: Aim) -> Problem:
    """The problem in which an aimed-at carrier may leave, for this question only.

    Its balance becomes "made at least as much as spent", and reactions that do nothing but
    spend it stand at their least: else they would take the surplus.
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
                column_high[j] = _least_of(problem, j)
    return replace(problem, row_low=low, row_high=high, column_high=column_high)


def _least_of(problem: Problem, j: int) -> float:
    """The lower limit or measured value of one flux, else 0."""
    least = max(0.0, float(problem.column_low[j]))
    for i, row in enumerate(problem.rows):
        if row.quantity is None or row.quantity.kind is not QuantityKind.FLUX:
            continue
        if row.quantity.name == problem.columns[j]:
            held = row.value if row.value is not None else float(problem.row_low[i])
            if np.isfinite(held):
                least = max(least, held)
    return least


def _hold(problem: Problem, cost: Array, optimum: float, fraction: float) -> Problem:
    """The problem with the aim held at its optimum, or at a fraction of it."""
    slack = _SLACK * max(1.0, abs(optimum))
    ends = sorted((optimum * fraction, optimum))
    return replace(
        problem,
        rows=(*problem.rows, Row(RowKind.LIMIT, "the aim at its optimum")),
        matrix=np.vstack([problem.matrix, cost]),
        row_low=np.append(problem.row_low, ends[0] - slack),
        row_high=np.append(problem.row_high, ends[1] + slack),
    )


def _binding(problem: Problem, best: LinearSolution) -> tuple[BindingLimit, ...]:
    """The limits and measured values with a price, the most worth first."""
    found = [
        BindingLimit(row.name, float(problem.matrix[i] @ best.fluxes), float(best.row_prices[i]))
        for i, row in enumerate(problem.rows)
        if row.kind is not RowKind.BALANCE
        and row.kind is not RowKind.ROLE
        and abs(best.row_prices[i]) > 1e-9
    ]
    return tuple(sorted(found, key=lambda limit: -abs(limit.worth * limit.value)))
