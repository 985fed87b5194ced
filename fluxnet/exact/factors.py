"""A square sparse matrix over the rationals, split so that both A x = b and A' y = c are solved.

The columns and rows of a reaction network hold a handful of entries, and most of them can be
taken as pivots without any elimination; short rows first keeps the rest sparse.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from heapq import heapify, heappop, heappush
from typing import Any

from flint import fmpq

from fluxnet.ground.record import record

__all__ = ["Factors", "Numbers", "factorise", "solve_turned"]

Numbers = Mapping[int, Any]
"""{place: fmpq}, zeros left out."""

_ZERO = fmpq(0)


@dataclass(slots=True, eq=False, repr=False)
class _Step:
    """A pivot, the rest of its row, and what was taken of its row from others."""

    row: int
    column: int
    pivot: Any
    rest: dict[int, Any]
    shares: list[tuple[int, Any]]


@record
class Factors:
    """The pivots in their order; ``rows`` and ``columns`` are those for which none was left."""

    steps: tuple[_Step, ...]
    rows: tuple[int, ...]
    columns: tuple[int, ...]

    @property
    def is_regular(self) -> bool:
        """Whether every row and column has a pivot."""
        return not self.rows and not self.columns

    def solve(self, right: Numbers) -> dict[int, Any]:
        """The x of A x = b, by column, b given by row; zeros left out."""
        left = dict(right)
        for step in self.steps:
            value = left.get(step.row)
            if value:
                for other, share in step.shares:
                    left[other] = left.get(other, _ZERO) - share * value
        found: dict[int, Any] = {}
        for step in reversed(self.steps):
            value = left.get(step.row, _ZERO)
            for column, entry in step.rest.items():
                other_value = found.get(column)
                if other_value is not None:
                    value -= entry * other_value
            if value:
                found[step.column] = value / step.pivot
        return found

    def solve_turned(self, right: Numbers) -> dict[int, Any]:
        """The y of A' y = c, by row, c given by column; zeros left out."""
        left = dict(right)
        found: dict[int, Any] = {}
        for step in self.steps:
            value = left.get(step.column)
            if value:
                value /= step.pivot
                found[step.row] = value
                for column, entry in step.rest.items():
                    left[column] = left.get(column, _ZERO) - entry * value
        for step in reversed(self.steps):
            total = found.get(step.row, _ZERO)
            for other, share in step.shares:
                other_value = found.get(other)
                if other_value is not None:
                    total -= share * other_value
            if total:
                found[step.row] = total
            else:
                found.pop(step.row, None)
        return found


def factorise(rows: Sequence[tuple[int, Numbers]], columns: Iterable[int]) -> Factors:
    """Split a square matrix given by its named rows.

    Parameters
    ----------
    rows
        The name of each row with its entries; entries in other columns are passed over.
    columns
        The columns that belong to the matrix.

    Examples
    --------
    >>> one, two = fmpq(1), fmpq(2)
    >>> factors = factorise([(7, {0: one, 1: one}), (8, {1: two})], (0, 1))
    >>> factors.solve({7: fmpq(3), 8: two}), factors.solve_turned({0: one})
    ({1: 1, 0: 2}, {7: 1, 8: -1/2})
    """
    inside = set(columns)
    active = {i: {j: v for j, v in row.items() if j in inside} for i, row in rows}
    holders: dict[int, set[int]] = {j: set() for j in inside}
    for i, row in active.items():
        for j in row:
            holders[j].add(i)
    steps: list[_Step] = []
    lonely = [j for j, names in holders.items() if len(names) == 1]
    waiting = [(len(row), i) for i, row in active.items()]
    heapify(waiting)
    while lonely or waiting:
        if lonely:
            column = lonely.pop()
            if column not in holders or len(holders[column]) != 1:
                continue
            (i,) = holders[column]
        else:
            length, i = heappop(waiting)
            if i not in active or len(active[i]) != length or not length:
                continue
            held = active[i]
            column = min(held, key=lambda j: (len(holders[j]), j))
        row = active.pop(i)
        pivot = row.pop(column)
        others = holders.pop(column)
        others.discard(i)
        for j in row:
            names = holders[j]
            names.discard(i)
            if len(names) == 1:
                lonely.append(j)
        shares = [(o, _clear(active[o], row, column, pivot, o, holders)) for o in sorted(others)]
        for o in others:
            heappush(waiting, (len(active[o]), o))
        steps.append(_Step(i, column, pivot, row, shares))
    return Factors(tuple(steps), tuple(sorted(active)), tuple(sorted(holders)))


def _clear(
    row: dict[int, Any], rest: Numbers, column: int, pivot: Any, name: int,
    holders: dict[int, set[int]],
) -> Any:
    """Clear a pivot's column from a row; the share of the pivot's row that was taken off."""
    share = row.pop(column) / pivot
    for j, value in rest.items():
        before = row.get(j)
        after = -share * value if before is None else before - share * value
        if after:
            row[j] = after
            if before is None:
                holders[j].add(name)
        elif before is not None:
            del row[j]
            holders[j].discard(name)
    return share


def solve_turned(
    rows: Sequence[Mapping[int, Fraction]], right: Mapping[int, Fraction]
) -> tuple[Fraction, ...] | None:
    """The y of A' y = c, one a row of a square sparse matrix; None where it is singular.

    Examples
    --------
    >>> solve_turned([{0: Fraction(1), 4: Fraction(1)}, {4: Fraction(2)}], {0: Fraction(1)})
    (Fraction(1, 1), Fraction(-1, 2))
    >>> solve_turned([{0: Fraction(1)}, {0: Fraction(2)}], {})
    """
    own = [(i, {j: fmpq(v.numerator, v.denominator) for j, v in row.items()})
           for i, row in enumerate(rows)]  # fmt: skip
    columns = {j for _, row in own for j in row}
    factors = factorise(own, columns)
    if not factors.is_regular:
        return None
    given = {j: fmpq(v.numerator, v.denominator) for j, v in right.items() if v}
    found = factors.solve_turned(given)
    return tuple(
        Fraction(int(v.p), int(v.q)) for v in (found.get(i, _ZERO) for i in range(len(own)))
    )
