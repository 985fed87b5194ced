"""Where a piece of text stands: files, lines, columns."""

from __future__ import annotations

from fluxnet.ground.record import record

__all__ = ["NOWHERE", "Source", "Span"]


@record
class Span:
    """A stretch of one line of one input.

    ``line`` and ``column`` count from 1, in code points; ``end_column`` is one past
    the last character. In a workbook ``file`` names the sheet as well
    (``rates.xlsx!Run 7``), ``line`` is the row and ``column`` the column.
    Line 0 means the file as a whole.
    """

    file: str
    line: int
    column: int = 1
    end_column: int = 1

    def __lt__(self, other: Span) -> bool:
        """Whether it stands before another: by file, line and column."""
        mine = (self.file, self.line, self.column, self.end_column)
        return mine < (other.file, other.line, other.column, other.end_column)


NOWHERE = Span("", 0, 0, 0)


@record
class Source:
    """One input text, decoded, with its lines (without line ends)."""

    file: str
    lines: tuple[str, ...]

    def line(self, number: int) -> str:
        """Line ``number`` (from 1), or an empty text where there is none."""
        return self.lines[number - 1] if 1 <= number <= len(self.lines) else ""
