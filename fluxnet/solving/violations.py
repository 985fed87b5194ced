"""Limits that a measured value passes by itself, before anything is solved."""

from __future__ import annotations

from fluxnet.ground.record import record
from fluxnet.network.model import Quantity, QuantityKind
from fluxnet.solving.problem import Problem, Row, RowKind

__all__ = ["Violation", "find_violations", "same_way"]


@record
class Violation:
    """A measured value that by itself lies beyond a limit, by ``in_sd`` of its sds."""

    limit: Row
    measured: Row
    in_sd: float


def find_violations(problem: Problem, beyond: float = 2.0) -> tuple[Violation, ...]:
    """Limits that a measured value of the same quantity violates by more than some sd."""
    found = []
    for i, row in enumerate(problem.rows):
        if row.kind is not RowKind.LIMIT or row.quantity is None or row.ratio is not None:
            continue
        for other in problem.rows:
            if other.value is None or not other.sd or other.quantity is None:
                continue
            sign = same_way(row.quantity, other.quantity)
            if sign == 0:
                continue
            value = sign * other.value
            over = max(problem.row_low[i] - value, value - problem.row_high[i]) / other.sd
            if over > beyond:
                found.append(Violation(row, other, float(over)))
    return tuple(found)


def same_way(one: Quantity, other: Quantity) -> int:
    """1 for the same quantity, -1 for the same in the other direction, else 0."""
    if one == other:
        return 1
    rate = QuantityKind.RATE
    if one.kind is rate and other.kind is rate and one.name == other.name:
        return -1
    return 0
