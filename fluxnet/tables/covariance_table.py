"""The covariance table that may lie beside a rates table.

``NAME.covariance.csv`` beside ``NAME.csv`` (or a sheet ``covariance`` of a workbook) tells which
errors move together beyond the shared error of the biomass: oxygen and CO2 from one gas
analyser, say. One row a pair::

    run, first,     second,  correlation
    A,   oxygen in, CO2 out, 0.6

``first`` and ``second`` are quantities of the rates table; the direction may be left out. A
blank run, or a table without that column, holds for every run that measures both.
``correlation`` is that of the errors as given, without the shared error, from -1 to 1. Instead
a column ``covariance`` may stand, in the product of the two units that the rates table uses;
a row with one quantity twice must then agree with its sd. Pairs that are not listed are
independent. Lines above the header and lines that start with # are remarks.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.source import Span
from fluxnet.network.model import Quantity, QuantityKind
from fluxnet.tables.correlations import Correlation, Correlations
from fluxnet.tables.delimited import declared_separator, split_text
from fluxnet.tables.grid import Cell, Grid, Row
from fluxnet.tables.numbers import cell_fault, read_cell
from fluxnet.tables.numerals import Decimal, decide_decimal
from fluxnet.tables.quantities import read_quantity
from fluxnet.tables.values import Readings
from fluxnet.tables.vocabulary import Vocabulary, find_species, read_direction, split_direction

__all__ = ["choose_covariance_grid", "read_covariance"]

_TITLES = ("run", "first", "second", "correlation", "covariance")


def choose_covariance_grid(lines: tuple[str, ...], file: str) -> Grid:
    """Cut a covariance table with the separator with which its header can be read."""
    declared = declared_separator(lines)
    grids = [split_text(lines, sign, file) for sign in (declared or "", "\t", ";", ",") if sign]
    return next((g for g in grids if _header(g) is not None), grids[-1])


def read_covariance(
    grid: Grid,
    readings: Readings,
    runs: Sequence[str],
    vocabulary: Vocabulary,
    asked: Decimal | None,
) -> Correlations:
    """The pairs of a covariance table, by the quantities of the rates table."""
    found = _header(grid)
    if found is None:
        fault = Diagnostic(
            Name.MISSING_COLUMN,
            f"{grid.source.file} has no header of a covariance table",
            Span(grid.source.file, 0, 0, 0),
            mend="write: run, first, second, correlation",
        )
        return Correlations(diagnostics=(fault,))
    places, body = found
    kind = "correlation" if "correlation" in places else "covariance"
    filled = [r.cell(places[kind]) for r in body]
    choice = decide_decimal(filled, grid.separator)
    decimal = asked or choice.decimal
    doubtful = () if asked else choice.doubtful + choice.disputed
    known = {r.quantity: None for r in readings.readings}
    pairs: list[Correlation] = []
    faults: list[Diagnostic] = []
    for row in body:
        run = row.cell(places["run"]).text if "run" in places else ""
        if run and run not in runs:
            faults.append(_foreign_run(row.cell(places["run"]), run, runs))
        sides = [_side(row.cell(places[k]), known, readings, vocabulary) for k in _TITLES[1:3]]
        faults.extend(s for s in sides if isinstance(s, Diagnostic))
        cell = row.cell(places[kind])
        if cell in doubtful:
            faults.append(_doubtful(cell))
            continue
        number = read_cell(cell, decimal, kind) if not cell.is_blank else None
        if number is None or number.fault is not None:
            faults.append((number and number.fault) or _blank(cell, kind))
        elif isinstance(sides[0], Quantity) and isinstance(sides[1], Quantity):
            value = number.value or 0.0
            value = value / 100 if number.percent else value
            pairs.append(Correlation(run, sides[0], sides[1], value, kind == "covariance", cell))
    return Correlations(tuple(pairs), tuple(faults))


def _header(grid: Grid) -> tuple[Mapping[str, int], tuple[Row, ...]] | None:
    """The columns by title, and the rows below the header."""
    for index, row in enumerate(grid.rows[:30]):
        places = {c.text.lower(): c.column for c in row.cells if c.text.lower() in _TITLES}
        if {"first", "second"} <= set(places) and {"correlation", "covariance"} & set(places):
            return places, grid.rows[index + 1 :]
    return None


def _side(
    cell: Cell, known: Mapping[Quantity, None], readings: Readings, vocabulary: Vocabulary
) -> Quantity | Diagnostic:
    """The quantity of the rates table that a cell names."""
    name, word = split_direction(cell.text)
    found = None if not name or "/" in name else find_species(name, vocabulary)
    if found is not None:
        typed = {s.entry or s.name: s.name for s in readings.species}
        own = typed.get(found.species.entry or found.species.name, found.species.name)
        told = read_direction(word)
        for quantity in known:
            same = quantity.kind is QuantityKind.RATE and quantity.name == own
            if same and told in (None, quantity.direction):
                return quantity
    elif cell.text:
        named = read_quantity(cell.text, "", vocabulary).quantity
        for quantity in known:
            if named is not None and _is_same(named, quantity):
                return quantity
    from difflib import get_close_matches

    near = get_close_matches(cell.text, [str(q) for q in known], 3, 0.5)
    return cell_fault(
        Name.UNKNOWN_QUANTITY,
        cell,
        "",
        f"the rates table has no quantity `{cell.text}`",
        f"did you mean {' or '.join(near)}?" if near else None,
    )


def _is_same(named: Quantity, quantity: Quantity) -> bool:
    """Whether a name means a quantity; the sides of a ratio may leave their direction open."""
    if named.kind is not QuantityKind.RATIO or quantity.kind is not QuantityKind.RATIO:
        return named == quantity
    sides = ((named.numerator, quantity.numerator), (named.denominator, quantity.denominator))
    return all(
        a is not None
        and b is not None
        and (a.kind, a.name) == (b.kind, b.name)
        and a.direction in (None, b.direction)
        for a, b in sides
    )


def _foreign_run(cell: Cell, run: str, runs: Sequence[str]) -> Diagnostic:
    words = f"the rates table has no run {run}"
    return cell_fault(Name.BAD_COVARIANCE, cell, "run", words, f"its runs are {', '.join(runs)}")


def _doubtful(cell: Cell) -> Diagnostic:
    words = f"`{cell.text}` can be read with a decimal point or with a decimal comma"
    return cell_fault(Name.AMBIGUOUS_NUMBER, cell, "", words)


def _blank(cell: Cell, kind: str) -> Diagnostic:
    words = f"a pair without a {kind}"
    return cell_fault(Name.UNREADABLE_CELL, cell, kind, words, "take the row out: independent")
