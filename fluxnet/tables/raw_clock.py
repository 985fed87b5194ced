"""Times as they are written: hours, durations past a day, dates of either order, serial numbers."""

from __future__ import annotations

import datetime
import re
from collections.abc import Iterable
from enum import Enum

from fluxnet.tables.raw_grid import RawValue

__all__ = [
    "DateOrder", "as_moment", "date_orders", "find_order", "read_duration", "read_moment",
    "to_hours",
]  # fmt: skip


class DateOrder(Enum):
    """Which number of ``02/03/2026`` is the day."""

    DAY_FIRST = "day first"
    MONTH_FIRST = "month first"


_MONTHS = {
    name: number
    for number, names in enumerate((
        "jan", "feb", "mar mär mrz", "apr", "may mai", "jun", "jul", "aug", "sep", "oct okt",
        "nov", "dec dez",
    ), start=1) for name in names.split()
}  # fmt: skip
_CLOCK = r"(?P<h>\d{1,2}):(?P<m>\d\d)(?::(?P<s>\d\d(?:[.,]\d+)?))?\s*(?P<half>[AaPp]\.?[Mm]\.?)?"
_ZONE = r"\s*(?P<zone>Z|UTC|[+-]\d\d:?\d\d)?"
_BEHIND = rf"(?:(?:[T ,]|\s)\s*{_CLOCK}{_ZONE})?"
_YEAR_FIRST = re.compile(rf"(?P<y>\d{{4}})[-/.](?P<a>\d{{1,2}})[-/.](?P<b>\d{{1,2}}){_BEHIND}")
_YEAR_LAST = re.compile(
    rf"(?P<a>\d{{1,2}})(?P<sign>[./-])(?P<b>\d{{1,2}})(?P=sign)(?P<y>\d{{4}}|\d\d){_BEHIND}"
)
_NAMED = re.compile(
    rf"(?P<a>\d{{1,2}})\.?[ -](?P<name>[A-Za-zä]{{3,9}})\.?[ -](?P<y>\d{{4}}|\d\d){_BEHIND}"
)
_DURATION = re.compile(
    r"(?P<sign>-?)(?:(?P<d>\d+)\s*d(?:ays?)?\s*,?\s*)?(?P<h>\d{1,4}):(?P<m>[0-5]\d)"
    r"(?::(?P<s>[0-5]\d(?:[.,]\d+)?))?"
)
_ZERO = datetime.datetime(1970, 1, 1)
_SERIAL_ZERO = datetime.datetime(1899, 12, 30)
_FIRST_SERIAL, _LAST_SERIAL = 20_000.0, 80_000.0
"""Serial numbers of days from 1954 to 2119; smaller ones are numbers of something else."""


def to_hours(moment: datetime.datetime) -> float:
    """Hours since the start of 1970."""
    return (moment - _ZERO) / datetime.timedelta(hours=1)


def read_duration(value: RawValue) -> float | None:
    """Hours of a duration or a time of day; None where it is none.

    Examples
    --------
    >>> read_duration("36:30:00"), read_duration("1 d 02:00"), read_duration("7.5")
    (36.5, 26.0, None)
    """
    if isinstance(value, datetime.timedelta):
        return value.total_seconds() / 3600
    if isinstance(value, datetime.time):
        return value.hour + value.minute / 60 + value.second / 3600
    found = _DURATION.fullmatch(value) if isinstance(value, str) else None
    if found is None:
        return None
    seconds = float((found["s"] or "0").replace(",", "."))
    hours = 24 * int(found["d"] or 0) + int(found["h"]) + int(found["m"]) / 60 + seconds / 3600
    return -hours if found["sign"] else hours


