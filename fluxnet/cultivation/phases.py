"""Phases proposed from the data: where ln(X V) is straight, where the feed begins, what is steady.

The straight stretches are those of the least sum of weighted squares plus a price for every
further stretch (the Bayesian criterion, three numbers a stretch), found over all ways to cut.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.cultivation.volumes import cumulated
from fluxnet.rates.cultivation import (
    Cultivation,
    Form,
    Mode,
    Phase,
    Series,
    SeriesKind,
    SettingKind,
)

__all__ = ["propose_phases"]

Array = NDArray[np.float64]

_FEWEST = 3
_MOST = 6
_STILL = 0.15
"""Of the fastest growth: below it nothing grows."""

_FAST = 0.6
_WASHED = 3.0
"""Residence times after a change of flow that are not called steady."""

_GRID = 121
_FLOW_SCATTER = 0.002
"""Of all that was fed: how far a total may lie off a straight line."""

_SAME = 0.05
"""Flows that differ by less are one."""


def propose_phases(raw: Cultivation, time: Array, logs: Array, sd: Array) -> tuple[Phase, ...]:
    """Phases of a batch or fed-batch from ln(X V); of a chemostat its last stretch.

    Parameters
    ----------
    time, logs, sd
        Biomass samples: time [h], ln(X V), relative sd.
    """
    if raw.mode is Mode.CHEMOSTAT:
        return steady_stretches(raw, time) or (_steady(time),)
    if time.size < 2:
        return ()
    feed = _feed_start(raw)
    if raw.mode is Mode.FED_BATCH and feed is not None:
        before = time <= feed + 1e-9
        if before.sum() < _FEWEST:
            return (Phase("feed", float(time[0]), float(time[-1])),)
        ahead = propose_stretches(time[before], logs[before], sd[before])
        return (*ahead, Phase("feed", float(time[before][-1]), float(time[-1])))
    return propose_stretches(time, logs, sd)


def steady_stretches(raw: Cultivation, time: Array) -> tuple[Phase, ...]:
    """The steady states of a chemostat: what is left of each flow after three residence times.

    Flows are told apart by the straight stretches of what was fed; a flow too short for three
    residence times gets its last third. Empty where no feed or no volume is told as a series.
    """
    size = raw.setting(SettingKind.VOLUME) or raw.setting(SettingKind.MASS)
    feeds = raw.of_kind(SeriesKind.FEED)
    if size is None or not feeds or float(time[-1]) <= float(time[0]):
        return ()
    found: list[tuple[float, float]] = []
    for start, end, flow in _flows(feeds[0], float(time[-1])):
        away = start + _WASHED * size.value / flow
        begin = away if away < end else end - (end - start) / 3
        inside = time[(time >= begin - 1e-9) & (time <= end + 1e-9)]
        if inside.size:
            first = float(inside[0]) if inside.size > 1 else begin
            found.append((first, float(inside[-1])))
    found = [(a, b) for a, b in found if b > a]
    names = ["steady state"] if len(found) == 1 else [
        f"steady state {i + 1}" for i in range(len(found))
    ]  # fmt: skip
    return tuple(Phase(name, a, b) for name, (a, b) in zip(names, found, strict=True))


def _flows(feed: Series, end: float) -> list[tuple[float, float, float]]:
    """Stretches of one flow: start, end, flow; those without feed left out."""
    grid = np.linspace(max(float(feed.time[0]), 0.0), end, _GRID)
    total, _ = cumulated(feed, grid)
    if total[-1] <= 0:
        return []
    sd = np.full(grid.size, _FLOW_SCATTER * float(total[-1]))
    cost, slopes = _all_lines(grid, total, sd)
    joined: list[tuple[float, float, float]] = []
    for i, j in _cheapest(cost, 3 * float(np.log(grid.size))):
        flow = float(slopes[i, j])
        if joined and abs(flow - joined[-1][2]) < _SAME * flow:
            joined[-1] = (joined[-1][0], float(grid[j]), flow)
        else:
            joined.append((float(grid[i]), float(grid[j]), flow))
    most = max(flow for *_, flow in joined)
    return [(a, b, flow) for a, b, flow in joined if flow > _SAME * most]


def _steady(time: Array) -> Phase:
    """All samples of a chemostat; of a single one, the hour before it."""
    first, last = float(time[0]), float(time[-1])
    if last > first:
        return Phase("steady state", first, last)
    return Phase("steady state", max(first - 1.0, 0.0), max(first, 1.0))


def _feed_start(raw: Cultivation) -> float | None:
    """When the first feed begins to flow."""
    starts: list[float] = []
    for series in raw.of_kind(SeriesKind.FEED):
        if series.form is Form.TOTAL:
            risen = np.flatnonzero(series.value - series.value[0] > 0.005 * np.ptp(series.value))
            starts.extend([float(series.time[max(int(risen[0]) - 1, 0)])] if risen.size else [])
        else:
            flowing = np.flatnonzero(series.value > 0)
            starts.extend([float(series.time[flowing[0]])] if flowing.size else [])
    return min(starts, default=None)


def propose_stretches(time: Array, logs: Array, sd: Array) -> tuple[Phase, ...]:
    """Straight stretches of ln(X V), named by how fast biomass grows in them.

    Neighbouring stretches share a sample.

    Examples
    --------
    >>> t = np.arange(12.0)
    >>> found = propose_stretches(t, 0.4 * np.clip(t - 3, 0, 5), np.full(12, 0.04))
    >>> [(p.name, p.start, p.end) for p in found]
    [('lag', 0.0, 3.0), ('growth', 3.0, 8.0), ('stationary', 8.0, 11.0)]
    """
    count = time.size
    if count < 2:
        return ()
    if count < 2 * _FEWEST - 1:
        return (Phase("growth", float(time[0]), float(time[-1])),)
    cost, slopes = _all_lines(time, logs, sd)
    cuts = _cheapest(cost, 3 * float(np.log(count)))
    rates = [float(slopes[i, j]) for i, j in cuts]
    fastest = max(rates)
    peak = rates.index(fastest)
    names: list[str] = []
    for place, rate in enumerate(rates):
        plain = _name(rate, fastest, is_before=place < peak)
        repeat = sum(n.split(" (")[0] == plain for n in names)
        names.append(f"{plain} ({repeat + 1})" if repeat else plain)
    named = zip(names, cuts, strict=True)
    return tuple(Phase(name, float(time[i]), float(time[j])) for name, (i, j) in named)


def _name(rate: float, fastest: float, *, is_before: bool) -> str:
    if fastest <= 0:
        return "no growth"
    if rate >= _FAST * fastest:
        return "growth"
    if rate >= _STILL * fastest:
        return "slow growth"
    if is_before:
        return "lag"
    return "stationary" if rate > -_STILL * fastest else "decline"


def _all_lines(time: Array, values: Array, sd: Array) -> tuple[Array, Array]:
    """Cost and slope of the line from each point to each later one."""
    count = time.size
    cost, slopes = np.full((count, count), np.inf), np.zeros((count, count))
    for i in range(count):
        for j in range(i + _FEWEST - 1, count):
            part = slice(i, j + 1)
            cost[i, j], slopes[i, j] = _line(time[part], values[part], sd[part])
    return cost, slopes


def _line(t: Array, y: Array, s: Array) -> tuple[float, float]:
    """Weighted sum of squares about the best straight line, and its slope."""
    w = 1.0 / s**2
    tm, ym = float(w @ t / w.sum()), float(w @ y / w.sum())
    spread = float(w @ (t - tm) ** 2)
    slope = float(w @ ((t - tm) * (y - ym))) / spread
    return float(w @ (y - ym - slope * (t - tm)) ** 2), slope


def _cheapest(cost: Array, price: float) -> list[tuple[int, int]]:
    """The stretches, each from one sample to another, that share ends and cost least together."""
    count = len(cost)
    best: list[Array] = [cost[0]]
    back: list[NDArray[np.intp]] = []
    for _ in range(1, _MOST):
        ways = best[-1][:, None] + cost
        back.append(np.argmin(ways, axis=0))
        best.append(ways.min(axis=0))
    totals = [level[count - 1] + price * (k + 1) for k, level in enumerate(best)]
    end, cuts = count - 1, []
    for k in range(int(np.argmin(totals)), 0, -1):
        start = int(back[k - 1][end])
        cuts.append((start, end))
        end = start
    cuts.append((0, end))
    return cuts[::-1]
