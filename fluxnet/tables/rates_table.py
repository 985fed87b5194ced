"""Tables of measured rates: CSV, TSV or a workbook, long or wide, into runs.

A long table has a row a quantity (``run, species, direction, rate, sd, unit``), a wide one a
row a run (``glucose in [mmol/g/h]``, ``glucose in sd``, ``mu [1/h]``). Lines above it may
declare species and a shared error (:mod:`fluxnet.tables.statements`); a covariance table may
lie beside it (:mod:`fluxnet.tables.covariance_table`). What was guessed is said in one note;
what cannot be read is an error with its cell, and nothing is dropped.
"""

from __future__ import annotations

from dataclasses import field, replace
from pathlib import Path

from fluxnet.ground.diagnostic import Diagnostic, has_errors, in_order
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.file_kinds import find_model_instead
from fluxnet.ground.names import Name
from fluxnet.ground.progress import Progress, silent
from fluxnet.ground.record import record
from fluxnet.ground.source import Source, Span
from fluxnet.network.model import Network
from fluxnet.rates.measured import RatesTable
from fluxnet.tables.covariance_table import choose_covariance_grid
from fluxnet.tables.errors_assumed import SdRule
from fluxnet.tables.grid import Grid
from fluxnet.tables.inputs import Input, read_input
from fluxnet.tables.numerals import Decimal
from fluxnet.tables.sniffing import choose_grid, choose_sheet, split_lines
from fluxnet.tables.understanding import understand

__all__ = ["RatesReading", "read_rates", "read_rates_bytes", "read_rates_text"]

_OF_RATES = frozenset(
    {
        Name.SD_ASSUMED,
        Name.SHARED_ERROR_ASSUMED,
        Name.FREE_ACID_TAKEN,
        Name.BIOMASS_ASSUMED,
    }
)


@record
class RatesReading:
    """A table, or None where its faults forbid one, with all that was found.

    ``notes`` are the lines above the table, and the comments, that say nothing to the
    computer.
    """

    table: RatesTable | None
    diagnostics: tuple[Diagnostic, ...]
    sources: tuple[Source, ...] = ()
    notes: tuple[str, ...] = field(default=())


def read_rates_text(
    text: str,
    *,
    file: str = "rates.csv",
    network: Network | None = None,
    decimal: Decimal | None = None,
    separator: str | None = None,
    sd: float = 0.05,
    sd_floor: float = 0.005,
    covariance: str | None = None,
) -> RatesReading:
    r"""Read a table of rates from text.

    Parameters
    ----------
    file
        The name told in messages.
    network
        The model whose names, roles and basis the table uses.
    decimal, separator
        Overrule what the table shows.
    sd, sd_floor
        The sd of a rate that has none: a fraction of its value, and at least a fraction of
        the run's largest rate in C-mol.
    covariance
        The text of a covariance table.

    Raises
    ------
    MisuseError
        Where ``sd`` or ``sd_floor`` is negative or no number, or the separator is no sign.

    Examples
    --------
    >>> reading = read_rates_text(
    ...     "run,species,direction,rate,sd,unit\nA,glucose,in,1.80156,3 %,g/g/h\n"
    ... )
    >>> rate = reading.table.runs[0].rates[0]
    >>> str(rate.quantity), rate.value, round(rate.sd, 6), reading.table.runs[0].unit
    ('glucose in', 10.0, 0.3, 'mmol/g/h')
    """
    rule = _rule(sd, sd_floor, separator)
    lines = split_lines(text)
    mistaken = find_model_instead(lines, file)
    if mistaken is not None:
        return RatesReading(None, (mistaken,), (Source(file, lines),))
    grid = choose_grid(lines, file, network, separator)
    pairs = None
    if covariance is not None:
        pairs = choose_covariance_grid(split_lines(covariance), f"covariance of {file}")
    return _read(grid, pairs, network, decimal, rule)


def read_rates_bytes(
    data: bytes,
    *,
    file: str = "standard input",
    network: Network | None = None,
    sheet: str | None = None,
    decimal: Decimal | None = None,
    separator: str | None = None,
    sd: float = 0.05,
    sd_floor: float = 0.005,
    progress: Progress = silent,
) -> RatesReading:
    """Read a table of rates from bytes: text in any usual encoding, or a workbook.

    Parameters are those of :func:`read_rates_text`; ``sheet`` names the sheet of a workbook.
    """
    rule = _rule(sd, sd_floor, separator)
    found = read_input(data, file)
    return _read_input(found, None, network, sheet, decimal, separator, rule, progress)


