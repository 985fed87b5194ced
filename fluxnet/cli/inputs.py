"""Inputs named on a command line: models and rates tables, read with everything told."""

from __future__ import annotations

import argparse
import sys
from collections.abc import Collection, Iterable, Sequence
from dataclasses import replace
from pathlib import Path
from typing import TYPE_CHECKING

from fluxnet.cli.main import Exit
from fluxnet.ground.diagnostic import Diagnostic, has_errors, with_accepted
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.names import Name
from fluxnet.ground.progress import Progress, silent
from fluxnet.ground.record import record
from fluxnet.ground.source import Source, Span
from fluxnet.network.model import Network
from fluxnet.presenting.records import Input, hash_bytes, hash_file
from fluxnet.reading.model import ModelReading, read_model, read_model_bytes
from fluxnet.reading.source import MOST_BYTES

if TYPE_CHECKING:
    from fluxnet.rates.measured import RatesTable

__all__ = [
    "ReadModel", "ReadRates", "exit_of", "load_model", "load_rates", "read_inputs",
    "without_limits",
]

_SEPARATORS = {"comma": ",", "semicolon": ";", "tab": "\t"}

# With one of these the input cannot even be looked at: the command was wrongly used.
_UNREADABLE = frozenset(
    {
        Name.FILE_MISSING,
        Name.NOT_A_FILE,
        Name.NO_RAW_DATA,
        Name.BINARY_FILE,
        Name.EMPTY_FILE,
        Name.FILE_TOO_LONG,
        Name.PACKAGE_MISSING,
        Name.UNKNOWN_RUN,
        Name.UNKNOWN_SHEET,
        Name.UNKNOWN_VARIANT,
        Name.WRONG_KIND_OF_FILE,
    }
)


@record
class ReadModel:
    """A model with its variant applied, all findings, its text, and its hash."""

    network: Network | None
    diagnostics: tuple[Diagnostic, ...]
    inputs: tuple[Input, ...]
    sources: tuple[Source, ...]

    @property
    def told(self) -> tuple[Diagnostic, ...]:
        """What a report that does not check the model says of it: what it accepts among that."""
        acceptances = () if self.network is None else self.network.acceptances
        return with_accepted(self.diagnostics, acceptances)


def exit_of(diagnostics: tuple[Diagnostic, ...]) -> int:
    """The exit status that findings alone ask for."""
    # told at a line they are faults of a file that could be read: a used file, a `from`
    if any(d.name in _UNREADABLE and not d.span.line for d in diagnostics):
        return Exit.MISUSE
    return Exit.FINDING if has_errors(diagnostics) else Exit.SOUND


def load_model(arguments: argparse.Namespace, variant: str = "base") -> ReadModel:
    """Read the model that a command names, and apply a variant to it."""
    reading, inputs = _read(arguments)
    network, diagnostics = reading.network, reading.diagnostics
    if network is not None and variant != "base":
        from fluxnet.network.variant import apply_variant  # most commands ask for none

        network, told = apply_variant(network, variant)
        known = {(d.name, d.span, d.message) for d in diagnostics}
        here = Span(str(arguments.model), 0)
        told = tuple(d if d.span.file else replace(d, span=here) for d in told)
        new = (d for d in told if (d.name, d.span, d.message) not in known)
        diagnostics = (*diagnostics, *new)
    return ReadModel(network, diagnostics, inputs, reading.sources)


def _read(arguments: argparse.Namespace) -> tuple[ModelReading, tuple[Input, ...]]:
    if arguments.model == "-":
        data = sys.stdin.buffer.read(MOST_BYTES + 1)
        reading = read_model_bytes(data, large=arguments.large)
        return reading, (hash_bytes(data, "standard input"),)
    path = Path(arguments.model)
    reading = read_model(path, large=arguments.large, allow_use=tuple(arguments.allow_use))
    return reading, read_inputs(source.file for source in reading.sources)


