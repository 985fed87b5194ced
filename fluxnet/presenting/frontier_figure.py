"""The figure of a trade-off: a line for each variant, its break points, names beside the lines."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from fluxnet.presenting.figures import look_of, new_figure, styled, write_figure
from fluxnet.presenting.frontier_labels import list_lines, note_breaks, room_of
from fluxnet.studies.frontier_best import tell_stretches
from fluxnet.studies.frontier_result import Curve, Frontier

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["draw_frontier"]


def draw_frontier(result: Frontier, path: Path, *, force: bool = False) -> None:
    """Draw all curves into one figure.

    Raises
    ------
    MisuseError
        Where the file cannot be written (:func:`fluxnet.presenting.figures.refuse_figure`).
    """
    title = f"{result.extreme.value.capitalize()} {result.y.name} at each {result.x.name}"
    common = " * ".join(result.common)
    title += f", {common}" if common else ""
    finding = _finding(result, common)
    foot = (
        f"Lines: the {result.extreme.value} {result.y.name} that the model allows at each "
        f"{result.x.name}; marks: break points, where what limits changes. Optima of the model "
        "as written: errors of its parameters are not shown."
    )
    groups = _alike([c for c in result.curves if c.points])
    several = len(groups) > 1
    with styled():
        gutter, height = room_of(groups) if several else (0.0, 0.0)
        figure, axes = new_figure(title, finding, foot, gutter, height)
        for k, group in enumerate(groups):
            look = look_of(k)
            xs, ys = zip(*group[0].line, strict=True)
            # Earlier lines are wider, so that they show below later ones.
            width = max(1.5, 3.0 - 0.4 * k) if several else 1.8
            axes.plot(xs, ys, color=look.colour, linestyle=look.dash, linewidth=width, zorder=3)
            axes.plot(
                [p.x for p in group[0].points], [p.y for p in group[0].points],
                linestyle="none", marker=look.marker, markersize=5.5, color=look.colour,
                markeredgecolor="white", markeredgewidth=0.8, zorder=4, clip_on=False,
            )  # fmt: skip
        _frame(axes, groups)
        if several:
            list_lines(axes, groups)
        elif groups:
            note_breaks(axes, groups[0][0])
        axes.set_xlabel(result.x.titled)
        axes.set_ylabel(result.y.titled)
        write_figure(figure, path, title, finding, force=force)


def _finding(result: Frontier, common: str) -> str:
    """What is seen, without the variants that the title names, and which line is best where."""
    words = result.words.removeprefix(f"With {common}: ")
    choice = tell_stretches(result.stretches, result.x.name, result.x.unit, ties=False)
    return f"{words[:1].upper()}{words[1:]} {choice}".rstrip()


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


def _frame(axes: Axes, groups: list[list[Curve]]) -> None:
    """Both axes from zero where that wastes less than half of the room; x ends with the lines."""
    points = [p for group in groups for p in group[0].line]
    for values, set_ends, beyond in (
        ([x for x, _ in points], axes.set_xlim, 0.0),
        ([y for _, y in points], axes.set_ylim, 0.08),
    ):
        low, high = min(values), max(values)
        low = 0.0 if 0 < low < 0.6 * high else low
        high = 0.0 if low < 0 and 0.6 * low < high < 0 else high
        room = (high - low) or abs(high) or 1.0
        beyond = beyond if high > low else 0.05
        set_ends(low - (0.0 if low == 0 else 0.05) * room, high + beyond * room)
