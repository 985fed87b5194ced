"""A plan for what a measured limit tells by itself: what the run says without that limit."""

from __future__ import annotations

from dataclasses import replace

from fluxnet.ground.progress import Progress, silent
from fluxnet.network.model import Network
from fluxnet.rates.measured import Run
from fluxnet.solving.flux_fit import FitStatus, FluxFit
from fluxnet.solving.least_squares import fit_fluxes
from fluxnet.solving.sources import SourceKind, find_sources
from fluxnet.solving.words import limit_words
from fluxnet.studies.plan import plan_measurements
from fluxnet.studies.plan_result import Plan, TypedLimit
from fluxnet.studies.plan_target import Target

__all__ = ["plan_beside_limits"]

_NEARLY_ALL = 0.9


def plan_beside_limits(
    fit: FluxFit,
    network: Network,
    run: Run | None,
    target: Target,
    error: float,
    unit: str,
    progress: Progress = silent,
) -> Plan:
    """What to measure next; where one measured limit brings 90 % of the error, without it too.

    The parameters are those of :func:`fluxnet.studies.plan.plan_measurements`. The run is
    fitted once more without that limit; nothing is added where that has no fit.
    """
    plan = plan_measurements(fit, network, run, target, error, unit)
    first = plan.shares[0] if plan.shares else None
    if run is None or first is None or first.share < _NEARLY_ALL:
        return plan
    limits = {
        s.quantity
        for s in find_sources(fit).members
        if s.kind is SourceKind.LIMIT and s.name == first.source
    }
    typed = [x for x in network.limits if x.is_measured and x.quantity in limits]
    if not typed:
        return plan
    left = tuple(x for x in network.limits if x not in typed)
    fewer = replace(network, limits=left)
    again = fit_fluxes(fewer, run, progress=progress)
    if again.status is FitStatus.INFEASIBLE:
        return plan
    without = plan_measurements(again, fewer, run, target, error, unit)
    words = ", ".join(limit_words(limit, network).removeprefix("limit ") for limit in typed)
    return replace(plan, typed=TypedLimit(words, first.share, without))
