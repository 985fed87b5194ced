"""Measured rows and unmeasured rates after a fit, ready to be shown."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.network.model import Direction, Network, Quantity, QuantityKind, Role, Species
from fluxnet.rates.kinds import RateKind
from fluxnet.solving.applying import is_same
from fluxnet.solving.build import Built
from fluxnet.solving.chart import Point
from fluxnet.solving.classify import Structure
from fluxnet.solving.flux_fit import FittedRow
from fluxnet.solving.forms import exact_numbers, exact_row, exact_species, form_of
from fluxnet.solving.functionals import Placed, Ratios
from fluxnet.solving.intervals import Intervals
from fluxnet.solving.problem import RowKind
from fluxnet.solving.weighing import Weighed

__all__ = [
    "MeasuredPlaces", "UnmeasuredRates", "calculated_rates", "fitted_rows", "measured_places",
    "unmeasured_rates",
]

Vector = NDArray[np.float64]

_MEASURED = (RowKind.MEASUREMENT, RowKind.MEASURED_LIMIT)


@record
class MeasuredPlaces:
    """The places of measured rows among the task's: plain values, then quotients."""

    plain: tuple[int, ...]
    ratios: tuple[tuple[int, int, int], ...]

    @property
    def functionals(self) -> tuple[Placed, Ratios]:
        """Their values, plain ones first."""
        pairs = np.array([pair[1:] for pair in self.ratios], dtype=np.intp).reshape(-1, 2)
        return Placed(np.array(self.plain, dtype=np.intp)), Ratios(pairs[:, 0], pairs[:, 1])


def measured_places(weighed: Weighed) -> MeasuredPlaces:
    """Where the measured rows stand, exact ones too."""
    places = [i for i, r in enumerate(weighed.built.problem.rows) if r.kind in _MEASURED]
    return MeasuredPlaces(
        tuple(i for i in places if i not in weighed.ratios),
        tuple((i, *weighed.ratios[i]) for i in places if i in weighed.ratios),
    )


def fitted_rows(
    weighed: Weighed, structure: Structure, places: MeasuredPlaces, ranges: Intervals,
    point: Point, adjustments: Vector, pressing: bool,
) -> tuple[FittedRow, ...]:
    """Every measured row, in the order of the problem.

    Parameters
    ----------
    ranges
        Those of ``places``, plain values first.
    point
        The fit that is shown.
    adjustments
        The sd of measured less fitted, one a soft row, in the unit of the row.
    pressing
        Whether bounds press: then they test rows too that nothing else tests.
    """
    rows = weighed.built.problem.rows
    order = [*places.plain, *(place for place, _, _ in places.ratios)]
    sharp = [e.place for e in structure.exact.equalities if e.is_measured]
    tested = dict(zip((*structure.exact.soft, *sharp), structure.balanceable, strict=True))
    adjusted = dict(zip(structure.exact.soft, adjustments.tolist(), strict=True))
    found: list[FittedRow] = []
    for k, place in sorted(enumerate(order), key=lambda pair: pair[1]):
        row = rows[place]
        if row.quantity is None or row.value is None or row.sd is None:
            continue
        measured, sd = row.value, row.sd
        if row.ratio is not None:
            measured, sd = row.ratio, row.sd / (row.denominator or 1.0)
        sure = adjusted.get(place, 0.0)
        gap = row.value - float(point.values[place])
        value, low, high, best_low, best_high = (
            float(x[k]) + 0.0
            for x in (ranges.values, ranges.low, ranges.high, ranges.best_low, ranges.best_high)
        )
        if np.isnan(value):  # a ratio over a rate of zero: any value fits, and so does the measured
            value, low, high, best_low, best_high = measured, -np.inf, np.inf, -np.inf, np.inf
        found.append(
            FittedRow(
                quantity=row.quantity,
                name=row.name,
                kind=RateKind.BALANCEABLE if tested[place] else RateKind.NOT_BALANCEABLE,
                value=value,
                value_sd=_known(ranges.sd[k]),
                low=low,
                high=high,
                best_low=best_low,
                best_high=best_high,
                measured=measured,
                sd=sd,
                z=gap / sure if sure > 0 and (tested[place] or pressing) else None,
                of_model=row.kind is RowKind.MEASURED_LIMIT,
                span=row.span,
            )
        )
    return tuple(found)


@record
class UnmeasuredRates:
    """Boundary rates that nothing measures, and mu: their places, and whether each is fixed."""

    quantities: tuple[Quantity, ...]
    places: NDArray[np.intp]
    fixed: NDArray[np.bool_]


def unmeasured_rates(
    built: Built, structure: Structure, mu_place: int | None
) -> UnmeasuredRates:
    """Every boundary rate that was not measured, and mu, in the order of declaration."""
    network, rows = built.network, built.problem.rows
    known = [r.quantity for r in rows if r.kind in _MEASURED and r.quantity is not None]
    asked: list[tuple[Quantity, int]] = [
        (row.quantity, place)
        for place, row in enumerate(rows)
        if row.kind is RowKind.ROLE and row.quantity is not None
    ]
    if mu_place is not None:
        asked.append((Quantity(QuantityKind.MU), mu_place))
    asked = [
        (quantity, place)
        for quantity, place in asked
        if not any(is_same(quantity, other, network) for other in known)
    ]
    numbers = exact_numbers(built)
    species = exact_species(built.stoichiometry, numbers)
    fixed = [
        structure.is_determined(exact_row(built, form_of(built, q), species, numbers))
        for q, _ in asked
    ]
    return UnmeasuredRates(
        tuple(q for q, _ in asked),
        np.array([place for _, place in asked], dtype=np.intp),
        np.array(fixed, dtype=bool),
    )


def calculated_rates(
    network: Network, rates: UnmeasuredRates, ranges: Intervals
) -> tuple[FittedRow, ...]:
    """The unmeasured rates with their values.

    The rate of an exchange species is told in the direction that it takes.
    """
    return tuple(
        _turned(
            FittedRow(
                quantity=quantity,
                name=str(quantity),
                kind=RateKind.CALCULABLE if rates.fixed[k] else RateKind.NOT_CALCULABLE,
                value=float(ranges.values[k]) + 0.0,
                value_sd=_known(ranges.sd[k]),
                low=float(ranges.low[k]),
                high=float(ranges.high[k]),
                best_low=float(ranges.best_low[k]),
                best_high=float(ranges.best_high[k]),
            ),
            network.find_species(quantity.name),
        )
        for k, quantity in enumerate(rates.quantities)
    )


def _turned(row: FittedRow, species: Species | None) -> FittedRow:
    """An exchange species' rate in the direction in which it is positive."""
    if species is None or species.role is not Role.EXCHANGE or row.value >= 0:
        return row
    quantity = replace(row.quantity, direction=Direction.IN)
    return replace(
        row, quantity=quantity, name=str(quantity), value=-row.value, low=-row.high,
        high=-row.low, best_low=-row.best_high, best_high=-row.best_low,
    )


def _known(sd: float) -> float | None:
    return None if np.isnan(sd) else float(sd)
