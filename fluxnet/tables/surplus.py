"""Cells that no title stands above: numbers cut in two by their decimal comma, columns unread."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.pattern import pattern_of
from fluxnet.ground.record import record
from fluxnet.tables.grid import Cell, Row, column_letters
from fluxnet.tables.layout import Layout
from fluxnet.tables.numbers import told_briefly
from fluxnet.tables.quantities import is_quantity_name

__all__ = ["Surplus", "find_surplus", "untitled_words"]

_WHOLE = pattern_of(r"[+\-\u2212]?\d+")
_FRACTION = pattern_of(r"\d+(?:\s*(?:±|\+/?-)\s*\d+)?\s*%?")
_OPEN = pattern_of(r".*(?:±|\+/?-)\s*\d+")


@record
class Surplus:
    """Lines whose cells stand in wrong columns, with a fault each; columns without a title."""

    lines: frozenset[int]
    diagnostics: tuple[Diagnostic, ...]
    untitled: tuple[int, ...] = ()


@record
class _Cut:
    """Neighbouring cells that were one: their first and last cell, as it was, as it should be."""

    first: Cell
    last: Cell
    text: str
    mend: str
    commas: int


def find_surplus(layout: Layout, separator: str | None) -> Surplus:
    """The rows of a comma-separated table that have a cell too many, and what was cut in them.

    A row counts as cut only where neighbouring cells of it make one number (``2`` and ``05 %``)
    or one name (``2`` and ``3-butanediol``); else what stands right of the titles is not read.
    """
    width = 1 + max((t.cell.column for t in layout.titles if _is_titled(t.cell, t.unit)), default=0)
    faults: list[Diagnostic] = []
    lines: set[int] = set()
    filled: set[int] = set()
    for row in layout.body:
        cuts = _cuts(row, layout) if separator == "," and _is_longer(row, width, layout) else []
        if cuts:
            lines.add(row.span.line)
            faults.append(_fault(row, width, cuts))
        else:
            filled.update(c.column for c in row.cells if not c.is_blank)
    titled = {t.cell.column for t in layout.titles if _is_titled(t.cell, t.unit)}
    untitled = tuple(sorted(filled - titled))
    return Surplus(frozenset(lines), tuple(told_briefly(faults)), untitled)


def _is_titled(cell: Cell, unit: str) -> bool:
    return bool(cell.text or unit)


def _is_longer(row: Row, width: int, layout: Layout) -> bool:
    """Whether a row has more cells than the header; blank ones count as far as they differ."""
    return _filled(row) > width or len(row.cells) > len(layout.titles)


def _filled(row: Row) -> int:
    return 1 + max((c.column for c in row.cells if not c.is_blank), default=-1)


def _cuts(row: Row, layout: Layout) -> list[_Cut]:
    cells, found, place = row.cells, list[_Cut](), 0
    while place + 1 < len(cells):
        cut = _cut_at(cells, place, layout)
        if cut is not None:
            found.append(cut)
        place += 1 if cut is None else 1 + cut.commas
    return found


def _cut_at(cells: Sequence[Cell], place: int, layout: Layout) -> _Cut | None:
    first, second = cells[place], cells[place + 1]
    if not first.text or not second.text or '"' in (first.text + second.text):
        return None
    joined = f"{first.text},{second.text}"
    if any(c.isalpha() for c in second.text):
        is_name = is_quantity_name(joined, layout.vocabulary)
        return _Cut(first, second, joined, f'"{joined}"', 1) if is_name else None
    if not _WHOLE.fullmatch(first.text) or not _FRACTION.fullmatch(second.text):
        return None
    point, last, commas = f"{first.text}.{second.text}", second, 1
    third = cells[place + 2] if place + 2 < len(cells) else Cell("")
    if _OPEN.fullmatch(second.text) and _FRACTION.fullmatch(third.text):
        joined, point, last, commas = (
            f"{joined},{third.text}", f"{point}.{third.text}", third, 2
        )  # fmt: skip
    return _Cut(first, last, joined, point, commas)


def _fault(row: Row, width: int, cuts: Sequence[_Cut]) -> Diagnostic:
    count = max(_filled(row), len(row.cells))
    numbers = [c.text for c in cuts if not c.mend.startswith('"')]
    asked = [f"is `{c.text}` one name?" for c in cuts if c.mend.startswith('"')]
    if len(numbers) == 1:
        asked.append(f"is {numbers[0]} a decimal comma?")
    elif numbers:
        asked.append(f"are {_listed(numbers)} decimal commas?")
    mend = f"write {_listed([c.mend for c in cuts])}, or separate the columns by semicolons"
    if sum(c.commas for c in cuts) != count - width:
        mend += "; a column of its own needs a title"
    first, last = cuts[0].first.span, cuts[0].last.span
    is_one_line = first.line == last.line
    return Diagnostic(
        Name.UNREADABLE_CELL,
        f"row {row.span.line} has {count} cells, the header {width}: {' '.join(asked)}",
        replace(first, end_column=last.end_column) if is_one_line else first,
        because="a comma separates the columns of this table",
        mend=mend,
    )


def _listed(words: Sequence[str]) -> str:
    return " and ".join(filter(None, (", ".join(words[:-1]), words[-1])))


def untitled_words(columns: Sequence[int]) -> str:
    """Which columns were not read, in words."""
    letters = [column_letters(c) for c in columns]
    if len(letters) == 1:
        return f"column {letters[0]} has no title and is not read"
    return f"columns {', '.join(letters)} have no title and are not read"
