"""Separated text as raw cells: its separator, its rows, quotes that are never closed."""

from __future__ import annotations

import csv
from collections.abc import Sequence

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.source import Source, Span
from fluxnet.tables.delimited import declared_separator
from fluxnet.tables.raw_grid import RawGrid

__all__ = ["choose_separator", "cut_text"]

_SAMPLE = 400
_CANDIDATES = "\t;|"
_LONGEST_CELL = 20
"""Lines over which a quoted cell may go."""


def choose_separator(lines: Sequence[str]) -> str:
    """The sign between cells: declared, else tab, semicolon or bar where most lines have it.

    Examples
    --------
    >>> choose_separator(["time;OD", "0,5;1,25", "1,0;1,5"])
    ';'
    """
    declared = declared_separator(tuple(lines[:1]))
    if declared is not None:
        return declared
    told = [t for t in lines[:_SAMPLE] if t.strip() and not t.strip().startswith(("[", "#"))]
    for sign in _CANDIDATES:
        if told and sum(sign in t for t in told) >= 0.5 * len(told):
            return sign
    return ","


def cut_text(
    lines: tuple[str, ...], file: str, encoding: str, separator: str | None = None
) -> tuple[RawGrid, tuple[Diagnostic, ...]]:
    """The rows of a text that hold anything; a lone ``#`` in front of a row is taken away."""
    sign = separator or choose_separator(lines)
    rows: list[list[str]] = []
    places: list[int] = []
    faults: list[Diagnostic] = []
    breaks: set[int] = set()
    number = behind = 0
    if declared_separator(lines) is not None:
        number = 1
    while number < len(lines):
        line = lines[number]
        first = number
        number += 1
        if '"' not in line:
            cells = line.split(sign)
        else:
            cells, number = _quoted(lines, first, sign)
            if not cells:
                column = line.rindex('"') + 1
                words = f"{file} line {first + 1}: a quote is opened and never closed"
                faults.append(Diagnostic(
                    Name.UNCLOSED_QUOTE, words, Span(file, first + 1, column, column + 1),
                    mend="close the quote, or take it away", source_line=line,
                ))  # fmt: skip
                cells = line.split(sign)
        cells = [c.strip() for c in cells]
        if cells[0].startswith("#"):
            cells[0] = cells[0].lstrip("# ")
        if any(cells):
            if rows and first > behind:
                breaks.add(len(rows))
            behind = number
            rows.append(cells)
            places.append(first + 1)
    grid = RawGrid(file, rows, places, Source(file, lines), None, sign, encoding,
                   breaks=frozenset(breaks))  # fmt: skip
    return grid, tuple(faults[:1])


def _quoted(lines: tuple[str, ...], first: int, sign: str) -> tuple[list[str], int]:
    """The cells of a row with quotes and the line behind it; no cells where one is not closed.

    A cell may hold line ends. Where it then holds separators too, it swallowed rows.
    """
    text = lines[first]
    behind = first + 1
    while text.count('"') % 2:
        if behind >= len(lines) or behind - first > _LONGEST_CELL:
            return [], first + 1
        text += "\n" + lines[behind]
        behind += 1
    parts = text.split("\n")
    reader = csv.reader([f"{t}\n" for t in parts[:-1]] + parts[-1:], delimiter=sign,
                        skipinitialspace=True)  # fmt: skip
    try:
        cells = next(reader)
    except csv.Error:
        return [], first + 1
    swallowed = any(sign in c.partition("\n")[2] for c in cells)
    if reader.line_num < len(parts) or swallowed:
        return [], first + 1
    return [" ".join(c.split("\n")) for c in cells], behind
