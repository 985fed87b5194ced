"""Each table of raw data read: its time, its columns, its runs; long ones thinned."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import field, replace

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.progress import Progress
from fluxnet.ground.record import record
from fluxnet.ground.source import Span
from fluxnet.rates.cultivation import DoubtfulCell
from fluxnet.tables.cultivation_columns import Columns
from fluxnet.tables.cultivation_series import Piece, doubtful_cells, left_out, read_piece
from fluxnet.tables.numerals import Decimal
from fluxnet.tables.raw_blocks import Block
from fluxnet.tables.raw_clock import DateOrder
from fluxnet.tables.raw_grid import shown
from fluxnet.tables.raw_long import choose_width, read_long, thin_piece
from fluxnet.tables.raw_long_times import NotOneTableError
from fluxnet.tables.raw_numbers import Doubt
from fluxnet.tables.raw_times import (
    TimeAxis,
    changed_clock,
    clock_fault,
    read_axis,
    time_columns,
)

__all__ = ["BlockRead", "read_block"]

Array = NDArray[np.float64]

_MANY = 20_000
"""Rows from which on a table is thinned."""

_MINUTE = 1.0 / 60


@record
class BlockRead:
    """What one table holds of one run.

    Times are hours of the process, or since 1970 where ``is_clock``; ``offset`` is what the
    clock showed when the process time was 0, where the table tells both.
    """

    title: str
    run: str
    pieces: tuple[Piece, ...]
    is_clock: bool
    offset: float | None
    words: str
    rows: int
    doubtful: tuple[DoubtfulCell, ...] = ()
    diagnostics: tuple[Diagnostic, ...] = field(default=())
    thinned: float = 0.0
    first: float = float("inf")
    file: str = ""


def read_block(
    block: Block, columns: Columns, decimal: Decimal, order: DateOrder | None, progress: Progress
) -> tuple[BlockRead, ...]:
    """Read a table of series; one result a run."""
    grid = block.grid
    if not block.body:
        return ()
    times = time_columns(columns.times, grid.rows[block.body[0]])
    axis = read_axis(grid, block.body, times, decimal, order)
    if grid.long is not None and block.body[-1] == len(grid.rows) - 1:
        if columns.run is not None:
            raise NotOneTableError("it holds several runs")
        head, is_clock, offset, faults = _base(block, block.body, axis)
        known = head[np.isfinite(head)]
        steps = np.diff(known)
        step = float(np.median(steps[steps > 0])) if (steps > 0).any() else 1.0
        size = grid.long.stat().st_size
        text = sum(len(grid.line_text(r)) + 1 for r in block.body) / len(block.body)
        text *= 2 if grid.encoding == "UTF-16" else 1
        width = choose_width(size / max(text, 1.0), step)
        if times.number is not None and not is_clock:
            times = replace(times, clock=None, of_day=None)
        read = read_long(block, columns.values, times, decimal, order, width, progress)
        first = min((float(p.time[0]) for p in read.pieces if p.time.size), default=np.inf)
        return (BlockRead(
            block.title, "", read.pieces, is_clock, offset, axis.words, read.rows, read.doubtful,
            (*axis.diagnostics, *faults, *read.diagnostics), read.width, first, grid.title,
        ),)  # fmt: skip
    found: list[BlockRead] = []
    for run, rows in _runs(block, columns).items():
        if len(rows) < len(block.body):
            axis = read_axis(grid, rows, times, decimal, order)
        found.append(_read_rows(block, columns, run, rows, axis, decimal))
    return tuple(found)


def _runs(block: Block, columns: Columns) -> dict[str, Sequence[int]]:
    if columns.run is None:
        return {"": block.body}
    runs: dict[str, list[int]] = {}
    for row in block.body:
        name = shown(block.grid.cell(row, columns.run.column))
        if name:
            runs.setdefault(name, []).append(row)
    return dict(runs)


def _read_rows(
    block: Block, columns: Columns, run: str, rows: Sequence[int], axis: TimeAxis, decimal: Decimal
) -> BlockRead:
    grid = block.grid
    time, is_clock, offset, faults = _base(block, rows, axis)
    doubts: list[tuple[int, Doubt]] = list(axis.doubts)
    told = [c for column, doubt in axis.doubts for c in doubtful_cells(grid, column, [doubt])]
    pieces: list[Piece] = []
    faults = [*axis.diagnostics, *faults]
    for column in columns.values:
        read = read_piece(grid, rows, column, time, decimal)
        told.extend(read.doubtful)
        faults.extend(read.diagnostics)
        doubts.extend((column.title.column, d) for d in read.doubts)
        if read.piece.value.size:
            pieces.append(read.piece)
    faults.extend(left_out(grid, doubts))
    width = 0.0
    stopped = any(d.name is Name.TIME_BACKWARDS for d in faults)
    if len(rows) > _MANY and not stopped:
        known = time[np.isfinite(time)]
        width = choose_width(known.size, float(np.ptp(known)) / max(known.size - 1, 1))
        pieces = [thin_piece(p, width) for p in pieces]
    first = float(np.nanmin(time)) if np.isfinite(time).any() else float("inf")
    return BlockRead(block.title, run, tuple(pieces), is_clock, offset, axis.words, len(rows),
                     tuple(told), tuple(faults), width, first, grid.title)  # fmt: skip


def _base(
    block: Block, rows: Sequence[int], axis: TimeAxis
) -> tuple[Array, bool, float | None, list[Diagnostic]]:
    """The time that a table is read by: the process time, else its clock.

    Where it tells both, the clock is only asked what it showed at process time 0.
    """
    grid = block.grid
    faults: list[Diagnostic] = []
    is_clock = axis.hours is None
    base = axis.clock if axis.hours is None else axis.hours
    assert base is not None
    offset = None
    if axis.hours is not None and axis.clock is not None:
        apart = axis.clock - axis.hours
        known = np.flatnonzero(np.isfinite(apart))
        if known.size:
            offset = float(np.median(apart[known][: max(known.size // 10, 1)]))
            off = known[np.abs(apart[known] - offset) > 0.5]
            if off.size and abs(abs(float(np.median(apart[off])) - offset) - 1.0) < 2 * _MINUTE:
                line = grid.lines[rows[int(off[0])]]
                hours = -round(float(np.median(apart[off])) - offset)
                faults.append(clock_fault(grid.title, line, hours))
    known = np.flatnonzero(np.isfinite(base))
    if is_clock:
        base = base.copy()
        for place, added in changed_clock(base[known]):
            base[known[place:]] += added
            faults.append(clock_fault(grid.title, grid.lines[rows[int(known[place])]], added))
    falls = np.flatnonzero(np.diff(base[known]) < 0)
    if falls.size:
        row = rows[int(known[falls[0] + 1])]
        before = rows[int(known[falls[0]])]
        more = f"; {falls.size - 1} more like it" if falls.size > 1 else ""
        faults.append(Diagnostic(
            Name.TIME_BACKWARDS, f"{block.title} row {grid.lines[row]}: time runs backwards, "
            f"{float(base[known[falls[0]]] - base[known[falls[0] + 1]]):.4g} h from the row above"
            f"{more}", Span(grid.title if grid.sheet else grid.file, grid.lines[row], 1,
                            len(grid.line_text(row)) + 1 if grid.sheet is None else 2),
            mend="correct the time, or put the rows in order",
            source_line=grid.line_text(row), also=(grid.span(before, 0),),
        ))  # fmt: skip
    return base, is_clock, offset, faults
