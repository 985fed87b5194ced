"""Fluxes from measured rates by weighted least squares, with their errors and ranges.

min (y - M v)' V^-1 (y - M v) + sum ((p - p0) / sd)^2 subject to S(p) v = 0, exact values and
limits with ``=``, directions, roles and limits. The test value h is that of the equalities
alone; what the bounds add is told apart from it. Sources: van der Heijden et al. 1994 and
Wang & Stephanopoulos 1983 for the test of measured rates (from memory).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.progress import Progress, silent
from fluxnet.network.model import Network, Quantity, QuantityKind
from fluxnet.rates.measured import Run
from fluxnet.solving.bound_test import chance_of_bounds
from fluxnet.solving.build import Built, build_problem, rebuild
from fluxnet.solving.chart import Point, flux_scale
from fluxnet.solving.classify import Structure, classify
from fluxnet.solving.descent import fit_bounded
from fluxnet.solving.equalities import find_equalities
from fluxnet.solving.fit_rows import (
    MeasuredPlaces,
    UnmeasuredRates,
    calculated_rates,
    fitted_rows,
    measured_places,
    unmeasured_rates,
)
from fluxnet.solving.flux_fit import FitStatus, FluxFit, FluxKind, FluxRelation
from fluxnet.solving.forms import form_of
from fluxnet.solving.functionals import Drifting, Joined, Placed
from fluxnet.solving.intervals import Intervals, find_intervals
from fluxnet.solving.pulls import pressing_bounds
from fluxnet.solving.quantities import has_mu
from fluxnet.solving.ratio_scale import find_scale, is_met
from fluxnet.solving.region import Region
from fluxnet.solving.relations import Relation, find_relations
from fluxnet.solving.representative import take_least_flux
from fluxnet.solving.spread import find_adjustments, find_spread, parameter_moves
from fluxnet.solving.statistics import chi_squared_quantile, chi_squared_tail
from fluxnet.solving.task import Task
from fluxnet.solving.weighing import Weighed, fit_weighed, weigh_again
from fluxnet.solving.weightless import without_weightless

__all__ = ["fit_fluxes"]

Vector = NDArray[np.float64]

_PRESSES = 1e-9
"""What bounds add to h below this part of it is rounding."""
_GUESSES = 3


def fit_fluxes(
    network: Network,
    run: Run | None = None,
    *,
    built: Built | None = None,
    progress: Progress = silent,
) -> FluxFit:
    """Fit the fluxes of a network to the measured rates of a run.

    Parameters
    ----------
    network
        With its ``?`` solved.
    run
        Its measured rates (one whose sd is above 30 times the largest rate counts as not
        measured); without one the measured limits of the model alone.
    built
        The problem, where it was built already (without bounds on measured values).

    Returns
    -------
    FluxFit

    Raises
    ------
    MisuseError
        Where the run measures what the network does not have, or errors are impossible.

    Examples
    --------
    >>> from fractions import Fraction
    >>> from fluxnet.network.expression import ONE, constant
    >>> from fluxnet.network.model import (
    ...     Basis, Compartment, Direction, Reaction, Role, Species, Term)
    >>> from fluxnet.rates.measured import MeasuredRate
    >>> network = Network("ferment", Basis.SPECIFIC,
    ...     (Species("glucose", Role.SUBSTRATE), Species("ethanol", Role.PRODUCT),
    ...      Species("CO2", Role.EXCHANGE)), (), (Compartment("all"),),
    ...     (Reaction("ferment", "all", (Term("glucose", ONE),),
    ...      (Term("ethanol", constant(2)), Term("CO2", constant(2)))),))
    >>> def rate(name, way, value, sd):
    ...     return MeasuredRate(Quantity(QuantityKind.RATE, name, Direction(way)), value, sd)
    >>> run = Run("a", Basis.SPECIFIC, (rate("glucose", "in", 10.0, 0.2),
    ...     rate("ethanol", "out", 18.6, 0.4), rate("CO2", "out", 19.6, 0.4)))
    >>> fit = fit_fluxes(network, run)
    >>> fit.fluxes.round(6).tolist(), round(fit.h, 6), fit.dof, round(fit.p_value, 5)
    ([9.7], 6.5, 2, 0.03877)
    """
    if built is None:
        built = build_problem(network, None if run is None else without_weightless(run))
    exact = find_equalities(built)
    if exact.contradictions:
        return _nothing(built, exact.contradictions)
    structure = classify(exact)
    mu = Quantity(QuantityKind.MU)
    extra = (form_of(built, mu),) if has_mu(network, built.basis) else ()
    weighed = fit_weighed(built, structure, extra)
    region, known = _with_guesses(weighed)
    for _ in range(_GUESSES if weighed.built.estimated else 0):
        if region is None:
            break
        weighed = weigh_again(weighed, region.point)
        better, known = _with_guesses(weighed)
        region = better or region
    held = None
    for place in weighed.built.estimated:
        if known and (region is None or is_met(weighed, region.point, place)):
            continue
        scaled = find_scale(weighed, place)
        if scaled is not None:
            weighed, region, held = scaled.weighed, scaled.region, scaled.held
            known = True
    if not known:
        raise ArithmeticError("the fluxes that measured ratios leave without a size were not found")
    if region is None:
        return _nothing(weighed.built, ())
    mu_place = len(built.problem.rows) if extra else None
    return _told(weighed, structure, region, held or region, mu_place, progress)


def _with_guesses(weighed: Weighed) -> tuple[Region | None, bool]:
    """The region of the fit with bounds, and whether it is known.

    Weighed by the guess of a denominator a fit can be best at rates without end, where no
    solver's answer passes its check: :func:`find_scale` then holds the denominator.
    """
    try:
        return _bounded(weighed), True
    except ArithmeticError:
        if not weighed.built.estimated:
            raise
        return None, False


def _bounded(weighed: Weighed) -> Region | None:
    """The region of the fit with bounds, or None where there is none."""
    bounded = fit_bounded(weighed.task, weighed.best)
    return None if bounded is None else take_least_flux(weighed.task, bounded[1])


def _told(
    weighed: Weighed, structure: Structure, region: Region, held: Region, mu_place: int | None,
    progress: Progress,
) -> FluxFit:
    """All that a fit tells; what bounds add by chance is asked of the region ``held``."""
    task, best, point = weighed.task, weighed.best, region.point
    numbers = dict(zip(task.rows.names, point.numbers.tolist(), strict=True))
    built = rebuild(weighed.built, numbers)
    dof = structure.dof
    limit = chi_squared_quantile(0.95, dof) if dof else None
    closes = None if limit is None else best.h <= limit
    added = max(0.0, point.h - best.h)
    presses = added > _PRESSES * (1 + best.h)
    places = measured_places(weighed)
    rates = unmeasured_rates(built, structure, mu_place)
    relations = find_relations(structure)
    fluxes, measured, unmeasured, sums = _all_ranges(
        task, region, structure, places, rates, relations, progress
    )
    spread = find_spread(weighed.built, task, region, structure.determined)
    adjustments = find_adjustments(task, region, presses)
    names = built.problem.columns
    return FluxFit(
        status=FitStatus.INCONSISTENT if closes is False else FitStatus.SOLVED,
        built=built,
        reactions=names,
        fluxes=_read_only(_rounded(task, point)),
        flux_sd=_read_only(fluxes.sd),
        low=_read_only(fluxes.low),
        high=_read_only(fluxes.high),
        best_low=_read_only(fluxes.best_low),
        best_high=_read_only(fluxes.best_high),
        kinds=tuple(
            FluxKind.DETERMINED if fixed else FluxKind.UNDETERMINED
            for fixed in structure.determined
        ),
        is_unique=not structure.unseen.dimension,
        h=best.h if dof else None,
        dof=dof,
        p_value=chi_squared_tail(best.h, dof) if dof else None,
        limit=limit,
        closes=closes,
        bound_h=added if presses else 0.0,
        bound_p=chance_of_bounds(held, added) if presses else None,
        bounds=pressing_bounds(built, task, region, structure) if presses else (),
        moved=parameter_moves(task, point, adjustments, spread.covariance),
        rows=fitted_rows(
            weighed, structure, places, measured, point, adjustments[: len(task.soft)], presses
        ),
        rates=calculated_rates(built.network, rates, unmeasured),
        relations=tuple(
            FluxRelation(
                tuple((names[j], float(factor)) for j, factor in relation.terms),
                float(sums.values[k]), float(sums.sd[k]), float(sums.low[k]), float(sums.high[k]),
            )
            for k, relation in enumerate(relations)
        ),
        covariance=_read_only(spread.covariance),
        free=_read_only(spread.free),
        sources=spread.sources,
        shares=_read_only(spread.shares),
        residual=_imbalance(built, point.fluxes),
        task=task,
        region=region,
    )


def _all_ranges(
    task: Task,
    region: Region,
    structure: Structure,
    places: MeasuredPlaces,
    rates: UnmeasuredRates,
    relations: tuple[Relation, ...],
    progress: Progress,
) -> tuple[Intervals, Intervals, Intervals, Intervals]:
    """The ranges of fluxes, measured rows, other rates and relations: what is alike once."""
    count = task.rows.count
    rows = np.zeros((len(relations), count))
    for k, relation in enumerate(relations):
        for j, factor in relation.terms:
            rows[k, j] = float(factor)
    steady = Drifting(rows, np.zeros((0, *rows.shape)), np.zeros(0))
    plain, ratios = places.functionals
    fluxes = Placed(np.arange(len(task.rows.base) - count, len(task.rows.base)))
    parts = (fluxes, steady, plain, ratios, Placed(rates.places))
    determined = np.concatenate(
        [
            np.array(structure.determined, dtype=bool),
            np.ones(len(relations) + len(places.plain) + len(places.ratios), dtype=bool),
            rates.fixed,
        ]
    )
    found = find_intervals(task, region, Joined(parts), determined, progress)
    measured = count + len(relations)
    others = measured + len(places.plain) + len(places.ratios)
    return (
        found.part(0, count), found.part(measured, others),
        found.part(others, len(found.values)), found.part(count, measured),
    )


def _imbalance(built: Built, fluxes: Vector) -> float:
    """The largest |S v| of a balanced species over the sum of its absolute terms."""
    stoich = built.stoichiometry
    matrix = stoich.floats(built.values)[list(stoich.balanced)]
    turnover = np.abs(matrix) @ np.abs(fluxes)
    least = 1e-6 * float(turnover.max(initial=0.0)) or 1.0
    return float((np.abs(matrix @ fluxes) / np.maximum(turnover, least)).max(initial=0.0))


def _nothing(built: Built, contradictions: tuple[tuple[str, ...], ...]) -> FluxFit:
    """The answer where the hard part has no solution."""
    count = len(built.problem.columns)
    none = _read_only(np.full(count, np.nan))
    size = count + len(built.uncertain)
    return FluxFit(
        status=FitStatus.INFEASIBLE,
        built=built,
        reactions=built.problem.columns,
        fluxes=none, flux_sd=none, low=none, high=none, best_low=none, best_high=none,
        kinds=(FluxKind.UNDETERMINED,) * count,
        is_unique=False,
        h=None, dof=0, p_value=None, limit=None, closes=None,
        bound_h=0.0, bound_p=None, bounds=(), moved=(), rows=(), rates=(), relations=(),
        covariance=_read_only(np.full((size, size), np.nan)),
        free=_read_only(np.zeros((count, 0))),
        sources=(),
        shares=_read_only(np.zeros((count, 0))),
        residual=0.0,
        contradictions=contradictions,
    )


def _read_only(array: Vector) -> Vector:
    array.setflags(write=False)
    return array


def _rounded(task: Task, point: Point) -> Vector:
    """Fluxes without the dust that is left where they are zero."""
    dust = 1e-13 * flux_scale(task, point)
    return np.where(np.abs(point.fluxes) <= dust, 0.0, point.fluxes)
