"""What balances can test and fix: decided exactly, from the formulas as written.

Balances are rows A over the exchanged species, split into measured (m) and unmeasured (u)
ones: A_m y + A_u x = 0. Rows that see no unmeasured species are the redundancy R y = 0: their
space is that of E_m - E_u E_u^+ E_m (van der Heijden et al. 1994; from memory), but found as
the left kernel of A_u in rational numbers, so that no tolerance decides a rank.
"""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

from fluxnet.exact.linear import echelon, kernel, solve
from fluxnet.ground.record import record

__all__ = ["Redundancy", "find_redundancy"]

Rows = tuple[tuple[Fraction, ...], ...]


@record
class Redundancy:
    """What a set of balances says of measured and unmeasured values.

    ``rows`` are the independent relations R y = 0 that a value with an error takes part in,
    over all measured values; their number is the degrees of freedom. ``contradictions`` are
    relations among exact values alone: they hold or the input contradicts itself (none of
    them can be made with fewer values).
    ``balanceable`` tells for each measured value whether any relation tests it.
    ``weights`` gives for each unmeasured value the w of x = w y, None where nothing fixes it.
    """

    rows: Rows
    contradictions: Rows
    balanceable: tuple[bool, ...]
    weights: tuple[tuple[Fraction, ...] | None, ...]

    @property
    def dof(self) -> int:
        """The degrees of freedom of the test."""
        return len(self.rows)


def find_redundancy(
    measured: Sequence[Sequence[Fraction]],
    unmeasured: Sequence[Sequence[Fraction]],
    exact: Sequence[bool],
) -> Redundancy:
    """Reduce balances to what they test and fix.

    Parameters
    ----------
    measured, unmeasured
        A_m and A_u: one row a balance, one entry a measured (unmeasured) value.
    exact
        For each measured value whether it has no error.

    Examples
    --------
    Glucose to two ethanol and two CO2, by carbon and electrons, all measured:

    >>> rows = [[-6, 2, 1], [-24, 12, 0]]
    >>> fractions = [[Fraction(x) for x in row] for row in rows]
    >>> find_redundancy(fractions, [[], []], [False] * 3).dof
    2
    >>> find_redundancy(fractions, [[], []], [True, False, False]).dof
    2
    """
    width = len(exact)
    unseen = kernel(_turned(unmeasured), len(measured)) if measured else ()
    relations = [_combine(weights, measured, width) for weights in unseen]
    # Values with an error first: a row of the echelon form that begins behind them holds exact
    # values alone, and no relation made of such rows holds fewer of them.
    order = sorted(range(width), key=lambda j: exact[j])
    found = echelon([[row[j] for j in order] for row in relations], width)
    place = {j: k for k, j in enumerate(order)}
    rows = [tuple(row[place[j]] for j in range(width)) for row in found.rows]
    tested = sum(pivot < width - sum(exact) for pivot in found.pivots)
    return Redundancy(
        rows=tuple(rows[:tested]),
        contradictions=tuple(rows[tested:]),
        balanceable=tuple(any(row[j] for row in relations) for j in range(width)),
        weights=_weights(measured, unmeasured, width),
    )


def _weights(
    measured: Sequence[Sequence[Fraction]],
    unmeasured: Sequence[Sequence[Fraction]],
    width: int,
) -> tuple[tuple[Fraction, ...] | None, ...]:
    """For each unmeasured value the combination of measured ones that it is."""
    count = len(unmeasured[0]) if unmeasured else 0
    found: list[tuple[Fraction, ...] | None] = []
    turned = _turned(unmeasured)
    for j in range(count):
        unit = [Fraction(int(i == j)) for i in range(count)]
        combination = solve(turned, unit, len(unmeasured))
        if combination is None:
            found.append(None)
        else:
            found.append(tuple(-x for x in _combine(combination, measured, width)))
    return tuple(found)


def _turned(rows: Sequence[Sequence[Fraction]]) -> list[list[Fraction]]:
    return [list(column) for column in zip(*rows, strict=True)]


def _combine(
    weights: Sequence[Fraction], rows: Sequence[Sequence[Fraction]], width: int
) -> tuple[Fraction, ...]:
    return tuple(
        sum((w * row[j] for w, row in zip(weights, rows, strict=True) if w), Fraction(0))
        for j in range(width)
    )
