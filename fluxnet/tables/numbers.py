"""The number in a cell, with the error that may stand beside it; faults name the cell."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.tables.grid import Cell
from fluxnet.tables.no_numbers import explain_no_number
from fluxnet.tables.numerals import (
    Decimal,
    DecimalChoice,
    is_infinite,
    read_number,
    split_numeral,
    two_readings,
)

__all__ = ["Number", "cell_fault", "decimal_faults", "read_cell", "told_briefly", "told_once"]

_MOST = 5
"""Cells with one kind of fault that are told one by one."""


@record
class Number:
    """A cell's number; ``sd`` or ``relative`` (a fraction) where an error stands beside it.

    ``percent``: a % sign stands behind it; the value is as written. ``fault`` where there is
    no number.
    """

    value: float | None = None
    sd: float | None = None
    relative: float | None = None
    percent: bool = False
    fault: Diagnostic | None = None


def cell_fault(
    name: Name, cell: Cell, title: str, words: str, mend: str | None = None
) -> Diagnostic:
    """A diagnostic that names row and column of a cell, and the column's title."""
    where = f"{cell.place} ({title})" if title else cell.place
    return Diagnostic(name, f"{where}: {words}", cell.span, mend=mend)


def read_cell(cell: Cell, decimal: Decimal, title: str, *, is_sd: bool = False) -> Number:
    """The number in a cell that is not blank; ``is_sd`` says that it is to be an error."""
    if cell.fault is not None:
        words = f"`{cell.text}` {cell.fault}" if cell.text else cell.fault
        return Number(fault=cell_fault(Name.UNREADABLE_CELL, cell, title, words))
    if cell.number is not None:
        return Number(cell.number, percent=cell.text.endswith("%"))
    alone = read_number(cell.text, decimal)
    if alone is not None:
        return Number(alone)
    if is_infinite(cell.text):
        words, mend = f"`{cell.text}` is no measured value", "leave the cell blank: not measured"
        return Number(fault=cell_fault(Name.NOT_A_NUMBER, cell, title, words, mend))
    parts = split_numeral(cell.text)
    value = read_number(parts.value, decimal)
    error = read_number(parts.error, decimal) if parts.error else 0.0
    if value is None or error is None:
        found = explain_no_number(cell.text, decimal, is_sd=is_sd)
        fault = cell_fault(Name.UNREADABLE_CELL, cell, title, found.words, found.mend)
        return Number(fault=fault)
    if not parts.error:
        return Number(value, percent=parts.percent)
    if parts.error_percent:
        return Number(value, relative=error / 100, percent=parts.percent)
    return Number(value, sd=error, percent=parts.percent)


def told_briefly(faults: Sequence[Diagnostic]) -> list[Diagnostic]:
    """Of many faults of one kind the first ones, the last with how many more there are."""
    shown, rest = list(faults[:_MOST]), faults[_MOST:]
    if len(rest) > 1:
        first = rest[0]
        shown.append(replace(first, message=f"{first.message}; {len(rest) - 1} more are like it"))
        return shown
    return list(faults)


def told_once(faults: Sequence[Diagnostic], places: str = "rows") -> list[Diagnostic]:
    """One fault for all rows (or runs) with the same words, with how many more there are.

    Two are told one by one.
    """
    alike: dict[tuple[Name, str], list[Diagnostic]] = {}
    for fault in dict.fromkeys(faults):
        alike.setdefault((fault.name, fault.message.partition(": ")[2]), []).append(fault)
    told: list[Diagnostic] = []
    for first, *others in alike.values():
        if len(others) > 1:
            words = f"{first.message}; the same in {len(others)} more {places}"
            told.append(replace(first, message=words))
        else:
            told += [first, *others]
    return told


def decimal_faults(choice: DecimalChoice) -> list[Diagnostic]:
    """One fault a cell that can be read in two ways, or is not written as the others are."""
    doubtful: list[Diagnostic] = []
    for cell in choice.doubtful:
        small, large = two_readings(cell.text)
        words = f"`{cell.text}` may be {small} or {large}, and no other number of the table tells"
        mend = "say --decimal point or --decimal comma"
        doubtful.append(cell_fault(Name.AMBIGUOUS_NUMBER, cell, "", words, mend))
    evidence = choice.evidence
    if evidence is None:
        return told_briefly(doubtful)
    disputed: list[Diagnostic] = []
    sign = choice.decimal.name.lower()
    shown = f"`{evidence.text}` in {evidence.place} is written with a decimal {sign}"
    for cell in choice.disputed:
        small, large = two_readings(cell.text)
        written = small.replace(".", choice.decimal.value)
        words = f"`{cell.text}` may be {small} or {large}; {shown}"
        mend = f"write {written} or {large}, or say --decimal {sign} where it is {large}"
        disputed.append(cell_fault(Name.AMBIGUOUS_NUMBER, cell, "", words, mend))
    contrary: list[Diagnostic] = []
    for cell in choice.contrary:
        words = f"`{cell.text}` is not written with a decimal {sign}, as others are; {shown}"
        mend = "write all numbers in one way"
        contrary.append(cell_fault(Name.AMBIGUOUS_NUMBER, cell, "", words, mend))
    return told_briefly(disputed) + told_briefly(contrary)
