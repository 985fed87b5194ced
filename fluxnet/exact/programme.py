"""Linear programmes in exact numbers, and what proves an answer to one.

A proof is looked at by itself, whatever it came from: fluxes that meet every bound show that a
value can be reached, prices of the rows that nothing lies below another. Where the two meet,
the optimum is proven (duality); prices that put the least above nothing at all prove that no
fluxes meet the bounds (Farkas).
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from fractions import Fraction
from typing import Any

from flint import fmpq

from fluxnet.ground.record import record

__all__ = [
    "ExactProgramme", "at_bounds", "excludes", "is_endless", "least_value", "make_programme",
    "meets", "worst_break",
]  # fmt: skip

Row = Mapping[int, Fraction]
Bound = Fraction | None
_ZERO = fmpq(0)
_NOTHING = Fraction(0)


@record
class ExactProgramme:
    """Least ``costs`` . v with low <= A v <= high and column_low <= v <= column_high.

    Numbers are kept as FLINT's own; an absent bound is None. Made by :func:`make_programme`.
    """

    columns: int
    rows: tuple[dict[int, Any], ...]
    low: tuple[Any, ...]
    high: tuple[Any, ...]
    costs: dict[int, Any]

    def value_of(self, i: int, fluxes: Sequence[Any]) -> Any:
        """The value of row ``i``."""
        total = _ZERO
        for j, a in self.rows[i].items():
            x = fluxes[j]
            if x:
                total += a * x
        return total


def make_programme(
    columns: int,
    rows: Sequence[Row],
    row_bounds: Iterable[tuple[Bound, Bound]],
    column_bounds: Iterable[tuple[Bound, Bound]],
    costs: Row,
) -> ExactProgramme:
    """A programme from fractions.

    Parameters
    ----------
    rows, costs
        {column: value}.
    row_bounds, column_bounds
        (low, high) of each, None where there is none.
    """
    both = [*column_bounds, *row_bounds]
    if len(both) != columns + len(rows):
        raise ValueError("every row and column needs its bounds")
    return ExactProgramme(
        columns,
        tuple({j: to_flint(a) for j, a in row.items() if a} for row in rows),
        tuple(None if low is None else to_flint(low) for low, _ in both),
        tuple(None if high is None else to_flint(high) for _, high in both),
        {j: to_flint(a) for j, a in costs.items() if a},
    )


def to_flint(value: Fraction) -> Any:
    """A fraction as FLINT's own."""
    return fmpq(value.numerator, value.denominator)


def to_fraction(value: Any) -> Fraction:
    """FLINT's own number as a fraction."""
    return Fraction(int(value.p), int(value.q)) if value else _NOTHING


def meets(programme: ExactProgramme, fluxes: Sequence[Fraction]) -> bool:
    """Whether fluxes meet every bound exactly."""
    return not worst_break(programme, [to_flint(v) for v in fluxes])


def worst_break(programme: ExactProgramme, fluxes: Sequence[Any]) -> Any:
    """The largest violation of a bound, 0 where all are met (FLINT's numbers)."""
    worst = _ZERO
    count = programme.columns
    for k, (low, high) in enumerate(zip(programme.low, programme.high, strict=True)):
        if low is None and high is None:
            continue
        value = fluxes[k] if k < count else programme.value_of(k - count, fluxes)
        if low is not None and value < low:
            worst = max(worst, low - value)
        if high is not None and value > high:
            worst = max(worst, value - high)
    return worst


def least_value(programme: ExactProgramme, prices: Sequence[Fraction]) -> Fraction | None:
    """A value that prices of the rows prove no fluxes to go below; None where they prove none.

    With d = c - A' y every feasible v has c v = y (A v) + d v, and each term is at least its
    coefficient times the bound on its own side.

    Examples
    --------
    >>> one = Fraction(1)
    >>> programme = make_programme(1, [{0: one}], [(3 * one, None)], [(0 * one, None)], {0: one})
    >>> least_value(programme, [one]), least_value(programme, [2 * one])
    (Fraction(3, 1), None)
    """
    found = least_by(programme, [to_flint(p) for p in prices], programme.costs)
    return None if found is None else to_fraction(found)


def least_by(programme: ExactProgramme, prices: Sequence[Any], costs: Mapping[int, Any]) -> Any:
    """:func:`least_value` in FLINT's numbers and for other costs."""
    weights = [_ZERO] * programme.columns
    for j, c in costs.items():
        weights[j] = c
    for i, price in enumerate(prices):
        if price:
            for j, a in programme.rows[i].items():
                weights[j] -= price * a
    total = _ZERO
    for k, weight in enumerate((*weights, *prices)):
        if weight:
            bound = programme.low[k] if weight > 0 else programme.high[k]
            if bound is None:
                return None
            total += weight * bound
    return total


def excludes(programme: ExactProgramme, weights: Sequence[Fraction]) -> bool:
    """Whether weights of the rows prove that no fluxes meet all bounds (Farkas).

    Either sign of the weights will do.

    Examples
    --------
    >>> one = Fraction(1)
    >>> programme = make_programme(1, [{0: one}], [(None, -one)], [(0 * one, None)], {})
    >>> excludes(programme, [one]), excludes(programme, [0 * one])
    (True, False)
    """
    own = [to_flint(w) for w in weights]
    for signed in (own, [-w for w in own]):
        least = least_by(programme, signed, {})
        if least is not None and least > 0:
            return True
    return False


def is_endless(programme: ExactProgramme, ray: Sequence[Fraction]) -> bool:
    """Whether a direction lowers the costs and approaches no bound: there is no least value.

    That some fluxes meet the bounds is for another to show (:func:`meets`).
    """
    own = [to_flint(v) for v in ray]
    count = programme.columns
    for k, (low, high) in enumerate(zip(programme.low, programme.high, strict=True)):
        if low is None and high is None:
            continue
        step = own[k] if k < count else programme.value_of(k - count, own)
        if (low is not None and step < 0) or (high is not None and step > 0):
            return False
    gain = _ZERO
    for j, c in programme.costs.items():
        gain += c * own[j]
    return bool(gain < 0)


def at_bounds(
    programme: ExactProgramme, fluxes: Sequence[Fraction]
) -> tuple[tuple[bool, bool], ...]:
    """Whether each flux, then each row, stands at its lower and at its upper bound."""
    own = [to_flint(v) for v in fluxes]
    values = own + [programme.value_of(i, own) for i in range(len(programme.rows))]
    return tuple(
        (low is not None and value == low, high is not None and value == high)
        for value, low, high in zip(values, programme.low, programme.high, strict=True)
    )
