"""Long records read in chunks and thinned on the way, in memory that does not grow with them.

The first lines were read as any table is; they say what each column holds. From there on pandas
reads the file, and only cells that are not plainly numbers are looked at one by one.
"""

from __future__ import annotations

import datetime
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
from fluxnet.rates.thinning import BinSums, add_sums, average_bins, sum_bins
from fluxnet.tables.cultivation_columns import Column
from fluxnet.tables.cultivation_series import Piece, gas_faults, value_faults
from fluxnet.tables.numerals import Decimal, possible_decimals
from fluxnet.tables.raw_blocks import Block
from fluxnet.tables.raw_clock import DateOrder, read_duration, read_moment
from fluxnet.tables.raw_fixed import read_fixed
from fluxnet.tables.raw_numbers import read_number_text
from fluxnet.tables.raw_times import TimeColumns, changed_clock

if TYPE_CHECKING:
    import pandas as pd

__all__ = ["KEPT_BINS", "LongRead", "NotOneTableError", "choose_width", "read_long", "thin_piece"]

Array = NDArray[np.float64]

KEPT_BINS = 5_000
"""Averages that a long record is thinned to, or a few more."""

_CHUNK = 131_072
_SECONDS = (1, 2, 5, 10, 15, 20, 30, 60, 120, 300, 600, 900, 1200, 1800, 3600)
_MOST_TOLD = 100
_ENCODINGS = {"UTF-8": "utf-8", "UTF-16": "utf-16", "Latin-1": "cp1252"}


class NotOneTableError(Exception):
    """A long file holds more than one table: it has to be read whole."""


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
    state = _State(grid.title, decimal, [_Sums() for _ in columns])
    size = grid.long.stat().st_size
    with grid.long.open("rb") as opened:
        reader = pd.read_csv(
            opened, sep=grid.separator, decimal=decimal.value, header=None, skiprows=first - 1,
            usecols=wanted, names=list(range(len(block.titles))), index_col=False,
            chunksize=_CHUNK, skip_blank_lines=False, keep_default_na=False, na_values=[""],
            encoding=_ENCODINGS[grid.encoding], encoding_errors="replace", on_bad_lines="error",
        )  # fmt: skip
        line, last, shift = first, -np.inf, 0.0
        try:
            for chunk in reader:
                time = _times(chunk, times, order, line, state)
                time, last, shift = _in_order(time, last, shift, times, line, state)
                lines = np.arange(line, line + len(chunk))
                for column, sums in zip(columns, state.sums, strict=True):
                    _add(chunk[column.title.column], column, sums, time, lines, width, state)
                line += len(chunk)
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


class _Sums:
    """What is added up of one column."""

    def __init__(self) -> None:
        self.bins: BinSums | None = None
        self.events: list[tuple[float, float, int]] = []
        self.told: set[Name] = set()


class _State:
    """What is gathered while a file goes by."""

    def __init__(self, title: str, decimal: Decimal, sums: list[_Sums]) -> None:
        self.title, self.decimal, self.sums = title, decimal, sums
        self.short = title.rpartition("/")[2]
        self.doubtful: list[DoubtfulCell] = []
        self.faults: list[Diagnostic] = []
        self.more = 0

    def doubt(self, line: int, text: str, done: str) -> None:
        """Keep a doubtful cell, or count it where there are many."""
        if len(self.doubtful) < _MOST_TOLD:
            self.doubtful.append(DoubtfulCell(f"{self.short} row {line}", text, done))
        else:
            self.more += 1


def _times(
    chunk: pd.DataFrame, times: TimeColumns, order: DateOrder | None, line: int, state: _State
) -> Array:
    clock = times.clock or times.number
    assert clock is not None
    cells = chunk[clock.column]
    if times.clock is None and cells.dtype.kind in "fi":
        return cells.to_numpy(dtype=np.float64) * (times.scale or 1.0)
    if cells.dtype.kind in "fi":
        return np.array([
            np.nan if v is None else v for v in (read_moment(float(x), order) for x in cells)
        ])
    texts = cells.fillna("").to_numpy(dtype=object)
    found = read_fixed(texts, order) if times.clock is not None else None
    if found is None:
        found = np.full(len(texts), np.nan)
        for place, text in enumerate(texts):
            if text == "":
                continue
            bare = str(text).strip()
            moment = read_moment(bare, order) if times.clock else _duration(bare, times, state)
            if moment is None:
                raise NotOneTableError(f"row {line + place}: `{bare}` is no time")
            found[place] = moment
    if times.of_day is not None:
        parts = [read_duration(str(t).strip()) for t in chunk[times.of_day.column].fillna("")]
        found = np.floor(found / 24) * 24 + np.array([np.nan if p is None else p for p in parts])
    return found


