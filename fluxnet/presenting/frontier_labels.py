"""Words inside the figure of a trade-off: the lines' names, and what changes at break points."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from fluxnet.presenting.figures import (
    INK,
    QUIET,
    WIDTH,
    inches_of,
    look_of,
    size_of,
    spread,
    wrapped,
)
from fluxnet.studies.frontier_result import Curve

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["list_lines", "name_of", "note_breaks", "room_of"]

Group = list[Curve]
"""Curves that lie upon one another, drawn as one line."""

_LINE = 0.05
"""The height of a line of text, as a part of the axes."""
_NAME_SIZE = 9
_NAME_LINE, _NAME_GAP = 0.16, 0.11
_WIDEST = 2.4
_SAMPLE = 0.58
"""Inches: a line of a name, what lies between two names, the widest name, and the piece of its
line before it."""
_MOST_NOTES = 6


def name_of(group: Group) -> list[str]:
    """The name of curves that are one line, broken into lines behind commas and blanks."""
    return wrapped(", ".join(c.label for c in group), _NAME_SIZE, _WIDEST, bold=True) or [""]


def room_of(groups: list[Group]) -> tuple[float, float]:
    """The room for the names beside the axes: part of a figure's usual width, height [inches]."""
    names = [name_of(group) for group in groups]
    widest = max(inches_of(line, _NAME_SIZE, bold=True) for name in names for line in name)
    lines = sum(map(len, names))
    return (_SAMPLE + widest) / WIDTH, lines * _NAME_LINE + len(names) * _NAME_GAP


def _place(axes: Axes, x: float, y: float) -> tuple[float, float]:
    """A point as parts of the axes."""
    (left, right), (low, high) = axes.get_xlim(), axes.get_ylim()
    return (x - left) / (right - left), (y - low) / (high - low)


def list_lines(axes: Axes, groups: list[Group]) -> None:
    """The lines' names in a column beside the axes, each with a piece of its line.

    They stand in the order in which the lines do where these are farthest apart.
    """
    width, tall = size_of(axes)
    top = tall
    for k in _order(groups):
        look, words = look_of(k), name_of(groups[k])
        middle = (top - _NAME_LINE * len(words) / 2) / tall
        axes.plot(
            [1 + part / width for part in (0.14, 0.3, 0.46)], [middle] * 3,
            transform=axes.transAxes, clip_on=False,
            color=look.colour, linestyle=look.dash, linewidth=1.8, marker=look.marker,
            markevery=[1], markersize=5.5, markeredgecolor="white", markeredgewidth=0.8,
        )  # fmt: skip
        axes.text(
            1 + _SAMPLE / width, middle, "\n".join(words), transform=axes.transAxes,
            color=look.colour, fontsize=_NAME_SIZE, fontweight="bold", va="center",
            linespacing=1.1,
        )  # fmt: skip
        top -= _NAME_LINE * len(words) + _NAME_GAP


def _order(groups: list[Group]) -> list[int]:
    """The places of the lines from the highest to the lowest where they are farthest apart."""
    lines = [list(zip(*group[0].line, strict=True)) for group in groups]
    every = np.linspace(min(x[0] for x, _ in lines), max(x[-1] for x, _ in lines), 101)
    heights = np.array([np.interp(every, x, y, right=min(y)) for x, y in lines])
    at = int(np.argmax(heights.std(axis=0)))
    return sorted(range(len(groups)), key=lambda k: (-heights[k, at], k))


def note_breaks(axes: Axes, curve: Curve) -> None:
    """What changes at the break points of a single line, on the side that has more room.

    Beside a rising line that is above to the left or below to the right, beside a falling one
    the other two corners.
    """
    inside = [p for p in curve.points[1:-1] if p.changes][:_MOST_NOTES]
    sides: dict[bool, list[tuple[float, float, str]]] = {True: [], False: []}
    for p in inside:
        x, y = _place(axes, p.x, p.y)
        rises = (p.slope_before or 0.0) + (p.slope_after or 0.0) > 0
        # The room for a text to the left, or to the right, and above or below.
        above = min(1 - y, x if rises else 1 - x)
        below = min(y, 1 - x if rises else x)
        sides[above > below].append((x, y, "\n".join(p.changes[:2])))
    for is_above, notes in sides.items():
        way = 1 if is_above else -1
        heights = spread([y + 0.1 * way for _, y, _ in notes], 2.4 * _LINE)
        for (x, y, text), height in zip(notes, heights, strict=True):
            is_left = _is_left(curve, is_above)
            axes.annotate(
                text, (x, y), (x + (-0.03 if is_left else 0.03), height),
                xycoords="axes fraction", textcoords="axes fraction", fontsize=8, color=INK,
                ha="right" if is_left else "left", va="center", linespacing=1.25,
                arrowprops={"arrowstyle": "-", "color": QUIET, "linewidth": 0.6, "shrinkB": 4},
            )  # fmt: skip


def _is_left(curve: Curve, is_above: bool) -> bool:
    """Whether the free side above (below) a line lies to the left: it does above a rising one."""
    rises = curve.points[-1].y > curve.points[0].y
    return rises is is_above
