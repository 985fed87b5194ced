"""Columns of raw cells as numbers; every cell that is none is told, with what was done."""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.ground.source import Span
from fluxnet.tables.grid import Cell
from fluxnet.tables.no_numbers import ABSENT
from fluxnet.tables.numerals import (
    Decimal,
    DecimalChoice,
    decide_decimal,
    possible_decimals,
    read_number,
    split_numeral,
)
from fluxnet.tables.raw_grid import RawGrid, RawValue, shown

__all__ = [
    "Doubt", "NumberColumn", "choose_decimal", "is_numeric", "read_column", "read_number_text",
]  # fmt: skip

Array = NDArray[np.float64]

_LIMIT = re.compile(r"(?P<sign>[<>≤≥])\s*=?\s*(?P<number>[^<>=]+)")
_FAILED = re.compile(r"#[\w/ÄÖÜ]+[!?]?|Err:\d+", re.IGNORECASE)


@record
class Doubt:
    """A cell that was not plainly a number; ``grave`` where something was there and is lost."""

    row: int
    text: str
    done: str
    grave: bool = False


@record
class NumberColumn:
    """Values (NaN where there is none), which are upper limits, and errors written beside them."""

    value: Array
    below: NDArray[np.bool_]
    sd: Array | None = None
    doubts: tuple[Doubt, ...] = ()
    blank: tuple[int, ...] = ()


def is_numeric(value: RawValue) -> bool:
    """Whether a cell holds a number, whatever its decimal sign, or a limit of one."""
    if isinstance(value, bool) or not isinstance(value, str):
        return isinstance(value, (int, float)) and not isinstance(value, bool)
    text = value.lstrip("<>≤≥= ").strip()
    return any(read_number(split_numeral(text).value, d) is not None for d in Decimal)


def choose_decimal(grid: RawGrid, places: Iterable[tuple[int, int]]) -> DecimalChoice:
    """The decimal sign of a grid from the numbers of its tables; each text is looked at once."""
    seen: dict[str, Cell] = {}
    rows: dict[int, int] = {}
    for row, column in places:
        value = grid.cell(row, column)
        if type(value) is str and value not in seen and ("." in value or "," in value):
            text = value.lstrip("<>≤≥= ")
            if possible_decimals(split_numeral(text).value):
                line = grid.lines[row]
                seen[value] = Cell(text, column, Span(grid.title, line, column + 1, column + 2))
                rows[line] = row
    found = decide_decimal(seen.values(), grid.separator)

    def placed(cells: tuple[Cell, ...]) -> tuple[Cell, ...]:
        # where a cell stands in its line is sought only for those that are told
        return tuple(replace(c, span=grid.span(rows[c.span.line], c.column)) for c in cells)

    return replace(
        found, doubtful=placed(found.doubtful), disputed=placed(found.disputed),
        contrary=placed(found.contrary),
    )  # fmt: skip


def read_column(grid: RawGrid, rows: Sequence[int], column: int, decimal: Decimal) -> NumberColumn:
    """The numbers of a column."""
    cells = [grid.cell(row, column) for row in rows]
    plain = None if grid.faults or grid.percents else _all_numbers(cells, decimal)
    if plain is not None:
        return NumberColumn(plain, np.zeros(plain.size, dtype=np.bool_))
    value = np.full(len(cells), np.nan)
    below = np.zeros(len(cells), dtype=np.bool_)
    sd = np.full(len(cells), np.nan)
    doubts: list[Doubt] = []
    blank: list[int] = []
    for place, (row, cell) in enumerate(zip(rows, cells, strict=True)):
        fault = grid.fault(row, column)
        if fault is not None:
            text, why = fault
            doubts.append(Doubt(row, text, f"{why}: left out", grave=True))
        elif cell == "":
            blank.append(row)
        elif isinstance(cell, (int, float)) and not isinstance(cell, bool):
            value[place] = cell
            if grid.percents and (grid.lines[row], column) in grid.percents:
                value[place] = float(f"{cell * 100:.13g}")
        elif isinstance(cell, str):
            number, error, is_limit, doubt = read_number_text(cell, decimal)
            value[place], sd[place], below[place] = number, error, is_limit
            if doubt is not None:
                doubts.append(Doubt(row, cell, *doubt))
        else:
            doubts.append(Doubt(row, shown(cell), "is no number: left out", grave=True))
    errors = sd if np.isfinite(sd).any() else None
    return NumberColumn(value, below, errors, tuple(doubts), tuple(blank))


def _all_numbers(cells: Sequence[RawValue], decimal: Decimal) -> Array | None:
    """All cells as numbers where each is plainly one."""
    if not cells:
        return np.zeros(0)
    texts = [c for c in cells if type(c) is str]
    if not texts:
        plain = all(type(c) is float or type(c) is int for c in cells)
        return np.array(cells, dtype=np.float64) if plain else None
    if len(texts) < len(cells):
        return None
    joined = " ".join(texts)
    if "_" in joined or (decimal is Decimal.COMMA and "." in joined):
        return None
    if decimal is Decimal.COMMA:
        texts = [t.replace(",", ".") for t in texts]
    try:
        found = np.array(list(map(float, texts)))
    except ValueError:
        return None
    return found if np.isfinite(found).all() else None


def read_number_text(
    text: str, decimal: Decimal
) -> tuple[float, float, bool, tuple[str, bool] | None]:
    """Value, sd, whether it is an upper limit, and what is told of the cell."""
    nan = float("nan")
    number = read_number(text, decimal)
    if number is not None:
        return number, nan, False, None
    limit = _LIMIT.fullmatch(text)
    if limit is not None:
        size = read_number(limit["number"].strip(), decimal)
        if size is not None and limit["sign"] in "<≤":
            return size, nan, True, ("kept as an upper limit", False)
        return nan, nan, False, ("is a lower limit: left out", True)
    if "".join(text.lower().split()) in ABSENT:
        return nan, nan, False, ("taken as not measured", False)
    parts = split_numeral(text)
    number = read_number(parts.value, decimal)
    error = read_number(parts.error, decimal) if parts.error else None
    if number is not None and not parts.percent and (error is not None) is bool(parts.error):
        if error is None:
            return number, nan, False, None
        return number, error * abs(number) / 100 if parts.error_percent else error, False, None
    if _FAILED.fullmatch(text):
        return nan, nan, False, ("is an error of the spreadsheet: left out", True)
    return nan, nan, False, ("is no number: left out", True)