def _duration(text: str, times: TimeColumns, state: _State) -> float | None:
    hours = read_duration(text)
    if hours is not None:
        return hours
    value, _, is_limit, _ = read_number_text(text, state.decimal)
    return None if is_limit or not np.isfinite(value) else value * (times.scale or 1.0)


def _in_order(
    time: Array, last: float, shift: float, times: TimeColumns, line: int, state: _State
) -> tuple[Array, float, float]:
    """Times of a chunk that never fall: hours of summer time mended, other falls told."""
    time = time + shift
    known = np.flatnonzero(np.isfinite(time))
    if not known.size:
        return time, last, shift
    course = np.concatenate([[last] if np.isfinite(last) else [], time[known]])
    ahead = course.size - known.size
    if times.clock is not None:
        for place, hours in changed_clock(course):
            course[place:] += hours
            shift += hours
            row = line + int(known[place - ahead])
            state.faults.append(clock_fault(state.title, row, hours))
        time[known] = course[ahead:]
    falls = np.flatnonzero(np.diff(course) < 0)
    if falls.size:
        row = line + int(known[falls[0] + 1 - ahead])
        state.faults.append(Diagnostic(
            Name.TIME_BACKWARDS, f"{state.short} row {row}: time runs backwards, from "
            f"{course[falls[0]]:.6g} to {course[falls[0] + 1]:.6g} h", Span(state.title, row, 1, 1),
            mend="correct the time, or put the rows in order",
        ))  # fmt: skip
    return time, float(course[-1]), shift


def clock_fault(title: str, row: int, hours: float) -> Diagnostic:
    """The warning of a clock that was changed."""
    way = "back" if hours > 0 else "ahead"
    end = "end" if hours > 0 else "start"
    return Diagnostic(
        Name.CLOCK_CHANGED,
        f"{title.rpartition('/')[2]} row {row}: the clock was set an hour {way} "
        f"at the {end} of summer time; {hours:+g} h are added from there on",
        Span(title, row, 1, 1),
        mend="look whether the other tables of that night were written by the same clock",
    )  # fmt: skip


def _add(
    cells: pd.Series[float], column: Column, sums: _Sums, time: Array,
    lines: NDArray[np.int64], width: float, state: _State,
) -> None:
    if cells.dtype.kind in "fi":
        numbers = cells.to_numpy(dtype=np.float64)
    else:
        numbers = _numbers(cells, lines, state)
    factor, offset = float(column.change.factor), float(column.change.offset)
    value: Array = np.asarray(numbers * factor + offset)
    kept = np.isfinite(value) & np.isfinite(time)
    if not kept.all():
        value, time, lines = value[kept], time[kept], lines[kept]
    if column.meaning.form is Form.EVENT:
        some = np.flatnonzero(value)
        sums.events += [(float(time[i]), float(value[i]), int(lines[i])) for i in some]
        return
    none = np.zeros(0, dtype=np.bool_)
    for fault in (
        *gas_faults(_bare(column, state, time, value, lines, none)),
        *value_faults(_bare(column, state, time, value, lines, none)),
    ):
        if fault.name not in sums.told:
            sums.told.add(fault.name)
            state.faults.append(fault)
    if value.size:
        found = sum_bins(time, value, width)
        sums.bins = found if sums.bins is None else add_sums(sums.bins, found)


def _bare(
    column: Column, state: _State, time: Array, value: Array, lines: NDArray[np.int64],
    below: NDArray[np.bool_],
) -> Piece:
    from fluxnet.ground.source import Source
    from fluxnet.tables.raw_grid import RawGrid

    grid = RawGrid(state.title, (), (), Source(state.title, ()), None, ",")
    return Piece(column, grid, time, value, None, below, lines)


def _numbers(cells: pd.Series[float], lines: NDArray[np.int64], state: _State) -> Array:
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


def _piece(block: Block, column: Column, sums: _Sums) -> Piece:
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


def as_moment(hours: float) -> str:
    """Hours since 1970 as a date, for messages."""
    moment = datetime.datetime(1970, 1, 1) + datetime.timedelta(hours=hours)
    return moment.isoformat(" ", "minutes")
