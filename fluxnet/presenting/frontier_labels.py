"""Words inside the figure of a trade-off: the lines' names, and what changes at break points."""

from __future__ import annotations

from textwrap import wrap
from typing import TYPE_CHECKING

import numpy as np

from fluxnet.presenting.figures import INK, QUIET, look_of, spread
from fluxnet.studies.frontier_result import Curve

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["are_apart", "list_lines", "name_lines", "name_of", "note_breaks"]

Group = list[Curve]
"""Curves that lie upon one another, drawn as one line."""

_LINE = 0.05
"""The height of a line of text, as a part of the axes."""
_LETTER = 0.019
"""The width of a letter of a name."""
_MOST_NOTES = 6


def name_of(group: Group) -> list[str]:
    """The name of curves that are one line, broken into lines."""
    return wrap(", ".join(c.label for c in group), 26, break_long_words=False) or [""]


def are_apart(groups: list[Group]) -> bool:
    """Whether the ends of the lines leave room for a name beside each."""
    points = np.array([point for group in groups for point in group[0].line])
    size = np.ptp(points, axis=0)
    size[size == 0] = 1.0
    ends = np.array([group[0].line[-1] for group in groups]) / size
    heights = [_LINE * (len(name_of(group)) + 0.4) for group in groups]
    widths = [_LETTER * max(map(len, name_of(group))) + 0.04 for group in groups]
    return all(
        abs(ends[i][0] - ends[k][0]) > max(widths[i], widths[k])
        or abs(ends[i][1] - ends[k][1]) > (heights[i] + heights[k]) / 2
        for i in range(len(groups))
        for k in range(i)
    )


def _place(axes: Axes, x: float, y: float) -> tuple[float, float]:
    """A point as parts of the axes."""
    (left, right), (low, high) = axes.get_xlim(), axes.get_ylim()
    return (x - left) / (right - left), (y - low) / (high - low)


def name_lines(axes: Axes, groups: list[Group]) -> None:
    """Each line's name beside its end."""
    for k, group in enumerate(groups):
        x, y = _place(axes, *group[0].line[-1])
        height = min(max(_clear(axes, groups, k, x, y), 0.045), 0.97)
        look = look_of(k)
        axes.annotate(
            "\n".join(name_of(group)), (x, y), (x + 0.018, height),
            xycoords="axes fraction", textcoords="axes fraction",
            color=look.colour, fontsize=9, va="center", fontweight="bold",
            annotation_clip=False, linespacing=1.1,
            bbox={"facecolor": "white", "edgecolor": "none", "alpha": 0.8, "pad": 0.8},
        )  # fmt: skip


def list_lines(axes: Axes, groups: list[Group]) -> None:
    """The lines' names in a column beside the axes, each with a piece of its line.

    They stand in the order in which the lines do where these are farthest apart.
    """
    order = _order(groups)
    height = 0.98
    for k in order:
        look, words = look_of(k), name_of(groups[k])
        middle = height - _LINE * len(words) / 2
        axes.plot(
            [1.03, 1.065, 1.1], [middle] * 3, transform=axes.transAxes, clip_on=False,
            color=look.colour, linestyle=look.dash, linewidth=1.8, marker=look.marker,
            markevery=[1], markersize=5.5, markeredgecolor="white", markeredgewidth=0.8,
        )  # fmt: skip
        axes.text(
            1.12, middle, "\n".join(words), transform=axes.transAxes, color=look.colour,
            fontsize=9, fontweight="bold", va="center", linespacing=1.1,
        )  # fmt: skip
        height -= _LINE * len(words) + 0.03


def _order(groups: list[Group]) -> list[int]:
    """The places of the lines from the highest to the lowest where they are farthest apart."""
    lines = [list(zip(*group[0].line, strict=True)) for group in groups]
    every = np.linspace(min(x[0] for x, _ in lines), max(x[-1] for x, _ in lines), 101)
    heights = np.array([np.interp(every, x, y, right=min(y)) for x, y in lines])
    at = int(np.argmax(heights.std(axis=0)))
    return sorted(range(len(groups)), key=lambda k: (-heights[k, at], k))


def _clear(axes: Axes, groups: list[Group], own: int, x: float, height: float) -> float:
    """The height of a label that would lie upon another line: then below, or above, that."""
    width = 0.025 + _LETTER * max(map(len, name_of(groups[own])))
    for group in (g for k, g in enumerate(groups) if k != own):
        xs, ys = zip(*(_place(axes, *point) for point in group[0].line), strict=True)
        across = np.linspace(x + 0.01, x + width, 12)
        across = across[(across >= xs[0]) & (across <= xs[-1])]
        passed = np.interp(across, xs, ys)
        if passed.size and (np.abs(passed - height) < 0.045).any():
            below = float(passed.min()) - 0.055
            return below if below > 0.05 else float(passed.max()) + 0.055
    return height


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
