"""Long records thinned by averaging, with the error of each average.

Rows are added up in bins of one width, chunk by chunk, so that the memory does not grow with
the file. The scatter about a straight line inside the bins is the rows' own error. Neighbouring
rows of an analyser are alike, so a mean of n rows is worth fewer than n: n (1 - r) / (1 + r),
r the correlation of neighbours (exact for a first-order autoregression and large n).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record

__all__ = [
    "BinSums", "BinnedTimes", "Thinned", "add_sums", "average_bins", "bin_times", "sum_bins",
    "sum_values", "thin",
]  # fmt: skip

Array = NDArray[np.float64]

_MOST = 0.98
"""Neighbours more alike than this are taken as this alike: beyond it r is not known."""


@record
class BinSums:
    """What is added up in each bin: counts and sums of t, t^2, v, v^2, t v and differences^2.

    t counts from the bin's middle, so that nothing cancels. ``pairs`` are neighbours in one bin.
    """

    width: float
    index: NDArray[np.int64]
    sums: Array
    """7 x bins: n, t, t^2, v, v^2, t v, squared differences of neighbours."""

    pairs: Array


@record
class Thinned:
    """Averages: time and value means, the sd of each mean, and the rows in it.

    ``row_sd`` is the scatter of one row, ``alike`` the correlation of neighbours.
    """

    time: Array
    value: Array
    sd: Array
    count: Array
    row_sd: float
    alike: float


@record
class BinnedTimes:
    """Where the rows of a chunk fall in bins: shared by all that was measured at those times."""

    width: float
    index: NDArray[np.int64]
    starts: NDArray[np.intp]
    time: Array
    """From the middle of each row's bin."""

    sums: Array
    """3 x bins: n, t, t^2."""


def bin_times(time: Array, width: float) -> BinnedTimes:
    """Put times, which increase, in bins of a width that start at multiples of it."""
    keys = np.floor(time / width)
    starts = np.flatnonzero(np.concatenate([[True], keys[1:] != keys[:-1]]))[: keys.size]
    t = time - (keys + 0.5) * width
    count = np.diff(np.append(starts, keys.size)).astype(np.float64)
    parts = [np.add.reduceat(p, starts) if keys.size else np.zeros(0) for p in (t, t * t)]
    return BinnedTimes(width, keys[starts].astype(np.int64), starts, t, np.array([count, *parts]))


def sum_values(bins: BinnedTimes, value: Array) -> BinSums:
    """Add up the values of one chunk at times that are in bins already."""
    steps = np.empty_like(value)
    np.subtract(value[1:], value[:-1], out=steps[1:])
    steps[bins.starts] = 0.0
    np.square(steps, out=steps)
    parts = (value, value * value, bins.time * value, steps)
    sums = [np.add.reduceat(p, bins.starts) if value.size else np.zeros(0) for p in parts]
    return BinSums(bins.width, bins.index, np.array([*bins.sums, *sums]), bins.sums[0] - 1)


def sum_bins(time: Array, value: Array, width: float) -> BinSums:
    """Add up one chunk, whose times increase, in bins of a width that start at multiples of it."""
    return sum_values(bin_times(time, width), value)


def add_sums(first: BinSums, second: BinSums) -> BinSums:
    """The sums of two chunks of one record; a bin that both hold becomes one."""
    if first.index.size and second.index.size and first.index[-1] <= second.index[0]:
        # one after the other: at most one bin is shared
        shared = int(first.index[-1] == second.index[0])
        sums = np.concatenate([first.sums, second.sums[:, shared:]], axis=1)
        pairs = np.concatenate([first.pairs, second.pairs[shared:]])
        if shared:
            sums[:, first.index.size - 1] += second.sums[:, 0]
            pairs[first.index.size - 1] += second.pairs[0]
        index = np.concatenate([first.index, second.index[shared:]])
        return BinSums(first.width, index, sums, pairs)
    index = np.union1d(first.index, second.index)
    sums, pairs = np.zeros((7, index.size)), np.zeros(index.size)
    for part in (first, second):
        places = np.searchsorted(index, part.index)
        sums[:, places] += part.sums
        pairs[places] += part.pairs
    return BinSums(first.width, index, sums, pairs)


def average_bins(bins: BinSums) -> Thinned:
    """The averages with their errors; a lone row has the sd of one row."""
    n, t, tt, v, vv, tv, dd = bins.sums
    spread, cross = tt - t * t / n, tv - t * v / n
    slope = np.divide(cross, spread, out=np.zeros_like(v), where=spread > 1e-12 * bins.width**2)
    rest = np.maximum(vv - v * v / n - slope * cross, 0.0)
    free = float(np.maximum(n - 2, 0).sum())
    variance = float(rest[n > 2].sum()) / free if free else 0.0
    pairs = float(bins.pairs.sum())
    trend = slope**2 * spread * 12 / np.maximum(n * n, 1)  # what a straight line steps
    steps = max(float(dd.sum() - trend.sum()), 0.0) / pairs if pairs else 2 * variance
    alike = float(np.clip(1 - steps / (2 * variance), 0.0, _MOST)) if variance else 0.0
    worth = np.maximum(n * (1 - alike) / (1 + alike), 1.0)
    return Thinned(
        time=(bins.index + 0.5) * bins.width + t / n,
        value=v / n,
        sd=np.sqrt(variance / worth),
        count=n,
        row_sd=float(np.sqrt(variance)),
        alike=alike,
    )


def thin(time: Array, value: Array, width: float, chunk: int = 100_000) -> Thinned:
    """Average a record in bins of a width, in chunks.

    Examples
    --------
    >>> t = np.arange(600.0)
    >>> thinned = thin(t, 3.0 + (-1.0) ** t, 100.0)
    >>> thinned.value.tolist(), thinned.count.tolist()
    ([3.0, 3.0, 3.0, 3.0, 3.0, 3.0], [100.0, 100.0, 100.0, 100.0, 100.0, 100.0])
    """
    total = sum_bins(time[:chunk], value[:chunk], width)
    for start in range(chunk, time.size, chunk):
        part = slice(start, start + chunk)
        total = add_sums(total, sum_bins(time[part], value[part], width))
    return average_bins(total)
