"""The best value of an aim, the range of every flux there, and what holds it back."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

import numpy as np

from fluxnet.network.biomass import biomasses
from fluxnet.network.model import Network, Quantity, QuantityKind
from fluxnet.rates.kinds import RateKind
from fluxnet.rates.measured import Run
from fluxnet.solving.alter import with_row, without_bounds
from fluxnet.solving.build import Built, build_problem
from fluxnet.solving.classify import classify
from fluxnet.solving.conflict import find_conflict, least_change
from fluxnet.solving.equalities import find_equalities
from fluxnet.solving.flux_fit import FluxKind
from fluxnet.solving.least_flux import least_total_flux
from fluxnet.solving.linear import LinearSolution, Outcome, Programme, worst_violation
from fluxnet.solving.problem import Problem, Row, RowKind
from fluxnet.solving.quantities import default_direction, quantity_row
from fluxnet.solving.ranges import find_ranges
from fluxnet.solving.unbounded import explain_unbounded
from fluxnet.studies.aims import Aim, Sense
from fluxnet.studies.settling import Array, Span, Spans, keep_account
from fluxnet.studies.solution import (
    BindingLimit,
    FluxEstimate,
    FluxSolution,
    RateEstimate,
    SolveStatus,
)
from fluxnet.studies.telling import (
    tell_infeasible,
    tell_optimum,
    tell_unbounded,
    tell_violations,
)
from fluxnet.studies.units import rate_unit

__all__ = ["optimise"]

# A price below this is the solver's own tolerance.
_PRICE = 1e-8


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
        violated_limits=tell_violations(problem),
        extras=run.extras if run else (),
        has_biomass=bool(biomasses(network)),
    )
    if best.outcome is Outcome.UNBOUNDED:
        reason = explain_unbounded(problem, cost if aim.sense is Sense.MAXIMISE else -cost)
        return replace(
            frame, status=SolveStatus.UNBOUNDED, unbounded=reason, words=tell_unbounded(aim, reason)
        )
    if best.outcome is Outcome.FAILED:
        raise ArithmeticError("the solver could not tell what is best")
    if best.outcome is not Outcome.OPTIMAL:
        conflict = find_conflict(problem, unit=frame.unit)
        change = least_change(problem)
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
    at_best = _hold(problem, cost, best, fraction)
    fluxes = least_total_flux(at_best)
    ranges = find_ranges(at_best)
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
            if _is_point(ranges.low[j], ranges.high[j])
            else FluxKind.UNDETERMINED,
        )
        for j, reaction in enumerate(built.network.reactions)
    )

    def spans(rows: Array, drift: Mapping[str, Array]) -> Span:
        found = find_ranges(at_best, rows)
        return Span(np.full(len(rows), np.nan), found.low, found.high)

    account = keep_account(built, fluxes, spans)
    solution = replace(
        frame,
        optimum=best.objective + 0.0,
        unheld=_unheld(problem, cost, frame.aim),
        fluxes=estimates,
        rates=_rates(built, fluxes, spans, frame.unit),
        ledger=account.ledger,
        equations=account.equations,
        yields=account.yields,
        limits=_binding(problem, best, frame.within),
        residual=max(best.residual, ranges.residual, worst_violation(at_best, fluxes)),
    )
    return replace(solution, words=tell_optimum(solution))


def _unheld(problem: Problem, cost: Array, aim: Aim | None) -> float | None:
    """The optimum without the rows that measure the aim itself, where there are any."""
    asked = {quantity for _, quantity in aim.terms} if aim is not None else set()
    rows = enumerate(problem.rows)
    own = [i for i, row in rows if row.value is not None and row.quantity in asked]
    if aim is None or not own:
        return None
    programme = Programme(without_bounds(problem, own))
    maximise = aim.sense is Sense.MAXIMISE
    free = programme.maximise(cost) if maximise else programme.minimise(cost)
    return free.objective if free.outcome is not Outcome.FAILED else None


def _is_point(low: float, high: float) -> bool:
    """Whether a range is as narrow as the solver's own tolerance leaves it."""
    return high - low <= 1e-6 * max(1.0, abs(low), abs(high))


