"""The rows of a problem and their bounds, before any number of the matrix is known."""

from __future__ import annotations

from dataclasses import dataclass, field
from fractions import Fraction
from math import inf, isfinite

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.ground.source import Span
from fluxnet.network.model import (
    Direction,
    Limit,
    Network,
    Quantity,
    QuantityKind,
    Relation,
    Role,
)
from fluxnet.rates.measured import Run
from fluxnet.solving.applying import (
    applies,
    empty_notes,
    free_species,
    is_closed,
    is_same,
    is_zero,
    limit_notes,
    may_reverse,
)
from fluxnet.solving.problem import Row, RowKind
from fluxnet.solving.quantities import counts_moles, default_direction, units_per_mole
from fluxnet.solving.words import limit_words

__all__ = ["Sheet", "lay_rows"]


@record
class Sheet:
    """Rows with bounds.

    ``sources`` is the place of a row's rate among the run's measured ones, ``sizes`` the
    factor of its sd (a ratio's denominator), ``guessed`` the rows where that is a guess.
    """

    rows: tuple[Row, ...]
    low: NDArray[np.float64]
    high: NDArray[np.float64]
    sources: tuple[int | None, ...]
    sizes: tuple[float, ...]
    guessed: frozenset[int]
    left_out: tuple[Limit, ...]
    replaced: tuple[Limit, ...]
    left_free: tuple[str, ...]
    notes: tuple[Diagnostic, ...]


@dataclass(slots=True, eq=False, repr=False)
class _Draft:
    """Rows as they are collected."""

    rows: list[Row] = field(default_factory=list)
    low: list[float] = field(default_factory=list)
    high: list[float] = field(default_factory=list)
    sources: list[int | None] = field(default_factory=list)
    sizes: list[float] = field(default_factory=list)
    guessed: set[int] = field(default_factory=set)

    def add(
        self, row: Row, low: float, high: float, source: int | None = None, size: float = 1.0
    ) -> None:
        self.rows.append(row)
        self.low.append(low)
        self.high.append(high)
        self.sources.append(source)
        self.sizes.append(size)


@record
class _Reading:
    """A measured value, of the run or of the model."""

    quantity: Quantity
    value: float
    sd: float
    kind: RowKind
    name: str
    span: Span
    source: int | None = None


def lay_rows(
    network: Network,
    run: Run | None,
    within: float | None,
    denominators: dict[Quantity, float],
) -> Sheet:
    """All rows of a network and one run, in the order balances, roles, limits, measurements."""
    draft = _Draft()
    for species in network.balanced:
        draft.add(Row(RowKind.BALANCE, species.name, span=species.span), 0.0, 0.0)
    for species in network.boundary:
        way = Quantity(QuantityKind.RATE, species.name, default_direction(species.role))
        low = -inf if species.role is Role.EXCHANGE else 0.0
        draft.add(Row(RowKind.ROLE, species.name, way, span=species.span), low, inf)
    readings = _run_readings(run)
    left_out: list[Limit] = []
    replaced: list[Limit] = []
    empty: list[Limit] = []
    hard: list[Limit] = []
    rated = [r.quantity for r in readings]
    for limit in network.limits:
        if limit.is_measured and any(is_same(limit.quantity, q, network) for q in rated):
            replaced.append(limit)
        elif limit.is_measured and is_closed(limit.quantity.denominator, network):
            empty.append(limit)
        elif applies(limit, network, run):
            hard.append(limit)
        else:
            left_out.append(limit)
    for limit in hard:
        if not limit.is_measured:
            _add_limit(draft, limit, network, run)
    for limit in left_out:
        _add_zeros(draft, limit, network)
    for limit in hard:
        if limit.is_measured:
            readings.append(_limit_reading(limit, network))
    known = {r.quantity: abs(r.value) for r in readings}
    for reading in readings:
        per_mole = _per_mole(reading.quantity, network, run)
        below = reading.quantity.denominator
        size = denominators.get(below) if below is not None else None
        if below is not None and not size:
            size = known.get(below, 0.0) / per_mole
            if not size:
                # No size is known before a solution is: the caller sees which rows rest on this.
                size = max((v for q, v in known.items() if q.denominator is None), default=0.0)
                size = size or 1.0
                draft.guessed.add(len(draft.rows))
        _add_reading(draft, reading, within, size, per_mole)
    return Sheet(
        rows=tuple(draft.rows),
        low=np.array(draft.low, dtype=np.float64),
        high=np.array(draft.high, dtype=np.float64),
        sources=tuple(draft.sources),
        sizes=tuple(draft.sizes),
        guessed=frozenset(draft.guessed),
        left_out=(*(limit for limit in left_out if not is_zero(limit)), *empty),
        replaced=tuple(replaced),
        left_free=free_species(
            network,
            (r.quantity for r in readings),
            zip(draft.rows, draft.low, draft.high, strict=True),
        ),
        notes=(*empty_notes(empty, network), *limit_notes(left_out, replaced, network, run)),
    )


