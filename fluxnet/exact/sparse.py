"""The null space of a sparse matrix over the rationals.

The rows of a reaction list hold a handful of entries, most of them 1 or -1, and eliminating the
shortest row first keeps them so. What fills up in spite of that is handed over to the dense
elimination of :mod:`fluxnet.exact.linear`.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction
from heapq import heapify, heappop, heappush
from math import gcd, lcm

from fluxnet.ground.record import record

__all__ = [
    "NullSpace", "SparseRow", "dependent_forms", "independent_forms", "null_space", "point_near",
    "product",
]

SparseRow = Mapping[int, Fraction]
_Whole = dict[int, int]

# A row longer than this means that the matrix has filled up, and is dense to all purposes.
_LONG = 60


@record
class NullSpace:
    """All x with A x = 0, written in free coordinates t: x_j is the sum of ``rows[j][k] t_k``.

    ``free`` are the columns whose values are the coordinates, in rising order; an empty row
    ``rows[j]`` says that x_j is zero throughout.
    """

    free: tuple[int, ...]
    rows: tuple[SparseRow, ...]

    @property
    def dimension(self) -> int:
        """The number of free coordinates."""
        return len(self.free)

    def image(self, row: SparseRow) -> dict[int, Fraction]:
        """The linear form ``row`` . x as a form in the coordinates; empty where it vanishes."""
        total: dict[int, Fraction] = {}
        for j, a in row.items():
            for k, b in self.rows[j].items():
                term = b if a == 1 else a * b
                before = total.get(k)
                total[k] = term if before is None else before + term
        return {k: v for k, v in total.items() if v}

    def point(self, coordinates: Sequence[Fraction]) -> tuple[Fraction, ...]:
        """The x of given coordinates."""
        return tuple(
            sum((a * coordinates[k] for k, a in row.items()), Fraction(0)) for row in self.rows
        )


def null_space(rows: Sequence[SparseRow], columns: int) -> NullSpace:
    """The null space of a matrix given by its rows as {column: value}.

    Parameters
    ----------
    rows
        Rows without entries for their zeros.
    columns
        The number of columns.

    Examples
    --------
    >>> one = Fraction(1)
    >>> space = null_space([{0: one, 1: -one}, {1: one, 2: -2 * one}], 3)
    >>> space.free, [int(x) for x in space.point([one])]
    ((2,), [2, 2, 1])
    """
    active = {i: whole for i, row in enumerate(rows) if (whole := _whole(row))}
    pivots: list[tuple[int, Mapping[int, int]]] = []
    _eliminate(active, pivots)
    if active:
        pivots.extend(_dense(list(active.values())))
    taken = {column for column, _ in pivots}
    free = tuple(j for j in range(columns) if j not in taken)
    # In whole numbers over one denominator a row: fractions take ten times as long.
    found: list[_Whole] = [{} for _ in range(columns)]
    below = [1] * columns
    for k, j in enumerate(free):
        found[j] = {k: 1}
    for column, row in reversed(pivots):
        common = lcm(*(below[j] for j in row))
        total: _Whole = {}
        for j, a in row.items():
            if j != column:
                factor = a * (common // below[j])
                for k, b in found[j].items():
                    total[k] = total.get(k, 0) + factor * b
        divisor = -row[column] * common
        content = gcd(divisor, *total.values()) * (1 if divisor > 0 else -1)
        found[column] = {k: v // content for k, v in total.items() if v}
        below[column] = divisor // content
    return NullSpace(
        free,
        tuple(
            {k: Fraction(v, under) if under != 1 else Fraction(v) for k, v in form.items()}
            for form, under in zip(found, below, strict=True)
        ),
    )


def point_near(space: NullSpace, guess: Sequence[float]) -> tuple[Fraction, ...]:
    """The exact point of the space whose free coordinates are those of a floating-point one.

    Parameters
    ----------
    guess
        One number a column, nearly in the space.
    """
    return space.point([Fraction(guess[j]) for j in space.free])


def independent_forms(rows: Sequence[SparseRow]) -> tuple[int, ...]:
    """Indices of a largest set of independent rows; earlier rows are preferred.

    Examples
    --------
    >>> one = Fraction(1)
    >>> independent_forms([{0: one}, {0: 2 * one}, {}, {0: one, 3: one}])
    (0, 3)
    """
    held: dict[int, _Whole] = {}
    age: dict[int, int] = {}
    chosen: list[int] = []
    for i, given in enumerate(rows):
        row = _whole(given)
        while row and (columns := held.keys() & row.keys()):
            column = min(columns, key=age.__getitem__)
            row = _combined(row, held[column], column)
        if row:
            column = min(row)
            held[column], age[column] = row, i
            chosen.append(i)
    return tuple(chosen)


def dependent_forms(rows: Sequence[SparseRow]) -> tuple[bool, ...]:
    """Which forms take part in a linear dependency: those that the others fix.

    Examples
    --------
    >>> one = Fraction(1)
    >>> dependent_forms([{0: one}, {1: one}, {0: 2 * one}])
    (True, False, True)
    """
    turned: dict[int, dict[int, Fraction]] = {}
    for i, row in enumerate(rows):
        for k, value in row.items():
            turned.setdefault(k, {})[i] = value
    return tuple(bool(row) for row in null_space(list(turned.values()), len(rows)).rows)


def product(row: SparseRow, point: Sequence[Fraction]) -> Fraction:
    """The value of a linear form at a point."""
    return sum((a * point[j] for j, a in row.items()), Fraction(0))


def _eliminate(active: dict[int, _Whole], pivots: list[tuple[int, Mapping[int, int]]]) -> None:
    """Take shortest rows as pivots and clear their column, until the rest is empty or long."""
    holders: dict[int, set[int]] = {}
    for i, row in active.items():
        for j in row:
            holders.setdefault(j, set()).add(i)
    waiting = [(len(row), i) for i, row in active.items()]
    heapify(waiting)
    while waiting:
        length, i = heappop(waiting)
        if i not in active or len(active[i]) != length:
            continue
        if length > _LONG:
            return
        pivot = active.pop(i)
        column = min(pivot, key=lambda j: (abs(pivot[j]) != 1, len(holders[j]), j))
        for j in pivot:
            holders[j].discard(i)
        for other in sorted(holders[column]):
            _clear(active[other], pivot, column, other, holders)
            if active[other]:
                heappush(waiting, (len(active[other]), other))
            else:
                del active[other]
        pivots.append((column, pivot))


def _clear(
    row: _Whole, pivot: _Whole, column: int, name: int, holders: dict[int, set[int]]
) -> None:
    """Clear the pivot's column from an active row, and keep account of who holds which column."""
    new = _combined(row, pivot, column)
    for j in pivot:
        if j in new:
            holders[j].add(name)
        else:
            holders[j].discard(name)
    row.clear()
    row.update(new)


