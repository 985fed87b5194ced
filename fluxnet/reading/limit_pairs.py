"""Limits held against one another: the same one twice, or two that leave no room."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.network.model import Direction, Limit, Quantity, QuantityKind

__all__ = ["compare_limits"]

_Axis = tuple[QuantityKind, str, Quantity | None, Quantity | None]


def compare_limits(limits: Sequence[Limit]) -> list[Diagnostic]:
    """Limits that are repeated, and hard limits on one quantity that contradict one another.

    Uptake and release of one species are one axis: at least 1 in and at least 1 out cannot
    both hold.

    Examples
    --------
    >>> from fractions import Fraction
    >>> from fluxnet.network.model import Relation
    >>> oxygen = Quantity(QuantityKind.RATE, "oxygen", Direction.IN)
    >>> most = Limit(oxygen, Relation.AT_MOST, None, Fraction(2))
    >>> least = Limit(oxygen, Relation.AT_LEAST, Fraction(3), None)
    >>> [d.name.value for d in compare_limits([most, least])]
    ['contradictory-limits']
    >>> [d.name.value for d in compare_limits([most, most])]
    ['limit-repeated']
    """
    found: list[Diagnostic] = []
    seen: dict[tuple[Quantity, bool, str], Limit] = {}
    lowest: dict[_Axis, tuple[Fraction, Limit]] = {}
    highest: dict[_Axis, tuple[Fraction, Limit]] = {}
    for limit in limits:
        clash = None if limit.is_measured else _clash(limit, lowest, highest)
        twice = next((seen[k] for k in _sides(limit) if k in seen), None)
        if clash is not None:
            found.append(
                _told(Name.CONTRADICTORY_LIMITS, "no value meets this limit and the one", limit,
                      clash, "correct one of the two")
            )
        elif twice is not None:
            found.append(
                _told(Name.LIMIT_REPEATED, f"{limit.quantity} is limited twice, here and", limit,
                      twice, "keep one of the two")
            )
        for key in _sides(limit):
            seen.setdefault(key, limit)
    return found


def _told(name: Name, words: str, limit: Limit, other: Limit, mend: str) -> Diagnostic:
    same = limit.span.file == other.span.file
    place = f"line {other.span.line}" if same else f"{other.span.file}, line {other.span.line}"
    return Diagnostic(name, f"{words} in {place}", limit.span, None, mend, also=(other.span,))


def _sides(limit: Limit) -> list[tuple[Quantity, bool, str]]:
    sides = [("low", limit.low), ("high", limit.high)]
    return [(limit.quantity, limit.is_measured, side) for side, at in sides if at is not None]


def _axis(quantity: Quantity) -> tuple[_Axis, int]:
    """The axis of a quantity, and the sign with which it lies on it."""
    sign = -1 if quantity.direction is Direction.IN else 1
    return (quantity.kind, quantity.name, quantity.numerator, quantity.denominator), sign


def _clash(
    limit: Limit,
    lowest: dict[_Axis, tuple[Fraction, Limit]],
    highest: dict[_Axis, tuple[Fraction, Limit]],
) -> Limit | None:
    """An earlier limit that leaves this one no room; the bounds of this one are noted."""
    axis, sign = _axis(limit.quantity)
    low, high = limit.low, limit.high
    if sign < 0:
        low, high = (None if high is None else -high), (None if low is None else -low)
    clash: Limit | None = None
    if low is not None and axis in highest and low > highest[axis][0]:
        clash = highest[axis][1]
    if high is not None and axis in lowest and high < lowest[axis][0]:
        clash = lowest[axis][1]
    if low is not None and (axis not in lowest or low > lowest[axis][0]):
        lowest[axis] = (low, limit)
    if high is not None and (axis not in highest or high < highest[axis][0]):
        highest[axis] = (high, limit)
    return clash
