"""What a trade-off costs, and what changes at its break points, in words."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise

from fluxnet.network.model import Direction
from fluxnet.solving.parametric import Extreme
from fluxnet.solving.parametric_proof import Break, Change, ChangeKind, Hold
from fluxnet.solving.problem import Problem, RowKind
from fluxnet.solving.words import number_words, quantity_words
from fluxnet.studies.frontier_result import Curve, CurveStatus, FrontierPoint

__all__ = ["ROOM", "change_words", "hold_words", "tell_curve", "tell_curves"]

ROOM = "room"
"""The column of what is left up to a moved limit."""

_MEASURED = (RowKind.MEASURED_LIMIT, RowKind.MEASUREMENT)
_LIMITS = (RowKind.LIMIT, *_MEASURED)


def change_words(changes: Sequence[Change], problem: Problem) -> tuple[str, ...]:
    """What leaves its bound and what meets one, each once; limits first.

    What is not so in every solution is marked.
    """
    limits: list[str] = []
    others: list[str] = []
    for change in changes:
        text = _one_change(change.kind is ChangeKind.LEAVES, change.hold, problem)
        text += "" if change.certain else " (in one solution)"
        row = change.hold.row
        is_limit = row is not None and problem.rows[row].kind in _LIMITS
        (limits if is_limit else others).append(text)
    return tuple(dict.fromkeys((*limits, *others)))


def _one_change(leaves: bool, hold: Hold, problem: Problem) -> str:
    if hold.column is not None:
        name = problem.columns[hold.column]
        if name == ROOM:
            return "the moved limit no longer binds" if leaves else "the moved limit starts to bind"
        if not hold.bound:
            return f"{name} {'starts' if leaves else 'stops'}"
        return f"{name} {'leaves' if leaves else 'reaches'} {number_words(hold.bound)}"
    assert hold.row is not None
    row = problem.rows[hold.row]
    if row.kind in _MEASURED and row.quantity is not None:
        # held within some sds: which of the two ends it is has to be said
        name = quantity_words(row.quantity)
        return f"{name} {'leaves' if leaves else 'reaches'} {number_words(hold.bound)}"
    if row.kind in _LIMITS:
        return f"{row.name} {'no longer binds' if leaves else 'starts to bind'}"
    what = f"surplus of {row.name}"
    if row.kind is RowKind.ROLE and row.quantity is not None:
        is_in = row.quantity.direction is Direction.IN
        what = f"{row.name} {'uptake' if is_in else 'release'}"
    return f"{what} {'starts' if leaves else 'stops'}"


def hold_words(holds: Sequence[Hold], problem: Problem) -> str:
    """The limits among what holds an end of x."""
    rows = [(problem.rows[h.row], h.bound) for h in holds if h.row is not None]
    names = [
        f"{quantity_words(row.quantity)} {number_words(bound)}"
        if row.kind in _MEASURED and row.quantity is not None
        else row.name
        for row, bound in rows
        if row.kind in _LIMITS
    ]
    return ", ".join(dict.fromkeys(names))


def tell_curve(
    breaks: Sequence[Break], x: str, y: str, y_unit: str, slope_unit: str, extreme: Extreme
) -> str:
    """How the best y goes with x, run by run: rising, level, falling.

    Examples
    --------
    >>> points = [Break(0.0, 4.0, None, 6.0), Break(2.0, 16.0, 6.0, 5.5), Break(6.0, 38.0, 5.5, None)]
    >>> tell_curve(points, "oxygen in", "ATP surplus", "mmol", "mmol ATP per mmol", Extreme.MOST)
    'The most ATP surplus rises from 4 mmol at oxygen in 0 to 38 at 6 (6 mmol ATP per mmol at first, 5.5 at the end).'
    """  # noqa: E501
    first = breaks[0]
    head = f"The {extreme.value} {y}"
    if len(breaks) == 1:
        return (
            f"A single point: {x} can only be {_n(first.x)}, and there the {extreme.value} {y} is "
            f"{_n(first.y)} {y_unit}".rstrip() + "."
        )
    parts: list[str] = []
    is_told = False
    for k, (start, stop, slopes) in enumerate(_runs(breaks)):
        origin = f" from {_n(start.y)} {y_unit}".rstrip() + f" at {x} {_n(start.x)}"
        if not _way(start, stop):
            level = f"stays at {_n(start.y)} {y_unit}".rstrip() + f" from {x} {_n(start.x)}"
            parts.append(f"{'stays there' if k else level} to {_n(stop.x)}")
            continue
        verb = "rises" if stop.y > start.y else "falls"
        steep = f"{_n(slopes[0])} {slope_unit if not is_told else ''}".rstrip()
        is_told = True
        if _n(slopes[0]) != _n(slopes[-1]):
            steep += f" at first, {_n(slopes[-1])} at the end"
        end = f" to {_n(stop.y)} at {_n(stop.x)} ({steep})"
        parts.append(f"{verb}{'' if k else origin}{end}")
    told = parts[0] if len(parts) == 1 else f"{', '.join(parts[:-1])} and {parts[-1]}"
    return f"{head} {told}."


def _runs(breaks: Sequence[Break]) -> list[tuple[Break, Break, list[float]]]:
    """Neighbouring pieces that rise, stay level or fall together."""
    runs: list[tuple[Break, Break, list[float]]] = []
    for start, stop in pairwise(breaks):
        # Between points of a curve that is not straight the slopes at its two ends differ.
        slopes = [start.slope_after or 0.0, stop.slope_before or 0.0]
        if runs and _way(runs[-1][0], runs[-1][1]) == _way(start, stop):
            runs[-1] = (runs[-1][0], stop, [*runs[-1][2], *slopes])
        else:
            runs.append((start, stop, slopes))
    return runs


def _way(start: Break, stop: Break) -> int:
    """1 where y rises, -1 where it falls, 0 where it stays but for rounding."""
    change = stop.y - start.y
    return 0 if abs(change) <= 1e-9 * max(1.0, abs(start.y)) else _sign(change)


def _sign(value: float) -> int:
    return (value > 0) - (value < 0)


def _n(value: float) -> str:
    """Four digits, without a trace of rounding."""
    return number_words(float(f"{value:.4g}")) if abs(value) > 1e-12 else "0"


def tell_curves(
    curves: Sequence[Curve], x: str, y: str, extreme: Extreme, common: str = ""
) -> str:
    """Which of several curves reaches farthest, in y and in x.

    ``common`` are the variants that all of them have.
    """
    found = [c for c in curves if c.points]
    if not found:
        return f"There is no curve of {y} over {x}: {curves[0].words}"
    head = f"With {common}: " if common else ""
    if len(curves) == 1:
        words = found[0].words
        return f"{head}{words[:1].lower()}{words[1:]}" if head else words
    is_most = extreme is Extreme.MOST

    def end_of(curve: Curve) -> FrontierPoint:
        return (max if is_most else min)(curve.points, key=lambda p: p.y)

    ranked = sorted(found, key=lambda c: end_of(c).y, reverse=is_most)
    first = end_of(ranked[0])
    alike = [c.label for c in ranked if abs(end_of(c).y - first.y) <= 1e-9 * max(1, abs(first.y))]
    words = f"The {extreme.value} {y} of all, {_n(first.y)} at {x} {_n(first.x)}, is that of "
    words += _listed(alike)
    farthest = max(c.points[-1].x for c in found)
    reach = [c.label for c in found if abs(c.points[-1].x - farthest) <= 1e-9 * max(1, farthest)]
    if len(reach) < len(found):
        words += f"; {x} goes farthest, to {_n(farthest)}, in {_listed(reach)}"
    words += "."
    if head:
        words = f"{head}{words[:1].lower()}{words[1:]}"
    none = [c.label for c in curves if c.status not in (CurveStatus.TRACED, CurveStatus.POINT)]
    return words + (f" No curve: {_listed(none)}." if none else "")


def _listed(words: Sequence[str]) -> str:
    if len(words) > 3:
        words = (*words[:2], f"{len(words) - 2} more")
    return words[0] if len(words) == 1 else f"{', '.join(words[:-1])} and {words[-1]}"
