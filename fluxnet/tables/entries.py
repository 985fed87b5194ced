"""The entries of a table: one quantity of one run, still as text, whatever form the table has."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import field, replace

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.ground.source import Span
from fluxnet.tables.grid import Cell, Row
from fluxnet.tables.titles import Key, Title

__all__ = ["BiomassColumns", "Entries", "Entry", "RunHead", "column_twice", "extend_head"]

_BLANK = Cell("")


@record
class Entry:
    """One quantity of one run, as it stands in the table.

    ``title`` names its column in messages; ``unit`` is the unit's text (with the place that
    says it), ``sd_unit`` that of the sd where it has one of its own (``%``), written in the
    title ``sd_title``. ``direction_cell`` is blank where no cell of its own tells the direction.
    """

    run: str
    name: str
    name_cell: Cell
    direction: str
    value: Cell
    sd: Cell
    unit: str
    unit_cell: Cell
    sd_unit: str = ""
    title: str = "rate"
    sd_title: Cell = _BLANK
    direction_cell: Cell = _BLANK


@record
class RunHead:
    """What a table says of a run beside its quantities: carried columns, biomass numbers."""

    name: str
    span: Span
    extras: tuple[tuple[str, str], ...] = ()
    shared: Cell = _BLANK
    shared_unit: str = ""
    concentration: Cell = _BLANK
    concentration_sd: Cell = _BLANK
    concentration_unit: str = ""


@record
class Entries:
    """All entries of a table, the runs in the order in which they appear.

    ``carried`` are the titles of the columns that are carried through; ``continued`` says
    that blank run cells were taken to continue the run above; ``failed`` names the runs of
    which a row could not be taken apart.
    """

    entries: tuple[Entry, ...]
    heads: tuple[RunHead, ...]
    carried: tuple[str, ...] = ()
    continued: bool = False
    failed: frozenset[str] = frozenset()
    diagnostics: tuple[Diagnostic, ...] = field(default=())


@record
class BiomassColumns:
    """The columns that tell of a run's biomass, where the table has them."""

    shared: Title | None = None
    concentration: Title | None = None
    concentration_sd: Title | None = None

    @classmethod
    def among(cls, titles: Sequence[Title]) -> BiomassColumns:
        """The first of each kind."""

        def first(key: Key, is_sd: bool = False) -> Title | None:
            return next((t for t in titles if t.key is key and t.is_sd is is_sd), None)

        return cls(first(Key.SHARED), first(Key.CONCENTRATION), first(Key.CONCENTRATION, True))

    @property
    def titles(self) -> tuple[Title, ...]:
        """Those that there are."""
        every = (self.shared, self.concentration, self.concentration_sd)
        return tuple(t for t in every if t is not None)


def extend_head(
    head: RunHead, row: Row, extras: Sequence[Title], columns: BiomassColumns
) -> RunHead:
    """The head of a run with what one more row says; different words are strung together."""
    told = dict(head.extras)
    for title in extras:
        text = row.cell(title.cell.column).text
        before = told.get(title.cell.text, "")
        if text and text != before and text not in before.split("; "):
            told[title.cell.text] = f"{before}; {text}" if before else text
        else:
            told.setdefault(title.cell.text, "")
    shared, concentration = columns.shared, columns.concentration
    return replace(
        head,
        extras=tuple(told.items()),
        shared=_later(head.shared, row, shared),
        shared_unit=shared.unit if shared else "",
        concentration=_later(head.concentration, row, concentration),
        concentration_sd=_later(head.concentration_sd, row, columns.concentration_sd),
        concentration_unit=concentration.unit if concentration else "",
    )


def column_twice(title: Title) -> Diagnostic:
    """The fault of a second column for one thing."""
    return Diagnostic(
        Name.ROW_REPEATED,
        f"{title.cell.place}: a second column `{title.cell.text}`",
        title.cell.span,
        mend="keep one of the two columns",
    )


def _later(before: Cell, row: Row, title: Title | None) -> Cell:
    """The cell of a row, or the one known before where that is blank."""
    cell = row.cell(title.cell.column) if title is not None else _BLANK
    return before if cell.is_blank else cell
