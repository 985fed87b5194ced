"""What is in the vessel: broth by litre or by kilogram, from all that went in and came out.

Streams are told in litres or kilograms, as totals, rates or single events. All become one thing:
the cumulated amount at the sample times, in the unit of the account, each with the error of its
reading (a balance is good to a gram) and one that all readings share (the pump, the density).
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from fluxnet.cultivation.errors import Block, Mode
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.rates.cultivation import Form, Series, SeriesKind

__all__ = [
    "BALANCE_SD", "PUMP_SD", "Account", "AccountLine", "Flow", "broth", "close_account",
    "cumulated", "kept_fraction", "read_flow", "resets",
]  # fmt: skip

Array = NDArray[np.float64]

BALANCE_SD = 1e-3
"""kg: a balance is good to 1 g (common practice). The same for litres read from a scale."""

PUMP_SD = 0.02
"""Relative error that all of a pump's volume shares where no balance stands under it (assumed)."""

WATER = 0.998
"""kg/L of what evaporates, at 20 °C (handbook, from memory)."""


@record
class Flow:
    """One stream, cumulated from the first node on, at the nodes.

    ``share`` tells of what leaves at the later end of each interval between nodes which part
    had the composition of the earlier node (1: taken right after it). ``shift`` is the error
    that all readings share, per one sd; ``first`` the sd of the reading at the first node, which
    was taken from all later ones.
    """

    name: str
    kind: SeriesKind
    total: Array
    own: Array
    shift: Array
    share: Array
    first: float = 0.0

    @property
    def block(self) -> Block:
        """The totals as raw data with their errors."""
        later = np.full(self.total.size, -self.first)
        later[0] = 0.0
        scale = Mode(f"{self.name}, scale", self.shift)
        start = Mode(f"{self.name}, first reading", later)
        return Block(self.name, self.total, self.own, (scale, start))

    @property
    def variance(self) -> Array:
        """Of the total at each node."""
        later = np.full(self.total.size, self.first**2)
        later[0] = 0.0
        return np.asarray(self.own**2 + self.shift**2 + later)


def cumulated(series: Series, nodes: Array) -> tuple[Array, Array]:
    """The amount since the first node at each node, and which part left at the earlier end.

    A TOTAL counts from its value at the first node (a totaliser may start anywhere); before
    its first and after its last reading nothing is added. A RATE holds from its time to the
    next one's. An EVENT at a node comes after the sample that was taken there.

    Examples
    --------
    >>> from fluxnet.rates.cultivation import make_series
    >>> pump = make_series(SeriesKind.FEED, "feed", "L/h", [0, 2], [0.1, 0.2], form=Form.RATE)
    >>> cumulated(pump, np.array([0.0, 1.0, 3.0]))[0].round(3).tolist()
    [0.0, 0.1, 0.4]
    """
    half = np.full(max(nodes.size - 1, 0), 0.5)
    if series.form is Form.TOTAL:
        return np.asarray(
            np.interp(nodes, series.time, series.value)
            - np.interp(nodes[0], series.time, series.value)
        ), half
    if series.form is Form.RATE:
        ends = np.append(series.time[1:], max(float(nodes[-1]), float(series.time[-1])))
        steps = np.concatenate([[0.0], np.cumsum(series.value * (ends - series.time))])
        total = np.interp(nodes, np.append(series.time, ends[-1]), steps)
        return np.asarray(total - total[0]), half
    if series.form is Form.EVENT:
        return _events(series, nodes)
    raise MisuseError(f"{series.title}: a state is no stream")


def _events(series: Series, nodes: Array) -> tuple[Array, Array]:
    slack = 2e-6  # h: sample times are rounded to a millionth
    inside = (series.time >= nodes[0] - slack) & (series.time < nodes[-1] - slack)
    time, size = series.time[inside], series.value[inside]
    place = np.searchsorted(nodes - slack, time, side="right") - 1
    widths = np.diff(nodes)
    early = 1.0 - np.clip((time - nodes[place]) / widths[place], 0.0, 1.0)
    moved = np.bincount(place, size, widths.size)
    share = np.bincount(place, size * early, widths.size)
    share = np.divide(share, moved, out=np.full(widths.size, 0.5), where=moved != 0)
    return np.concatenate([[0.0], np.cumsum(moved)]), np.asarray(share)


def resets(series: Series) -> NDArray[np.intp]:
    """Where a total falls by more than its noise: a totaliser was set back, a bottle changed.

    Returns the indices of the first reading after each fall.
    """
    if series.form is not Form.TOTAL or series.value.size < 2:
        return np.zeros(0, dtype=np.intp)
    span = float(np.ptp(series.value))
    return np.flatnonzero(np.diff(series.value) < -max(5 * BALANCE_SD, 0.05 * span)) + 1


