"""The time axis of a raw table: which columns tell it, what they hold, where they contradict."""

from __future__ import annotations

import datetime
from collections.abc import Sequence
from dataclasses import field

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.ground.source import Span
from fluxnet.tables.cultivation_words import Part
from fluxnet.tables.numerals import Decimal
from fluxnet.tables.raw_clock import (
    DateOrder,
    find_order,
    read_duration,
    read_moment,
)
from fluxnet.tables.raw_grid import RawGrid, shown
from fluxnet.tables.raw_numbers import Doubt, read_column
from fluxnet.tables.raw_titles import RawTitle, try_unit

__all__ = [
    "TimeAxis", "TimeColumns", "changed_clock", "clock_fault", "read_axis", "time_columns",
]  # fmt: skip

Array = NDArray[np.float64]

_HOUR_WORDS = frozenset({"h", "hours", "eft"})
_SLACK = 1.0 / 60


@record
class TimeColumns:
    """Where a table tells its time; ``hours`` per unit of the number column, None: unknown."""

    number: RawTitle | None = None
    clock: RawTitle | None = None
    of_day: RawTitle | None = None
    scale: float | None = None


@record
class TimeAxis:
    """Times of all rows [h]: since the process began, and since 1970; NaN where none stands."""

    hours: Array | None = None
    clock: Array | None = None
    doubts: tuple[tuple[int, Doubt], ...] = ()
    words: str = ""
    diagnostics: tuple[Diagnostic, ...] = field(default=())


def time_columns(
    columns: Sequence[tuple[RawTitle, Part]], first: Sequence[object]
) -> TimeColumns:
    """The columns of time: the first of each kind. ``first`` is the first row below the titles.

    A column called ``time`` that holds dates is a clock.
    """
    number = clock = of_day = None
    for title, part in columns:
        value = first[title.column] if title.column < len(first) else ""
        is_date = isinstance(value, (datetime.datetime, datetime.date)) or (
            isinstance(value, str) and read_duration(value) is None
            and read_moment(value, DateOrder.DAY_FIRST) is not None
            and not value.replace(".", "").replace(",", "").isdigit()
        )  # fmt: skip
        if part is Part.HOURS and is_date:
            part = Part.CLOCK
        if part is Part.CLOCK and read_duration(value) is not None and not is_date:  # type: ignore[arg-type]
            part = Part.TIME_OF_DAY
        if part is Part.HOURS:
            number = number or title
        elif part is Part.CLOCK:
            clock = clock or title
        elif part is Part.TIME_OF_DAY:
            of_day = of_day or title
    scale = None
    if number is not None:
        unit = try_unit(number.unit) if number.unit else None
        if unit is not None and unit.measure.value == "h":
            scale = float(unit.factor)
        elif number.name.lower() in _HOUR_WORDS:
            scale = 1.0
    if number is None and of_day is not None and clock is None:
        number, of_day = of_day, None
    elif (
        number is not None and clock is not None and scale is None and of_day is None
        and _is_day(first[clock.column] if clock.column < len(first) else "")
    ):  # fmt: skip
        of_day, number = number, None  # "date" and "time" beside each other
    return TimeColumns(number, clock, of_day, scale)


def _is_day(value: object) -> bool:
    """Whether a date comes without a time of day."""
    if isinstance(value, datetime.datetime):
        return value.time() == datetime.time()
    return ":" not in value if isinstance(value, str) else isinstance(value, datetime.date)


def read_axis(
    grid: RawGrid, rows: Sequence[int], columns: TimeColumns, decimal: Decimal,
    order: DateOrder | None,
) -> TimeAxis:
    """The times of the rows of a table."""
    doubts: list[tuple[int, Doubt]] = []
    faults: list[Diagnostic] = []
    hours = clock = None
    words: list[str] = []
    if columns.number is not None:
        hours = _durations(grid, rows, columns, decimal, doubts, faults)
        words.append(f"`{columns.number.shown}` in hours")
    if columns.clock is not None:
        clock = _moments(grid, rows, columns, order, doubts, faults)
        words.append(f"`{columns.clock.shown}` as a clock")
    return TimeAxis(hours, clock, tuple(doubts), " and ".join(words), tuple(faults))


def _durations(
    grid: RawGrid, rows: Sequence[int], columns: TimeColumns, decimal: Decimal,
    doubts: list[tuple[int, Doubt]], faults: list[Diagnostic],
) -> Array:
    title = columns.number
    assert title is not None
    column = title.column
    read = [read_duration(grid.cell(r, column)) for r in rows]
    if any(r is not None for r in read):
        hours = np.array([np.nan if r is None else r for r in read])
        falls = np.flatnonzero(np.diff(hours) < -12)
        for fall in falls:  # a time of day past midnight
            hours[fall + 1 :] += 24
        rest = [r for r, x in zip(rows, read, strict=True) if x is None]
        doubts += [(column, _no_time(grid, r, column)) for r in rest if _stands(grid, r)]
        return hours
    numbers = read_column(grid, rows, column, decimal)
    doubts += [(column, d) for d in numbers.doubts]
    doubts += [(column, _no_time(grid, r, column)) for r in numbers.blank if _stands(grid, r)]
    if columns.scale is None:
        row = rows[0] if len(rows) else 0
        faults.append(Diagnostic(
            Name.UNIT_MISSING, f"{grid.place(row, column)} ({title.shown}): the time has no unit "
            "that can be read", grid.span(row, column), mend="write [h], [min], [s] or [d] in the "
            "title, or hours:minutes", source_line=grid.line_text(row),
        ))  # fmt: skip
        return numbers.value
    return numbers.value * columns.scale


