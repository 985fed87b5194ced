"""Entries become readings: quantities, numbers and units, each fault with its cell."""

from __future__ import annotations

from collections.abc import Collection, Iterable
from dataclasses import field, replace

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.ground.source import Span
from fluxnet.network.model import Quantity, QuantityKind, Species
from fluxnet.tables.entries import Entry
from fluxnet.tables.numbers import Number, cell_fault, read_cell, told_briefly, told_once
from fluxnet.tables.numerals import Decimal
from fluxnet.tables.quantities import QuantityReading, read_quantity, settle_ratio
from fluxnet.tables.rate_units import BadUnit, RateUnit, read_rate_unit
from fluxnet.tables.sense import sd_doubts, sense_faults, unit_faults
from fluxnet.tables.vocabulary import Vocabulary

__all__ = ["Reading", "Readings", "read_entries"]


@record
class Reading:
    """An entry understood: numbers still in the units as written.

    ``relative`` is the sd as a fraction of the value. ``unit`` is None only where there is
    no value.
    """

    entry: Entry
    quantity: Quantity
    species: tuple[Species, ...]
    unit: RateUnit | None
    value: float | None
    sd: float | None = None
    relative: float | None = None
    sd_unit: RateUnit | None = None


@record
class Readings:
    """All readings; ``species`` each once, by the name first typed for it.

    ``failed`` names the runs that lost an entry to a fault. ``assumed`` are the entries that
    named biomass of which nothing says the formula.
    """

    readings: tuple[Reading, ...]
    species: tuple[Species, ...]
    failed: frozenset[str] = frozenset()
    assumed: tuple[Entry, ...] = ()
    diagnostics: tuple[Diagnostic, ...] = field(default=())


def read_entries(
    entries: Iterable[Entry],
    decimal: Decimal,
    vocabulary: Vocabulary,
    flagged: Collection[Span] = (),
) -> Readings:
    """Read every entry; one with a fault is left out, and its run is named as failed.

    ``flagged`` are the places of cells whose number was refused before.
    """
    known: dict[tuple[str, str], QuantityReading] = {}
    units: dict[str, RateUnit | BadUnit] = {}
    typed: dict[str, Species] = {}
    readings: list[Reading] = []
    faults: list[Diagnostic] = []
    doubts: list[Diagnostic] = []
    failed: set[str] = set()
    assumed: list[Entry] = []
    for entry in entries:
        key = (entry.name, entry.direction)
        if key not in known:
            known[key] = _once(read_quantity(*key, vocabulary), typed)
            faults.extend(_outside(entry, known[key], vocabulary))
        told = known[key]
        if told.assumed:
            assumed.append(entry)
        for text in (entry.unit, entry.sd_unit):
            if text not in units:
                units[text] = read_rate_unit(text)
        bad = {entry.value.span, entry.sd.span} & set(flagged) if flagged else ()
        found = _read(entry, told, decimal, units, skip=bool(bad))
        if isinstance(found, Reading):
            readings.append(found)
            same = found.sd_unit is None or entry.sd_unit == entry.unit
            doubts += sd_doubts(entry, found.value, found.sd, same_unit=same)
        else:
            faults.extend(found)
            failed.add(entry.run)
    readings = _settled(readings, typed)
    faults = told_once(faults) + told_briefly(doubts)
    return Readings(
        tuple(readings), tuple(typed.values()), frozenset(failed), tuple(assumed), tuple(faults)
    )


def _settled(readings: list[Reading], typed: dict[str, Species]) -> list[Reading]:
    """The readings with the open directions of ratios taken from the other rows."""
    told = {
        r.quantity.name: r.quantity.direction
        for r in readings
        if r.quantity.kind is QuantityKind.RATE and r.quantity.direction is not None
    }
    species = {s.name: s for s in typed.values()}
    return [
        replace(r, quantity=settle_ratio(r.quantity, told, species))
        if r.quantity.kind is QuantityKind.RATIO
        else r
        for r in readings
    ]


def _outside(entry: Entry, told: QuantityReading, vocabulary: Vocabulary) -> list[Diagnostic]:
    """A warning for each species that is measured and not in the model."""
    network = vocabulary.network
    return [
        cell_fault(
            Name.NOT_IN_MODEL,
            entry.name_cell,
            "",
            f"{species.name} is measured, and the model does not exchange it",
            f"declare it in the model, or leave {species.name} out",
        )
        for species in told.species
        if network is not None and network.find_species(species.name) is None
    ]


def _once(told: QuantityReading, typed: dict[str, Species]) -> QuantityReading:
    """One name for one species: the name first typed stands for all its synonyms."""
    renamed = {s.name: typed.setdefault(s.entry or s.name, s) for s in told.species}
    if told.quantity is None or not renamed:
        return told
    return replace(told, quantity=_renamed(told.quantity, renamed), species=tuple(renamed.values()))


def _renamed(quantity: Quantity, renamed: dict[str, Species]) -> Quantity:
    if quantity.kind is QuantityKind.RATIO:
        return replace(
            quantity,
            numerator=quantity.numerator and _renamed(quantity.numerator, renamed),
            denominator=quantity.denominator and _renamed(quantity.denominator, renamed),
        )
    if quantity.kind is QuantityKind.RATE and quantity.name in renamed:
        return replace(quantity, name=renamed[quantity.name].name)
    return quantity


def _read(
    entry: Entry,
    told: QuantityReading,
    decimal: Decimal,
    units: dict[str, RateUnit | BadUnit],
    *,
    skip: bool,
) -> Reading | list[Diagnostic]:
    faults: list[Diagnostic] = []
    if told.fault is not None:
        faults.append(
            cell_fault(told.fault.name, entry.name_cell, "", told.fault.message, told.fault.mend)
        )
    value, sd = Number(), Number()
    if not entry.value.is_blank and not skip:
        value = read_cell(entry.value, decimal, entry.title)
    if not entry.sd.is_blank and not skip:
        sd = read_cell(entry.sd, decimal, f"sd of {entry.name}", is_sd=True)
    faults += [n.fault for n in (value, sd) if n.fault is not None]
    faults += unit_faults(entry, told.quantity, units)
    if not faults:
        faults += sense_faults(entry, told.quantity, value, sd, told.species)
    if faults or told.quantity is None or skip:
        return faults
    own, relative = value.sd, value.relative
    if sd.value is not None:
        if sd.percent or entry.sd_unit == "%":
            relative = sd.value / 100
        else:
            own = sd.value
    measured = value.value
    if measured is not None and value.percent:
        measured, own = measured / 100, None if own is None else own / 100
    unit, sd_unit = units[entry.unit], units[entry.sd_unit]
    return Reading(
        entry,
        told.quantity,
        told.species,
        unit if isinstance(unit, RateUnit) and (entry.unit or measured is not None) else None,
        measured,
        own,
        relative,
        sd_unit if isinstance(sd_unit, RateUnit) and entry.sd_unit not in ("", "%") else None,
    )
