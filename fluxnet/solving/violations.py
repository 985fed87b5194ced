"""Limits that a measured value passes by itself, before anything is solved."""

from __future__ import annotations

from math import isfinite

from fluxnet.ground.record import record
from fluxnet.network.model import Quantity, QuantityKind
from fluxnet.solving.problem import Problem, Row, RowKind

__all__ = ["Violation", "find_violations", "same_way"]


@record
class Violation:
    """A measured value that by itself lies beyond a limit, by ``in_sd`` of its sds.

    ``value`` is what was measured: of a ratio, the ratio.
    """

    limit: Row
    measured: Row
    value: float
    in_sd: float


def find_violations(problem: Problem, beyond: float = 2.0) -> tuple[Violation, ...]:
    """Limits that a measured value of the same quantity violates by more than some sd.

    A measured ratio is held against limits on that ratio.
    """
    measured = [row for row in problem.rows if row.value is not None and row.sd]
    found = []
    for i, row in enumerate(problem.rows):
        if row.kind is not RowKind.LIMIT or row.quantity is None:
            continue
        low, high = float(problem.row_low[i]), float(problem.row_high[i])
        if row.ratio is not None:
            # The bound of a ratio A / B is in the row's coefficients, as A - bound B.
            low, high = (row.ratio if isfinite(end) else end for end in (low, high))
        for other in measured:
            sign = same_way(row.quantity, other.quantity) if other.quantity is not None else 0
            value, sd = other.value or 0.0, other.sd or 0.0
            if other.ratio is not None:
                value, sd = other.ratio, sd / (other.denominator or 1.0)
            over = max(low - sign * value, sign * value - high) / sd
            if sign and over > beyond:
                found.append(Violation(row, other, value, over))
    return tuple(found)


def same_way(one: Quantity, other: Quantity) -> int:
    """1 for the same quantity, -1 for the same in the other direction, else 0."""
    if one == other:
        return 1
    rate = QuantityKind.RATE
    if one.kind is rate and other.kind is rate and one.name == other.name:
        return -1
    return 0
