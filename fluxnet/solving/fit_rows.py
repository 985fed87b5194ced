"""Measured rows and unmeasured rates after a fit, ready to be shown."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from fluxnet.network.model import Direction, Quantity, QuantityKind, Role
from fluxnet.rates.kinds import RateKind
from fluxnet.solving.applying import is_same
from fluxnet.solving.build import Built
from fluxnet.solving.classify import Structure
from fluxnet.solving.flux_fit import FittedRow
from fluxnet.solving.forms import exact_numbers, exact_row, exact_species, form_of
from fluxnet.solving.functionals import Placed, Ratios
from fluxnet.solving.intervals import Intervals, find_intervals
from fluxnet.solving.problem import RowKind
from fluxnet.solving.region import Region
from fluxnet.solving.spread import Spread
from fluxnet.solving.task import Task
from fluxnet.solving.weighing import Weighed

__all__ = ["fitted_rows", "unmeasured_rates"]

_MEASURED = (RowKind.MEASUREMENT, RowKind.MEASURED_LIMIT)


def fitted_rows(
    weighed: Weighed, structure: Structure, region: Region, spread: Spread
) -> tuple[FittedRow, ...]:
    """Every measured row, exact ones too, in the order of the problem."""
    built, task = weighed.built, weighed.task
    rows = built.problem.rows
    places = [i for i, row in enumerate(rows) if row.kind in _MEASURED]
    plain = [i for i in places if i not in weighed.ratios]
    quotients = [i for i in places if i in weighed.ratios]
    told: dict[int, tuple[Intervals, int]] = {}
    ranges = find_intervals(
        task, region, Placed(np.array(plain, dtype=np.intp)), np.ones(len(plain), dtype=bool)
    )
    told |= {place: (ranges, k) for k, place in enumerate(plain)}
    if quotients:
        pairs = np.array([weighed.ratios[i] for i in quotients], dtype=np.intp)
        ranges = find_intervals(task, region, Ratios(pairs[:, 0], pairs[:, 1]))
        told |= {place: (ranges, k) for k, place in enumerate(quotients)}
    sharp = [e.place for e in structure.exact.equalities if e.is_measured]
    tested = dict(zip((*structure.exact.soft, *sharp), structure.balanceable, strict=True))
    adjusted = dict(zip(structure.exact.soft, spread.adjustment_sd.tolist(), strict=True))
    found: list[FittedRow] = []
    for place in places:
        row = rows[place]
        if row.quantity is None or row.value is None or row.sd is None:
            continue
        ranges, k = told[place]
        measured, sd, scale = row.value, row.sd, 1.0
        if row.ratio is not None:
            measured, scale = row.ratio, row.denominator or 1.0
            sd = row.sd / scale
        value = float(ranges.values[k])
        adjustment = adjusted.get(place, 0.0) / scale
        found.append(
            FittedRow(
                quantity=row.quantity,
                name=row.name,
                kind=RateKind.BALANCEABLE if tested[place] else RateKind.NOT_BALANCEABLE,
                value=value,
                value_sd=_known(ranges.sd[k]),
                low=float(ranges.low[k]),
                high=float(ranges.high[k]),
                best_low=float(ranges.best_low[k]),
                best_high=float(ranges.best_high[k]),
                measured=measured,
                sd=sd,
                z=(measured - value) / adjustment if adjustment > 0 and tested[place] else None,
                of_model=row.kind is RowKind.MEASURED_LIMIT,
                span=row.span,
            )
        )
    return tuple(found)


def unmeasured_rates(
    built: Built, task: Task, structure: Structure, region: Region, mu_place: int | None
) -> tuple[FittedRow, ...]:
    """Every boundary rate that was not measured, and mu, in the order of declaration.

    The rate of an exchange species is told in the direction that it takes.
    """
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
    if not asked:
        return ()
    numbers = exact_numbers(built)
    species = exact_species(built.stoichiometry, numbers)
    fixed = np.array(
        [
            structure.is_determined(exact_row(built, form_of(built, q), species, numbers))
            for q, _ in asked
        ]
    )
    places = np.array([place for _, place in asked], dtype=np.intp)
    ranges = find_intervals(task, region, Placed(places), fixed)
    return tuple(
        _turned(
            FittedRow(
                quantity=quantity,
                name=str(quantity),
                kind=RateKind.CALCULABLE if fixed[k] else RateKind.NOT_CALCULABLE,
                value=float(ranges.values[k]) + 0.0,
                value_sd=_known(ranges.sd[k]),
                low=float(ranges.low[k]),
                high=float(ranges.high[k]),
                best_low=float(ranges.best_low[k]),
                best_high=float(ranges.best_high[k]),
            ),
            network.find_species(quantity.name),
        )
        for k, (quantity, _) in enumerate(asked)
    )


def _turned(row: FittedRow, species: object) -> FittedRow:
    """An exchange species' rate in the direction in which it is positive."""
    role = getattr(species, "role", None)
    if role is not Role.EXCHANGE or row.value >= 0:
        return row
    quantity = replace(row.quantity, direction=Direction.IN)
    return replace(
        row, quantity=quantity, name=str(quantity), value=-row.value, low=-row.high,
        high=-row.low, best_low=-row.best_high, best_high=-row.best_low,
    )


def _known(sd: float) -> float | None:
    return None if np.isnan(sd) else float(sd)
