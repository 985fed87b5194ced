"""Cells of raw data as they stood in a text or a sheet, with the way to name each."""

from __future__ import annotations

import datetime
from collections.abc import Mapping, Sequence
from dataclasses import field
from pathlib import Path
from typing import TypeAlias

from fluxnet.ground.record import record
from fluxnet.ground.source import Source, Span
from fluxnet.tables.delimited import split_text
from fluxnet.tables.grid import column_letters

__all__ = ["RawGrid", "RawValue", "shown"]

RawValue: TypeAlias = (
    str | float | int | bool
    | datetime.datetime | datetime.date | datetime.time | datetime.timedelta
)
"""What a cell holds; a blank one holds an empty text."""


@record
class RawGrid:
    """The rows of one text or one sheet that are not blank, and where each stood.

    ``lines`` are row numbers from 1. ``faults`` tell of cells, by row number and column from 0,
    what stands there and why it is no value; ``percents`` are cells shown in per cent.
    ``breaks`` are the places in ``rows`` that follow a blank row. ``long`` is the file of which
    only the beginning is here.
    """

    file: str
    rows: Sequence[Sequence[RawValue]]
    lines: Sequence[int]
    source: Source
    sheet: str | None = None
    separator: str | None = None
    encoding: str = ""
    faults: Mapping[tuple[int, int], tuple[str, str]] = field(default_factory=dict)
    percents: frozenset[tuple[int, int]] = frozenset()
    breaks: frozenset[int] = frozenset()
    long: Path | None = None

    @property
    def title(self) -> str:
        """File and sheet, as spans name them."""
        return self.file if self.sheet is None else f"{self.file}!{self.sheet}"

    @property
    def short(self) -> str:
        """File and sheet without the folder, for messages."""
        return self.title.rpartition("/")[2]

    def cell(self, row: int, column: int) -> RawValue:
        """What stands in a cell; an empty text past the end of the row."""
        cells = self.rows[row]
        return cells[column] if column < len(cells) else ""

    def fault(self, row: int, column: int) -> tuple[str, str] | None:
        """What is wrong with a cell that looks blank."""
        return self.faults.get((self.lines[row], column)) if self.faults else None

    def place(self, row: int, column: int) -> str:
        """Where a cell stands: ``run.xlsx HPLC!F17`` or ``samples.csv row 7, column C``."""
        return self.place_of_line(self.lines[row], column)

    def place_of_line(self, line: int, column: int) -> str:
        """Where a cell of a row number stands."""
        letters, name = column_letters(column), self.file.rpartition("/")[2]
        if self.sheet is not None:
            return f"{name} {self.sheet}!{letters}{line}"
        return f"{name} row {line}, column {letters}"

    def span(self, row: int, column: int) -> Span:
        """The stretch of a cell, for underlining."""
        line = self.lines[row]
        if self.separator is None:
            return Span(self.title, line, column + 1, column + 2)
        text = self.source.line(line)
        cut = split_text((text.lstrip("#"),), self.separator, self.file).rows
        if not cut or column >= len(cut[0].cells):
            return Span(self.file, line, 1, len(text) + 1)
        span = cut[0].cells[column].span
        shift = len(text) - len(text.lstrip("#"))
        return Span(self.file, line, span.column + shift, span.end_column + shift)

    def line_text(self, row: int) -> str:
        """The row as it stood."""
        if self.separator is not None:
            return self.source.line(self.lines[row])
        return "  ".join(shown(v) for v in self.rows[row] if v != "")


def shown(value: RawValue) -> str:
    """A cell as text.

    Examples
    --------
    >>> shown(1.5), shown(datetime.timedelta(hours=30)), shown(datetime.date(2026, 3, 2))
    ('1.5', '30:00:00', '2026-03-02')
    """
    if isinstance(value, str):
        return value
    if isinstance(value, bool):
        return str(value).upper()
    if isinstance(value, (int, float)):
        return f"{value:.15g}"
    if isinstance(value, datetime.timedelta):
        seconds = round(value.total_seconds())
        return f"{seconds // 3600}:{seconds // 60 % 60:02d}:{seconds % 60:02d}"
    return value.isoformat(" ") if isinstance(value, datetime.datetime) else value.isoformat()
