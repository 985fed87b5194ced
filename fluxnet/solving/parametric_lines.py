"""Proven lines under which a path lies, where they cross, and what reaches them: exactly.

The prices of a basis that is the best anywhere prove a line y = height + slope x that no y
passes, at any x. Where neighbouring lines cross, fluxes that meet all bounds and reach the
lines prove that the path is these lines' pieces, for it is convex (as a cost).
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from fractions import Fraction
from itertools import pairwise
from typing import Any

from fluxnet.exact.pivoting import Pivoting, Place
from fluxnet.exact.programme import ExactProgramme, least_by, to_flint, worst_break
from fluxnet.exact.simplex import End, solve_from
from fluxnet.ground.record import record

__all__ = [
    "Corner", "Line", "Unproven", "find_corners", "hold_at", "prove_line", "search_lines",
]  # fmt: skip


class Unproven(Exception):  # noqa: N818
    """Something is not as the floats said."""


@record
class Line:
    """A proven line y = height + slope x (as a cost), with the basis that proves it."""

    slope: Any
    height: Any
    first: Pivoting
    last: Pivoting

    def at(self, x: Any) -> Any:
        """Its y at x."""
        return self.height + self.slope * x


@record
class Corner:
    """A point of the path: every variable's value there."""

    x: Any
    y: Any
    values: tuple[Any, ...]


def hold_at(programme: ExactProgramme, x: Any) -> ExactProgramme:
    """The programme with the moved row held at x."""
    return replace(programme, low=(*programme.low[:-1], x), high=(*programme.high[:-1], x))


def prove_line(programme: ExactProgramme, first: Sequence[Place], last: Sequence[Place]) -> Line:
    """The line that the prices of a basis prove."""
    zero = hold_at(programme, to_flint(Fraction(0)))
    simplex = Pivoting(zero, first)
    if tuple(simplex.places) != tuple(first) or simplex.places[-1] is Place.BASIC:
        raise Unproven("a basis is none in exact arithmetic")
    simplex.reprice(programme.costs)
    height = least_by(zero, simplex.prices, programme.costs)
    if height is None:
        raise Unproven("a price has the wrong sign in exact arithmetic")
    other = simplex
    if tuple(last) != tuple(first):
        other = Pivoting(zero, last)
        other.reprice(programme.costs)
    return Line(simplex.prices[-1], height, simplex, other)


def find_corners(
    programme: ExactProgramme, lines: Sequence[Line], start: Any, stop: Any
) -> tuple[Corner, ...]:
    """Where neighbouring lines cross, each with fluxes that reach the lines."""
    places = [start]
    for left, right in pairwise(lines):
        if left.slope == right.slope:
            raise Unproven("two pieces have one slope")
        places.append((right.height - left.height) / (left.slope - right.slope))
    if stop != start:
        places.append(stop)
    if any(a >= b for a, b in pairwise(places)):
        raise Unproven("the break points are out of order")
    corners: list[Corner] = []
    for i, x in enumerate(places):
        sides = ([lines[i].first] if i < len(lines) else []) + ([lines[i - 1].last] if i else [])
        corners.append(_corner(programme, sides, x, lines[min(i, len(lines) - 1)].at(x)))
    return tuple(corners)


def _corner(programme: ExactProgramme, sides: Sequence[Pivoting], x: Any, y: Any) -> Corner:
    held = hold_at(programme, x)
    for simplex in sides:
        simplex.programme = held
        simplex.refresh(programme.costs)
        values = simplex.values
        total = to_flint(Fraction(0))
        for j, c in programme.costs.items():
            total += c * values[j]
        if total == y and not worst_break(held, values[: programme.columns]):
            return Corner(x, y, tuple(values))
    raise Unproven("no fluxes reach a break point in exact arithmetic")


def search_lines(
    programme: ExactProgramme, places: Sequence[Place], start: Any, stop: Any
) -> list[Line]:
    """The lines by exact programmes alone: what two lines hide lies below their crossing."""

    def line_at(x: Any, begin: Sequence[Place]) -> tuple[Line, Any]:
        held = hold_at(programme, x)
        found = solve_from(held, begin, None)
        if found.end is not End.OPTIMAL:
            raise Unproven("in exact arithmetic there is no best value")
        simplex = Pivoting(held, found.places)
        simplex.refresh(programme.costs)
        zero = hold_at(programme, to_flint(Fraction(0)))
        height = least_by(zero, simplex.prices, programme.costs)
        if height is None:
            raise Unproven("a price has the wrong sign in exact arithmetic")
        return Line(simplex.prices[-1], height, simplex, simplex), to_flint(found.objective)

    first, _ = line_at(start, places)
    if start == stop:
        return [first]
    lines, waiting = [first], [line_at(stop, first.first.places)[0]]
    while waiting:
        left, right = lines[-1], waiting[-1]
        if left.slope == right.slope:
            waiting.pop()
            continue
        x = (right.height - left.height) / (left.slope - right.slope)
        if x <= start:
            lines[-1] = waiting.pop()
            continue
        if x >= stop:
            waiting.pop()
            continue
        between, y = line_at(x, left.last.places)
        if y == left.at(x):
            lines.append(waiting.pop())
        else:
            waiting.append(between)
    return _settled(programme, lines, start, stop)


def _settled(
    programme: ExactProgramme, lines: Sequence[Line], start: Any, stop: Any
) -> list[Line]:
    """The lines with a basis that is the best in the middle of each piece, and at its ends."""
    crossings = [
        (right.height - left.height) / (left.slope - right.slope)
        for left, right in pairwise(lines)
    ]
    edges = [start, *crossings, stop]
    found: list[Line] = []
    for line, (low, high) in zip(lines, pairwise(edges), strict=True):
        ends: list[Pivoting] = []
        for x in (low, high):
            # A step inside, small enough that the basis there is still the best at the end.
            step, places = (high - low) / 2, tuple(line.first.places)
            for _ in range(60):
                inside = x + step if x == low else x - step
                own = solve_from(hold_at(programme, inside), places, None)
                simplex = Pivoting(hold_at(programme, x), own.places)
                simplex.refresh(programme.costs)
                if simplex.first_outside() is None:
                    break
                step, places = step / 16, own.places
            ends.append(simplex)
        found.append(Line(line.slope, line.height, ends[0], ends[1]))
    return found
