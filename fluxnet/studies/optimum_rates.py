"""The rates of an optimum: measured ones, then the boundary rates that were not measured."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from fluxnet.network.model import Quantity, QuantityKind
from fluxnet.rates.kinds import RateKind
from fluxnet.solving.build import Built
from fluxnet.solving.classify import classify
from fluxnet.solving.equalities import find_equalities
from fluxnet.solving.problem import Row
from fluxnet.solving.quantities import default_direction, frame_at
from fluxnet.studies.settling import Array, Spans
from fluxnet.studies.solution import RateEstimate
from fluxnet.studies.units import rate_unit

__all__ = ["estimate_rates", "is_point"]


def is_point(low: float, high: float) -> bool:
    """Whether a range is as narrow as the solver's own tolerance leaves it.

    Examples
    --------
    >>> is_point(2.0, 2.0), is_point(2.0, 2.1), is_point(0.0, float("inf"))
    (True, False, False)
    """
    return bool(np.isfinite(high - low)) and high - low <= 1e-6 * max(1.0, abs(low), abs(high))


def estimate_rates(
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
    frame = frame_at(built.network, built.stoichiometry, built.values, built.basis)
    rows = np.array([frame.row(q) for q in asked]).reshape(len(asked), len(fluxes))
    span = spans(rows, {})
    values = rows @ fluxes
    tested = _tested(built) if measured else set()
    estimates: list[RateEstimate] = []
    for k, quantity in enumerate(asked):
        row = measured.get(quantity)
        point = is_point(span.low[k], span.high[k])
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