def read_flow(
    series: Series, nodes: Array, *, by_mass: bool, density: float, density_sd: float = 0.0
) -> Flow:
    """A stream at the nodes in the unit of the account.

    Parameters
    ----------
    by_mass
        Whether the account counts kilograms.
    density
        Of the stream [kg/L]; only used where its unit is not the account's.
    """
    total, share = cumulated(series, nodes)
    unit = series.unit.partition("/")[0]
    if unit not in ("L", "kg"):
        raise MisuseError(f"{series.title}: `{series.unit}` is neither litres nor kilograms")
    own = np.full(nodes.size, BALANCE_SD)
    if series.sd is not None and series.form is Form.TOTAL:
        own = np.interp(nodes, series.time, series.sd)
    elif series.sd is not None:
        moved = np.interp(nodes, series.time, np.cumsum(series.sd**2))
        own = np.sqrt(moved - moved[0] + float(series.sd[0]) ** 2)
    if series.form is Form.RATE and series.sd is None:
        own = np.zeros(nodes.size)
    first = float(own[0]) if series.form is Form.TOTAL else 0.0
    own[0] = 0.0
    common = series.common
    if common is None:
        common = PUMP_SD if series.form is Form.RATE else 0.0
    factor = 1.0
    if (unit == "kg") is not by_mass:
        factor = density if by_mass else 1.0 / density
        common = float(np.hypot(common, density_sd / density))
    total = total * factor
    return Flow(series.title, series.kind, total, own * factor, common * total, share,
                first * factor)


def broth(start: Array, flows: Sequence[tuple[SeriesKind, Array]], nodes: int) -> Array:
    """Broth at the nodes: trials x nodes, from that at the first one and cumulated streams."""
    total = np.repeat(start[:, None], nodes, axis=1)
    for kind, moved in flows:
        total = total - moved if kind.is_removal else total + moved
    return np.asarray(total)


def kept_fraction(
    level: Array, flows: Sequence[tuple[SeriesKind, Array, Array]]
) -> tuple[Array, Array]:
    """How much of what was in the broth at the first node samples and effluent left in it.

    Each removal takes the part f = removed / broth of everything. Between nodes the part taken
    at the earlier end (``share``) counts at once.

    Parameters
    ----------
    level
        Broth at the nodes, before what is taken there: trials x nodes.
    flows
        Kind, cumulated amount (trials x nodes), and share by interval.

    Returns
    -------
    tuple
        Fraction kept before the sample at each node (trials x nodes), and right after what was
        taken there (trials x intervals).
    """
    trials, count = level.shape
    log_kept = np.zeros((trials, count))
    after = np.zeros((trials, count - 1))
    for kind, moved, share in flows:
        if kind not in (SeriesKind.SAMPLE, SeriesKind.EFFLUENT):
            continue
        step = np.diff(moved, axis=1)
        mean = np.where(share > 0.999, level[:, :-1], (level[:, :-1] + level[:, 1:]) / 2)
        parts = np.log1p(-np.clip(step / mean, 0.0, 0.99))
        log_kept[:, 1:] += np.cumsum(parts, axis=1)
        after += np.where(share > 0.999, parts, 0.0)
    return np.exp(log_kept), np.exp(log_kept[:, :-1] + after)


@record
class AccountLine:
    """One line of an account: what moved until each time, positive into the broth."""

    name: str
    amount: Array


@record
class Account:
    """What the vessel should hold, and what it was found to hold.

    ``found`` is NaN-free: at the times ``found_time`` only. ``closure`` is the last found
    value over the expected one; None where nothing was found.
    """

    title: str
    unit: str
    time: Array
    lines: tuple[AccountLine, ...]
    expected: Array
    expected_sd: Array
    found_time: Array
    found: Array

    @property
    def closure(self) -> float | None:
        """Found over expected at the last time at which it was found."""
        if not self.found.size:
            return None
        return float(self.found[-1] / np.interp(self.found_time[-1], self.time, self.expected))


def close_account(
    title: str, unit: str, nodes: Array, start: Block, flows: Sequence[Flow],
    found: Series | None,
) -> Account:
    """The account of the broth, with the error of what it expects."""
    lines = [AccountLine("at the start", np.full(nodes.size, float(start.value[0])))]
    variance = np.full(nodes.size, float(start.own[0]) ** 2)
    for flow in flows:
        sign = -1.0 if flow.kind.is_removal else 1.0
        lines.append(AccountLine(flow.name, sign * flow.total))
        variance = variance + flow.variance
    expected = np.asarray(sum(line.amount for line in lines))
    none = np.zeros(0)
    inside = none if found is None else (found.time >= nodes[0]) & (found.time <= nodes[-1])
    return Account(
        title, unit, nodes, tuple(lines), expected, np.sqrt(variance),
        none if found is None else found.time[inside],
        none if found is None else found.value[inside],
    )  # fmt: skip
