"""Numbers of one column one below the other: decimal points, ± and ends of ranges aligned."""

from __future__ import annotations

from collections.abc import Sequence
from math import floor, log10

from fluxnet.ground.pattern import pattern_of

__all__ = ["align_points", "common_decimals"]

_CELL = pattern_of(
    r"(?P<whole>[+-]?\d+)(?P<rest>\.\d+)?"
    r"(?:(?P<between> ± | \+- | to )(?P<whole2>-?\d+)(?P<rest2>\.\d+)?|(?P<tail> [a-z ]+))?"
)
_MISSING = ("–", "-")


def align_points(cells: Sequence[str]) -> list[str]:
    """The cells of a column of numbers, padded so that their points stand below one another.

    Cells hold a number, one with its sd, a range, or a number with a word behind it; others
    stand at the right. All that is returned has the width of the widest.

    Examples
    --------
    >>> align_points(["4.81 ± 0.17", "0.332 ± 0.019", "12 ± 3", "2"])
    [' 4.81  ± 0.17 ', ' 0.332 ± 0.019', '12     ± 3    ', ' 2            ']
    >>> align_points(["9.5 to 12.0", "2 or more", "–"])
    ['9.5 to 12.0', '2 or more  ', '–          ']
    """
    found = [_CELL.fullmatch(cell) for cell in cells]
    matches = [match for match in found if match is not None]
    if not matches:
        return list(cells)
    whole, rest, whole2, rest2 = (
        max(len(match[part] or "") for match in matches)
        for part in ("whole", "rest", "whole2", "rest2")
    )
    lines: list[str] = []
    for cell, match in zip(cells, found, strict=True):
        if match is None:
            lines.append(cell.rjust(whole) if cell in _MISSING else cell)
            continue
        line = match["whole"].rjust(whole) + (match["rest"] or "")
        if match["between"]:
            line = line.ljust(whole + rest) + match["between"]
            line += match["whole2"].rjust(whole2) + (match["rest2"] or "").ljust(rest2)
        lines.append(line + (match["tail"] or ""))
    width = max(map(len, lines))
    return [
        line.ljust(width) if match is not None or cell in _MISSING else line.rjust(width)
        for cell, line, match in zip(cells, lines, found, strict=True)
    ]


def common_decimals(values: Sequence[float], digits: int = 4) -> int:
    """The decimals that numbers of one unit are shown with, all of them alike.

    The largest keeps its ``digits``, the smallest two of its own, but no more than one decimal
    beyond that is spent on it.

    Examples
    --------
    >>> common_decimals([26.7, 8.51, 0.765]), common_decimals([1.81, 0.059, 0.0])
    (2, 3)
    """
    sizes = [abs(value) for value in values if value]
    if not sizes:
        return 0
    largest = digits - 1 - floor(log10(max(sizes)))
    smallest = 1 - floor(log10(min(sizes)))
    return max(0, min(max(largest, smallest), largest + 1))
