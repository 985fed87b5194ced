"""Tables that fit as they are: lines of text, columns beside columns."""

from __future__ import annotations

from collections.abc import Sequence
from unicodedata import combining, east_asian_width

__all__ = ["cell_width", "lay_out"]

_BETWEEN = "  "


def cell_width(text: str) -> int:
    """The number of terminal cells that a text takes."""
    if text.isascii():
        return len(text)
    return sum(
        0 if combining(letter) else 2 if east_asian_width(letter) in "WF" else 1 for letter in text
    )


def lay_out(
    titles: Sequence[str],
    rows: Sequence[Sequence[str]],
    rights: Sequence[bool],
    limits: Sequence[int | None],
    width: int,
    rule: str = "─",
) -> tuple[str, str, tuple[str, ...]] | None:
    """The title line, the rule below it and the lines of a table; None where it is too wide.

    Parameters
    ----------
    rights
        Whether each column's text stands at its right side.
    limits
        The width beyond which each column's text is to be broken, or None.
    width
        Of the whole table at most.

    Examples
    --------
    >>> lay_out(["rate", "of"], [["1.5", "CO2"]], [True, False], [None, None], 80, "-")
    ('rate  of', '---------', (' 1.5  CO2',))
    """
    cells = [titles, *rows]
    sizes = [[cell_width(cell) for cell in row] for row in cells]
    widths = [max(column) for column in zip(*sizes, strict=True)]
    total = sum(widths) + len(_BETWEEN) * (len(widths) - 1)
    if (
        not rows
        or total > width
        or any(limit is not None and limit < own for limit, own in zip(limits, widths, strict=True))
        or any("\n" in cell for row in cells for cell in row)
    ):
        return None
    lines = [
        _BETWEEN.join(
            " " * (own - size) + cell if right else cell + " " * (own - size)
            for cell, size, own, right in zip(row, row_sizes, widths, rights, strict=True)
        ).rstrip()
        for row, row_sizes in zip(cells, sizes, strict=True)
    ]
    return lines[0], rule * total, tuple(lines[1:])
