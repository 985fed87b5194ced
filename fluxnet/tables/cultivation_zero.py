"""When a cultivation was inoculated, and what is taken from each table's times for it."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.ground.source import NOWHERE, Span
from fluxnet.tables.cultivation_blocks import BlockRead
from fluxnet.tables.raw_clock import DateOrder, as_moment, read_duration, read_moment
from fluxnet.tables.raw_grid import RawValue, shown

__all__ = ["Zero", "find_zero", "nothing_read", "shift_of", "whole_table"]


@record
class Zero:
    """Inoculation: as a clock, as a process time, and what a clock shows at process time 0."""

    clock: float | None
    hours: float
    offset: float | None
    words: str


def find_zero(
    reads: Sequence[BlockRead], said: tuple[RawValue, str] | None, order: DateOrder | None,
    faults: list[Diagnostic],
) -> Zero | None:
    """When the cultivation was inoculated, as told or, where all tell a clock, as assumed."""
    if not any(np.isfinite(r.first) for r in reads):
        faults.append(nothing_read(reads))
        return None
    reads = [r for r in reads if np.isfinite(r.first)]
    offsets = [(r, r.offset) for r in reads if r.offset is not None]
    offset = offsets[0][1] if offsets else None
    for read, other in offsets[1:]:
        assert offset is not None
        apart = other - offset
        if abs(apart) > 1 / 60:
            faults.append(Diagnostic(
                Name.CLOCKS_DIFFER, f"the clock of {read.title} is {abs(apart) * 60:.0f} min "
                f"{'ahead of' if apart > 0 else 'behind'} that of {offsets[0][0].title}, by the "
                "process time that both tell", whole_table(read),
                mend="process times are used; correct the clock, or the process time",
            ))  # fmt: skip
    clocks = [r for r in reads if r.is_clock]
    if said is not None:
        value, place = said
        moment = read_moment(value, order or DateOrder.DAY_FIRST)
        hours = read_duration(value)
        if moment is None and hours is None and isinstance(value, (int, float)):
            hours = float(value)
        if moment is None and hours is None and isinstance(value, str):
            number = value.lower().removesuffix("h").strip().replace(",", ".")
            hours = float(number) if number.replace(".", "", 1).isdigit() else None
        if moment is None and hours is None:
            faults.append(Diagnostic(
                Name.UNREADABLE_CELL, f"{place}: the inoculation `{shown(value)}` is no time",
                mend="write 2026-03-02 09:30, or a process time such as 2.5 h",
            ))  # fmt: skip
            return None
        if moment is None and clocks and len(clocks) == len(reads):
            assert hours is not None  # a time of day, on the first day
            first = min(r.first for r in clocks)
            moment, hours = float(np.floor(first / 24)) * 24 + hours, None
        words = f"inoculation at {as_moment(moment) if moment is not None else f'{hours:g} h'}"
        start = moment - offset if moment is not None and offset is not None else hours
        return _checked(reads, Zero(moment, start or 0.0, offset, words), faults)
    if clocks and offset is None and len(clocks) == len(reads):
        first = min(r.first for r in clocks)
        words = f"inoculation not told: the first row, {as_moment(first)}, is taken"
        faults.append(Diagnostic(
            Name.INOCULATION_ASSUMED, f"no line tells the inoculation; the first row "
            f"({as_moment(first)}) is taken as time 0", whole_table(clocks[0]),
            mend="write a line above the table: inoculation; 2026-03-02 09:30",
        ))  # fmt: skip
        return Zero(first, 0.0, None, words)
    return _checked(reads, Zero(None, 0.0, offset, "process time 0 is inoculation"), faults)


def _checked(reads: Sequence[BlockRead], zero: Zero, faults: list[Diagnostic]) -> Zero | None:
    """None where the clock of a table cannot be tied to the process time of another."""
    for read in reads:
        tied = zero.offset is not None or (zero.clock is not None if read.is_clock else (
            zero.clock is None or zero.hours != 0.0
        ))  # fmt: skip
        if not tied and (read.is_clock or any(r.is_clock for r in reads)):
            faults.append(Diagnostic(
                Name.CLOCKS_UNTIED, f"{read.title} tells "
                f"{'a clock' if read.is_clock else 'process time'}, others do not, and nothing "
                "ties the two", whole_table(read),
                mend="write a line: inoculation; 2026-03-02 09:30 (process time is then taken "
                "from it), or give both times in one table",
            ))  # fmt: skip
            return None
    return zero


def shift_of(read: BlockRead, zero: Zero) -> float:
    """What is taken from a table's times to tell them from inoculation."""
    if not read.is_clock:
        return zero.hours
    if zero.clock is not None:
        return zero.clock
    assert zero.offset is not None
    return zero.offset + zero.hours


def nothing_read(reads: Sequence[BlockRead]) -> Diagnostic:
    """The fault of tables without any value that has a time."""
    where = ", ".join(r.title for r in reads) or "the data"
    return Diagnostic(
        Name.NO_RAW_DATA, f"{where}: no row has both a time and a value",
        whole_table(reads[0]) if reads else NOWHERE,
        mend="look what the columns were taken for; columns.csv can say otherwise",
    )


def whole_table(read: BlockRead) -> Span:
    """A table's file as a whole."""
    return Span(read.file, 0, 0, 0)
