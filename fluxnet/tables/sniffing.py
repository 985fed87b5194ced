"""Which sign separates the cells of a text: the one with which the table can be understood."""

from __future__ import annotations

from fluxnet.network.model import Network
from fluxnet.tables.delimited import SEPARATORS, declared_separator, split_text
from fluxnet.tables.grid import Grid
from fluxnet.tables.layout import find_layout

__all__ = ["choose_grid"]


def choose_grid(
    lines: tuple[str, ...], file: str, network: Network | None, separator: str | None = None
) -> Grid:
    """Cut a text with the separator that is asked for or declared, else with the best one.

    Each candidate is tried; the one whose header has the most columns that are understood
    wins, then the one that cuts most cells.
    """
    asked = separator or declared_separator(lines)
    if asked is not None:
        return split_text(lines, SEPARATORS.get(asked, asked), file)
    best: tuple[tuple[bool, int, int], Grid] | None = None
    for sign in ("\t", ";", ","):
        grid = split_text(lines, sign, file)
        layout = find_layout(grid, network)
        cells = sum(len(r.cells) for r in grid.rows)
        score = (layout.form is not None, layout.score, cells)
        if best is None or score > best[0]:
            best = score, grid
    assert best is not None
    return best[1]
