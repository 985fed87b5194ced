"""Tables of measured rates: CSV, TSV or a workbook, long or wide, into runs.

A long table has a row a quantity (``run, species, direction, rate, sd, unit``), a wide one a
row a run (``glucose in [mmol/g/h]``, ``glucose in sd``, ``mu [1/h]``). What was guessed is
said in one note; what cannot be read is an error with its cell, and nothing is dropped.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace
from pathlib import Path

from fluxnet.ground.diagnostic import Diagnostic, has_errors, in_order
from fluxnet.ground.names import Name
from fluxnet.ground.source import Source, Span
from fluxnet.network.model import Network
from fluxnet.rates.measured import RatesTable
from fluxnet.tables.correlations import Correlation
from fluxnet.tables.decoding import decode
from fluxnet.tables.delimited import split_lines
from fluxnet.tables.errors_assumed import SdRule
from fluxnet.tables.grid import Grid
from fluxnet.tables.numerals import Decimal
from fluxnet.tables.sniffing import choose_grid
from fluxnet.tables.understanding import understand

__all__ = ["RatesReading", "read_rates", "read_rates_text"]


@dataclass(frozen=True, slots=True)
class RatesReading:
    """A table, or None where its faults forbid one, with all that was found.

    ``notes`` are the lines above the table that say nothing to the computer.
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
) -> RatesReading:
    r"""Read a table of rates from text.

    Parameters
    ----------
    file
        The name told in messages.
    network
        The model whose names and roles the table uses.
    decimal, separator
        Overrule what the table shows.
    sd, sd_floor
        The sd of a rate that has none: a fraction of its value, and at least a fraction of
        the run's largest rate in C-mol.

    Examples
    --------
    >>> reading = read_rates_text(
    ...     "run,species,direction,rate,sd,unit\nA,glucose,in,1.80156,3 %,g/g/h\n"
    ... )
    >>> rate = reading.table.runs[0].rates[0]
    >>> str(rate.quantity), rate.value, round(rate.sd, 6), reading.table.runs[0].unit
    ('glucose in', 10.0, 0.3, 'mmol/g/h')
    """
    lines = split_lines(text.removeprefix("\ufeff"))
    grid = choose_grid(lines, file, network, separator)
    if not grid.rows:
        fault = Diagnostic(Name.EMPTY_FILE, f"{file} holds nothing", Span(file, 0, 0, 0))
        return RatesReading(None, (fault,), (grid.source,))
    return _read(grid, network, decimal, SdRule(sd, sd_floor))


def read_rates(
    path: str | Path,
    *,
    network: Network | None = None,
    sheet: str | None = None,
    decimal: Decimal | None = None,
    separator: str | None = None,
    sd: float = 0.05,
    sd_floor: float = 0.005,
) -> RatesReading:
    """Read a table of rates from a file.

    Parameters are those of :func:`read_rates_text`; ``sheet`` names the sheet of a workbook.
    """
    path = Path(path)
    file = str(path)
    data, fault = _bytes_of(path)
    if fault is not None:
        return RatesReading(None, (fault,))
    decoded = decode(data)
    if decoded.text is None:
        fault = Diagnostic(
            Name.BINARY_FILE,
            f"{file} is neither text nor a workbook",
            Span(file, 0, 0, 0),
            mend="save it as CSV or XLSX",
        )
        return RatesReading(None, (fault,))
    reading = read_rates_text(
        decoded.text,
        file=file,
        network=network,
        decimal=decimal,
        separator=separator,
        sd=sd,
        sd_floor=sd_floor,
    )
    if not decoded.guessed:
        return reading
    note = Diagnostic(
        Name.WRONG_ENCODING, f"{file} is not UTF-8 and was read as Latin-1", Span(file, 0, 0, 0)
    )
    return replace(reading, diagnostics=in_order((*reading.diagnostics, note)))


def _read(
    grid: Grid,
    network: Network | None,
    decimal: Decimal | None,
    rule: SdRule,
    correlations: Sequence[Correlation] = (),
) -> RatesReading:
    understood = understand(grid, network, decimal, rule)
    diagnostics = in_order(
        d
        if d.source_line is not None or grid.sheet is not None or not d.span.line
        else replace(d, source_line=grid.source.line(d.span.line))
        for d in understood.diagnostics
    )
    table = None if has_errors(diagnostics) else understood.table
    return RatesReading(table, diagnostics, (grid.source,), understood.notes)


def _bytes_of(path: Path) -> tuple[bytes, Diagnostic | None]:
    span = Span(str(path), 0, 0, 0)
    if path.is_dir():
        return b"", Diagnostic(Name.NOT_A_FILE, f"{path} is a folder", span)
    try:
        return path.read_bytes(), None
    except FileNotFoundError:
        return b"", Diagnostic(Name.FILE_MISSING, f"there is no file {path}", span)
    except OSError as fault:
        words = fault.strerror or "it cannot be opened"
        return b"", Diagnostic(Name.FILE_MISSING, f"{path} cannot be read: {words}", span)
