"""``fluxnet closure``: do carbon, nitrogen and electrons close?"""

from __future__ import annotations

import argparse
import sys
from pathlib import Path
from typing import TYPE_CHECKING

from fluxnet.cli.inputs import load_model, load_rates
from fluxnet.cli.main import Exit
from fluxnet.cli.options import add_model_argument, add_output_options, add_table_options
from fluxnet.cli.output import give_faults, give_findings, give_screen, refuse_outputs
from fluxnet.cli.progress import progress_on
from fluxnet.cli.table_files import refuse_table, write_table
from fluxnet.ground.diagnostic import Diagnostic, in_order
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.names import Name
from fluxnet.ground.progress import Progress
from fluxnet.network.model import Network
from fluxnet.presenting.records import Document, Input

if TYPE_CHECKING:
    from fluxnet.rates.measured import RatesTable
    from fluxnet.studies.closure_result import Closure

__all__ = ["EXAMPLES", "add_arguments", "run"]

EXAMPLES = """Do carbon, nitrogen and electrons close?

  fluxnet closure rates.csv                          formulas from the catalogue
  fluxnet closure rates.csv --model model.flux       formulas from the model
  fluxnet closure rates.csv --run A --without CO2    as if the row of CO2 were not there
  fluxnet closure rates.csv --nitrogen nitrate       another nitrogen source
  fluxnet closure grams.csv --table rates.csv        the rates as they were understood
"""


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Options of the command."""
    parser.add_argument("rates", metavar="RATES", help="a rates table (CSV, TSV, XLSX), or -")
    add_model_argument(parser, optional=True)
    parser.add_argument(
        "--without", metavar="NAME", action="append", default=[],
        help="leave the rows of NAME out: it then counts as not exchanged",
    )
    parser.add_argument(
        "--suspects", action="store_true",
        help="say what could be wrong in every run, not only in those that do not close",
    )  # fmt: skip
    parser.add_argument("--nitrogen", metavar="NAME", help="the nitrogen source (ammonia)")
    parser.add_argument(
        "--table", metavar="FILE", type=Path,
        help="write the rates as they were understood: one unit a run, every rate with its sd",
    )  # fmt: skip
    add_table_options(parser)
    add_output_options(parser)


def run(arguments: argparse.Namespace) -> int:
    """Close the runs that were asked for, and show them."""
    refuse_outputs(arguments, Document.CLOSURE)
    if arguments.table is not None:
        _refuse_table(arguments)
    from fluxnet.presenting.closure_record import closure_record
    from fluxnet.presenting.closure_screen import closure_screen

    network: Network | None = None
    inputs: tuple[Input, ...] = ()
    diagnostics: tuple[Diagnostic, ...] = ()
    if arguments.model is not None:
        model = load_model(arguments)
        network, inputs, diagnostics = model.network, model.inputs, model.told
        if network is None:
            return give_faults(arguments, Document.CLOSURE, inputs, diagnostics)
    with progress_on(sys.stderr) as progress:
        rates = load_rates(arguments, network, progress)
        closure, undone = (
            _close(arguments, rates.table, network, progress) if rates.table else (None, 0)
        )
    inputs, diagnostics = (*inputs, *rates.inputs), (*diagnostics, *rates.diagnostics)
    if closure is None:
        return give_faults(arguments, Document.CLOSURE, inputs, diagnostics)
    diagnostics = in_order((*diagnostics, *closure.diagnostics))
    if not closure.runs:
        status = give_faults(arguments, Document.CLOSURE, inputs, diagnostics)
        # an option that names what is not there is misuse; what a table names is its fault
        asked = arguments.without or arguments.nitrogen
        wrong = any(d.name is Name.UNKNOWN_QUANTITY for d in closure.diagnostics)
        return Exit.MISUSE if asked and wrong else status
    give_findings(arguments, [d for d in diagnostics if d.accepted is None])
    if rates.table is not None and arguments.table is not None:
        write_table(rates.table, arguments.table, force=arguments.force)
    body = closure_record(closure) if arguments.json else {}
    if undone:
        body["undone"] = undone
    status = give_screen(
        arguments, Document.CLOSURE, inputs, diagnostics, body,
        closure_screen(closure, everything=arguments.all), sound=closure.is_sound,
    )  # fmt: skip
    if undone:
        done = len(closure.runs)
        print(f"interrupted: {done:,} of {done + undone:,} runs are closed", file=sys.stderr)
        return Exit.INTERRUPTED
    return status


def _refuse_table(arguments: argparse.Namespace) -> None:
    """Refuse a file for the rates that could not be written, or is the one that is read."""
    table: Path = arguments.table
    if arguments.rates != "-" and table.resolve() == Path(arguments.rates).resolve():
        raise MisuseError(f"--table would write over {table}, which is read")
    refuse_table(table, force=arguments.force)


def _close(
    arguments: argparse.Namespace,
    table: RatesTable,
    network: Network | None,
    progress: Progress,
) -> tuple[Closure, int]:
    """The closure, and how many runs are left when the user stops: what is done is kept."""
    from fluxnet.studies.closure import close_in_parts, join_parts

    parts: list[Closure] = []
    total, done = len(table.runs), 0
    try:
        for part in close_in_parts(
            table,
            network=network,
            nitrogen=arguments.nitrogen,
            without=tuple(arguments.without),
            suspects=True if arguments.suspects else None,
        ):
            parts.append(part)
            done += len(part.runs) + len(part.diagnostics)
            progress("closing runs", done, total)
    except KeyboardInterrupt:
        if not any(part.runs for part in parts):
            raise
        return join_parts(table, parts), total - done
    return join_parts(table, parts), 0
