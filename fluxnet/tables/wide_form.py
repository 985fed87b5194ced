"""Wide tables, a row a run: ``glucose in [mmol/g/h]``, ``glucose in sd``, ``mu [1/h]``."""

from __future__ import annotations

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.tables.entries import (
    BiomassColumns,
    Entries,
    Entry,
    RunHead,
    column_twice,
    extend_head,
)
from fluxnet.tables.grid import Cell, Row
from fluxnet.tables.layout import Layout
from fluxnet.tables.quantities import is_quantity_name
from fluxnet.tables.rate_units import RateUnit, UnitKind, is_rate_unit, read_rate_unit
from fluxnet.tables.reckoned import MOST_BELOW, label_of, names_total
from fluxnet.tables.titles import Key, Title

__all__ = ["collect_wide"]


@record
class _Columns:
    """The columns of a wide table: quantities with their sds, the run, what is carried."""

    quantities: tuple[tuple[Title, Title | None], ...]
    extras: tuple[Title, ...]
    run: Title | None
    faults: tuple[Diagnostic, ...]


def collect_wide(layout: Layout) -> Entries:
    """The entries of a wide table; a run without a name is called by its number."""
    columns = _columns(layout)
    biomass = BiomassColumns.among(layout.titles)
    entries: list[Entry] = []
    heads: dict[str, RunHead] = {}
    failed: set[str] = set()
    faults = list(columns.faults)
    for count, row in enumerate(layout.body, start=1):
        label = label_of(row) if count > len(layout.body) - MOST_BELOW else ""
        if label:
            faults.append(_reckoned(row, label))
            if names_total(label):
                continue
        named = row.cell(columns.run.cell.column).text if columns.run else ""
        run = named or str(count)
        head = heads.setdefault(run, RunHead(run, row.span))
        if row.span.line in layout.shifted:
            failed.add(run)
            continue
        heads[run] = extend_head(head, row, columns.extras, biomass)
        entries.extend(
            Entry(
                run=run,
                name=title.name,
                name_cell=title.cell,
                direction=title.direction,
                value=row.cell(title.cell.column),
                sd=row.cell(sd.cell.column) if sd else Cell(""),
                unit=title.unit,
                unit_cell=title.cell,
                sd_unit=sd.unit if sd else "",
                title=title.cell.text,
                sd_title=sd.cell if sd else Cell(""),
            )
            for title, sd in columns.quantities
        )
    carried = tuple(t.cell.text for t in columns.extras)
    return Entries(
        tuple(entries),
        tuple(heads.values()),
        carried,
        failed=frozenset(failed),
        diagnostics=tuple(faults),
    )


def _columns(layout: Layout) -> _Columns:
    fixed: dict[tuple[Key, bool], Title] = {}
    quantities: list[tuple[Title, Title | None]] = []
    extras: list[Title] = []
    faults: list[Diagnostic] = []
    waiting: list[Title] = []
    known = _known_kinds(layout)
    for title in layout.titles:
        if title.key in (Key.RUN, Key.SHARED, Key.CONCENTRATION):
            if fixed.setdefault((title.key, title.is_sd), title) is not title:
                faults.append(column_twice(title))
        elif title.key is Key.SD and quantities and quantities[-1][1] is None:
            quantities[-1] = (quantities[-1][0], title)
        elif title.is_sd:
            waiting.append(title)
        elif title.key is None and _is_quantity(title, known, layout):
            quantities.append((title, None))
        elif title.cell.text:
            extras.append(title)
    for title in waiting:
        faults.extend(_join_sd(title, quantities))
    run = fixed.get((Key.RUN, False), _untitled_run(layout))
    return _Columns(tuple(quantities), tuple(extras), run, tuple(faults))


def _untitled_run(layout: Layout) -> Title | None:
    """The first column, where it has no title and only words: it names the runs."""
    first = layout.titles[0] if layout.titles else None
    if first is None or first.cell.text or first.unit:
        return None
    texts = [row.cell(0).text for row in layout.body]
    return first if texts and all(any(c.isalpha() for c in text) for text in texts) else None


def _reckoned(row: Row, label: str) -> Diagnostic:
    """What to tell of a row below the data: a mean can be a run, a total cannot."""
    if not names_total(label):
        words = f"row {row.span.line}, {label}, is read as a run like the others"
        return Diagnostic(Name.TABLE_UNDERSTOOD, words, row.span)
    return Diagnostic(
        Name.UNREADABLE_CELL,
        f"row {row.span.line}, {label}, is reckoned from the rows above and is no run",
        row.span,
        mend="take the row out, or start its line with #; a run needs another name",
    )


def _join_sd(title: Title, quantities: list[tuple[Title, Title | None]]) -> list[Diagnostic]:
    """Put an sd column beside its quantity; a fault where there is none without an sd."""
    for place, (quantity, sd) in enumerate(quantities):
        same = quantity.name == title.name and title.direction in ("", quantity.direction)
        if sd is None and same:
            quantities[place] = (quantity, title)
            return []
    words = f"{title.cell.place}: `{title.cell.text}` is the sd of no column of the table"
    mend = "write glucose sd, or put it right of the column that it belongs to"
    return [Diagnostic(Name.MISSING_COLUMN, words, title.cell.span, mend=mend)]


def _is_quantity(title: Title, known: frozenset[UnitKind], layout: Layout) -> bool:
    """Whether a column holds a quantity.

    An unknown name counts as a misspelt one, so that it is not lost, where it has a direction
    or a unit of the kind that the known quantities have; else the column is carried through.
    """
    if not title.name:
        return False
    if is_quantity_name(title.name, layout.vocabulary):
        return True
    if title.direction and title.bracketed:
        return True
    unit = read_rate_unit(title.unit) if is_rate_unit(title.unit) else None
    if not isinstance(unit, RateUnit) or unit.kind in (UnitKind.GROWTH, UnitKind.NUMBER):
        return False
    return unit.kind in known or not known


def _known_kinds(layout: Layout) -> frozenset[UnitKind]:
    """The kinds of unit of the columns whose names are known."""
    units = [
        read_rate_unit(t.unit)
        for t in layout.titles
        if t.key is None and is_rate_unit(t.unit) and is_quantity_name(t.name, layout.vocabulary)
    ]
    return frozenset(u.kind for u in units if isinstance(u, RateUnit)) - {UnitKind.GROWTH}
