"""The suspects of a fit of fluxes: rates, limits, parameters, and what no reaction has.

The relations are those that the network leaves among the measured values once every flux is
eliminated. With the equalities A c = e over fluxes and uncertain numbers c, and the measured
values y = M c, they are all weights with l A + w M = 0: then w (y - y^) is zero but for errors,
y^ being the fitted values. One unit of an error in y_i adds w_i, one unit of a balanced species
that leaves by no reaction -l_k. Numbers of the model enter by their slopes at the fit.
"""

from __future__ import annotations

from collections.abc import Iterator
from fractions import Fraction
from math import inf

import numpy as np
from numpy.typing import NDArray

from fluxnet.exact.sparse import SparseRow, null_space
from fluxnet.ground.record import record
from fluxnet.network.model import Network, QuantityKind, Role, Species
from fluxnet.solving.applying import applies, is_same, may_reverse
from fluxnet.solving.build import Built, rebuild
from fluxnet.solving.descent import fit_equalities
from fluxnet.solving.equalities import ExactRows, find_equalities
from fluxnet.solving.flux_fit import FluxFit
from fluxnet.solving.forms import as_fraction, exact_numbers, form_of_row, growth_weights
from fluxnet.solving.problem import Row, RowKind
from fluxnet.solving.quantities import ash_key, default_direction
from fluxnet.studies.suspect_plan import Hypothesis, SuspectPlan, plan_suspects
from fluxnet.studies.suspect_readings import with_readings
from fluxnet.studies.suspect_result import Standing, SuspectKind, Suspects
from fluxnet.studies.suspect_species import crosses
from fluxnet.studies.suspects import MeasuredValues, judge_suspects, tell_suspects
from fluxnet.studies.units import rate_unit

__all__ = ["seek_flux_suspects"]

Array = NDArray[np.float64]
Columns = dict[int, dict[int, Fraction]]


@record
class _Lifted:
    """A suspect that breaks equalities: by their places, what one unit of it adds on the left."""

    hypothesis: Hypothesis
    amounts: dict[int, Fraction]


def seek_flux_suspects(fit: FluxFit, unit: str) -> Suspects | None:
    """What could be wrong in a run by its network; None where nothing tests the rates.

    Parameters
    ----------
    unit
        That of the rates.
    """
    if fit.task is None or fit.region is None or not fit.dof:
        return None
    task = fit.task
    best = fit_equalities(task, fit.region.point.numbers)
    names = task.rows.names
    built = rebuild(fit.built, dict(zip(names, best.numbers.tolist(), strict=True)))
    plan = _plan(built, best.fluxes, unit)
    if not plan.hypotheses:
        return None
    rows = built.problem.rows
    soft = [rows[i] for i in built.measured]
    errors = np.linalg.inv(task.whitening) if len(soft) else np.zeros((0, 0))
    roots = np.zeros((len(soft) + len(names),) * 2)
    roots[: len(soft), : len(soft)] = errors
    roots[len(soft) :, len(soft) :] = np.diag(task.sd)
    start = task.rows.start
    measured = MeasuredValues(
        values=np.concatenate(
            [task.measured - best.values[task.soft], start - best.numbers]
        )[None, :],
        covariance=(roots @ roots.T)[None, :, :],
        roots=roots[None, :, :],
        given=np.concatenate([[_given(row) for row in soft], start])[None, :],
        factors=np.concatenate(
            [[1 / (row.denominator or 1.0) for row in soft], np.ones(len(names))]
        )[None, :],
    )
    told = tell_suspects(judge_suspects(plan, measured), 0)
    run = built.run
    return with_readings(told, _species(built.network), dict(run.extras) if run else {})


def _species(network: Network) -> dict[str, Species]:
    """The species of rates by the names that these have; mu is the growth of the one biomass."""
    named = {s.name: s for s in network.boundary}
    biomass = [s for s in network.boundary if s.role is Role.BIOMASS]
    return named | ({"mu": biomass[0]} if len(biomass) == 1 else {})


def _given(row: Row) -> float:
    """The measured value as it is told."""
    return float((row.value if row.ratio is None else row.ratio) or 0.0)


def _plan(built: Built, fluxes: Array, unit: str) -> SuspectPlan:
    """All suspects, and the relations among measured values and uncertain numbers."""
    exact = find_equalities(built)
    slopes = _slopes(built, fluxes)
    rows, count = built.problem.rows, exact.columns
    numbers = len(built.uncertain)
    equal = [e.place for e in exact.equalities]
    stacked = [dict(exact.rows[p]) | slopes.get(p, {}) for p in (*equal, *exact.soft)]
    stacked += [{count + k: Fraction(1)} for k in range(numbers)]
    turned: Columns = {}
    for i, row in enumerate(stacked):
        for j, value in row.items():
            turned.setdefault(j, {})[i] = value
    space = null_space(list(turned.values()), len(stacked))
    width = len(exact.soft) + numbers
    hypotheses = [
        _of_row(rows[place], k, built, unit) for k, place in enumerate(exact.soft)
    ] + [
        Hypothesis(
            SuspectKind.PARAMETER, u.name, "", row=len(exact.soft) + k, low=u.low, high=u.high
        )
        for k, u in enumerate(built.uncertain)
    ]
    lifted = [
        found
        for k in range(len(equal))
        for found in _of_equality(exact, k, built, unit)
    ]
    equations: list[list[Fraction]] = []
    for k in range(space.dimension):
        weights = [row.get(k, Fraction(0)) for row in space.rows]
        equations.append([
            *weights[len(equal) :],
            *(sum((-a * weights[p] for p, a in x.amounts.items()), Fraction(0)) for x in lifted),
        ])  # fmt: skip
    return plan_suspects(
        equations, [False] * width, [*hypotheses, *(one.hypothesis for one in lifted)],
        with_model=True,
    )  # fmt: skip


