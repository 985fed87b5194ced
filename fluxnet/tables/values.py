"""Entries become readings: quantities, numbers and units, each fault with its cell."""

from __future__ import annotations

from collections.abc import Collection, Mapping, Sequence
from dataclasses import field, replace

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.progress import Progress, silent
from fluxnet.ground.record import record
from fluxnet.ground.source import Span
from fluxnet.network.model import Quantity, QuantityKind, Species
from fluxnet.tables.entries import Entry
from fluxnet.tables.numbers import Number, cell_fault, read_cell, told_briefly, told_once
from fluxnet.tables.numerals import Decimal
from fluxnet.tables.quantities import QuantityFault, QuantityReading, read_quantity, settle_ratio
from fluxnet.tables.rate_units import BadUnit, RateUnit, read_rate_unit
from fluxnet.tables.reckoned import names_total
from fluxnet.tables.sense import sd_doubts, sense_faults, unit_faults
from fluxnet.tables.vocabulary import Vocabulary

__all__ = ["Reading", "Readings", "read_entries"]

_OFTEN = 2_000
_WITHOUT_MINUS = ", and the numbers without the minus"


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
    entries: Sequence[Entry],
    decimal: Decimal,
    vocabulary: Vocabulary,
    flagged: Collection[Span] = (),
    progress: Progress = silent,
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
    unsaid: dict[str, tuple[Entry, Diagnostic]] = {}
    failed: set[str] = set()
    assumed: list[Entry] = []
    for count, entry in enumerate(entries):
        if count % _OFTEN == 0:
            progress("reading rates", count, len(entries))
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
            failed.add(entry.run)
            wrong = told.fault is not None and told.fault.name is Name.BAD_DIRECTION
            if wrong and not entry.direction:
                unsaid.setdefault(entry.name, (entry, found.pop(0)))
            faults.extend(found)
    readings = _settled(readings, typed)
    faults = told_once(faults) + _unsaid_directions(unsaid) + told_briefly(doubts)
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


def _unsaid_directions(unsaid: Mapping[str, tuple[Entry, Diagnostic]]) -> list[Diagnostic]:
    """One fault for all names without a direction, where they are more than two."""
    found = list(unsaid.values())
    if len(found) < 3:
        return [fault for _, fault in found]
    entry, first = found[0]
    is_title = entry.name_cell is entry.unit_cell
    where = "into each title" if is_title else "behind each name, or into a column direction"
    mend = f"write it {where}: {entry.name} in, or {entry.name} out"
    if any(_is_negative(one) for one, _ in found):
        mend += _WITHOUT_MINUS
    words = f"no direction is written for {', '.join(unsaid)}, and no role gives it"
    return [replace(first, message=f"{entry.name_cell.place}: {words}", mend=mend)]


def _is_negative(entry: Entry) -> bool:
    return entry.value.text[:1] in ("-", "\u2212") and len(entry.value.text) > 1


def _name_fault(entry: Entry, fault: QuantityFault) -> Diagnostic:
    """The fault of a name or direction, at the cell that tells it."""
    cell, mend = entry.name_cell, fault.mend
    if fault.name is Name.BAD_DIRECTION:
        if entry.direction and not entry.direction_cell.is_blank:
            cell = entry.direction_cell
        if not entry.direction and _is_negative(entry) and mend:
            mend += _WITHOUT_MINUS
    return cell_fault(fault.name, cell, "", fault.message, mend)


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
        faults.append(_name_fault(entry, told.fault))
        if names_total(entry.name):
            return faults
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
