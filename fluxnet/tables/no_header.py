"""What to tell of a table in which no header was found."""

from __future__ import annotations

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.source import Span
from fluxnet.tables.grid import Grid, Row
from fluxnet.tables.layout import Layout
from fluxnet.tables.titles import Key, Title, read_title

__all__ = ["no_header"]

_FORMS = (
    "a long table has at least the columns species and rate; a wide one names quantities with "
    "their units"
)
_MEND = "write: run, species, direction, rate, sd, unit; or glucose in [mmol/g/h]"


def no_header(grid: Grid, layout: Layout) -> Diagnostic:
    """The fault of a table without a header, at the row that comes nearest to one."""
    row = layout.header or (grid.rows[0] if grid.rows else None)
    file = grid.source.file
    if row is None:
        return Diagnostic(Name.EMPTY_FILE, f"{file} holds no table", Span(file, 0, 0, 0))
    words = ", ".join(c.text for c in row.cells if c.text)
    message = f"row {row.span.line} ({words}) is no header of a rates table, and no row below is"
    because, mend = _FORMS, _MEND
    titles = [read_title(c) for c in row.cells if c.text]
    others = ", ".join(t.cell.text for t in titles if t.key is None)
    species, rate = _first(titles, Key.SPECIES), _first(titles, Key.RATE)
    if species is not None and rate is None:
        message = f"row {row.span.line} has a column of species (`{species.cell.text}`) and no rate"
        mend = _rate_mend(row, others)
    elif rate is not None and species is None:
        message = f"row {row.span.line} has a column of rates (`{rate.cell.text}`) and no species"
        mend = "call the column that names the compounds species"
        mend += f"; the other columns are {others}" if others else ""
    return Diagnostic(Name.MISSING_COLUMN, message, row.span, because=because, mend=mend)


def _first(titles: list[Title], key: Key) -> Title | None:
    return next((t for t in titles if t.key is key), None)


def _rate_mend(row: Row, others: str) -> str:
    mend = "call the column with the numbers rate"
    if others:
        mend += (
            f"; where {others} are runs, write them below one another: run, species, direction, "
            "rate, sd, unit"
        )
    return mend
