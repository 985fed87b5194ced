"""Entries whose units or numbers can be read and make no sense."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.network.model import Direction, Quantity, QuantityKind, Species
from fluxnet.tables.entries import Entry
from fluxnet.tables.grid import Cell
from fluxnet.tables.numbers import Number, cell_fault
from fluxnet.tables.numerals import split_numeral
from fluxnet.tables.rate_units import BadUnit, RateUnit
from fluxnet.tables.reach import reach_faults
from fluxnet.tables.vocabulary import direction_of_role

__all__ = ["sd_doubts", "sense_faults", "unit_faults"]

_NOISE = 2.0
"""Of its sd: a rate within this cannot be told from 0."""

_TYPED = 6
"""Digits of a number that somebody may have typed."""


def unit_faults(
    entry: Entry, quantity: Quantity | None, units: Mapping[str, RateUnit | BadUnit]
) -> list[Diagnostic]:
    """Faults of an entry's units; ``units`` are those of all texts, as they were read."""
    faults: list[Diagnostic] = []
    is_ratio = "/" in entry.name if quantity is None else quantity.kind is QuantityKind.RATIO
    is_own = entry.unit_cell.span.line == entry.value.span.line
    # a long table whose title tells the unit, or should, has one fault for all its rows
    for_all = not is_own and entry.unit_cell is not entry.name_cell
    title = "unit" if is_own else entry.title
    mend = _unit_mend(None if for_all else quantity)
    if not entry.unit and not entry.value.is_blank and not is_ratio:
        words = f"{entry.name} has no unit"
        if for_all:
            words = "no unit is written, and the table has no column `unit`"
            mend = "write the unit into the title, rate [mmol/g/h], or add the column"
        faults.append(cell_fault(Name.UNKNOWN_UNIT, entry.unit_cell, title, words, mend))
    written = units[entry.unit]
    if entry.unit and isinstance(written, BadUnit):
        words = written.words if entry.unit in written.words else f"`{entry.unit}`: {written.words}"
        faults.append(
            cell_fault(written.name, entry.unit_cell, title, words, written.mend or mend)
        )
    own = units[entry.sd_unit]
    if entry.sd_unit not in ("", "%") and isinstance(own, BadUnit):
        faults.append(
            cell_fault(
                own.name,
                entry.sd_title,
                entry.sd_title.text,
                own.words,
                "write the unit of the rate, or %",
            )
        )
    return faults


def _unit_mend(quantity: Quantity | None) -> str:
    if quantity is not None and quantity.kind is QuantityKind.MU:
        return "write 1/h"
    return "write a unit of a rate or an amount, such as mmol/g/h, g/L/h or mmol"


def sense_faults(
    entry: Entry,
    quantity: Quantity | None,
    value: Number,
    sd: Number,
    species: Sequence[Species] = (),
) -> list[Diagnostic]:
    """Faults of numbers that can be read but make no sense; ``species`` are the quantity's."""
    kind = quantity.kind if quantity is not None else None
    sd_title = f"sd of {entry.name}"
    faults: list[Diagnostic] = []

    def add(name: Name, cell: Cell, title: str, words: str, mend: str | None = None) -> None:
        faults.append(cell_fault(name, cell, title, f"`{cell.text}` {words}", mend))

    if value.percent and kind is not QuantityKind.RATIO:
        words = f"is in per cent, not in {entry.unit or 'a unit'}"
        add(Name.UNREADABLE_CELL, entry.value, entry.title, words)
    signed = kind is QuantityKind.FLUX or _is_noise(entry, value, sd)
    if value.value is not None and value.value < 0 and not signed:
        mend = _magnitude(entry.value.text, quantity, species)
        add(Name.NEGATIVE_RATE, entry.value, entry.title, "is negative", mend)
    if (value.sd is not None or value.relative is not None) and sd.value is not None:
        words = f"is a second sd beside `{entry.value.text}`"
        add(Name.UNREADABLE_CELL, entry.sd, sd_title, words, "keep one of them")
    errors = ((sd.value, entry.sd), (value.sd, entry.value), (value.relative, entry.value))
    for number, cell in errors:
        if number is not None and number < 0:
            words = "is a negative standard deviation"
            add(Name.NEGATIVE_SD, cell, sd_title, words, "0 means exact")
    if not faults:
        faults += reach_faults(entry, value, sd)
    if value.value is None and sd.value is not None:
        mend = "fill in the rate, or leave both blank"
        add(Name.UNREADABLE_CELL, entry.sd, sd_title, "is the sd of a rate that is blank", mend)
    return faults


def _is_noise(entry: Entry, value: Number, sd: Number) -> bool:
    """Whether a value was reckoned and cannot be told from 0: noise makes it of either sign.

    In a number that was typed a minus most often marks the direction.
    """
    if value.value is None or sd.value is None or sd.percent or entry.sd_unit == "%":
        return False
    return _is_reckoned(entry.sd.text) and abs(value.value) <= _NOISE * sd.value


def _is_reckoned(text: str) -> bool:
    """Whether a number has more digits than anybody types."""
    return sum(letter.isdigit() for letter in text.split("e")[0].lstrip("0.,")) > _TYPED


def _magnitude(text: str, quantity: Quantity | None, species: Sequence[Species]) -> str | None:
    """How to write a negative rate: most often the minus only marks the direction."""
    if quantity is None:
        return None
    if quantity.kind is QuantityKind.MU:
        return "rates are magnitudes: write 0 with its sd where the cells did not grow"
    size = split_numeral(text).value.lstrip("-\u2212 ")
    if quantity.direction is None:
        return f"rates are magnitudes: write {size}"
    told = quantity.direction
    other, verb = (
        (Direction.OUT, "released") if told is Direction.IN else (Direction.IN, "taken up")
    )
    words = f"rates are magnitudes: write {size} with the direction {told.value}"
    if any(direction_of_role(s.role) is not None for s in species):
        return words
    kept = "only marks the uptake" if told is Direction.IN else "is only a convention"
    return (
        f"{words} if the minus {kept}; "
        f"if {quantity.name} was really {verb}, {other.value}"
    )


def sd_doubts(
    entry: Entry, value: float | None, sd: float | None, *, same_unit: bool
) -> list[Diagnostic]:
    """A warning where an sd without % is larger than its rate; 0 may have any sd."""
    if not value or sd is None or not same_unit or sd <= abs(value):
        return []
    beside = split_numeral(entry.value.text)
    cell, shown = (entry.value, beside.error) if entry.sd.is_blank else (entry.sd, entry.sd.text)
    if _is_reckoned(shown):
        return []
    words = f"sd {shown} is larger than the rate {beside.value}"
    mend = "correct it; what cannot be told from 0 may have such an sd"
    if 1 <= sd <= 100:
        words += f"; was {shown} % meant?"
        mend = f"write {shown} %, or [%] in the title of the sds"
    return [cell_fault(Name.SD_LARGER_THAN_RATE, cell, f"sd of {entry.name}", words, mend)]