def _run_readings(run: Run | None) -> list[_Reading]:
    readings: list[_Reading] = []
    for place, rate in enumerate(run.measured if run is not None else ()):
        if rate.value is None or rate.sd is None or not isfinite(rate.value + rate.sd):
            raise MisuseError(f"{rate.quantity} has a value that is no number, or no sd")
        if rate.sd < 0:
            raise MisuseError(f"{rate.quantity} has a negative sd")
        readings.append(
            _Reading(
                rate.quantity, rate.value, rate.sd, RowKind.MEASUREMENT, str(rate.quantity),
                rate.span, place,
            )
        )
    return readings


def _limit_reading(limit: Limit, network: Network) -> _Reading:
    value = limit.low if limit.low is not None else limit.high
    return _Reading(
        limit.quantity, float(value or 0), float(limit.sd or 0), RowKind.MEASURED_LIMIT,
        limit_words(limit, network), limit.span,
    )


def _per_mole(quantity: Quantity, network: Network, run: Run | None) -> float:
    """Units of the basis in a mole of a ratio's denominator."""
    below = quantity.denominator
    species = network.find_species(below.name) if below is not None else None
    if species is None or not counts_moles(quantity):
        return 1.0
    return units_per_mole(species, run.basis if run is not None else network.basis)


def _add_reading(
    draft: _Draft,
    reading: _Reading,
    within: float | None,
    size: float | None,
    per_mole: float,
) -> None:
    """A measured value as a row: free, within K sd, or an equality where it is exact."""
    value, sd, ratio = reading.value, reading.sd, None
    if size is not None:
        ratio, value, sd = reading.value, 0.0, reading.sd * abs(size)
    row = Row(
        reading.kind, reading.name, reading.quantity, value, sd, reading.span, ratio, size,
        per_mole,
    )
    low, high = -inf, inf
    if reading.sd == 0:
        low = high = value
    elif within is not None and ratio is None:
        low, high = value - within * sd, value + within * sd
    draft.add(row, low, high, reading.source, size or 1.0)
    if ratio is not None and within is not None and reading.sd > 0:
        # |A / B - r| <= K sd is exactly these two rows: together they force B >= 0.
        half = within * reading.sd
        pair = Limit(
            reading.quantity, Relation.BETWEEN, Fraction(ratio - half), Fraction(ratio + half)
        )
        _add_ratio(draft, pair, reading.kind, reading.name, reading.span, per_mole)


def _add_limit(draft: _Draft, limit: Limit, network: Network, run: Run | None) -> None:
    name = limit_words(limit, network)
    if limit.quantity.kind is QuantityKind.RATIO:
        guard = may_reverse(limit.quantity.denominator, network)
        per_mole = _per_mole(limit.quantity, network, run)
        _add_ratio(draft, limit, RowKind.LIMIT, name, limit.span, per_mole, guard)
        return
    low = -inf if limit.low is None else float(limit.low)
    high = inf if limit.high is None else float(limit.high)
    draft.add(Row(RowKind.LIMIT, name, limit.quantity, span=limit.span), low, high)


def _add_ratio(
    draft: _Draft,
    limit: Limit,
    kind: RowKind,
    name: str,
    span: Span,
    per_mole: float,
    guard: bool = False,
) -> None:
    """Bound a ratio A / B by A - low B >= 0 and A - high B <= 0, with B going its way.

    ``guard``: B could be negative, and a one-sided limit would then turn round.
    """
    quantity, low, high = limit.quantity, limit.low, limit.high
    ends = [(low, 0.0, inf), (high, -inf, 0.0)]
    if low is not None and low == high:
        ends, guard = [(low, 0.0, 0.0)], False
    for ratio, least, most in ends:
        if ratio is not None:
            row = Row(kind, name, quantity, span=span, ratio=float(ratio), per_mole=per_mole)
            draft.add(row, least, most)
    if guard and (low is None or high is None):
        draft.add(Row(kind, name, quantity.denominator, span=span), 0.0, inf)


def _add_zeros(draft: _Draft, limit: Limit, network: Network) -> None:
    """What stays of a limit in another basis: zero is zero in every unit."""
    if limit.is_measured:
        return
    low = 0.0 if limit.low == 0 else -inf
    high = 0.0 if limit.high == 0 else inf
    if low == -inf and high == inf:
        return
    name = limit_words(limit, network)
    quantities: tuple[Quantity, ...] = (limit.quantity,)
    if limit.quantity.kind is QuantityKind.MU:
        quantities = tuple(
            Quantity(QuantityKind.RATE, s.name, Direction.OUT)
            for s in network.boundary if s.role is Role.BIOMASS
        )
    for quantity in quantities:
        draft.add(Row(RowKind.LIMIT, name, quantity, span=limit.span), low, high)
