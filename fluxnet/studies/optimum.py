"""The best value of an aim, the range of every flux there, and what holds it back."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

import numpy as np

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.progress import Progress, silent
from fluxnet.network.biomass import biomasses
from fluxnet.network.model import Network
from fluxnet.rates.measured import Run
from fluxnet.solving.alter import without_bounds
from fluxnet.solving.build import Built, build_problem
from fluxnet.solving.conflict import least_change
from fluxnet.solving.flux_fit import FluxKind
from fluxnet.solving.least_flux import least_total_flux
from fluxnet.solving.linear import LinearSolution, Outcome, Programme, worst_violation
from fluxnet.solving.problem import Problem
from fluxnet.solving.ranges import find_ranges
from fluxnet.solving.unbounded import explain_unbounded
from fluxnet.studies.aim_problem import aim_cost, open_carriers
from fluxnet.studies.aims import Aim, Sense
from fluxnet.studies.optimum_bill import make_optimum_bill
from fluxnet.studies.optimum_held import Optima, hold_proven
from fluxnet.studies.optimum_proof import as_proven, find_worths, prove_aim
from fluxnet.studies.optimum_rates import estimate_rates, is_point
from fluxnet.studies.optimum_span import span_optimum
from fluxnet.studies.settling import Array, Span, keep_account
from fluxnet.studies.solution import FluxEstimate, FluxSolution, SolveStatus
from fluxnet.studies.telling import (
    open_substrates,
    tell_infeasible,
    tell_optimum,
    tell_unbounded,
    tell_violations,
)

__all__ = ["optimise"]

_NOT_LEAST = (
    "The fluxes shown are those of the proof: which ones have the least total flux could not "
    "be found."
)


def optimise(
    network: Network,
    run: Run | None,
    aim: Aim,
    *,
    within: float = 2.0,
    fraction: float = 1.0,
    progress: Progress = silent,
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

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text('''
    ... substrate glucose
    ... product   lactate
    ... carrier   ATP  carries energy
    ... compartment a
    ...     lump   : glucose -> 2 lactate + 2 ATP
    ... compartment b
    ...     upkeep : ATP -> nothing
    ... limit glucose <= 10
    ... ''').network
    >>> from fluxnet.studies.aims import read_aim
    >>> best = optimise(network, None, read_aim("ATP", Sense.MAXIMISE, network))
    >>> best.optimum, [(flux.reaction, flux.value) for flux in best.fluxes]
    (20.0, [('lump', 10.0), ('upkeep', 0.0)])
    """
    built = build_problem(network, run, within=within)
    problem = open_carriers(built, aim)
    cost = aim_cost(built, aim)
    programme = Programme(problem)
    best = programme.maximise(cost) if aim.sense is Sense.MAXIMISE else programme.minimise(cost)
    proven = prove_aim(built, problem, aim, programme, within)
    best = as_proven(best, proven, aim.sense)
    frame = FluxSolution(
        run=run.name if run else None,
        variant=network.variant,
        status=SolveStatus.OPTIMAL,
        unit=run.unit if run else network.basis.value,
        words="",
        aim=aim,
        fraction=fraction,
        within=within,
        left_free=built.left_free,
        left_out=built.left_out,
        replaced=built.replaced,
        notes=built.notes,
        violated_limits=tell_violations(problem),
        proof=proven.proof,
        extras=run.extras if run else (),
        has_biomass=bool(biomasses(network)),
    )
    if best.outcome is Outcome.UNBOUNDED:
        reason = explain_unbounded(problem, cost if aim.sense is Sense.MAXIMISE else -cost)
        return replace(
            frame,
            status=SolveStatus.UNBOUNDED,
            unbounded=reason,
            words=tell_unbounded(aim, reason, network),
        )
    if best.outcome is Outcome.FAILED:
        raise ArithmeticError("the solver could not tell what is best")
    if best.outcome is not Outcome.OPTIMAL:
        from fluxnet.studies.conflicts import explain_conflicts

        conflicts = explain_conflicts(built, problem, frame.unit, within)
        change = least_change(problem)
        return replace(
            frame,
            status=SolveStatus.INFEASIBLE,
            conflicts=conflicts,
            least_change=change,
            smallest_within=change.common_k,
            words=tell_infeasible(conflicts, change, within),
        )
    prices, limits = find_worths(
        problem, cost, proven, aim, frame.unit, within, progress=progress
    )
    frame = replace(
        frame,
        prices=prices,
        limits=limits,
        bill=make_optimum_bill(problem, proven, aim, frame.unit, within),
    )
    optima = hold_proven(problem, cost, best, proven, aim.sense, fraction)
    return _at_optimum(frame, built, problem, cost, best, optima, progress)


def _at_optimum(
    frame: FluxSolution,
    built: Built,
    problem: Problem,
    cost: Array,
    best: LinearSolution,
    optima: Optima,
    progress: Progress,
) -> FluxSolution:
    at_best, exact = optima.problem, optima.exact
    fluxes, is_least = _representative(optima, best)
    ranges = find_ranges(at_best, exact=exact, progress=progress)
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
            if is_point(ranges.low[j], ranges.high[j])
            else FluxKind.UNDETERMINED,
        )
        for j, reaction in enumerate(built.network.reactions)
    )

    def spans(rows: Array, drift: Mapping[str, Array]) -> Span:
        found = find_ranges(at_best, rows, exact=exact, progress=progress)
        return Span(np.full(len(rows), np.nan), found.low, found.high)

    account = keep_account(built, fluxes, spans)
    solution = replace(
        frame,
        optimum=best.objective + 0.0,
        unheld=_unheld(problem, cost, frame.aim),
        span=span_optimum(built, frame.aim, best.objective) if frame.aim is not None else None,
        smallest_within=_smallest_within(built, problem),
        fluxes=estimates,
        rates=estimate_rates(built, fluxes, spans, frame.unit),
        ledger=account.ledger,
        equations=account.equations,
        yields=account.yields,
        heat=account.heat,
        residual=max(best.residual, ranges.residual, worst_violation(at_best, fluxes)),
    )
    words = tell_optimum(solution, open_substrates(problem, solution))
    return replace(solution, words=words if is_least else f"{words} {_NOT_LEAST}")


def _representative(optima: Optima, best: LinearSolution) -> tuple[Array, bool]:
    """The optimum of the least total flux, or where that is not found the one that is proven."""
    try:
        return least_total_flux(optima.problem, optima.exact), True
    except (ArithmeticError, MisuseError):
        if optima.exact is None:
            raise
        return best.fluxes, False


def _smallest_within(built: Built, problem: Problem) -> float | None:
    """The least number of sds within which all measured values can hold together.

    None where nothing is measured, or where it is reached only as rates grow without end
    (a measured ratio of two rates that nothing limits).
    """
    if not built.measured:
        return None
    try:
        return least_change(problem).common_k
    except ArithmeticError:
        return None


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

