"""Long records read in chunks and thinned on the way, in memory that does not grow with them.

The first lines were read as any table is; they say what each column holds. From there on pandas
reads the file, and only cells that are not plainly numbers are looked at one by one.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import field, replace
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.progress import Progress
from fluxnet.ground.record import record
from fluxnet.ground.source import Span
from fluxnet.rates.cultivation import DoubtfulCell, Form
from fluxnet.rates.thinning import (
    BinnedTimes,
    BinSums,
    add_sums,
    average_bins,
    bin_times,
    sum_bins,
    sum_values,
)
from fluxnet.tables.cultivation_columns import Column
from fluxnet.tables.cultivation_series import Piece, gas_faults, value_faults
from fluxnet.tables.numerals import Decimal, possible_decimals
from fluxnet.tables.raw_blocks import Block
from fluxnet.tables.raw_clock import DateOrder
from fluxnet.tables.raw_long_times import (
    LongState,
    LongSums,
    NotOneTableError,
    chunk_times,
    in_order,
)
from fluxnet.tables.raw_numbers import read_number_text
from fluxnet.tables.raw_times import TimeColumns

if TYPE_CHECKING:
    import pandas as pd

__all__ = ["KEPT_BINS", "LongRead", "choose_width", "read_long", "thin_piece"]

Array = NDArray[np.float64]

KEPT_BINS = 5_000
"""Averages that a long record is thinned to, or a few more."""

_CHUNK = 131_072
_SECONDS = (1, 2, 5, 10, 15, 20, 30, 60, 120, 300, 600, 900, 1200, 1800, 3600)
_ENCODINGS = {"UTF-8": "utf-8", "UTF-16": "utf-16", "Latin-1": "cp1252"}


@record
class LongRead:
    """Thinned pieces, with times as they stand in the file; ``rows`` were read."""

    pieces: tuple[Piece, ...]
    rows: int
    width: float
    doubtful: tuple[DoubtfulCell, ...] = ()
    diagnostics: tuple[Diagnostic, ...] = field(default=())


def choose_width(rows: float, step: float) -> float:
    """The width of the bins [h] for so many rows at a step: a round number of seconds.

    Examples
    --------
    >>> round(choose_width(604_800, 1 / 3600) * 3600)
    300
    """
    wanted = 3600 * rows * step / KEPT_BINS
    return next((s for s in _SECONDS if s >= wanted), max(3600, round(wanted))) / 3600


def read_long(
    block: Block, columns: Sequence[Column], times: TimeColumns, decimal: Decimal,
    order: DateOrder | None, width: float, progress: Progress,
) -> LongRead:
    """Read and thin the table that goes on to the end of a long file.

    Raises
    ------
    NotOneTableError
        Where rows have texts in the place of a time.
    """
    import pandas as pd

    grid = block.grid
    assert grid.long is not None
    first = grid.lines[block.body[0]]
    clock = times.clock or times.number
    assert clock is not None
    needed = [clock, *([times.of_day] if times.of_day else [])]
    wanted = sorted({t.column for t in needed} | {c.title.column for c in columns})
    state = LongState(grid.title, decimal, [LongSums() for _ in columns])
    size = grid.long.stat().st_size
    with grid.long.open("rb") as opened:
        reader = pd.read_csv(
            opened, sep=grid.separator, decimal=decimal.value, header=None, skiprows=first - 1,
            usecols=wanted, names=list(range(len(block.titles))), index_col=False,
            dtype={t.column: object for t in needed if times.clock is not None},
            chunksize=_CHUNK, skip_blank_lines=False, keep_default_na=False, na_values=[""],
            encoding=_ENCODINGS[grid.encoding], encoding_errors="replace", on_bad_lines="error",
        )  # fmt: skip
        line, last, shift = first, -np.inf, 0.0
        try:
            for chunk in reader:
                time = chunk_times(chunk, times, order, line, state)
                time, last, shift = in_order(time, last, shift, times, line, state)
                lines = np.arange(line, line + len(chunk))
                known = np.isfinite(time)
                if not known.all():
                    time, lines, chunk = time[known], lines[known], chunk[known]
                bins = bin_times(time, width)
                for column, sums in zip(columns, state.sums, strict=True):
                    _add(chunk[column.title.column], column, sums, time, lines, bins, state)
                line += known.size
                progress(f"reading {grid.short}", min(opened.tell(), size), size)
                if any(d.name is Name.TIME_BACKWARDS for d in state.faults):
                    break
        except pd.errors.ParserError as fault:
            raise NotOneTableError(str(fault)) from fault
    pieces = tuple(
        _piece(block, column, sums) for column, sums in zip(columns, state.sums, strict=True)
        if sums.bins is not None or sums.events
    )  # fmt: skip
    if state.more:
        state.doubtful.append(DoubtfulCell(grid.short, "", f"{state.more} more like these"))
    return LongRead(pieces, line - first, width, tuple(state.doubtful), tuple(state.faults))


def _add(
    cells: pd.Series[float], column: Column, sums: LongSums, time: Array,
    lines: NDArray[np.int64], bins: BinnedTimes, state: LongState,
) -> None:
    if cells.dtype.kind in "fi":
        numbers = cells.to_numpy(dtype=np.float64)
    else:
        numbers = _numbers(cells, lines, state)
    factor, offset = float(column.change.factor), float(column.change.offset)
    value: Array = np.asarray(numbers * factor + offset)
    kept = np.isfinite(value)
    if not kept.all():
        value, time, lines = value[kept], time[kept], lines[kept]
        bins = bin_times(time, bins.width)
    if column.meaning.form is Form.EVENT:
        some = np.flatnonzero(value)
        sums.events += [(float(time[i]), float(value[i]), int(lines[i])) for i in some]
        return
    bare = _bare(column, state, time, value, lines, np.zeros(0, dtype=np.bool_))
    for fault in (*gas_faults(bare), *value_faults(bare)):
        if fault.name not in sums.told:
            sums.told.add(fault.name)
            state.faults.append(fault)
    if value.size:
        found = sum_values(bins, value)
        sums.bins = found if sums.bins is None else add_sums(sums.bins, found)


def _bare(
    column: Column, state: LongState, time: Array, value: Array, lines: NDArray[np.int64],
    below: NDArray[np.bool_],
) -> Piece:
    from fluxnet.ground.source import Source
    from fluxnet.tables.raw_grid import RawGrid

    grid = RawGrid(state.title, (), (), Source(state.title, ()), None, ",")
    return Piece(column, grid, time, value, None, below, lines)


def _numbers(cells: pd.Series[float], lines: NDArray[np.int64], state: LongState) -> Array:
    """A chunk's column with texts in it: only those are read one by one."""
    import pandas as pd

    texts = cells.astype(str).where(cells.notna(), "").str.strip()
    plain = texts
    if state.decimal is Decimal.COMMA:
        plain = texts.where(~texts.str.contains(".", regex=False), "").str.replace(",", ".")
    numbers = np.array(pd.to_numeric(plain, errors="coerce"), dtype=np.float64)
    numbers[~np.isfinite(numbers)] = np.nan
    for place in np.flatnonzero(np.isnan(numbers) & (texts != "").to_numpy(dtype=np.bool_)):
        text = str(texts.iloc[place])
        if len(possible_decimals(text)) == 2:
            state.faults.append(Diagnostic(
                Name.AMBIGUOUS_NUMBER, f"{state.short} row {lines[place]}: `{text}` may be a "
                "thousand times what it is with the other decimal sign",
                Span(state.title, int(lines[place]), 1, 1), mend="say --decimal point or comma",
            ))  # fmt: skip
            break
        value, _, is_limit, doubt = read_number_text(text, state.decimal)
        if is_limit:
            doubt = ("is a limit among many rows: left out", True)
        else:
            numbers[place] = value
        if doubt is not None:
            state.doubt(int(lines[place]), text, doubt[0])
    return numbers


