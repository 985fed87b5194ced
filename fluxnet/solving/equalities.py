"""Which rows of a problem hold with equality, decided exactly.

Beside the balances and the limits with ``=`` these are pairs of bounds that meet (an uptake
that a limit closes), and what then can carry nothing: where every term of a row pushes one
way and the row may not go there, each of them is zero.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from math import inf, isfinite

from fluxnet.exact.sparse import SparseRow, null_space
from fluxnet.ground.record import record
from fluxnet.solving.build import Built
from fluxnet.solving.forms import as_fraction, exact_numbers, exact_row, exact_species, form_of_row
from fluxnet.solving.problem import RowKind

__all__ = ["Equality", "ExactRows", "find_equalities"]

_TOLERANCE = 1e-9


@record
class Equality:
    """A row that equals a value.

    ``place`` counts the problem's rows first, then its columns (a flux that is fixed).
    """

    place: int
    value: float
    name: str
    is_measured: bool = False


@record
class ExactRows:
    """A problem's rows in exact numbers, and those of them that hold with equality.

    ``rows`` has one a problem row, then one a column. ``soft`` are the places of measured
    rows with an sd. ``contradictions`` names rows that cannot hold together, as far as pairs
    of bounds and combinations of equalities show it.
    """

    rows: tuple[SparseRow, ...]
    columns: int
    equalities: tuple[Equality, ...]
    soft: tuple[int, ...]
    contradictions: tuple[tuple[str, ...], ...]

    def equal_rows(self, *, measured: bool = True) -> list[SparseRow]:
        """The rows of the equalities, with or without exact measured ones."""
        return [self.rows[e.place] for e in self.equalities if measured or not e.is_measured]


@dataclass(slots=True, eq=False, repr=False)
class _Group:
    """All bounds on one functional, up to its factor."""

    place: int
    lead: Fraction
    low: Fraction | None
    high: Fraction | None
    low_name: str
    high_name: str


def find_equalities(built: Built) -> ExactRows:
    """The exact rows of a problem, and which hold with equality."""
    problem = built.problem
    numbers = exact_numbers(built)
    species = exact_species(built.stoichiometry, numbers)
    rows: list[SparseRow] = [
        exact_row(built, form_of_row(built, row), species, numbers) for row in problem.rows
    ]
    rows += [{j: Fraction(1)} for j in range(len(problem.columns))]
    names = [row.name for row in problem.rows] + list(problem.columns)
    soft = set(built.measured)
    lows = [*problem.row_low.tolist(), *problem.column_low.tolist()]
    highs = [*problem.row_high.tolist(), *problem.column_high.tolist()]
    found: list[Equality] = []
    contradictions: list[tuple[str, ...]] = []
    groups: dict[tuple[tuple[int, Fraction], ...], _Group] = {}
    for place, row in enumerate(rows):
        if place in soft:
            continue
        if place < len(problem.rows) and problem.rows[place].kind in _MEASURED:
            found.append(Equality(place, lows[place], names[place], is_measured=True))
        elif not row:
            if lows[place] > 0 or highs[place] < 0:
                contradictions.append((names[place],))
        elif lows[place] > -inf or highs[place] < inf:
            _join(groups, row, place, lows[place], highs[place], names[place])
    zeros = _spread_zeros(rows, groups)
    for group in groups.values():
        if group.low is None or group.high is None:
            continue
        if group.low > group.high:
            contradictions.append((group.low_name, group.high_name))
        elif group.low == group.high:
            value = float(group.low * group.lead)
            found.append(Equality(group.place, value, names[group.place]))
    fixed = {e.place - len(problem.rows) for e in found if e.place >= len(problem.rows)}
    found += [
        Equality(len(problem.rows) + j, 0.0, problem.columns[j]) for j in sorted(zeros - fixed)
    ]
    contradictions += _unequal(rows, found)
    return ExactRows(
        tuple(rows), len(problem.columns), tuple(found), built.measured, tuple(contradictions)
    )


_MEASURED = (RowKind.MEASUREMENT, RowKind.MEASURED_LIMIT)


def _join(
    groups: dict[tuple[tuple[int, Fraction], ...], _Group],
    row: SparseRow,
    place: int,
    low: float,
    high: float,
    name: str,
) -> None:
    """Put the bounds of a row to those on the same functional."""
    pairs = sorted(row.items())
    lead = pairs[0][1]
    key = tuple((j, value / lead) for j, value in pairs)
    down = as_fraction(low) / lead if isfinite(low) else None
    up = as_fraction(high) / lead if isfinite(high) else None
    if lead < 0:
        down, up = up, down
    group = groups.setdefault(key, _Group(place, lead, None, None, "", ""))
    if down is not None and (group.low is None or down > group.low):
        group.low, group.low_name = down, name
    if up is not None and (group.high is None or up < group.high):
        group.high, group.high_name = up, name


def _spread_zeros(
    rows: list[SparseRow], groups: dict[tuple[tuple[int, Fraction], ...], _Group]
) -> set[int]:
    """The fluxes that directions and zero bounds hold at zero."""
    sides: dict[int, tuple[bool, bool]] = {}
    for key, group in groups.items():
        if len(key) == 1:
            at_least = group.low is not None and group.low >= 0
            sides[key[0][0]] = (at_least, group.high is not None and group.high <= 0)
    zeros = {j for j, (up, down) in sides.items() if up and down}
    watched = [
        (key, group.low is not None and group.low >= 0, group.high is not None and group.high <= 0)
        for key, group in groups.items()
    ]
    changed = True
    while changed:
        changed = False
        for key, not_below, not_above in watched:
            left = [(j, c) for j, c in key if j not in zeros]
            if not left:
                continue
            rising = all(sides.get(j, (False, False))[0 if c > 0 else 1] for j, c in left)
            falling = all(sides.get(j, (False, False))[1 if c > 0 else 0] for j, c in left)
            if (rising and not_above) or (falling and not_below):
                zeros.update(j for j, _ in left)
                changed = True
    return zeros


def _unequal(rows: list[SparseRow], equalities: list[Equality]) -> list[tuple[str, ...]]:
    """Combinations of equalities that vanish on the left and not on the right."""
    if not any(e.value for e in equalities):
        return []
    turned: dict[int, dict[int, Fraction]] = {}
    for i, equality in enumerate(equalities):
        for j, value in rows[equality.place].items():
            turned.setdefault(j, {})[i] = value
    combinations = null_space(list(turned.values()), len(equalities))
    found: list[tuple[str, ...]] = []
    for k in range(combinations.dimension):
        weights = {i: float(row[k]) for i, row in enumerate(combinations.rows) if k in row}
        terms = [w * equalities[i].value for i, w in weights.items()]
        if abs(sum(terms)) > _TOLERANCE * sum(abs(t) for t in terms):
            found.append(tuple(equalities[i].name for i in weights if equalities[i].value))
    return found
