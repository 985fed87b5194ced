"""The figure of a trade-off: a line for each variant, its break points, labels beside the lines."""

from __future__ import annotations

from pathlib import Path
from textwrap import wrap
from typing import TYPE_CHECKING

import numpy as np

from fluxnet.presenting.figures import (
    INK,
    QUIET,
    look_of,
    new_figure,
    spread,
    styled,
    write_figure,
)
from fluxnet.studies.frontier_result import Curve, Frontier

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["draw_frontier"]

_LINE = 0.052
"""The height of a label, as a part of the axes."""
_MOST_NOTES = 6


def draw_frontier(result: Frontier, path: Path, *, force: bool = False) -> None:
    """Draw all curves into one figure.

    Raises
    ------
    MisuseError
        Where the file cannot be written (:func:`fluxnet.presenting.figures.refuse_figure`).
    """
    title = f"{result.extreme.value.capitalize()} {result.y.name} at each {result.x.name}"
    foot = (
        f"Lines: the {result.extreme.value} {result.y.name} that the model allows at each "
        f"{result.x.name}; marks: break points, where what limits changes. Optima of the model "
        "as written: errors of its parameters are not shown."
    )
    with styled():
        figure, axes = new_figure(title, result.words, foot)
        groups = _alike([c for c in result.curves if c.points])
        for k, group in enumerate(groups):
            look = look_of(k)
            xs, ys = zip(*group[0].line, strict=True)
            # Earlier lines are wider, so that they show below later ones.
            width = max(1.5, 3.0 - 0.4 * k) if len(groups) > 1 else 1.8
            axes.plot(xs, ys, color=look.colour, linestyle=look.dash, linewidth=width, zorder=3)
            axes.plot(
                [p.x for p in group[0].points], [p.y for p in group[0].points],
                linestyle="none", marker=look.marker, markersize=5.5, color=look.colour,
                markeredgecolor="white", markeredgewidth=0.8, zorder=4,
            )  # fmt: skip
        _frame(axes, result, max((len(_label(g)[0]) for g in groups), default=0))
        if len(groups) > 1:
            _name_lines(axes, groups)
        elif groups:
            _note_breaks(axes, groups[0][0])
        axes.set_xlabel(result.x.titled)
        axes.set_ylabel(result.y.titled)
        write_figure(figure, path, title, result.words, force=force)


def _alike(curves: list[Curve]) -> list[list[Curve]]:
    """Curves that lie upon one another, together."""
    groups: list[list[Curve]] = []
    for curve in curves:
        same = next((g for g in groups if _same(g[0].line, curve.line)), None)
        if same is None:
            groups.append([curve])
        else:
            same.append(curve)
    return groups


def _same(one: tuple[tuple[float, float], ...], other: tuple[tuple[float, float], ...]) -> bool:
    if len(one) != len(other):
        return False
    return all(
        abs(a - b) <= 1e-9 * max(1.0, abs(a))
        for left, right in zip(one, other, strict=True)
        for a, b in zip(left, right, strict=True)
    )


def _label(group: list[Curve]) -> list[str]:
    """The name of curves that are one line, in lines of its own."""
    lines = wrap(", ".join(c.label for c in group), 24, break_long_words=False)
    return sorted(lines, key=len, reverse=True)[:1] + lines


def _frame(axes: Axes, result: Frontier, letters: int) -> None:
    """Both axes from zero where that wastes less than half of the room; room for labels."""
    points = [p for c in result.curves for p in c.line]
    if not points:
        return
    for values, name in (
        ([x for x, _ in points], "x"), ([y for _, y in points], "y"),
    ):  # fmt: skip
        low, high = min(values), max(values)
        low = 0.0 if 0 < low < 0.6 * high else low
        high = 0.0 if low < 0 and 0.6 * low < high < 0 else high
        room = (high - low) or abs(high) or 1.0
        right = 0.06 + (0.018 * letters if name == "x" and len(result.curves) > 1 else 0.0)
        below = 0.0 if low == 0 else 0.05
        bounds = (low - below * room, high + (right if name == "x" else 0.08) * room)
        (axes.set_xlim if name == "x" else axes.set_ylim)(*bounds)


def _place(axes: Axes, x: float, y: float) -> tuple[float, float]:
    """A point as parts of the axes."""
    (left, right), (low, high) = axes.get_xlim(), axes.get_ylim()
    return (x - left) / (right - left), (y - low) / (high - low)


def _name_lines(axes: Axes, groups: list[list[Curve]]) -> None:
    """Each line's name beside its end, moved apart where ends are close."""
    ends = [_place(axes, *group[0].line[-1]) for group in groups]
    # Labels of ends that stand near one another in x are moved apart in y.
    heights = [y for _, y in ends]
    columns: list[list[int]] = []
    for k in sorted(range(len(ends)), key=lambda k: ends[k][0]):
        near = columns and ends[k][0] - ends[columns[-1][0]][0] < 0.18
        columns = [*columns[:-1], [*columns[-1], k]] if near else [*columns, [k]]
    for column in columns:
        for k, height in zip(column, spread([heights[k] for k in column], _LINE), strict=True):
            heights[k] = height
    for k, height in enumerate(heights):
        heights[k] = min(max(_clear(axes, groups, k, ends[k][0], height), 0.04), 0.97)
    for k, group in enumerate(groups):
        look, (x, y) = look_of(k), ends[k]
        column = next(c for c in columns if k in c)
        right = max(ends[i][0] for i in column)
        axes.annotate(
            "\n".join(_label(group)[1:]), (x, y), (right + 0.018, heights[k]),
            xycoords="axes fraction", textcoords="axes fraction",
            color=look.colour, fontsize=9, va="center", fontweight="bold",
            annotation_clip=False, linespacing=1.1,
            bbox={"facecolor": "white", "edgecolor": "none", "alpha": 0.8, "pad": 0.8},
            arrowprops={"arrowstyle": "-", "color": look.colour, "linewidth": 0.6,
                        "shrinkA": 1, "shrinkB": 3}
            if abs(heights[k] - y) > 0.01 or right - x > 0.01 else None,
        )  # fmt: skip


def _clear(axes: Axes, groups: list[list[Curve]], own: int, x: float, height: float) -> float:
    """The height of a label that would lie upon another line: then below, or above, that."""
    width = 0.025 + 0.018 * len(_label(groups[own])[0])
    for k, group in enumerate(groups):
        if k == own:
            continue
        xs, ys = zip(*(_place(axes, *point) for point in group[0].line), strict=True)
        across = np.linspace(x + 0.01, x + width, 12)
        across = across[(across >= xs[0]) & (across <= xs[-1])]
        passed = np.interp(across, xs, ys)
        if passed.size and (np.abs(passed - height) < 0.045).any():
            below = float(passed.min()) - 0.055
            return below if below > 0.05 else float(passed.max()) + 0.055
    return height


def _note_breaks(axes: Axes, curve: Curve) -> None:
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
