"""Which of several curves is the best where: their envelope, in exact numbers."""

from __future__ import annotations

from bisect import bisect_right
from collections.abc import Iterator, Sequence
from fractions import Fraction
from itertools import pairwise

from fluxnet.ground.record import record
from fluxnet.solving.parametric import Extreme
from fluxnet.solving.words import number_words
from fluxnet.studies.frontier_result import Curve, Stretch

__all__ = ["find_stretches", "tell_stretches"]

_MOST = 8

Point = tuple[Fraction, Fraction]


@record
class _Line:
    """A curve in straight pieces, y counted so that more is better."""

    label: str
    points: tuple[Point, ...]

    def covers(self, low: Fraction, high: Fraction) -> bool:
        """Whether it goes all the way from one x to another."""
        return self.points[0][0] <= low and high <= self.points[-1][0]

    def at(self, x: Fraction) -> tuple[Fraction, Fraction]:
        """The value at x, and the slope just behind."""
        place = bisect_right(self.points, x, key=lambda point: point[0])
        (left, y), (right, end) = self.points[place - 1], self.points[place]
        slope = (end - y) / (right - left)
        return y + slope * (x - left), slope


def find_stretches(curves: Sequence[Curve], extreme: Extreme) -> tuple[Stretch, ...]:
    """The parts of x on which the same curves are the best, from left to right.

    Where two curves cross is reckoned exactly. There are none where fewer than two curves have
    a length, and none where a curve is not straight between its points.

    Examples
    --------
    >>> from fluxnet.studies.frontier_result import CurveStatus, FrontierPoint
    >>> def curve(label, *points):
    ...     told = [FrontierPoint(x, y, None, None, (), str(x), str(y)) for x, y in points]
    ...     return Curve(label, label, CurveStatus.TRACED, tuple(told), "")
    >>> two = [curve("up", (0, 0), (3, 6)), curve("level", (0, 1), (3, 1))]
    >>> [(s.labels, s.low_exact, s.high_exact) for s in find_stretches(two, Extreme.MOST)]
    [(('level',), '0', '1/2'), (('up',), '1/2', '3')]
    """
    traced = [curve for curve in curves if len(curve.points) > 1]
    if len(traced) < 2 or any(curve.drawn for curve in traced):
        return ()
    lines: list[_Line] = []
    for curve in traced:
        points: list[Point] = []
        for p in curve.points:
            if p.x_exact is None or p.y_exact is None:
                return ()
            points.append((Fraction(p.x_exact), -extreme.sign * Fraction(p.y_exact)))
        lines.append(_Line(curve.label, tuple(points)))
    found: list[tuple[Fraction, Fraction, tuple[str, ...], bool]] = []
    for low, high in pairwise(sorted({x for line in lines for x, _ in line.points})):
        there = [line for line in lines if line.covers(low, high)]
        for start, stop, labels in _leaders(there, low, high):
            alone = len(there) == 1
            if found and found[-1][1:] == (start, labels, alone):
                start = found.pop()[0]
            found.append((start, stop, labels, alone))
    return tuple(
        Stretch(float(low), float(high), labels, alone, str(low), str(high))
        for low, high, labels, alone in found
    )


def _leaders(
    lines: Sequence[_Line], low: Fraction, high: Fraction
) -> Iterator[tuple[Fraction, Fraction, tuple[str, ...]]]:
    """The best of lines that are straight from low to high, piece by piece."""
    values = [(*line.at(low), line.label) for line in lines]
    at = low
    while values and at < high:
        y, slope = max((y + slope * (at - low), slope) for y, slope, _ in values)
        labels = tuple(
            label for own, rise, label in values if (own + rise * (at - low), rise) == (y, slope)
        )
        crossings = (
            at + (y - own - rise * (at - low)) / (rise - slope)
            for own, rise, _ in values
            if rise > slope
        )
        stop = min((*crossings, high))
        yield at, stop, labels
        at = stop


def tell_stretches(
    stretches: Sequence[Stretch], x: str, unit: str, *, ties: bool = True
) -> str:
    """Which is the best below and above each crossing, with as few changes as may be.

    ``ties``: whether those are told that are as good somewhere.

    Examples
    --------
    >>> tell_stretches(
    ...     [Stretch(0, 1.1, ("a",), False), Stretch(1.1, 4, ("b",), False),
    ...      Stretch(4, 6, ("a", "b"), False)],
    ...     "oxygen in", "mmol/g/h")
    'Below oxygen in 1.1 mmol/g/h a is best; above it b (as good: a from 4 to 6).'
    """
    if not stretches:
        return ""
    choices: list[tuple[list[Stretch], tuple[str, ...]]] = []
    for stretch in stretches:
        if choices and choices[-1][0][-1].high == stretch.low:
            still = tuple(name for name in choices[-1][1] if name in stretch.labels)
            if still:
                choices[-1] = ([*choices[-1][0], stretch], still)
                continue
        choices.append(([stretch], stretch.labels))
    named = [
        f"{_listed(names)}{' (alike)' if len(names) > 1 else ''}" for _, names in choices
    ]
    tied = [_ties(part, names) if ties else "" for part, names in choices]
    if len(choices) == 1:
        verb = "are" if len(choices[0][1]) > 1 else "is"
        return f"At every {x}, {named[0]} {verb} best{tied[0]}."
    switch = choices[0][0][-1].high
    if len(choices) == 2 and switch == choices[1][0][0].low:
        verb = "are" if len(choices[0][1]) > 1 else "is"
        where = f"Below {x} {_n(switch)} {unit}".rstrip()
        return f"{where} {named[0]} {verb} best{tied[0]}; above it {named[1]}{tied[1]}."
    parts = [
        f"{name} from {_n(part[0].low)} to {_n(part[-1].high)}{tie}"
        for (part, _), name, tie in zip(choices, named, tied, strict=True)
    ]
    more = len(parts) - _MOST
    told = "; ".join([*parts[:_MOST], *([f"and {more} more (--json)"] if more > 0 else [])])
    return f"Best by {x}{f' [{unit}]' if unit else ''}: {told}."


def _ties(part: Sequence[Stretch], names: Sequence[str]) -> str:
    """Who else is as good on a part of it, or that no other goes there."""
    if all(stretch.alone for stretch in part):
        return " (no other goes there)"
    ranges: dict[str, list[tuple[float, float]]] = {}
    for stretch in part:
        for label in stretch.labels:
            if label in names:
                continue
            own = ranges.setdefault(label, [])
            start = own.pop()[0] if own and own[-1][1] == stretch.low else stretch.low
            own.append((start, stretch.high))
    together: dict[str, list[str]] = {}
    for label, own in ranges.items():
        where = " and ".join(f"{_n(a)} to {_n(b)}" for a, b in own)
        together.setdefault(where, []).append(label)
    told = [f"{_listed(labels)} from {where}" for where, labels in together.items()]
    return f" (as good: {'; '.join(told)})" if told else ""


def _listed(names: Sequence[str]) -> str:
    return names[0] if len(names) == 1 else f"{', '.join(names[:-1])} and {names[-1]}"


def _n(value: float) -> str:
    return number_words(float(f"{value:.4g}"))
