"""Separated text as a grid: a scanner that keeps the place of every cell.

Quotes follow RFC 4180 (``"a ""b"" c"``, separators and line ends inside them); a quote that is
never closed is an ordinary sign. A first line ``sep=;`` as spreadsheets write it is obeyed.
"""

from __future__ import annotations

import re

from fluxnet.ground.pattern import pattern_of
from fluxnet.ground.source import Source, Span
from fluxnet.tables.grid import Cell, Grid, Row

__all__ = ["declared_separator", "split_lines", "split_text"]

_DECLARED = pattern_of(r"sep=(.)\s*$", re.IGNORECASE)
_LINE_END = pattern_of(r"\r\n|\r|\n")


def split_lines(text: str) -> tuple[str, ...]:
    """The lines of a text, whatever ends them; an end at the very end opens no new line."""
    lines = _LINE_END.split(text.removeprefix("\ufeff"))
    return tuple(lines[:-1] if lines and not lines[-1] else lines)


def declared_separator(lines: tuple[str, ...]) -> str | None:
    """The separator that a first line ``sep=;`` names, or None."""
    found = _DECLARED.match(lines[0]) if lines else None
    return found.group(1) if found else None


def split_text(lines: tuple[str, ...], separator: str, file: str) -> Grid:
    """Cut lines into cells.

    Blank lines stay as blank rows, so that row numbers are line numbers; lines whose first
    sign is ``#`` become comments.
    """
    rows: list[Row] = []
    comments: list[str] = []
    number = 0
    while number < len(lines):
        line = lines[number]
        first = number
        if line.lstrip().startswith("#"):
            comments.append(line.strip().lstrip("#").strip())
            number += 1
        elif number == 0 and declared_separator(lines):
            number += 1
        else:
            if '"' in line:
                cells, number = _split_row(lines, number, separator, file)
            else:
                cells, number = _split_plain(line, number, separator, file), number + 1
            if any(not c.is_blank for c in cells):
                span = Span(file, first + 1, 1, len(line) + 1)
                rows.append(Row(tuple(cells), "\n".join(lines[first:number]), span))
    return Grid(tuple(rows), Source(file, lines), separator, comments=tuple(comments))


def _split_plain(line: str, number: int, separator: str, file: str) -> list[Cell]:
    """The cells of a line without quotes."""
    cells: list[Cell] = []
    place = 0
    for column, text in enumerate(line.split(separator)):
        stripped = text.strip()
        # of a blank cell the place is its end
        left = place + len(text) - len(text.lstrip())
        cells.append(
            Cell(stripped, column, Span(file, number + 1, left + 1, left + len(stripped) + 1))
        )
        place += len(text) + 1
    return cells


def _split_row(
    lines: tuple[str, ...], number: int, separator: str, file: str
) -> tuple[list[Cell], int]:
    """The cells of the row that starts on a line, and the line behind it."""
    cells: list[Cell] = []
    place = 0
    while True:
        line = lines[number]
        start = place
        while start < len(line) and line[start] in " \t" and line[start] != separator:
            start += 1
        quoted = (
            _quoted(lines, number, start, separator) if line[start : start + 1] == '"' else None
        )
        if quoted is not None:
            text, end_line, end = quoted
            shown = end if end_line == number else len(line)
            cells.append(
                Cell(text.strip(), len(cells), Span(file, number + 1, start + 1, shown + 1))
            )
            number, place = end_line, end
            line = lines[number]
        else:
            end = line.find(separator, place)
            end = len(line) if end < 0 else end
            text = line[place:end]
            left = place + len(text) - len(text.lstrip())
            stripped = text.strip()
            left = min(left, end)
            span = Span(file, number + 1, left + 1, left + len(stripped) + 1)
            cells.append(Cell(stripped, len(cells), span))
            place = end
        if place >= len(line):
            return cells, number + 1
        place += 1


def _quoted(
    lines: tuple[str, ...], number: int, start: int, separator: str
) -> tuple[str, int, int] | None:
    """Text, line and place behind a quoted cell; None where the quote is an ordinary sign."""
    parts: list[str] = []
    place = start + 1
    while number < len(lines):
        line = lines[number]
        end = line.find('"', place)
        if end < 0:
            parts.append(line[place:] + "\n")
            number += 1
            place = 0
            continue
        parts.append(line[place:end])
        if line[end + 1 : end + 2] == '"':
            parts.append('"')
            place = end + 2
            continue
        behind = end + 1
        while behind < len(line) and line[behind] in " \t" and line[behind] != separator:
            behind += 1
        if behind < len(line) and line[behind] != separator:
            return None
        return "".join(parts), number, behind
    return None
