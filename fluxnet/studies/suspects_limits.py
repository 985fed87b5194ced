"""Whether the limits hold once a suspect has its way: a suspect that passes them is none."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

from fluxnet.network.expression import ONE
from fluxnet.network.model import Direction, Network, QuantityKind, Reaction, Term
from fluxnet.rates.measured import RatesTable, Run
from fluxnet.rates.unmeasuring import leave_unmeasured
from fluxnet.solving.build import build_problem
from fluxnet.solving.classify import classify
from fluxnet.solving.descent import fit_bounded
from fluxnet.solving.equalities import find_equalities
from fluxnet.solving.flux_fit import FluxFit
from fluxnet.solving.pulls import pressing_bounds
from fluxnet.solving.statistics import chi_squared_quantile
from fluxnet.solving.weighing import fit_weighed
from fluxnet.solving.weightless import without_weightless
from fluxnet.studies.suspect_result import Standing, Suspect, SuspectKind, Suspects
from fluxnet.studies.suspects import LIKELY
from fluxnet.studies.telling import bound_words, listed

__all__ = ["keep_limits"]

_BESIDE = " beside"
"""Behind the name of what leaves by no reaction, the name of one that lets it."""
_FREE = 30
"""A parameter with so many times its size as sd weighs nothing."""


def keep_limits(told: Suspects, fit: FluxFit) -> Suspects:
    """The suspects, with those as not possible beside which the fluxes still pass a limit.

    Each suspect is left free in a fit with all bounds: where these add more to h than
    :data:`LIKELY` sds, neither its own value nor those of the others keep them. A fit with
    weights that rest on a guess is not asked.
    """
    built = fit.built
    if not told.explained or built.estimated:
        return told
    group, passed = [], dict[str, None]()
    for one in told.group:
        names = _passed(one, built.network, built.run) if one.possible else ()
        passed |= dict.fromkeys(names)
        group.append(one if not names else replace(
            one, standing=Standing.IMPOSSIBLE, is_declared=False,
            why_not=f"with it the fluxes would still pass {listed(names)}",
        ))  # fmt: skip
    if not passed:
        return told
    enough = chi_squared_quantile(0.95, told.dof - 1) if told.dof > 1 else told.h
    return replace(
        told,
        group=tuple(sorted(group, key=lambda one: not one.possible)),
        explained=any(one.possible and one.h_left <= enough for one in group),
        passed=tuple(passed),
    )


def _passed(one: Suspect, network: Network, run: Run | None) -> tuple[str, ...]:
    """The bounds that fluxes would have to pass with a suspect left free."""
    freed = _without(one, network, run)
    built = build_problem(freed[0], None if freed[1] is None else without_weightless(freed[1]))
    exact = find_equalities(built)
    if exact.contradictions or built.estimated:
        return ()
    structure = classify(exact)
    try:
        weighed = fit_weighed(built, structure)
        bounded = fit_bounded(weighed.task, weighed.best)
    except ArithmeticError:
        return ()
    if bounded is None:
        return ("limits that hold exactly",)
    point, region = bounded
    if point.h - weighed.best.h <= LIKELY**2:
        return ()
    pressing = pressing_bounds(weighed.built, weighed.task, region, structure)
    told = [bound_words(b) for b in pressing if b.name != f"{one.name}{_BESIDE}"]
    return tuple(told[:2]) or ("zero",)


def _without(one: Suspect, network: Network, run: Run | None) -> tuple[Network, Run | None]:
    """The model and the run in which a suspect can be anything."""
    if one.kind is SuspectKind.PARAMETER:
        parameters = tuple(
            p if p.name != one.name else
            replace(p, sd=_FREE * max(abs(p.value), p.sd or Fraction(0)))
            for p in network.parameters
        )  # fmt: skip
        return replace(network, parameters=parameters), run
    if one.kind is SuspectKind.MEASURED_RATE:
        limits = tuple(
            x for x in network.limits if not (x.is_measured and str(x.quantity) == one.label)
        )
        if run is not None:
            run = leave_unmeasured(RatesTable((run,)), (one.label,)).runs[0]
        return replace(network, limits=limits), run
    species = network.find_species(one.name)
    if species is not None and species.role.is_boundary:
        limits = tuple(
            x for x in network.limits
            if x.quantity.kind is not QuantityKind.RATE or x.quantity.name != one.name
        )  # fmt: skip
        return replace(network, limits=limits), run
    gone = (Term(one.name, ONE),)
    leaves = one.direction is Direction.OUT if one.direction else one.size >= 0
    left, right = (gone, ()) if leaves else ((), gone)
    missing = Reaction(f"{one.name}{_BESIDE}", network.reactions[0].compartment, left, right)
    return replace(network, reactions=(*network.reactions, missing)), run
