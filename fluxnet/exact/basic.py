"""Solutions x >= 0 of A x = b, exactly: whether there is one, and how large an unknown can be.

Both are small programmes of :mod:`fluxnet.exact.simplex`, begun without any guess. Meant for
the few unknowns that elimination leaves.
"""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

from fluxnet.exact.linear import Row
from fluxnet.exact.programme import make_programme
from fluxnet.exact.simplex import End, ExactSolution, Place, solve_from

__all__ = ["find_nonnegative", "largest"]


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
    found = _solve(rows, rights, columns, {})
    return None if found.end is End.INFEASIBLE else found.fluxes


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
    found = _solve(rows, rights, columns, {unknown: Fraction(-1)})
    if found.end is End.INFEASIBLE:
        raise ValueError("no x >= 0 meets the equations")
    return None if found.end is End.UNBOUNDED else -found.objective


def _solve(
    rows: Sequence[Row], rights: Sequence[Fraction | int], columns: int,
    costs: dict[int, Fraction],
) -> ExactSolution:
    """Pivots end by themselves (Bland), however many they are."""
    programme = make_programme(
        columns,
        [{j: Fraction(v) for j, v in enumerate(row) if v} for row in rows],
        [(Fraction(right), Fraction(right)) for right in rights],
        [(Fraction(0), None)] * columns,
        costs,
    )
    return solve_from(programme, [Place.LOW] * columns + [Place.BASIC] * len(rows), None)
