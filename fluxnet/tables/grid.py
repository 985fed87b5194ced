"""Cells with their places: what every kind of file is brought to before it is understood."""

from __future__ import annotations

from dataclasses import field

from fluxnet.ground.record import record
from fluxnet.ground.source import NOWHERE, Source, Span

__all__ = ["Cell", "Grid", "Row", "column_letters"]


@record
class Cell:
    """One cell: its text without blanks around it, and where it stands.

    ``column`` counts from 0. ``fault`` says why the cell holds nothing usable although it is
    not blank (an error value of a workbook). ``number`` is the value that a workbook stores
    for a number, so that no digit is lost on the way through text.
    """

    text: str
    column: int = 0
    span: Span = NOWHERE
    number: float | None = None
    fault: str | None = None

    @property
    def is_blank(self) -> bool:
        """Whether nothing stands in it."""
        return not self.text and self.fault is None

    @property
    def place(self) -> str:
        """Where it stands, in words: ``row 4, column C``."""
        return f"row {self.span.line}, column {column_letters(self.column)}"


@record
class Row:
    """One row of cells; ``text`` is the whole line as it stood."""

    cells: tuple[Cell, ...]
    text: str
    span: Span

    def cell(self, column: int) -> Cell:
        """The cell of a column; a blank one past the end of the row."""
        if 0 <= column < len(self.cells):
            return self.cells[column]
        end = self.cells[-1].span.end_column if self.cells else 1
        return Cell("", column, Span(self.span.file, self.span.line, end, end))

    @property
    def is_blank(self) -> bool:
        """Whether all its cells are blank."""
        return all(c.is_blank for c in self.cells)


@record
class Grid:
    """The rows of one text file or one sheet.

    ``separator`` is None for a sheet. ``comments`` are lines that start with ``#``.
    """

    rows: tuple[Row, ...]
    source: Source
    separator: str | None = None
    sheet: str | None = None
    comments: tuple[str, ...] = field(default=())


def column_letters(column: int) -> str:
    """The letters of a column in a spreadsheet, counted from 0.

    Examples
    --------
    >>> column_letters(0), column_letters(25), column_letters(26)
    ('A', 'Z', 'AA')
    """
    letters = ""
    column += 1
    while column:
        column, rest = divmod(column - 1, 26)
        letters = chr(ord("A") + rest) + letters
    return letters
