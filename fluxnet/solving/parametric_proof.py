"""The break points of a path in exact numbers, proven, and what changes at each of them.

The prices of a piece's basis prove a straight line that y cannot pass, at any x. Two
neighbouring lines cross at the break point; fluxes that meet all bounds there, and reach the
lines, prove the rest, for the best y is concave (the least convex). So the break point is the
quotient of two exact numbers, whatever the floats said. Where a basis of the floats does not
pass, the lines are found anew by exact programmes, at the crossings of those that are known.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from enum import Enum
from fractions import Fraction
from itertools import pairwise
from typing import Any

from numpy.typing import NDArray

from fluxnet.exact.pivoting import Pivoting, Place
from fluxnet.exact.programme import ExactProgramme, to_flint, to_fraction
from fluxnet.exact.simplex import End, solve_from
from fluxnet.exact.sparse import SparseRow
from fluxnet.ground.record import record
from fluxnet.solving.forms import as_fraction
from fluxnet.solving.parametric import Extreme, Path, PathEnd
from fluxnet.solving.parametric_lines import (
    Corner,
    Line,
    Unproven,
    find_corners,
    hold_at,
    prove_line,
    search_lines,
)
from fluxnet.solving.proof import Proof, exact_programme, exact_rows

__all__ = ["Break", "Change", "ChangeKind", "ExactPoint", "Hold", "ProvenPath", "prove_path"]

Vector = NDArray[Any]


class ChangeKind(Enum):
    """Whether, as x grows, a variable leaves a bound (a flux starts) or meets one."""

    LEAVES = "leaves"
    MEETS = "meets"


@record
class Hold:
    """A bound at which a variable stands: that of a flux, or that of a row of the problem."""

    column: int | None
    row: int | None
    bound: float


@record
class Change:
    """What changes at a break point.

    ``certain``: it is so in every solution, for the bound has a price on the side where it
    holds. Else it is so in the solution that was followed.
    """

    kind: ChangeKind
    hold: Hold
    certain: bool = True


@record
class ExactPoint:
    """A break point in exact numbers."""

    x: Fraction
    y: Fraction
    slope_before: Fraction | None
    slope_after: Fraction | None


@record
class Break:
    """A break point: x and the best y there, and dy/dx before and after it (None at an end).

    ``exact`` is None where nothing could be proven. ``fluxes`` are one solution.
    """

    x: float
    y: float
    slope_before: float | None
    slope_after: float | None
    changes: tuple[Change, ...] = ()
    exact: ExactPoint | None = None
    fluxes: tuple[float, ...] = ()


@record
class ProvenPath:
    """All break points, the bounds that hold x at its least and at its most, and the proof."""

    breaks: tuple[Break, ...]
    low_holds: tuple[Hold, ...]
    high_holds: tuple[Hold, ...]
    proof: Proof


def prove_path(
    path: Path,
    rows: Sequence[SparseRow] | None,
    exact_along: SparseRow | None,
    exact_cost: SparseRow | None,
    along: Vector,
    cost: Vector,
    low: float | None = None,
    high: float | None = None,
    *,
    within: float | None = None,
) -> ProvenPath:
    """Prove a path that was followed in floats.

    Parameters
    ----------
    rows, exact_along, exact_cost
        The problem's rows, x and y in exact numbers; else those that the floats stand for.
    within
        The number of sds within which measured values are held.
    """
    own = exact_rows(path.problem)[:-1] if rows is None else tuple(rows)
    step = _row_of(along) if exact_along is None else exact_along
    aim = _row_of(cost) if exact_cost is None else exact_cost
    sign = path.extreme.sign
    costs = {j: sign * c for j, c in aim.items()}
    programme = exact_programme(path.problem, (*own, step), costs, within=within)
    try:
        start, low_holds = _end(programme, step, 1, path.low_places, low)
        stop, high_holds = _end(programme, step, -1, path.high_places, high)
        breaks = _proven(programme, path, to_flint(start), to_flint(stop))
    except Unproven as fault:
        words = f"Not proven: {fault}"
        return ProvenPath(_unproven(path), (), (), Proof(False, 0.0, words))
    words = f"The {len(breaks)} points are proven in exact arithmetic"
    if len(breaks) == 1:
        words = "The point is proven in exact arithmetic"
    return ProvenPath(breaks, low_holds, high_holds, Proof(True, 0.0, words))


def _row_of(row: Vector) -> SparseRow:
    return {j: as_fraction(v) for j, v in enumerate(row.tolist()) if v}


def _unproven(path: Path) -> tuple[Break, ...]:
    slopes: list[float | None] = [None, *(p.slope for p in path.pieces), None]
    if path.end is PathEnd.POINT:
        slopes = [None, None]
    pairs = zip(path.points, pairwise(slopes), strict=True)
    return tuple(Break(x, y, before, after) for (x, y), (before, after) in pairs)


# --- the ends of x -----------------------------------------------------------------------


def _end(
    programme: ExactProgramme, step: SparseRow, sign: int,
    places: tuple[Place, ...] | None, given: float | None,
) -> tuple[Fraction, tuple[Hold, ...]]:  # fmt: skip
    """The least x (sign 1) or the most (-1), and what holds it there."""
    if places is None:
        if given is None:
            raise Unproven("an end of the range is missing")
        return as_fraction(given), ()
    costs = {j: to_flint(sign * a) for j, a in step.items()}
    found = solve_from(replace(programme, costs=costs), places)
    if found.end is not End.OPTIMAL:
        raise Unproven("in exact arithmetic the range has another end")
    worth = (*found.gains, *found.prices)
    holds = [
        _hold(programme, k, programme.low[k] if price > 0 else programme.high[k])
        for k, price in enumerate(worth)
        if price
    ]
    return sign * found.objective, tuple(h for h in holds if h is not None)


def _hold(programme: ExactProgramme, k: int, bound: Any) -> Hold | None:
    """A variable at a bound; None for one that has but one value."""
    if bound is None or (programme.low[k] == programme.high[k] and not bound):
        return None
    count, value = programme.columns, float(to_fraction(bound))
    return Hold(k, None, value) if k < count else Hold(None, k - count, value)


_PLACES = tuple(Place)


def _places(numbers: Sequence[int]) -> tuple[Place, ...]:
    return tuple([_PLACES[k] for k in numbers])


def _proven(
    programme: ExactProgramme, path: Path, start: Any, stop: Any
) -> tuple[Break, ...]:
    if start > stop:
        raise Unproven("in exact arithmetic no fluxes meet everything")
    try:
        if start == stop or path.end is PathEnd.POINT:
            raise Unproven("a single point")
        lines = [
            prove_line(programme, _places(p.first), _places(p.last)) for p in path.pieces
        ]
        corners = find_corners(programme, lines, start, stop)
    except Unproven:
        lines = search_lines(programme, _places(path.pieces[0].first), start, stop)
        corners = find_corners(programme, lines, start, stop)
    return _breaks(programme, path.extreme, lines, corners)


# --- what changes ------------------------------------------------------------------------


def _breaks(
    programme: ExactProgramme, extreme: Extreme, lines: Sequence[Line],
    corners: Sequence[Corner],
) -> tuple[Break, ...]:  # fmt: skip
    sign, count = extreme.sign, programme.columns
    breaks: list[Break] = []
    is_point = len(corners) == 1
    for i, corner in enumerate(corners):
        before = sign * to_fraction(lines[i - 1].slope) if i else None
        after = sign * to_fraction(lines[i].slope) if i < len(lines) and not is_point else None
        changes: tuple[Change, ...] = ()
        if before is not None and after is not None:
            changes = _changes(programme, corner, lines[i - 1].last, lines[i].first)
        x, y = to_fraction(corner.x), sign * to_fraction(corner.y)
        breaks.append(Break(
            float(x), float(y),
            None if before is None else float(before),
            None if after is None else float(after),
            changes, ExactPoint(x, y, before, after),
            tuple(float(to_fraction(v)) for v in corner.values[:count]),
        ))  # fmt: skip
    return tuple(breaks)


def _changes(
    programme: ExactProgramme, corner: Corner, left: Pivoting, right: Pivoting
) -> tuple[Change, ...]:
    """What holds with a price on one side of a break point, and not on the other."""
    sides = []
    for simplex in (left, right):
        simplex.programme = hold_at(programme, corner.x)
        simplex.reprice(programme.costs)
        sides.append((simplex, simplex.steps_of(len(simplex.places) - 1, to_flint(Fraction(1)))))
    found: list[Change] = []
    for kind, (held, _), (loose, rates) in (
        (ChangeKind.LEAVES, sides[0], sides[1]),
        (ChangeKind.MEETS, sides[1], sides[0]),
    ):
        for certain in (True, False):
            some = [
                Change(kind, hold, certain)
                for k in range(len(held.places) - 1)
                if (bound := _bound(programme, held, k, certain)) is not None
                and loose.places[k] is Place.BASIC
                and (corner.values[k] != bound or rates[k])
                and (hold := _hold(programme, k, bound)) is not None
            ]
            found += some
            if some:
                break
    return tuple(found)


def _bound(programme: ExactProgramme, simplex: Pivoting, k: int, certain: bool) -> Any:
    """The bound at which a variable stands: with a price, or else as the basis has it."""
    if certain:
        worth = simplex.worth[k]
        return None if not worth else programme.low[k] if worth > 0 else programme.high[k]
    place = simplex.places[k]
    if place is Place.LOW:
        return programme.low[k]
    return programme.high[k] if place is Place.HIGH else None