def read_inputs(files: Iterable[str]) -> tuple[Input, ...]:
    """The hashes of files that were read."""
    paths = dict.fromkeys(file.split("!")[0] for file in files)
    return tuple(hash_file(Path(p), p) for p in paths if Path(p).is_file())


@record
class ReadRates:
    """The runs that a command asks for, all findings, and the table's hash."""

    table: RatesTable | None
    diagnostics: tuple[Diagnostic, ...]
    inputs: tuple[Input, ...]


def load_rates(
    arguments: argparse.Namespace,
    network: Network | None,
    progress: Progress = silent,
    limits: Collection[str] = (),
) -> ReadRates:
    """Read the rates table that a command names, and keep the runs that it asks for.

    ``limits`` are measured limits of the model that a command can leave unmeasured itself.
    """
    # Imported here, so that `check` does not wait for the tables.
    from fluxnet.tables.inputs import MOST_BYTES as MOST_OF_A_TABLE
    from fluxnet.tables.numerals import Decimal
    from fluxnet.tables.rates_table import read_rates, read_rates_bytes

    decimal = Decimal[arguments.decimal.upper()] if arguments.decimal else None
    separator = _SEPARATORS.get(arguments.separator)
    sd, floor = arguments.sd / 100, arguments.sd_floor / 100
    inputs: tuple[Input, ...]
    if arguments.rates == "-":
        data = sys.stdin.buffer.read(MOST_OF_A_TABLE + 1)
        reading = read_rates_bytes(
            data, network=network, sheet=arguments.sheet, decimal=decimal, separator=separator,
            sd=sd, sd_floor=floor, progress=progress,
        )  # fmt: skip
        inputs = (hash_bytes(data, "standard input"),)
    else:
        reading = read_rates(
            Path(arguments.rates), network=network, sheet=arguments.sheet, decimal=decimal,
            separator=separator, sd=sd, sd_floor=floor, progress=progress,
        )  # fmt: skip
        inputs = read_inputs(source.file for source in reading.sources)
    table, diagnostics = reading.table, reading.diagnostics
    if table is not None and arguments.run:
        table, told = _choose_runs(table, arguments)
        diagnostics = (*told, *diagnostics)
    if table is not None and arguments.unmeasured:
        table = _leave_unmeasured(table, arguments.unmeasured, limits)
    return ReadRates(table, diagnostics, inputs)


def without_limits(network: Network, asked: Collection[str]) -> Network:
    """The model without those measured limits; a rate of the same name in a table is blank too."""
    kept = tuple(x for x in network.limits if not (x.is_measured and str(x.quantity) in asked))
    return network if len(kept) == len(network.limits) else replace(network, limits=kept)


def _leave_unmeasured(
    table: RatesTable, asked: Sequence[str], limits: Collection[str]
) -> RatesTable:
    from difflib import get_close_matches

    from fluxnet.rates.unmeasuring import leave_unmeasured, measured_names

    known = measured_names(table)
    for name in asked:
        if name not in known and name not in limits:
            every = (*known, *limits)
            near = get_close_matches(name, every, 1, 0.6)
            hint = f"the nearest is {near[0]}" if near else f"there are {', '.join(every)}"
            raise MisuseError(f"no measured rate is called {name!r}; {hint}")
    return leave_unmeasured(table, asked)


def _choose_runs(
    table: RatesTable, arguments: argparse.Namespace
) -> tuple[RatesTable | None, tuple[Diagnostic, ...]]:
    names = [run.name for run in table.runs]
    asked = [
        name
        for given in arguments.run
        for name in ([given] if given in names else [part.strip() for part in given.split(",")])
    ]
    told = tuple(
        Diagnostic(
            Name.UNKNOWN_RUN,
            f"the table has no run {name}",
            Span(str(arguments.rates), 0),
            mend=f"its runs are {', '.join(names)}",
        )
        for name in asked
        if name not in names
    )
    if told:
        return None, told
    chosen = tuple(run for run in table.runs if run.name in asked)
    return replace(table, runs=chosen), ()
