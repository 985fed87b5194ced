"""Which separator a text has, and which sheet of a workbook holds the table."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import field

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.ground.source import Span
from fluxnet.network.model import Network
from fluxnet.tables.delimited import declared_separator, split_lines, split_text
from fluxnet.tables.grid import Grid
from fluxnet.tables.layout import find_layout

__all__ = ["SheetChoice", "choose_grid", "choose_sheet", "split_lines"]

_SAMPLE = 200
"""Lines that are looked at to find the separator."""

_COVARIANCE = "covariance"


@record
class SheetChoice:
    """The sheet with the rates and the one with their covariance."""

    grid: Grid | None
    covariance: Grid | None = None
    diagnostics: tuple[Diagnostic, ...] = field(default=())


def choose_grid(
    lines: tuple[str, ...], file: str, network: Network | None, separator: str | None = None
) -> Grid:
    """Cut a text with the separator that is asked for or declared, else with the best one.

    Each candidate is tried on the first lines; the one whose header has the most columns that
    are understood wins, then the one that cuts most cells.
    """
    asked = separator or declared_separator(lines)
    if asked is not None:
        return split_text(lines, asked, file)
    scores: dict[str, tuple[bool, int, int]] = {}
    for sign in ("\t", ";", ","):
        grid = split_text(lines[:_SAMPLE], sign, file)
        layout = find_layout(grid, network)
        cells = sum(len(r.cells) for r in grid.rows)
        scores[sign] = (layout.form is not None, layout.score, cells)
    return split_text(lines, max(scores, key=scores.__getitem__), file)


def choose_sheet(
    sheets: Sequence[Grid], asked: str | None, network: Network | None, file: str
) -> SheetChoice:
    """The sheet that is asked for, else the first with the header of a rates table."""
    others = [g for g in sheets if (g.sheet or "").casefold() != _COVARIANCE]
    covariance = next((g for g in sheets if (g.sheet or "").casefold() == _COVARIANCE), None)
    if asked is not None:
        found = [g for g in sheets if (g.sheet or "").casefold() == asked.casefold()]
        if found:
            return SheetChoice(found[0], covariance if covariance is not found[0] else None)
        names = ", ".join(g.sheet or "" for g in sheets)
        fault = Diagnostic(
            Name.UNKNOWN_SHEET,
            f"{file} has no sheet {asked}",
            Span(file, 0, 0, 0),
            mend=f"its sheets are {names}",
        )
        return SheetChoice(None, diagnostics=(fault,))
    tables = [g for g in others if find_layout(g, network).form is not None]
    chosen = tables or [g for g in others if g.rows] or others or list(sheets)
    left = [g.sheet or "" for g in tables[1:]]
    if not left:
        return SheetChoice(chosen[0], covariance)
    note = Diagnostic(
        Name.TABLE_UNDERSTOOD,
        f"{file} has more sheets with a table, which were not read: {', '.join(left)}",
        Span(file, 0, 0, 0),
        mend="name the sheet that is meant: --sheet NAME",
    )
    return SheetChoice(chosen[0], covariance, (note,))