def read_rates(
    path: str | Path,
    *,
    network: Network | None = None,
    sheet: str | None = None,
    decimal: Decimal | None = None,
    separator: str | None = None,
    sd: float = 0.05,
    sd_floor: float = 0.005,
    progress: Progress = silent,
) -> RatesReading:
    """Read a table of rates from a file, and the covariance table that may lie beside it.

    Parameters are those of :func:`read_rates_bytes`.
    """
    rule = _rule(sd, sd_floor, separator)
    path = Path(path)
    found = read_input(path, str(path))
    beside = next((p for p in _beside(path) if p.is_file()), None)
    covariance = None if beside is None else read_input(beside, str(beside))
    return _read_input(found, covariance, network, sheet, decimal, separator, rule, progress)


def _rule(sd: float, floor: float, separator: str | None) -> SdRule:
    if not all(share == 0 or 1e-9 <= share <= 1e9 for share in (sd, floor)):
        raise MisuseError("an assumed sd and its floor are shares of a rate that are not negative, "
                          "0 or between 1e-9 and 1e9 (1e-7 and 1e11 %)")
    if separator is not None and len(separator) != 1:
        raise MisuseError(f"a separator is one sign, not {separator!r}")
    return SdRule(sd, floor)


def _beside(path: Path) -> tuple[Path, ...]:
    """Where the covariance table of a rates table may lie; a path such as / has no name."""
    if not path.name:
        return ()
    endings = dict.fromkeys((path.suffix, ".csv", ".tsv"))
    return tuple(path.with_name(f"{path.stem}.covariance{e}") for e in endings)


def _read_input(
    found: Input,
    beside: Input | None,
    network: Network | None,
    sheet: str | None,
    decimal: Decimal | None,
    separator: str | None,
    rule: SdRule,
    progress: Progress,
) -> RatesReading:
    told = list(found.diagnostics)
    pairs: Grid | None = None
    if found.sheets:
        choice = choose_sheet(found.sheets, sheet, network, found.file)
        told.extend(choice.diagnostics)
        grid, pairs = choice.grid, choice.covariance
    else:
        mistaken = find_model_instead(found.lines, found.file)
        if mistaken is not None:
            source = Source(found.file, found.lines)
            return RatesReading(None, in_order((*told, mistaken)), (source,))
        grid = choose_grid(found.lines, found.file, network, separator) if found.lines else None
        if sheet is not None and not told:
            told.append(_no_workbook(found.file))
    if beside is not None and pairs is None:
        told.extend(beside.diagnostics)
        if beside.lines:
            pairs = choose_covariance_grid(beside.lines, beside.file)
    if grid is None or has_errors(told):
        return RatesReading(None, in_order(told))
    reading = _read(grid, pairs, network, decimal, rule, progress)
    return replace(reading, diagnostics=in_order((*told, *reading.diagnostics)))


def _read(
    grid: Grid,
    pairs: Grid | None,
    network: Network | None,
    decimal: Decimal | None,
    rule: SdRule,
    progress: Progress = silent,
) -> RatesReading:
    sources = (grid.source,) if pairs is None else (grid.source, pairs.source)
    if not grid.rows:
        file = grid.source.file
        fault = Diagnostic(Name.EMPTY_FILE, f"{file} holds no table", Span(file, 0, 0, 0))
        return RatesReading(None, (fault,), sources, grid.comments)
    understood = understand(grid, network, decimal, rule, pairs, progress)
    diagnostics = in_order(_with_line(d, sources) for d in understood.diagnostics)
    table = understood.table
    if has_errors(diagnostics):
        # what was assumed of rates is no news where there are none
        table = None
        diagnostics = tuple(d for d in diagnostics if d.name not in _OF_RATES)
    return RatesReading(table, diagnostics, sources, understood.notes)


def _with_line(diagnostic: Diagnostic, sources: tuple[Source, ...]) -> Diagnostic:
    """The diagnostic with the user's own line, where the input is text."""
    span = diagnostic.span
    lines = {s.file: s for s in sources if s.lines}
    if diagnostic.source_line is not None or not span.line or span.file not in lines:
        return diagnostic
    return replace(diagnostic, source_line=lines[span.file].line(span.line))


def _no_workbook(file: str) -> Diagnostic:
    words = f"a sheet is asked for, and {file} is no workbook"
    return Diagnostic(Name.UNKNOWN_SHEET, words, Span(file, 0, 0, 0))
