"""What could be measured next: new quantities, and what is known already with half its sd."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from fluxnet.checks.freedom import in_order_of_practice
from fluxnet.ground.record import record
from fluxnet.network.biomass import biomasses
from fluxnet.network.model import Direction, Network, Quantity, QuantityKind, Species
from fluxnet.solving.sources import Sources
from fluxnet.studies.plan_gauge import Gauge, Reading
from fluxnet.studies.plan_result import How, Step
from fluxnet.studies.units import rate_unit
from fluxnet.tables.bases import Target, carbon_weight
from fluxnet.tables.errors_assumed import SdRule, assume_sds

__all__ = ["Candidate", "better_ones", "inside_ones", "new_ones"]

Vector = NDArray[np.float64]

_ALIKE = 1e-9
_NOTHING = 1e-9


@record
class Candidate:
    """A step, with its reading where it is new, else the source that it makes better.

    ``shift`` is what one sd of the run's shared error moves a new value by.
    """

    step: Step
    reading: Reading | None = None
    source: int | None = None
    shift: float = 0.0


def new_ones(gauge: Gauge, error: float, unit: str) -> list[Candidate]:
    """What crosses the boundary and is not measured, mu, and CO2 over oxygen; usual ones first.

    What is proportional to something before it, or fixed anyway, is left out.
    """
    network = gauge.fit.built.network
    order = {_key(q): k for k, q in enumerate(in_order_of_practice(network))}
    rows = sorted(gauge.fit.rates, key=lambda row: order.get(_key(row.quantity), len(order)))
    sizes = {row.quantity: _size(row.value, row.best_low, row.best_high) for row in rows}
    quantities = list(sizes)
    quotient = _gas_quotient(network)
    measured = {row.quantity for row in gauge.fit.rows}
    if quotient is not None and quotient not in measured:
        quantities.append(quotient)
    sds = _errors(gauge, quantities, [sizes.get(q) for q in quantities], error, unit)
    found: list[Candidate] = []
    for quantity, sd in zip(quantities, sds, strict=True):
        reading = gauge.read(quantity)
        if reading is None or reading.is_constant or _is_told(reading, [c.reading for c in found]):
            continue
        size = sd or error * abs(reading.value)
        if size <= _NOTHING * gauge.scale:
            # 5 % of nothing would be exact: as in a table it has the floor as its sd
            size = SdRule().floor
        step = Step(str(quantity), How.NEW, size, rate_unit(quantity, unit), reading.value,
                    quantity.kind.value)  # fmt: skip
        found.append(Candidate(step, reading, shift=_shift(gauge, quantity, reading)))
    return found


def better_ones(sources: Sources, unit: str) -> list[Candidate]:
    """Everything that is known with an error, with half of it."""
    found: list[Candidate] = []
    for place, member in enumerate(sources.members):
        told_in = "" if member.quantity is None else rate_unit(member.quantity, unit)
        kind = member.kind.value
        step = Step(member.name, How.BETTER, member.sd / 2, told_in, None, kind)
        found.append(Candidate(step, source=place))
    return found


def inside_ones(
    gauge: Gauge, told: Sequence[Reading | None], error: float, unit: str
) -> list[Candidate]:
    """The fluxes inside that are not proportional to what was told of already.

    Parameters
    ----------
    told
        What crosses the boundary, what is measured, and what the plan is for.
    """
    fit = gauge.fit
    found: list[Candidate] = []
    for j, name in enumerate(fit.reactions):
        quantity = Quantity(QuantityKind.FLUX, name)
        reading = gauge.read(quantity)
        if reading is None or reading.is_constant:
            continue
        if _is_told(reading, [*told, *(c.reading for c in found)]):
            continue
        size = _size(float(fit.fluxes[j]), float(fit.best_low[j]), float(fit.best_high[j]))
        sd = max(error * (gauge.scale if size is None else size), SdRule().floor * gauge.scale)
        step = Step(str(quantity), How.NEW, sd, unit, reading.value, quantity.kind.value)
        found.append(Candidate(step, reading, shift=_shift(gauge, quantity, reading)))
    return found


def _shift(gauge: Gauge, quantity: Quantity, reading: Reading) -> float:
    """What one sd of the run's shared error moves a new value by: a part of it, if divided."""
    built = gauge.fit.built
    shared = built.run.shared_error if built.run is not None else None
    is_growth = quantity.name in {s.name for s in biomasses(built.network)}
    divided = quantity.kind in (QuantityKind.RATE, QuantityKind.FLUX) and not is_growth
    return shared * reading.value if shared and divided else 0.0


def _size(value: float, low: float, high: float) -> float | None:
    """What a relative error is taken of: the value, or the middle of a range; None of none."""
    if not (np.isfinite(low) and np.isfinite(high)):
        return None
    return abs(value) if low == high else (abs(low) + abs(high)) / 2


def _errors(
    gauge: Gauge, quantities: Sequence[Quantity], sizes: Sequence[float | None], error: float,
    unit: str,
) -> list[float]:
    """The sd of each new rate, as a table would assume it in a row without one; 0 for a ratio."""
    fit = gauge.fit
    network = fit.built.network
    target = Target(fit.built.basis, unit, unit, biomass=next(iter(biomasses(network)), None))
    known = [row for row in fit.rows if row.quantity.kind is not QuantityKind.RATIO]
    values = [row.value for row in known]
    weights = [carbon_weight(r.quantity, _species(network, r.quantity), target) for r in known]
    sds: list[float] = []
    for quantity, size in zip(quantities, sizes, strict=True):
        is_ratio = quantity.kind is QuantityKind.RATIO
        value = 0.0 if is_ratio else gauge.scale if size is None else size
        weight = carbon_weight(quantity, _species(network, quantity), target)
        sds.append(assume_sds([*values, value], [*weights, weight], SdRule(error))[-1])
    return sds


def _species(network: Network, quantity: Quantity) -> tuple[Species, ...]:
    species = network.find_species(quantity.name)
    return () if species is None else (species,)


def _key(quantity: Quantity) -> tuple[QuantityKind, str]:
    return quantity.kind, quantity.name


def _gas_quotient(network: Network) -> Quantity | None:
    """CO2 released over oxygen taken up, which one gas analyser tells better than either."""
    by_formula = {
        tuple(sorted(s.formula.counts)): s.name for s in network.boundary if s.formula is not None
    }
    one, two = Fraction(1), Fraction(2)
    oxygen = by_formula.get((("O", two),))
    dioxide = by_formula.get((("C", one), ("O", two)))
    if oxygen is None or dioxide is None:
        return None
    return Quantity(
        QuantityKind.RATIO,
        numerator=Quantity(QuantityKind.RATE, dioxide, Direction.OUT),
        denominator=Quantity(QuantityKind.RATE, oxygen, Direction.IN),
    )


def _is_told(reading: Reading, others: Iterable[Reading | None]) -> bool:
    """Whether a reading is proportional to one of the others: the same measurement."""
    own = _direction(reading)
    return any(
        np.abs(own - _direction(other)).max(initial=0.0) <= _ALIKE
        for other in others
        if other is not None
    )


def _direction(reading: Reading) -> Vector:
    """The slopes up to a factor."""
    slopes = np.concatenate([reading.seen, reading.unseen])
    size = float(np.linalg.norm(slopes)) or 1.0
    lead = slopes[int(np.argmax(np.abs(slopes) > 0.3 * np.abs(slopes).max(initial=0.0)))]
    turned: Vector = slopes / (size if lead > 0 else -size)
    return turned