def _moments(
    grid: RawGrid, rows: Sequence[int], columns: TimeColumns, order: DateOrder | None,
    doubts: list[tuple[int, Doubt]], faults: list[Diagnostic],
) -> Array:
    title = columns.clock
    assert title is not None
    cells = [grid.cell(r, title.column) for r in rows]
    shown_order, is_open = find_order(cells)
    taken = order or shown_order
    if taken is None and is_open:
        taken = _by_course(cells)
        if taken is None:
            row = next(r for r, c in zip(rows, cells, strict=True) if c != "")
            text = shown(grid.cell(row, title.column))
            faults.append(Diagnostic(
                Name.AMBIGUOUS_DATE, f"{grid.place(row, title.column)}: `{text}` may begin with "
                "the day or with the month, and no other date tells", grid.span(row, title.column),
                mend="write a line `dates; day first` above the table, or dates as 2026-03-02",
                source_line=grid.line_text(row),
            ))  # fmt: skip
            return np.full(len(rows), np.nan)
    clock = np.full(len(rows), np.nan)
    for place, (row, cell) in enumerate(zip(rows, cells, strict=True)):
        moment = read_moment(cell, taken)
        if moment is None:
            if _stands(grid, row):
                doubts.append((title.column, _no_time(grid, row, title.column)))
            continue
        if columns.of_day is not None:
            part = read_duration(grid.cell(row, columns.of_day.column))
            if part is None:
                doubts.append((columns.of_day.column, _no_time(grid, row, columns.of_day.column)))
                continue
            moment = float(np.floor(moment / 24) * 24) + part
        clock[place] = moment
    return clock


def _by_course(cells: Sequence[object]) -> DateOrder | None:
    """The order in which time never runs back, where only one is like that, or both are alike."""
    courses = {}
    for order in DateOrder:
        read = [read_moment(c, order) for c in cells if c != ""]  # type: ignore[arg-type]
        times = np.array([r for r in read if r is not None])
        courses[order] = times
    runs = {o: bool((np.diff(t) >= 0).all()) and t.size > 0 for o, t in courses.items()}
    good = [o for o, ok in runs.items() if ok]
    if len(good) == 1:
        return good[0]
    first, second = courses[DateOrder.DAY_FIRST], courses[DateOrder.MONTH_FIRST]
    alike = first.size == second.size and np.allclose(first - first[:1], second - second[:1])
    return DateOrder.DAY_FIRST if good and alike else None


def _stands(grid: RawGrid, row: int) -> bool:
    return any(c != "" for c in grid.rows[row])


def _no_time(grid: RawGrid, row: int, column: int) -> Doubt:
    return Doubt(row, shown(grid.cell(row, column)), "is no time: the row was left out", grave=True)


def changed_clock(clock: Array) -> list[tuple[int, float]]:
    """Rows at which a clock was set to or from summer time, and the hours to add from there on.

    Told only in the nights in which clocks are changed in Europe and North America: an hour
    that is passed again, or one that is missing among rows that are less than ten minutes apart.

    Examples
    --------
    >>> night = 24.0 * (datetime.date(2026, 10, 25) - datetime.date(1970, 1, 1)).days
    >>> changed_clock(night + np.array([2.0, 2.5, 2.9, 2.1, 2.6]))
    [(3, 1.0)]
    """
    steps = np.diff(clock)
    if not steps.size:
        return []
    usual = float(np.median(np.abs(steps)))
    found: list[tuple[int, float]] = []
    back = np.flatnonzero((steps < 0) & (steps > -1.0 - _SLACK))
    ahead = np.flatnonzero(np.abs(steps - 1.0 - usual) < _SLACK) if usual < 1 / 6 else back[:0]
    for place in np.concatenate([back, ahead]):
        moment = datetime.datetime(1970, 1, 1) + datetime.timedelta(hours=float(clock[place]))
        autumn = steps[place] < 0
        if _is_change(moment.date(), autumn=autumn) and moment.hour <= 3:
            found.append((int(place) + 1, 1.0 if autumn else -1.0))
    return sorted(found)


def _is_change(day: datetime.date, *, autumn: bool) -> bool:
    if day.weekday() != 6:
        return False
    last = day.day > 24
    return (day.month == 10 and last) or (day.month == 11 and day.day <= 7) if autumn else (
        (day.month == 3 and last) or (day.month == 3 and 8 <= day.day <= 14)
    )


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
