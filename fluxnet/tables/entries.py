"""The rows of a table, long or wide, as entries: one quantity of one run, still as text."""

from __future__ import annotations

from dataclasses import dataclass, field, replace

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.source import Span
from fluxnet.tables.grid import Cell, Row
from fluxnet.tables.layout import Form, Layout
from fluxnet.tables.quantities import is_quantity_name
from fluxnet.tables.rate_units import RateUnit, UnitKind, is_rate_unit, read_rate_unit
from fluxnet.tables.titles import Key, Title
from fluxnet.tables.vocabulary import split_direction

__all__ = ["Entries", "Entry", "RunHead", "collect_entries"]

_BLANK = Cell("")


@dataclass(frozen=True, slots=True)
class Entry:
    """One quantity of one run, as it stands in the table.

    ``title`` names its column in messages; ``unit`` is the unit's text (with the place that
    says it), ``sd_unit`` that of the sd where it has one of its own (``%``).
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


@dataclass(frozen=True, slots=True)
class RunHead:
    """What a table says of a run beside its quantities."""

    name: str
    span: Span
    extras: tuple[tuple[str, str], ...] = ()
    shared: Cell = _BLANK
    shared_unit: str = ""
    concentration: Cell = _BLANK
    concentration_sd: Cell = _BLANK
    concentration_unit: str = ""


@dataclass(frozen=True, slots=True)
class Entries:
    """All entries of a table, the runs in the order in which they appear."""

    entries: tuple[Entry, ...]
    heads: tuple[RunHead, ...]
    carried: tuple[str, ...] = ()
    diagnostics: tuple[Diagnostic, ...] = field(default=())


def collect_entries(layout: Layout) -> Entries:
    """The entries of a table whose header was found."""
    return _collect_long(layout) if layout.form is Form.LONG else _collect_wide(layout)


def _collect_long(layout: Layout) -> Entries:
    place: dict[Key, Title] = {}
    faults: list[Diagnostic] = []
    for title in layout.titles:
        if title.key is None or (title.is_sd and title.key is not Key.SD):
            continue
        if title.key in place:
            faults.append(_twice(title))
        place.setdefault(title.key, title)
    concentration_sd = next(
        (t for t in layout.titles if t.key is Key.CONCENTRATION and t.is_sd), None
    )
    used = {t.cell.column for t in place.values()}
    used |= {concentration_sd.cell.column} if concentration_sd else set()
    extras = [t for t in layout.titles if t.cell.column not in used and t.cell.text]

    entries: list[Entry] = []
    heads: dict[str, RunHead] = {}
    run = "run 1"
    for row in layout.body:
        if row.is_blank:
            continue

        def at(key: Key, row: Row = row) -> Cell:
            return row.cell(place[key].cell.column) if key in place else _BLANK

        run = at(Key.RUN).text or run
        heads[run] = _head(
            heads.get(run, RunHead(run, row.span)),
            row,
            extras,
            at(Key.SHARED),
            at(Key.CONCENTRATION),
            row.cell(concentration_sd.cell.column) if concentration_sd else _BLANK,
            place[Key.CONCENTRATION].unit if Key.CONCENTRATION in place else "",
            place[Key.SHARED].unit if Key.SHARED in place else "",
        )
        species = at(Key.SPECIES)
        if species.is_blank:
            if any(not at(k).is_blank for k in (Key.RATE, Key.SD, Key.DIRECTION, Key.UNIT)):
                faults.append(_nameless(row, species))
            continue
        rate, sd = place[Key.RATE], place.get(Key.SD)
        own_unit = at(Key.UNIT)
        bare, word = split_direction(species.text)
        direction = at(Key.DIRECTION).text
        if is_quantity_name(species.text, layout.vocabulary) or direction:
            bare, word = species.text, ""
        entries.append(
            Entry(
                run,
                bare,
                species,
                direction or word,
                at(Key.RATE),
                at(Key.SD),
                own_unit.text or rate.unit,
                own_unit if own_unit.text else (rate.cell if rate.unit else own_unit),
                sd.unit if sd else "",
                rate.cell.text,
            )
        )
    return Entries(tuple(entries), tuple(heads.values()), _names(extras), tuple(faults))


def _collect_wide(layout: Layout) -> Entries:
    columns = _wide_columns(layout)
    entries: list[Entry] = []
    heads: dict[str, RunHead] = {}
    count = 0
    for row in layout.body:
        if row.is_blank:
            continue
        count += 1
        named = row.cell(columns.run.cell.column).text if columns.run else ""
        run = named or f"run {count}"
        heads[run] = _head(
            heads.get(run, RunHead(run, row.span)),
            row,
            columns.extras,
            _at(row, columns.shared),
            _at(row, columns.concentration),
            _at(row, columns.concentration_sd),
            columns.concentration.unit if columns.concentration else "",
            columns.shared.unit if columns.shared else "",
        )
        for title, sd in columns.quantities:
            entries.append(
                Entry(
                    run,
                    title.name,
                    title.cell,
                    title.direction,
                    row.cell(title.cell.column),
                    _at(row, sd),
                    title.unit,
                    title.cell,
                    sd.unit if sd else "",
                    title.cell.text,
                )
            )
    return Entries(tuple(entries), tuple(heads.values()), _names(columns.extras), columns.faults)


@dataclass(frozen=True, slots=True)
class _Columns:
    """The columns of a wide table by what they hold."""

    quantities: tuple[tuple[Title, Title | None], ...]
    extras: tuple[Title, ...]
    faults: tuple[Diagnostic, ...]
    run: Title | None = None
    shared: Title | None = None
    concentration: Title | None = None
    concentration_sd: Title | None = None


def _wide_columns(layout: Layout) -> _Columns:
    fixed: dict[str, Title] = {}
    quantities: list[tuple[Title, Title | None]] = []
    extras: list[Title] = []
    faults: list[Diagnostic] = []
    orphans: list[Title] = []
    known = _known_kinds(layout)
    for title in layout.titles:
        if title.key in (Key.RUN, Key.SHARED, Key.CONCENTRATION):
            name = title.key.value + (" sd" if title.is_sd else "")
            if name in fixed:
                faults.append(_twice(title))
            fixed.setdefault(name, title)
        elif title.key is Key.SD and quantities and quantities[-1][1] is None:
            quantities[-1] = (quantities[-1][0], title)
        elif title.is_sd:
            orphans.append(title)
        elif title.key is None and _is_quantity(title, known, layout):
            quantities.append((title, None))
        elif title.cell.text:
            extras.append(title)
    for title in orphans:
        wanted = [
            k
            for k, (q, sd) in enumerate(quantities)
            if sd is None and q.name == title.name and (title.direction in ("", q.direction))
        ]
        if wanted:
            quantities[wanted[0]] = (quantities[wanted[0]][0], title)
        else:
            faults.append(_lonely_sd(title))
    return _Columns(
        tuple(quantities),
        tuple(extras),
        tuple(faults),
        fixed.get("run"),
        fixed.get("shared error biomass"),
        fixed.get("biomass concentration"),
        fixed.get("biomass concentration sd"),
    )


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


def _at(row: Row, title: Title | None) -> Cell:
    return row.cell(title.cell.column) if title is not None else _BLANK


def _head(
    head: RunHead,
    row: Row,
    extras: tuple[Title, ...] | list[Title],
    shared: Cell,
    concentration: Cell,
    concentration_sd: Cell,
    unit: str,
    shared_unit: str,
) -> RunHead:
    """The head of a run with what one more row says: different words are strung together."""
    told = dict(head.extras)
    for title in extras:
        text = row.cell(title.cell.column).text
        before = told.get(title.cell.text, "")
        if text and text not in before.split("; "):
            told[title.cell.text] = f"{before}; {text}" if before else text
        else:
            told.setdefault(title.cell.text, "")
    return replace(
        head,
        extras=tuple(told.items()),
        shared=head.shared if shared.is_blank else shared,
        concentration=head.concentration if concentration.is_blank else concentration,
        concentration_sd=head.concentration_sd if concentration_sd.is_blank else concentration_sd,
        concentration_unit=unit,
        shared_unit=shared_unit,
    )


def _names(extras: tuple[Title, ...] | list[Title]) -> tuple[str, ...]:
    return tuple(t.cell.text for t in extras)


def _twice(title: Title) -> Diagnostic:
    return Diagnostic(
        Name.ROW_REPEATED,
        f"{title.cell.place}: a second column `{title.cell.text}`",
        title.cell.span,
        mend="keep one of the two columns",
    )


def _nameless(row: Row, cell: Cell) -> Diagnostic:
    return Diagnostic(
        Name.UNREADABLE_CELL,
        f"row {row.span.line} names no species",
        cell.span,
        mend="write the species, or start the line with # if it is a remark",
    )


def _lonely_sd(title: Title) -> Diagnostic:
    words = f"`{title.cell.text}` is the sd of no column before it"
    return Diagnostic(Name.MISSING_COLUMN, f"{title.cell.place}: {words}", title.cell.span)
