"""Long tables, a row a quantity: ``run, species, direction, rate, sd, unit``."""

from __future__ import annotations

from collections.abc import Mapping

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
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
from fluxnet.tables.reckoned import label_of
from fluxnet.tables.titles import Key, Title
from fluxnet.tables.vocabulary import Vocabulary, split_direction

__all__ = ["collect_long"]

_ROW_KEYS = (Key.RATE, Key.SD, Key.DIRECTION, Key.UNIT)


def collect_long(layout: Layout) -> Entries:
    """The entries of a long table; a blank run cell continues the run above."""
    places: dict[Key, Title] = {}
    faults: list[Diagnostic] = []
    for title in layout.titles:
        if title.key is None or (title.is_sd and title.key is not Key.SD):
            continue
        if title.key in places:
            faults.append(column_twice(title))
        places.setdefault(title.key, title)
    biomass = BiomassColumns.among(layout.titles)
    tells_biomass = bool(biomass.titles)
    used = {t.cell.column for t in (*places.values(), *biomass.titles)}
    extras = [t for t in layout.titles if t.cell.column not in used and t.cell.text]
    entries: list[Entry] = []
    heads: dict[str, RunHead] = {}
    failed: set[str] = set()
    run, continued = "", False
    for row in layout.body:
        named = _cell(row, places, Key.RUN).text
        continued = continued or bool(run and not named and Key.RUN in places)
        run = named or run or "1"
        head = heads.setdefault(run, RunHead(run, row.span))
        if row.span.line in layout.shifted:
            failed.add(run)
            continue
        if extras or tells_biomass:
            heads[run] = extend_head(head, row, extras, biomass)
        entry = _entry(row, run, places, layout.vocabulary)
        if entry is not None:
            entries.append(entry)
        elif any(not _cell(row, places, k).is_blank for k in _ROW_KEYS):
            faults.append(_nameless(row, _cell(row, places, Key.SPECIES)))
            failed.add(run)
    carried = tuple(t.cell.text for t in extras)
    return Entries(
        tuple(entries),
        tuple(heads.values()),
        carried,
        continued,
        frozenset(failed),
        tuple(faults),
    )


def _entry(row: Row, run: str, places: Mapping[Key, Title], vocabulary: Vocabulary) -> Entry | None:
    """The entry of a row; None where it names no species."""
    species = _cell(row, places, Key.SPECIES)
    if species.is_blank:
        return None
    direction_cell = _cell(row, places, Key.DIRECTION)
    direction = direction_cell.text
    name, word = split_direction(species.text)
    if direction or is_quantity_name(species.text, vocabulary):
        name, word = species.text, ""
    rate, sd = places[Key.RATE], places.get(Key.SD)
    unit = _cell(row, places, Key.UNIT)
    if not unit.text and (rate.unit or Key.UNIT not in places):
        unit_text, unit = rate.unit, rate.cell
    else:
        unit_text = unit.text
    return Entry(
        run=run,
        name=name,
        name_cell=species,
        direction=direction or word,
        value=_cell(row, places, Key.RATE),
        sd=_cell(row, places, Key.SD),
        unit=unit_text,
        unit_cell=unit,
        sd_unit=sd.unit if sd else "",
        title=rate.cell.text,
        sd_title=sd.cell if sd else Cell(""),
        direction_cell=direction_cell,
    )


def _cell(row: Row, places: Mapping[Key, Title], key: Key) -> Cell:
    return row.cell(places[key].cell.column) if key in places else Cell("")


def _nameless(row: Row, cell: Cell) -> Diagnostic:
    mend = "write the species, or start the line with # if it is a remark"
    if label_of(row):
        mend = "take the row out, or start its line with #: what is reckoned is no rate"
    words = f"row {row.span.line} names no species"
    return Diagnostic(Name.UNREADABLE_CELL, words, cell.span, mend=mend)