def _of_row(row: Row, place: int, built: Built, unit: str) -> Hypothesis:
    """An error of a measured value."""
    network, quantity = built.network, row.quantity
    if quantity is None:
        raise ValueError(f"{row.name} measures nothing")
    is_rate = quantity.kind is QuantityKind.RATE
    low, high = (-inf if may_reverse(quantity, network) else 0.0), inf
    for limit in network.limits:
        if (
            limit.is_measured
            or limit.quantity.direction is not quantity.direction
            or not is_same(limit.quantity, quantity, network)
            or not applies(limit, network, built.run)
        ):
            continue
        low = low if limit.low is None else max(low, float(limit.low))
        high = high if limit.high is None else min(high, float(limit.high))
    return Hypothesis(
        SuspectKind.MEASURED_RATE, quantity.name if is_rate else str(quantity),
        rate_unit(quantity, unit), row=place, direction=quantity.direction if is_rate else None,
        low=low, high=high,
    )  # fmt: skip


def _of_equality(exact: ExactRows, k: int, built: Built, unit: str) -> Iterator[_Lifted]:
    """What leaves or enters beside what the reactions have, or against a limit that closes it."""
    rows, network, equality = built.problem.rows, built.network, exact.equalities[k]
    if equality.place >= len(rows) or equality.is_measured:
        return
    row = rows[equality.place]
    if row.kind is RowKind.BALANCE:
        species = network.find_species(row.name)
        if species is not None:
            yield _Lifted(_of_species(species, unit), {k: Fraction(1)})
        return
    quantity = row.quantity
    if quantity is None or quantity.kind is not QuantityKind.RATE or equality.value:
        return
    closed = network.find_species(quantity.name)
    if closed is None:
        return
    direction = quantity.direction or default_direction(closed.role)
    one = Hypothesis(
        SuspectKind.UNMEASURED_SPECIES, closed.name, unit, (Fraction(1),),
        positive=_allowed(closed, Role.SUBSTRATE), negative=_allowed(closed, Role.PRODUCT),
    )  # fmt: skip
    # what is closed closes the reaction that alone takes part in it, which is an equality as well
    own = exact.rows[equality.place]
    yield _Lifted(one, {
        other: direction.sign * factor
        for other, also in enumerate(exact.equalities)
        if (factor := _multiple(exact.rows[also.place], own)) is not None
    })  # fmt: skip


def _multiple(row: SparseRow, other: SparseRow) -> Fraction | None:
    """The factor by which one row is another; None where it is not."""
    if row.keys() != other.keys() or not row:
        return None
    factors = {value / other[j] for j, value in row.items()}
    return factors.pop() if len(factors) == 1 else None


def _allowed(species: Species, against: Role) -> Standing:
    """How a boundary species' way stands that one role forbids."""
    forbidden = species.role is against or (
        species.role is Role.BIOMASS and against is Role.PRODUCT
    )
    return Standing.IMPOSSIBLE if forbidden else Standing.MODEL


def _of_species(species: Species, unit: str) -> Hypothesis:
    """A balanced species that leaves, or comes, by no reaction of the model."""
    if species.role is not Role.CARRIER and crosses(species):
        return Hypothesis(
            SuspectKind.UNMEASURED_SPECIES, species.name, unit, (Fraction(1),),
            positive=Standing.MODEL, negative=Standing.RARE,
        )  # fmt: skip
    spent = Standing.MODEL if species.role is Role.CARRIER else Standing.RARE
    return Hypothesis(
        SuspectKind.CARRIER, species.name, unit, (Fraction(1),), positive=spent,
        negative=Standing.RARE,
    )  # fmt: skip


def _slopes(built: Built, fluxes: Array) -> Columns:
    """By row: the derivative of its value by each uncertain number, at the fitted fluxes.

    Behind the columns of the fluxes. The fluxes count as the decimals that they are, so that
    numbers which act alike are found to do so exactly.
    """
    stoich, numbers = built.stoichiometry, exact_numbers(built)
    count = len(stoich.reactions)
    exact_fluxes = [as_fraction(v) for v in fluxes.tolist()]
    mass = growth_weights(built, numbers)
    production: dict[int, Fraction] = {}
    changes: list[dict[int, Fraction]] = [{} for _ in built.uncertain]
    for i, j, entry in stoich.entries:
        flux = exact_fluxes[j]
        if i in mass:
            value = entry.exact(numbers) if entry.number is None else entry.number
            production[i] = production.get(i, Fraction(0)) + value * flux
        for k, uncertain in enumerate(built.uncertain):
            if uncertain.name in entry.parameters:
                slope = entry.derivative(uncertain.name).exact(numbers)
                changes[k][i] = changes[k].get(i, Fraction(0)) + slope * flux
    found: Columns = {}
    for place, row in enumerate(built.problem.rows):
        form = form_of_row(built, row)
        weights = dict(form.species)
        for i, weight in mass.items():
            if form.growth:
                weights[i] = weights.get(i, Fraction(0)) + form.growth * weight
        for k, uncertain in enumerate(built.uncertain):
            slope = sum(
                (w * changes[k][i] for i, w in weights.items() if i in changes[k]), Fraction(0)
            )
            if form.growth:
                # mu counts the mass of biomass over 1 - ash
                slope += form.growth * sum(
                    (
                        weight / (1 - numbers[uncertain.name]) * production.get(i, Fraction(0))
                        for i, weight in mass.items()
                        if uncertain.name == ash_key(built.network.species[i].name)
                    ),
                    Fraction(0),
                )
            if slope:
                found.setdefault(place, {})[count + k] = slope
    return found