def _rates(
    built: Built, fluxes: Array, spans: Spans, unit: str
) -> tuple[RateEstimate, ...]:
    """The measured quantities, then the boundary rates that were not measured."""
    measured = {row.quantity: row for row in built.problem.rows if row.value is not None}
    boundary = [
        Quantity(QuantityKind.RATE, s.name, default_direction(s.role))
        for s in built.network.boundary
    ]
    asked = [
        *(q for q in measured if q is not None and q.kind is not QuantityKind.RATIO),
        *(q for q in boundary if not _is_measured(q, measured)),
    ]
    rows = np.array(
        [
            quantity_row(built.network, built.stoichiometry, q, built.values, basis=built.basis)
            for q in asked
        ]
    ).reshape(len(asked), len(fluxes))
    span = spans(rows, {})
    values = rows @ fluxes
    tested = _tested(built)
    estimates: list[RateEstimate] = []
    for k, quantity in enumerate(asked):
        row = measured.get(quantity)
        point = _is_point(span.low[k], span.high[k])
        if row is not None:
            kind = RateKind.BALANCEABLE if quantity in tested else RateKind.NOT_BALANCEABLE
        else:
            kind = RateKind.CALCULABLE if point else RateKind.NOT_CALCULABLE
        estimates.append(
            RateEstimate(
                quantity=quantity,
                unit=rate_unit(quantity, unit),
                measured=row.value if row is not None else None,
                sd=row.sd if row is not None else None,
                reconciled=float(values[k]) + 0.0,
                reconciled_sd=None,
                low=float(span.low[k]),
                high=float(span.high[k]),
                z=None,
                kind=kind,
                reversed_=bool(values[k] < -1e-9) and quantity.direction is not None,
            )
        )
    return tuple(estimates)


def _is_measured(quantity: Quantity, measured: Mapping[Quantity | None, Row]) -> bool:
    return any(q is not None and q.name == quantity.name for q in measured)


def _tested(built: Built) -> set[Quantity]:
    """The measured quantities that the others test."""
    structure = classify(find_equalities(built))
    places = (
        *structure.exact.soft,
        *(e.place for e in structure.exact.equalities if e.is_measured),
    )
    rows = built.problem.rows
    return {
        quantity
        for place, balanceable in zip(places, structure.balanceable, strict=False)
        if balanceable and (quantity := rows[place].quantity) is not None
    }


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


def _hold(problem: Problem, cost: Array, best: LinearSolution, fraction: float) -> Problem:
    """The problem with the aim held at its optimum, or between that and a fraction of it.

    All optima, and nothing else, meet the bounds of the rows and columns with a price exactly
    (complementary slackness): holding these asks for no tolerance.
    """
    if fraction < 1:
        low, high = sorted((best.objective * fraction, best.objective))
        return with_row(problem, Row(RowKind.LIMIT, "the aim near its optimum"), cost, low, high)
    values = problem.matrix @ best.fluxes
    rows = _pressed(problem.row_low, problem.row_high, values, best.row_prices)
    columns = _pressed(
        problem.column_low, problem.column_high, best.fluxes, best.column_prices
    )
    return replace(
        problem, row_low=rows[0], row_high=rows[1], column_low=columns[0], column_high=columns[1]
    )


def _pressed(low: Array, high: Array, values: Array, prices: Array) -> tuple[Array, Array]:
    """Bounds that hold what has a price at the bound where it stands."""
    low, high = low.copy(), high.copy()
    for i in np.flatnonzero(np.abs(prices) > _PRICE):
        if abs(values[i] - low[i]) <= abs(high[i] - values[i]):
            high[i] = low[i]
        else:
            low[i] = high[i]
    return low, high


def _binding(
    problem: Problem, best: LinearSolution, within: float | None
) -> tuple[BindingLimit, ...]:
    """The limits and measured values with a price, the most worth first."""
    found: list[BindingLimit] = []
    for i, row in enumerate(problem.rows):
        price = float(best.row_prices[i])
        if row.kind in (RowKind.BALANCE, RowKind.ROLE) or abs(price) <= _PRICE:
            continue
        value = float(problem.matrix[i] @ best.fluxes)
        name = row.name
        if row.sd and row.value is not None and row.ratio is None:
            at_low = abs(value - problem.row_low[i]) < abs(value - problem.row_high[i])
            name = (
                f"{row.name} {'>=' if at_low else '<='} {value:.4g} "
                f"(measured {row.value:.4g} {'-' if at_low else '+'} {within:g} sd)"
            )
        found.append(BindingLimit(name, value, price))
    return tuple(sorted(found, key=lambda limit: -abs(limit.worth * limit.value)))