def _combined(row: _Whole, pivot: _Whole, column: int) -> _Whole:
    """The combination of two rows that vanishes in a column, in smallest whole numbers."""
    shared = gcd(pivot[column], row[column])
    a, b = pivot[column] // shared, row[column] // shared
    new = {j: a * v for j, v in row.items()} if a != 1 else dict(row)
    for j, value in pivot.items():
        total = new.get(j, 0) - b * value
        if total:
            new[j] = total
        else:
            new.pop(j, None)
    content = gcd(*new.values()) if new else 1
    return {j: v // content for j, v in new.items()} if content > 1 else new


def _dense(rows: list[_Whole]) -> list[tuple[int, Mapping[int, int]]]:
    """Pivots of rows that have filled up, each free of the other pivots' columns."""
    from fluxnet.exact.linear import echelon

    columns = sorted({j for row in rows for j in row})
    form = echelon([[row.get(j, 0) for j in columns] for row in rows], len(columns))
    pivots: list[tuple[int, Mapping[int, int]]] = []
    for place, values in zip(form.pivots, form.rows, strict=True):
        row = _whole({columns[k]: v for k, v in enumerate(values) if v})
        pivots.append((columns[place], row))
    return pivots


def _whole(row: SparseRow) -> _Whole:
    """A row times its common denominator, without zeros."""
    factor = lcm(*(v.denominator for v in row.values()))
    return {j: v.numerator * (factor // v.denominator) for j, v in row.items() if v}
