"""Rank, kernel, echelon form and solutions over the rationals.

Yes/no questions of structure are decided here, never by a floating-point tolerance. Rows are
scaled to whole numbers and handed to FLINT, whose row reduction is exact (large matrices are
reduced modulo primes, and the result is verified before it is returned). The only user of
python-flint.
"""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from math import lcm
from typing import Any

from flint import fmpz_mat

from fluxnet.ground.record import record

__all__ = ["Echelon", "echelon", "independent_rows", "kernel", "rank", "solve"]

Row = Sequence[Fraction | int]
_ZERO = Fraction(0)


@record
class Echelon:
    """The reduced row echelon form: its non-zero rows and the column of each row's leading 1."""

    rows: tuple[tuple[Fraction, ...], ...]
    pivots: tuple[int, ...]
    columns: int

    @property
    def rank(self) -> int:
        """The number of independent rows."""
        return len(self.pivots)


def echelon(rows: Sequence[Row], columns: int) -> Echelon:
    """Reduced row echelon form of a matrix given by its rows.

    Parameters
    ----------
    rows
        Rows of rational numbers, each of length ``columns``.
    columns
        The number of columns (so that a matrix without rows has one).

    Examples
    --------
    >>> echelon([[2, 4, 2], [1, 2, 3]], 3).pivots
    (0, 2)
    """
    if not rows or not columns:
        return Echelon((), (), columns)
    reduced, denominator, found = fmpz_mat(_whole(rows)).rref()
    divisor = int(denominator)
    table: list[list[Any]] = reduced.tolist()
    out: list[tuple[Fraction, ...]] = []
    pivots: list[int] = []
    for line in table[:found]:
        values = [int(v) for v in line]
        pivots.append(next(j for j, v in enumerate(values) if v))
        out.append(tuple(Fraction(v, divisor) if v else _ZERO for v in values))
    return Echelon(tuple(out), tuple(pivots), columns)


def rank(rows: Sequence[Row], columns: int) -> int:
    """The number of independent rows.

    Examples
    --------
    >>> rank([[1, 2], [2, 4]], 2)
    1
    """
    if not rows or not columns:
        return 0
    return int(fmpz_mat(_whole(rows)).rank())


def kernel(rows: Sequence[Row], columns: int) -> tuple[tuple[Fraction, ...], ...]:
    """A basis of all x with A x = 0: one vector per free column, with 1 there.

    Examples
    --------
    >>> [[int(x) for x in v] for v in kernel([[1, -1, 0], [0, 1, -1]], 3)]
    [[1, 1, 1]]
    """
    form = echelon(rows, columns)
    taken = set(form.pivots)
    basis: list[tuple[Fraction, ...]] = []
    for free in (j for j in range(columns) if j not in taken):
        vector = [_ZERO] * columns
        vector[free] = Fraction(1)
        for pivot, row in zip(form.pivots, form.rows, strict=True):
            vector[pivot] = -row[free]
        basis.append(tuple(vector))
    return tuple(basis)


def solve(
    rows: Sequence[Row], right: Sequence[Fraction | int], columns: int
) -> tuple[Fraction, ...] | None:
    """One x with A x = b (free unknowns are zero), or None where there is none.

    Examples
    --------
    >>> solve([[2, 0], [0, 4]], [1, 1], 2)
    (Fraction(1, 2), Fraction(1, 4))
    """
    form = echelon([[*row, b] for row, b in zip(rows, right, strict=True)], columns + 1)
    if columns in form.pivots:
        return None
    solution = [_ZERO] * columns
    for pivot, row in zip(form.pivots, form.rows, strict=True):
        solution[pivot] = row[columns]
    return tuple(solution)


def independent_rows(rows: Sequence[Row], columns: int) -> tuple[int, ...]:
    """Indices of the first largest set of independent rows: earlier rows are preferred.

    Examples
    --------
    >>> independent_rows([[1, 1], [2, 2], [0, 1]], 2)
    (0, 2)
    """
    if not rows or not columns:
        return ()
    turned = [[row[j] for row in rows] for j in range(columns)]
    return echelon(turned, len(rows)).pivots


def _whole(rows: Sequence[Row]) -> list[list[int]]:
    """Each row times its common denominator."""
    scaled: list[list[int]] = []
    for row in rows:
        factor = lcm(*(v.denominator for v in row))
        scaled.append([v.numerator * (factor // v.denominator) for v in row])
    return scaled
