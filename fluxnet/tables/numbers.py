"""The number in a cell, with the error that may stand beside it; faults name the cell."""

from __future__ import annotations

import re
from collections.abc import Sequence

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.tables.grid import Cell
from fluxnet.tables.numerals import (
    Decimal,
    DecimalChoice,
    is_infinite,
    read_number,
    split_numeral,
    two_readings,
)

__all__ = ["Number", "cell_fault", "decimal_faults", "read_cell"]

_MOST = 5
"""Cells with one fault that are told one by one."""

_SAY = "say --decimal point or --decimal comma"
_DATE = re.compile(r"\d{4}-\d\d-\d\d.*")


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


def read_cell(cell: Cell, decimal: Decimal, title: str) -> Number:
    """The number in a cell that is not blank."""
    if cell.fault is not None:
        words = f"`{cell.text}` {cell.fault}" if cell.text else cell.fault
        return Number(fault=cell_fault(Name.UNREADABLE_CELL, cell, title, words))
    if cell.number is not None:
        return Number(cell.number, percent=cell.text.endswith("%"))
    if is_infinite(cell.text):
        words, mend = f"`{cell.text}` is no measured value", "leave the cell blank: not measured"
        return Number(fault=cell_fault(Name.NOT_A_NUMBER, cell, title, words, mend))
    parts = split_numeral(cell.text)
    value = read_number(parts.value, decimal)
    error = read_number(parts.error, decimal) if parts.error else 0.0
    if value is None or error is None:
        return Number(fault=_no_number(cell, title))
    if not parts.error:
        return Number(value, percent=parts.percent)
    if parts.error_percent:
        return Number(value, relative=error / 100, percent=parts.percent)
    return Number(value, sd=error, percent=parts.percent)


def _no_number(cell: Cell, title: str) -> Diagnostic:
    words = f"`{cell.text}` is no number"
    mend = "correct it, or leave the cell blank: not measured"
    if _DATE.fullmatch(cell.text):
        words = f"`{cell.text}` is a date"
        mend = "write the number again: spreadsheets turn 1.5 into the first of May"
    return cell_fault(Name.UNREADABLE_CELL, cell, title, words, mend)


def decimal_faults(choice: DecimalChoice) -> list[Diagnostic]:
    """One fault a cell that can be read in two ways, or is not written as the others are.

    Of many cells with one fault the first are told, and then how many more there are.
    """
    faults: list[Diagnostic] = []

    def add(cell: Cell, words: str, mend: str) -> None:
        faults.append(cell_fault(Name.AMBIGUOUS_NUMBER, cell, "", words, mend))

    def told(cells: Sequence[Cell], mend: str) -> Sequence[Cell]:
        shown, rest = cells[:_MOST], cells[_MOST:]
        if len(rest) < 2:
            return cells
        add(rest[0], f"`{rest[0].text}`: the same of {len(rest)} numbers from here on", mend)
        return shown

    for cell in told(choice.doubtful, _SAY):
        small, large = two_readings(cell.text)
        words = f"`{cell.text}` may be {small} or {large}, and no other number of the table tells"
        add(cell, words, _SAY)
    evidence = choice.evidence
    if evidence is None:
        return faults
    sign, one_way = choice.decimal.name.lower(), "write all numbers in one way"
    shown = f"`{evidence.text}` in {evidence.place} is written with a decimal {sign}"
    for cell in told(choice.disputed, one_way):
        small, large = two_readings(cell.text)
        written = small.replace(".", choice.decimal.value)
        words = f"`{cell.text}` may be {small} or {large}; {shown}"
        add(cell, words, f"write {written} or {large}, or say --decimal {sign} where it is {large}")
    for cell in told(choice.contrary, one_way):
        words = f"`{cell.text}` is not written with a decimal {sign}, as others are; {shown}"
        add(cell, words, one_way)
    return faults