def _piece(block: Block, column: Column, sums: LongSums) -> Piece:
    grid = block.grid
    if sums.events:
        time, value, lines = (np.array(x) for x in zip(*sums.events, strict=True))
        return Piece(column, grid, time.astype(np.float64), value.astype(np.float64), None,
                     np.zeros(time.size, dtype=np.bool_), lines.astype(np.int64))  # fmt: skip
    assert sums.bins is not None
    return _averaged(Piece(
        column, grid, np.zeros(0), np.zeros(0), None, np.zeros(0, dtype=np.bool_),
        np.zeros(0, dtype=np.int64), True,
    ), sums.bins)  # fmt: skip


def _averaged(piece: Piece, bins: BinSums) -> Piece:
    mean = average_bins(bins)
    time = mean.time
    if piece.column.meaning.form is Form.RATE:
        # a rate holds from its time on: its mean holds from the start of the bin
        time = np.maximum(bins.index * bins.width, mean.time[0] - bins.width)
    sd = mean.sd if mean.row_sd > 0 else None
    return replace(piece, time=time, value=mean.value, sd=sd, thinned=True,
                   below=np.zeros(time.size, dtype=np.bool_))  # fmt: skip


def thin_piece(piece: Piece, width: float) -> Piece:
    """A piece of many rows as averages over bins of a width; events stay as they are."""
    if piece.column.meaning.form is Form.EVENT or not piece.time.size:
        return piece
    return _averaged(piece, sum_bins(piece.time, piece.value, width))
