"""Many time stamps of one width at once: digits by their places, not one text after another."""

from __future__ import annotations

import re

import numpy as np
from numpy.typing import NDArray

from fluxnet.tables.raw_clock import DateOrder, read_moment

__all__ = ["read_fixed"]

_LAYOUT = re.compile(
    r"(?:(?P<y>\d{4})[-/.](?P<a>\d\d)[-/.](?P<b>\d\d)|(?P<c>\d\d)[./-](?P<d>\d\d)[./-](?P<z>\d{4}))"
    r"[ T](?P<h>\d\d):(?P<m>\d\d):(?P<s>\d\d)(?:\.(?P<f>\d{1,6}))?"
)


def read_fixed(texts: NDArray[np.object_], order: DateOrder | None) -> NDArray[np.float64] | None:
    """Hours since 1970 of stamps that are all laid out as the first one; None where they are not.

    Examples
    --------
    >>> read_fixed(np.array(["1970-01-01 01:30:00", "1970-01-02 00:00:36"], dtype=object), None)
    array([ 1.5 , 24.01])
    """
    if not texts.size:
        return np.zeros(0)
    first = str(texts[0])
    layout = _LAYOUT.fullmatch(first)
    if layout is None:
        return None
    try:
        packed = texts.astype(f"S{len(first) + 1}")
    except UnicodeEncodeError:
        return None
    bytes_of = packed.view(np.uint8).reshape(texts.size, len(first) + 1)
    if bytes_of[:, -1].any():  # longer than the first
        return None
    is_digit = np.array([c.isdigit() for c in first])
    signs = np.frombuffer(first.encode(), dtype=np.uint8)
    digits = bytes_of[:, :-1] - np.uint8(48)
    if (bytes_of[:, :-1][:, ~is_digit] != signs[~is_digit]).any():
        return None
    if (digits[:, is_digit] > 9).any():
        return None

    def number(name: str) -> NDArray[np.int64]:
        start, end = layout.span(name)
        total = np.zeros(texts.size, dtype=np.int64)
        for place in range(start, end):
            total = total * 10 + digits[:, place]
        return total

    names = ("y", "a", "b") if layout["y"] else ("z", "d", "c")
    start, end = min(layout.start(n) for n in names), max(layout.end(n) for n in names)
    days, place = np.unique(sum(number(n) * 100 ** (2 - i) for i, n in enumerate(names)),
                            return_inverse=True)  # fmt: skip
    starts = np.empty(days.size)
    index = np.unique(place, return_index=True)[1]
    for day, row in enumerate(index):
        moment = read_moment(str(texts[row])[start:end], order)
        if moment is None:
            return None
        starts[day] = moment
    seconds = number("h") * 3600 + number("m") * 60 + number("s")
    hours = starts[place] + seconds / 3600
    if layout["f"]:
        hours += number("f") / 10 ** len(layout["f"]) / 3600
    return np.asarray(hours)