def date_orders(value: RawValue) -> frozenset[DateOrder]:
    """The orders in which a text is a date; empty where it shows none, both where it may be either.

    Examples
    --------
    >>> [o.value for o in date_orders("13/02/2026")], len(date_orders("02/03/2026 09:15"))
    (['day first'], 2)
    """
    found = _YEAR_LAST.fullmatch(value) if isinstance(value, str) else None
    if found is None:
        return frozenset()
    a, b = int(found["a"]), int(found["b"])
    if found["sign"] == ".":  # nobody writes a month first with points
        return frozenset({DateOrder.DAY_FIRST}) if b <= 12 else frozenset()
    orders = {DateOrder.DAY_FIRST} if b <= 12 else set()
    return frozenset(orders | ({DateOrder.MONTH_FIRST} if a <= 12 else set()))


def find_order(values: Iterable[RawValue]) -> tuple[DateOrder | None, bool]:
    """The order that the dates of a column show, and whether any leaves it open.

    None with True: nothing tells; None with False: no date depends on it.
    """
    possible = [o for o in map(date_orders, values) if o]
    sure = {next(iter(o)) for o in possible if len(o) == 1}
    is_open = any(len(o) == 2 for o in possible)
    if len(sure) == 1:
        return next(iter(sure)), False
    return None, is_open or len(sure) > 1


def read_moment(value: RawValue, order: DateOrder | None) -> float | None:
    """Hours since 1970 of a date with or without a time of day; None where it is none.

    A number is the serial number of a day as spreadsheets count them.

    Examples
    --------
    >>> read_moment("1970-01-02 12:30", None), read_moment("02/01/1970", DateOrder.DAY_FIRST)
    (36.5, 24.0)
    """
    if isinstance(value, datetime.datetime):
        return to_hours(value)
    if isinstance(value, datetime.date):
        return to_hours(datetime.datetime(value.year, value.month, value.day))
    if isinstance(value, (int, float)) and not isinstance(value, bool):
        return _serial(float(value))
    if not isinstance(value, str):
        return None
    found = _YEAR_FIRST.fullmatch(value)
    if found is not None:
        return _moment(found, int(found["a"]), int(found["b"]))
    found = _YEAR_LAST.fullmatch(value)
    if found is not None:
        orders = date_orders(value)
        taken = order if order in orders or len(orders) != 1 else next(iter(orders))
        first, second = int(found["a"]), int(found["b"])
        if taken is None or taken not in orders:
            return None
        return _moment(found, *((second, first) if taken is DateOrder.DAY_FIRST else
                                (first, second)))  # fmt: skip
    found = _NAMED.fullmatch(value)
    if found is not None and found["name"][:3].lower() in _MONTHS:
        return _moment(found, _MONTHS[found["name"][:3].lower()], int(found["a"]))
    try:
        return _serial(float(value.replace(",", ".")))
    except ValueError:
        return None


def _serial(number: float) -> float | None:
    if not _FIRST_SERIAL <= number <= _LAST_SERIAL:
        return None
    hours = round(number * 86_400_000) / 3_600_000  # to a thousandth of a second
    return to_hours(_SERIAL_ZERO) + hours


def _moment(found: re.Match[str], month: int, day: int) -> float | None:
    year = int(found["y"])
    hour, minute = int(found["h"] or 0), int(found["m"] or 0)
    seconds = float((found["s"] or "0").replace(",", "."))
    if found["half"]:
        hour = hour % 12 + (12 if found["half"].lower().startswith("p") else 0)
    try:
        day_start = datetime.datetime(year + 2000 if year < 100 else year, month, day)
    except ValueError:
        return None
    if hour > 24 or minute > 59:
        return None
    hours = to_hours(day_start) + (hour * 3600 + minute * 60 + seconds) / 3600
    zone = found["zone"]
    if zone and zone[0] in "+-":
        shift = int(zone[1:3]) + int(zone[-2:]) / 60
        hours -= shift if zone[0] == "+" else -shift
    return hours


def as_moment(hours: float) -> str:
    """Hours since 1970 as a date, for messages."""
    moment = datetime.datetime(1970, 1, 1) + datetime.timedelta(hours=hours)
    return moment.isoformat(" ", "minutes")
