"""The times of a long record, chunk by chunk, in one unbroken course."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.source import Span
from fluxnet.rates.cultivation import DoubtfulCell
from fluxnet.rates.thinning import BinSums
from fluxnet.tables.numerals import Decimal
from fluxnet.tables.raw_clock import DateOrder, read_duration, read_moment
from fluxnet.tables.raw_fixed import read_fixed
from fluxnet.tables.raw_numbers import read_number_text
from fluxnet.tables.raw_times import TimeColumns, changed_clock, clock_fault

if TYPE_CHECKING:
    import pandas as pd

__all__ = ["LongState", "LongSums", "NotOneTableError", "chunk_times", "in_order"]

Array = NDArray[np.float64]

_MOST_TOLD = 100


class NotOneTableError(Exception):
    """A long file holds more than one table: it has to be read whole."""


class LongSums:
    """What is added up of one column."""

    def __init__(self) -> None:
        self.bins: BinSums | None = None
        self.events: list[tuple[float, float, int]] = []
        self.told: set[Name] = set()


class LongState:
    """What is gathered while a file goes by."""

    def __init__(self, title: str, decimal: Decimal, sums: list[LongSums]) -> None:
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


def chunk_times(
    chunk: pd.DataFrame, times: TimeColumns, order: DateOrder | None, line: int, state: LongState
) -> Array:
    """The times of a chunk in hours, NaN where none stands."""
    clock = times.clock or times.number
    assert clock is not None
    cells = chunk[clock.column]
    if times.clock is None and cells.dtype.kind in "fi":
        return cells.to_numpy(dtype=np.float64) * (times.scale or 1.0)
    texts = (cells.fillna("") if cells.hasnans else cells).to_numpy(dtype=object)
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


def _duration(text: str, times: TimeColumns, state: LongState) -> float | None:
    hours = read_duration(text)
    if hours is not None:
        return hours
    value, _, is_limit, _ = read_number_text(text, state.decimal)
    return None if is_limit or not np.isfinite(value) else value * (times.scale or 1.0)


def in_order(
    time: Array, last: float, shift: float, times: TimeColumns, line: int, state: LongState
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
