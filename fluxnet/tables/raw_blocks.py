"""A grid of raw data cut into its tables: header, body, and the lines that stand above."""

from __future__ import annotations

import re
from collections.abc import Callable, Sequence
from enum import Enum

from fluxnet.ground.record import record
from fluxnet.rates.cultivation import SeriesKind
from fluxnet.tables.cultivation_words import Meaning, Part, plain_words
from fluxnet.tables.raw_clock import date_orders, read_duration, read_moment
from fluxnet.tables.raw_grid import RawGrid, RawValue, shown
from fluxnet.tables.raw_numbers import is_numeric
from fluxnet.tables.raw_titles import RawTitle, is_header_row_below, read_raw_title

__all__ = ["Block", "BlockKind", "Cut", "Understand", "cut_blocks"]

_SECTION = re.compile(r"\[(?P<name>.+)\]")
_LONGEST_HEADER = 3

Understand = Callable[[RawTitle], Meaning | None]
"""What a title means: by the mapping file, else by its words."""


class BlockKind(Enum):
    """What a table holds."""

    SERIES = "series"
    SETTINGS = "settings"
    CALIBRATION = "calibration"
    PHASES = "phases"


@record
class Block:
    """One table: its titles, how many rows they take, and the rows below them."""

    kind: BlockKind
    grid: RawGrid
    titles: tuple[RawTitle, ...]
    header: int
    depth: int
    body: Sequence[int]
    section: str = ""

    @property
    def title(self) -> str:
        """File, sheet and section, for messages."""
        return f"{self.grid.short} [{self.section}]" if self.section else self.grid.short


@record
class Cut:
    """The tables of a grid, and the rows outside them (notes and settings)."""

    blocks: tuple[Block, ...]
    lines: tuple[int, ...]


def cut_blocks(grid: RawGrid, understand: Understand) -> Cut:
    """Find the tables of a grid.

    A table ends at a blank row or at a name in square brackets; numbers that go on behind a
    blank row without titles of their own belong to the table above.
    """
    blocks: list[Block] = []
    loose: list[int] = []
    for section, rows in _pieces(grid):
        block, above = _read_piece(grid, rows, section, understand)
        if block is None and blocks and _goes_on(grid, rows, blocks[-1]):
            before = blocks.pop()
            body = [*before.body, *rows]
            blocks.append(Block(
                before.kind, grid, before.titles, before.header, before.depth, body, before.section
            ))  # fmt: skip
            continue
        loose.extend(above)
        if block is not None:
            blocks.append(block)
    return Cut(tuple(blocks), tuple(loose))


def _pieces(grid: RawGrid) -> list[tuple[str, range]]:
    """Stretches of rows without a blank one between them, with the name above each."""
    pieces: list[tuple[str, range]] = []
    start, name = 0, ""
    for row in range(len(grid.rows)):
        cells = grid.rows[row]
        first = cells[0] if cells else ""
        section = None
        if isinstance(first, str) and first.startswith("[") and not any(c != "" for c in cells[1:]):
            section = _SECTION.fullmatch(first)
        gap = row > start and row in grid.breaks
        if section is not None or gap:
            if row > start:
                pieces.append((name, range(start, row)))
                name = name if section is None and not pieces[-1][1] else ""
            start = row
        if section is not None:
            name, start = section["name"], row + 1
    if start < len(grid.rows):
        pieces.append((name, range(start, len(grid.rows))))
    return pieces


def _read_piece(
    grid: RawGrid, rows: range, section: str, understand: Understand
) -> tuple[Block | None, list[int]]:
    for row in rows[:60]:
        if not _may_be_header(grid.rows[row]):
            continue
        depth = 1
        while depth < _LONGEST_HEADER and row + depth in rows and is_header_row_below(
            grid.rows[row + depth]
        ):
            depth += 1
        width = max(len(grid.rows[r]) for r in range(row, row + depth))
        titles = tuple(
            read_raw_title(j, [grid.cell(r, j) for r in range(row, row + depth)])
            for j in range(width)
        )
        kind = _kind(titles, understand)
        if kind is not None:
            body = range(row + depth, rows.stop)
            return Block(kind, grid, titles, row, depth, body, section), list(range(rows[0], row))
    return None, list(rows)


def _may_be_header(cells: Sequence[RawValue]) -> bool:
    texts = [c for c in cells if c != ""]
    return len(texts) > 1 and not any(
        not isinstance(c, str) or is_numeric(c) or bool(date_orders(c))
        or read_duration(c) is not None or read_moment(c, None) is not None
        for c in texts
    )  # fmt: skip


_KEYS = frozenset({"setting", "parameter", "name", "key", "quantity", "einstellung", "property",
                   "größe", "item"})  # fmt: skip
_VALUES = frozenset({"value", "wert", "setting value"})


def _kind(titles: Sequence[RawTitle], understand: Understand) -> BlockKind | None:
    words = [plain_words(t.shown) for t in titles]
    if _KEYS & set(words) and _VALUES & set(words):
        return BlockKind.SETTINGS
    names = [plain_words(t.name) for t in titles]
    if {"start", "end"} <= set(names) and "phase" in names:
        return BlockKind.PHASES
    meanings = [m for m in map(understand, titles) if m is not None]
    parts = {m.part for m in meanings}
    kinds = {m.kind for m in meanings}
    if parts & {Part.HOURS, Part.CLOCK, Part.TIME_OF_DAY}:
        return BlockKind.SERIES
    if {SeriesKind.OPTICAL_DENSITY, SeriesKind.DRY_WEIGHT} <= kinds:
        return BlockKind.CALIBRATION
    return None


def _goes_on(grid: RawGrid, rows: range, block: Block) -> bool:
    """Whether rows without titles are more of the table above."""
    if block.kind is not BlockKind.SERIES or not block.body:
        return False
    first = grid.rows[rows[0]]
    likely = [c for c in first if c != ""]
    texts = sum(
        isinstance(c, str) and not is_numeric(c) and read_duration(c) is None
        and not date_orders(c) and read_moment(c, None) is None
        for c in likely
    )  # fmt: skip
    wide = sum(c != "" for c in grid.rows[block.body[0]])
    return 2 * texts < len(likely) and 2 * len(likely) >= wide and shown(first[0]) != ""
