"""A trade-off as a drawing of characters, for a terminal or a pipe of 80 columns."""

from __future__ import annotations

from collections.abc import Sequence
from string import ascii_lowercase
from textwrap import wrap

import numpy as np

from fluxnet.presenting.numbers import format_number
from fluxnet.presenting.screen import Block, Drawing, Mood, Sentence
from fluxnet.studies.frontier_result import Curve, Frontier

__all__ = ["frontier_plot"]

_WIDTH, _HEIGHT = 66, 14
_LABEL = 10
_MOST_LINES = 6
_OWN = 0.2
"""The least part of a line's places that no other line has, for it to be seen."""

Cell = tuple[int, int]
_Group = tuple[list[str], frozenset[Cell], frozenset[Cell]]
"""The names of curves that look the same, the places they go through, and their break points."""


def frontier_plot(result: Frontier) -> tuple[Block, ...]:
    """The curves drawn; nothing where none bends, a sentence where they could not be told apart.

    Each curve has a letter, a capital at its break points; those that look the same share one.
    """
    curves = [c for c in result.curves if c.points]
    if all(len(c.points) < 3 for c in curves):
        return ()
    frame = _Frame(curves)
    groups: list[_Group] = []
    for curve in curves:
        breaks = frozenset(frame.cell(p.x, p.y) for p in curve.points)
        cells = frame.cells(curve.line) | breaks
        same = next((names for names, own, _ in groups if own == cells), None)
        if same is None:
            groups.append(([curve.label], cells, breaks))
        else:
            same.append(curve.label)
    if not _can_be_told_apart([cells for _, cells, _ in groups]):
        return (
            Sentence("As characters the lines could not be told apart: --figure FILE.svg draws "
                     "them.", Mood.QUIET),
        )  # fmt: skip
    return (Drawing(tuple(_lines(result, frame, groups))),)


def _can_be_told_apart(lines: Sequence[frozenset[Cell]]) -> bool:
    if len(lines) > _MOST_LINES:
        return False
    for k, cells in enumerate(lines):
        others = frozenset().union(*(c for j, c in enumerate(lines) if j != k))
        if len(cells - others) < _OWN * len(cells):
            return False
    return True


class _Frame:
    """The ends of both axes, from zero where that wastes less than half of the room."""

    def __init__(self, curves: Sequence[Curve]) -> None:
        points = [p for c in curves for p in c.line]
        self.x = _ends([x for x, _ in points])
        self.y = _ends([y for _, y in points])

    def cell(self, x: float, y: float) -> Cell:
        """The column and row of a point; row 0 is the lowest."""
        return (
            round((x - self.x[0]) / (self.x[1] - self.x[0]) * (_WIDTH - 1)),
            round((y - self.y[0]) / (self.y[1] - self.y[0]) * (_HEIGHT - 1)),
        )

    def cells(self, line: Sequence[tuple[float, float]]) -> frozenset[Cell]:
        """The places that a line goes through, without gaps where it is steep."""
        found: set[Cell] = set()
        xs, ys = np.array(line).T
        last: int | None = None
        for column in range(self.cell(*line[0])[0], self.cell(*line[-1])[0] + 1):
            x = self.x[0] + column * (self.x[1] - self.x[0]) / (_WIDTH - 1)
            row = self.cell(x, float(np.interp(x, xs, ys)))[1]
            lowest = row if last is None or row <= last else last + 1
            highest = row if last is None or row >= last else last - 1
            found |= {(column, r) for r in range(lowest, highest + 1)}
            last = row
        return frozenset(found)


def _ends(values: Sequence[float]) -> tuple[float, float]:
    low, high = min(values), max(values)
    low = 0.0 if 0 < low < 0.6 * high else low
    high = 0.0 if low < 0 and 0.6 * low < high < 0 else high
    return low, high if high > low else low + (abs(low) or 1.0)


def _lines(
    result: Frontier, frame: _Frame, groups: Sequence[_Group]
) -> list[str]:
    signs: dict[Cell, str] = {}
    several = len(groups) > 1
    for k, (_, cells, _) in enumerate(groups):
        letter = ascii_lowercase[k] if several else "·"
        for cell in cells:
            signs[cell] = "+" if cell in signs else letter
    for k, (_, _, breaks) in enumerate(groups):
        for cell in breaks:
            own = ascii_lowercase[k].upper() if several else "o"
            signs[cell] = "O" if signs[cell].isupper() else own
    found = [result.y.titled]
    for row in reversed(range(_HEIGHT)):
        is_told = row in (0, _HEIGHT - 1)
        value = frame.y[0] if row == 0 else frame.y[1]
        label = format_number(value, 4) if is_told else ""
        text = "".join(signs.get((column, row), " ") for column in range(_WIDTH))
        found.append(f"{label:>{_LABEL}} |{text}".rstrip())
    found.append(f"{'':>{_LABEL}} +{'-' * _WIDTH}")
    low, high = (format_number(end, 4) for end in frame.x)
    name = f"{low}   {result.x.titled}".ljust(_WIDTH - len(high))
    found.append(f"{'':>{_LABEL}}  {name}{high}")
    return found + (_key(groups) if several else [])


def _key(groups: Sequence[_Group]) -> list[str]:
    """The letters with their curves, then what capitals and signs are."""
    told = [f"{ascii_lowercase[k]} {', '.join(names)}" for k, (names, _, _) in enumerate(groups)]
    words = "  " + "; ".join([*told, "capitals: break points; + and O: of several"])
    return wrap(words, 80, subsequent_indent="  ", break_on_hyphens=False)
