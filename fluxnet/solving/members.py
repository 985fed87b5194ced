"""What can take part in a conflict: each thing that bounds the fluxes, with its words."""

from __future__ import annotations

from enum import Enum

import numpy as np

from fluxnet.ground.record import record
from fluxnet.ground.source import NOWHERE, Span
from fluxnet.network.model import Direction, QuantityKind
from fluxnet.solving.problem import Problem, Row, RowKind
from fluxnet.solving.words import measured_words, number_words

__all__ = ["Member", "MemberKind", "list_members"]


class MemberKind(Enum):
    """What a member is. The order is that in which members are told."""

    MEASUREMENT = "measurement"
    MEASURED_LIMIT = "measured limit"
    LIMIT = "limit"
    DIRECTION = "direction"
    ROLE = "role"
    BALANCE = "balance"

    @property
    def is_given(self) -> bool:
        """Whether it is a limit or measurement rather than a part of the network's making."""
        return self in (MemberKind.MEASUREMENT, MemberKind.MEASURED_LIMIT, MemberKind.LIMIT)

    @property
    def is_measured(self) -> bool:
        """Whether it is a measured value."""
        return self in (MemberKind.MEASUREMENT, MemberKind.MEASURED_LIMIT)


@record
class Member:
    """One thing that bounds the fluxes.

    ``rows`` are the problem's rows that express it (a ratio may take several), ``column`` the
    one of the reaction whose direction it is. ``words`` tell it in one phrase. ``exact``: a
    measured value with an sd of 0.
    """

    kind: MemberKind
    name: str
    words: str
    span: Span = NOWHERE
    rows: tuple[int, ...] = ()
    column: int | None = None
    exact: bool = False


def list_members(problem: Problem, unit: str = "") -> tuple[Member, ...]:
    """All things that bound the fluxes of a problem, in the order in which they are told.

    Parameters
    ----------
    unit
        The text behind a measured rate.
    """
    groups: dict[tuple[RowKind, str, Span], list[int]] = {}
    for i, row in enumerate(problem.rows):
        if np.isfinite(problem.row_low[i]) or np.isfinite(problem.row_high[i]):
            groups.setdefault((row.kind, row.name, row.span), []).append(i)
    members = [_row_member(problem, tuple(places), unit) for places in groups.values()]
    for j, name in enumerate(problem.columns):
        low, high = float(problem.column_low[j]), float(problem.column_high[j])
        if np.isfinite(low) or np.isfinite(high):
            words = _flux_words(name, low, high)
            members.append(Member(MemberKind.DIRECTION, name, words, column=j))
    order = list(MemberKind)
    return tuple(sorted(members, key=lambda member: order.index(member.kind)))


def _row_member(problem: Problem, places: tuple[int, ...], unit: str) -> Member:
    row = problem.rows[places[0]]
    kind = MemberKind(row.kind.value)
    words = row.name
    if kind is MemberKind.BALANCE:
        words = f"balance of {row.name}"
    elif kind is MemberKind.ROLE:
        words = _role_words(row)
    elif kind is MemberKind.MEASUREMENT:
        words = _measured_words(row, problem, unit)
    exact = kind.is_measured and row.sd == 0
    return Member(kind, row.name, words, row.span, places, exact=exact)


def _role_words(row: Row) -> str:
    way = row.quantity.direction if row.quantity is not None else None
    return f"{row.name} is only {'taken up' if way is Direction.IN else 'released'}"


def _measured_words(row: Row, problem: Problem, unit: str) -> str:
    quantity = row.quantity
    if quantity is None:
        return row.name
    first = next((r for r in problem.rows if r.quantity == quantity and r.sd is not None), row)
    if first.value is None or first.sd is None:
        return row.name
    value, sd = first.value, first.sd
    if quantity.kind is QuantityKind.RATIO and first.ratio is not None:
        value, sd = first.ratio, sd / (first.denominator or 1.0)
    return measured_words(quantity, value, sd, unit)


def _flux_words(name: str, low: float, high: float) -> str:
    if low == 0 and not np.isfinite(high):
        return f"reaction {name} runs one way"
    if low == high:
        return f"flux {name} is {number_words(low)}"
    parts = []
    if np.isfinite(low):
        parts.append(f"at least {number_words(low)}")
    if np.isfinite(high):
        parts.append(f"at most {number_words(high)}")
    return f"flux {name} is {' and '.join(parts)}"
