"""The fluxes nearest to a run's measured rates, and all that follows from them."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from fluxnet.ground.progress import Progress, silent
from fluxnet.network.biomass import biomasses
from fluxnet.network.model import Network
from fluxnet.rates.measured import Run
from fluxnet.solving.build import build_problem
from fluxnet.solving.flux_fit import (
    FitStatus,
    FittedRow,
    FluxFit,
    FluxRelation,
)
from fluxnet.solving.least_squares import fit_fluxes
from fluxnet.solving.sources import find_sources
from fluxnet.solving.spans import spans_of
from fluxnet.studies.settling import Array, Span, keep_account
from fluxnet.studies.shares import (
    correlated_fluxes,
    correlated_numbers,
    shares_of,
    slopes_of,
)
from fluxnet.studies.solution import (
    FluxEstimate,
    FluxSolution,
    FluxTest,
    MovedParameter,
    RateEstimate,
    SolveStatus,
)
from fluxnet.studies.telling import (
    bound_words,
    tell_clashes,
    tell_fit,
    tell_infeasible,
    tell_violations,
)
from fluxnet.studies.units import rate_unit

if TYPE_CHECKING:
    from fluxnet.studies.plan_target import Target
    from fluxnet.studies.suspect_result import Suspects

__all__ = ["fit_run"]

# A relation of fluxes tells something where it is so much narrower than its terms.
_TELLING = 0.5

# A rate this small beside the largest flux is rounding, not a rate.
_ROUNDING = 1e-12


def fit_run(
    network: Network,
    run: Run | None,
    *,
    suspects: bool = False,
    within: float = 2.0,
    plan: tuple[Target, float] | None = None,
    progress: Progress = silent,
) -> FluxSolution:
    """Fit fluxes to one run (None: to the measured limits of the model alone).

    A run that the balances accept but whose fit a limit holds back beyond chance
    (p below 5 %) is inconsistent as well. What could be wrong is looked for where the balances
    reject a run, and with ``suspects`` always. ``plan`` asks what to measure next: what is to
    be known better, and the relative error of what would be measured anew. Of a rejected run it is
    asked what contradicts what while measured values hold ``within`` so many sds.

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
    >>> fit = fit_run(network, None)
    >>> fit.status.value, [(flux.reaction, flux.low, flux.high) for flux in fit.fluxes]
    ('solved', [('lump', 0.0, 10.0), ('upkeep', 0.0, 20.0)])
    """
    fit = fit_fluxes(network, run, progress=progress)
    frame = FluxSolution(
        run=run.name if run else None,
        variant=network.variant,
        status=SolveStatus.SOLVED,
        unit=run.unit if run else network.basis.value,
        words="",
        left_free=fit.built.left_free,
        left_out=fit.built.left_out,
        replaced=fit.built.replaced,
        notes=fit.built.notes,
        extras=run.extras if run else (),
        has_biomass=bool(biomasses(network)),
        violated_limits=tell_violations(fit.built.problem),
    )
    if fit.status is FitStatus.INFEASIBLE:
        from fluxnet.solving.least_change import least_change
        from fluxnet.studies.conflicts import explain_conflicts, proof_of

        conflicts = explain_conflicts(fit.built, fit.built.problem, frame.unit)
        change = least_change(fit.built.problem)
        return replace(
            frame,
            status=SolveStatus.INFEASIBLE,
            conflicts=conflicts,
            least_change=change,
            proof=proof_of(conflicts),
            words=tell_infeasible(conflicts, change),
        )
    test = _test(fit)
    solution = replace(
        _account(frame, fit, progress), test=test, status=_status(fit, test), residual=fit.residual
    )
    solution = replace(solution, words=tell_fit(solution, test, tell_clashes(fit.built.problem)))
    if suspects or test.closes is False:
        solution = replace(solution, suspects=_suspects(fit, frame.unit))
    if plan is not None:
        from fluxnet.studies.plan_without import plan_beside_limits

        target, error = plan
        told = plan_beside_limits(fit, network, run, target, error, frame.unit, progress)
        solution = replace(solution, plan=told)
    if solution.status is SolveStatus.INCONSISTENT:
        from fluxnet.solving.least_change import least_change
        from fluxnet.studies.conflicts import explain_conflicts

        held = build_problem(network, run, within=within)
        conflicts = explain_conflicts(held, held.problem, frame.unit, within)
        if conflicts:
            change = least_change(held.problem)
            solution = replace(
                solution, conflicts=conflicts, within=within, least_change=change
            )
    return solution


def _suspects(fit: FluxFit, unit: str) -> Suspects | None:
    """What could be wrong, and whether limits leave it possible."""
    from fluxnet.studies.suspects_limits import keep_limits
    from fluxnet.studies.suspects_solve import seek_flux_suspects

    found = seek_flux_suspects(fit, unit)
    return None if found is None else keep_limits(found, fit)


def _status(fit: FluxFit, test: FluxTest) -> SolveStatus:
    held_back = test.bound_p is not None and test.bound_p < 0.05
    if fit.status is FitStatus.INCONSISTENT or held_back:
        return SolveStatus.INCONSISTENT
    return SolveStatus.SOLVED


def _test(fit: FluxFit) -> FluxTest:
    return FluxTest(
        h=fit.h,
        dof=fit.dof,
        p=fit.p_value,
        limit=fit.limit,
        closes=fit.closes,
        bound_h=fit.bound_h,
        bound_p=fit.bound_p,
        active=tuple(bound_words(bound) for bound in fit.bounds),
        pulling=tuple(
            f"{bound_words(bound)} pulls {bound.pulled} by {abs(bound.pull or 0):.1f} sd"
            for bound in fit.bounds
            if bound.is_strong
        ),
    )


def _account(frame: FluxSolution, fit: FluxFit, progress: Progress) -> FluxSolution:
    network = fit.built.network
    sources = find_sources(fit)
    shares = shares_of(sources, slopes_of(fit, np.eye(len(fit.reactions)), {}))
    fluxes = tuple(
        FluxEstimate(
            reaction=reaction.name,
            compartment=reaction.compartment,
            # rounding of the fit may leave a flux a trace outside of its own range
            value=float(np.clip(fit.fluxes[j], fit.low[j], fit.high[j])),
            sd=None if np.isnan(fit.flux_sd[j]) else float(fit.flux_sd[j]),
            low=float(fit.low[j]),
            high=float(fit.high[j]),
            best_low=float(fit.best_low[j]),
            best_high=float(fit.best_high[j]),
            kind=fit.kinds[j],
            shares=() if np.isnan(fit.flux_sd[j]) else shares[j],
        )
        for j, reaction in enumerate(network.reactions)
    )
    rounding = _ROUNDING * float(np.abs(fit.fluxes).max(initial=0.0))
    measured = {row.quantity for row in fit.rows}
    rates = (*fit.rows, *(row for row in fit.rates if row.quantity not in measured))

    def spans(rows: Array, drift: Mapping[str, Array]) -> Span:
        intervals = spans_of(fit, rows, dict(drift), progress)
        shares = shares_of(sources, slopes_of(fit, rows, drift))
        return Span(intervals.sd, intervals.low, intervals.high, shares)

    account = keep_account(fit.built, fit.fluxes, spans)
    return replace(
        frame,
        fluxes=fluxes,
        rates=tuple(_rate(row, frame.unit, rounding, fit.built.run) for row in rates),
        relations=_telling_relations(fit),
        moved=tuple(MovedParameter(m.name, m.value, m.sd, m.moved, m.moved_sd) for m in fit.moved),
        correlated_numbers=correlated_numbers(fit),
        correlated_fluxes=correlated_fluxes(fit),
        ledger=account.ledger,
        equations=account.equations,
        yields=account.yields,
        heat=account.heat,
    )


def _telling_relations(fit: FluxFit) -> tuple[FluxRelation, ...]:
    """The relations whose range is at most half as wide as the ranges of their terms allow."""
    width = dict(zip(fit.reactions, fit.high - fit.low, strict=True))
    return tuple(
        relation
        for relation in fit.relations
        if relation.high - relation.low
        <= _TELLING * sum(abs(c) * width[name] for name, c in relation.terms)
    )


def _rate(row: FittedRow, unit: str, rounding: float, run: Run | None) -> RateEstimate:
    value = 0.0 if abs(row.value) <= rounding else row.value
    measured = run.find(row.quantity) if run is not None else None
    return RateEstimate(
        quantity=row.quantity,
        unit=rate_unit(row.quantity, unit),
        measured=row.measured,
        # The fit takes a relative sd of the fitted value; people look for the one they typed.
        sd=row.sd if measured is None or measured.sd is None else measured.sd,
        reconciled=value,
        reconciled_sd=row.value_sd,
        low=row.low,
        high=row.high,
        z=None if row.z is None else -row.z + 0.0,
        kind=row.kind,
        reversed_=value < 0 and row.quantity.direction is not None,
    )
