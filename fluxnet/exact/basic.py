"""Solutions x >= 0 of A x = b, exactly, by pivoting from one basis to the next.

The dual simplex without a cost finds one or proves that there is none; the primal one then
moves to where a single unknown is largest. Both take the smallest index among equals, so that
they end (Bland 1977; from memory). Meant for the few unknowns that elimination leaves.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction

from fluxnet.exact.linear import Row, echelon

__all__ = ["find_nonnegative", "largest"]


@dataclass(slots=True, eq=False, repr=False)
class _Basis:
    """A tableau: rows of coefficients with the right side last, and each row's basic column."""

    rows: list[list[Fraction]]
    basic: list[int]
    columns: int

    def pivot(self, place: int, column: int) -> None:
        """Make a column basic in a row."""
        row = self.rows[place]
        factor = row[column]
        row = [v / factor for v in row]
        self.rows[place] = row
        for k, other in enumerate(self.rows):
            if k != place and other[column]:
                share = other[column]
                self.rows[k] = [v - share * w for v, w in zip(other, row, strict=True)]
        self.basic[place] = column

    def solution(self) -> tuple[Fraction, ...]:
        """The basic solution."""
        values = [Fraction(0)] * self.columns
        for row, column in zip(self.rows, self.basic, strict=True):
            values[column] = row[-1]
        return tuple(values)


def _feasible(
    rows: Sequence[Row], rights: Sequence[Fraction | int], columns: int
) -> _Basis | None:
    joined = [[*row, right] for row, right in zip(rows, rights, strict=True)]
    form = echelon(joined, columns + 1)
    if columns in form.pivots:
        return None
    basis = _Basis([list(row) for row in form.rows], list(form.pivots), columns)
    while True:
        below = [k for k, row in enumerate(basis.rows) if row[-1] < 0]
        if not below:
            return basis
        place = min(below, key=lambda k: basis.basic[k])
        row = basis.rows[place]
        entering = next((j for j in range(columns) if row[j] < 0), None)
        if entering is None:
            return None
        basis.pivot(place, entering)


def find_nonnegative(
    rows: Sequence[Row], rights: Sequence[Fraction | int], columns: int
) -> tuple[Fraction, ...] | None:
    """One x >= 0 with A x = b, or None where there is none.

    Examples
    --------
    >>> find_nonnegative([[1, -1]], [2], 2)
    (Fraction(2, 1), Fraction(0, 1))
    >>> find_nonnegative([[1, 1]], [-1], 2) is None
    True
    """
    basis = _feasible(rows, rights, columns)
    return None if basis is None else basis.solution()


def largest(
    rows: Sequence[Row], rights: Sequence[Fraction | int], columns: int, unknown: int
) -> Fraction | None:
    """The largest value of one unknown among all x >= 0 with A x = b; None: no end to it.

    Raises
    ------
    ValueError
        If there is no such x.

    Examples
    --------
    >>> largest([[1, 1]], [3], 2, 0), largest([[1, -1]], [0], 2, 0)
    (Fraction(3, 1), None)
    """
    basis = _feasible(rows, rights, columns)
    if basis is None:
        raise ValueError("no x >= 0 meets the equations")
    while True:
        gains = _gains(basis, unknown)
        entering = next((j for j in range(columns) if gains[j] > 0), None)
        if entering is None:
            return basis.solution()[unknown]
        ratios = [
            (row[-1] / row[entering], basis.basic[k], k)
            for k, row in enumerate(basis.rows)
            if row[entering] > 0
        ]
        if not ratios:
            return None
        basis.pivot(min(ratios)[2], entering)


def _gains(basis: _Basis, unknown: int) -> list[Fraction]:
    """By column: how much the unknown grows when that column's value grows by one."""
    if unknown in basis.basic:
        row = basis.rows[basis.basic.index(unknown)]
        return [Fraction(0) if j in basis.basic else -row[j] for j in range(basis.columns)]
    return [Fraction(int(j == unknown)) for j in range(basis.columns)]
