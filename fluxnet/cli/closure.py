"""``fluxnet closure``: do carbon, nitrogen and electrons close?"""

from __future__ import annotations

import argparse

from fluxnet.cli.inputs import load_model, load_rates
from fluxnet.cli.main import Exit
from fluxnet.cli.options import add_model_argument, add_output_options, add_table_options
from fluxnet.cli.output import give_faults, give_findings, give_screen, refuse_outputs
from fluxnet.ground.diagnostic import Diagnostic, in_order
from fluxnet.ground.names import Name
from fluxnet.network.model import Network
from fluxnet.presenting.records import Document, Input

__all__ = ["EXAMPLES", "add_arguments", "run"]

EXAMPLES = """Do carbon, nitrogen and electrons close?

  fluxnet closure rates.csv                          formulas from the catalogue
  fluxnet closure rates.csv --model model.flux       formulas from the model
  fluxnet closure rates.csv --run A --without CO2    as if the row of CO2 were not there
  fluxnet closure rates.csv --nitrogen nitrate       another nitrogen source
"""


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Options of the command."""
    parser.add_argument("rates", metavar="RATES", help="a rates table (CSV, TSV, XLSX), or -")
    add_model_argument(parser, optional=True)
    parser.add_argument(
        "--without", metavar="NAME", action="append", default=[],
        help="leave the rows of NAME out: it then counts as not exchanged",
    )
    parser.add_argument("--nitrogen", metavar="NAME", help="the nitrogen source (ammonia)")
    add_table_options(parser)
    add_output_options(parser)


def run(arguments: argparse.Namespace) -> int:
    """Close the runs that were asked for, and show them."""
    refuse_outputs(arguments, Document.CLOSURE)
    from fluxnet.presenting.closure_screen import closure_record, closure_screen
    from fluxnet.studies.closure import close_rates

    network: Network | None = None
    inputs: tuple[Input, ...] = ()
    diagnostics: tuple[Diagnostic, ...] = ()
    if arguments.model is not None:
        model = load_model(arguments)
        network, inputs, diagnostics = model.network, model.inputs, model.diagnostics
        if network is None:
            return give_faults(arguments, Document.CLOSURE, inputs, diagnostics)
    rates = load_rates(arguments, network)
    inputs, diagnostics = (*inputs, *rates.inputs), (*diagnostics, *rates.diagnostics)
    if rates.table is None:
        return give_faults(arguments, Document.CLOSURE, inputs, diagnostics)
    closure = close_rates(
        rates.table,
        network=network,
        nitrogen=arguments.nitrogen,
        without=tuple(arguments.without),
    )
    diagnostics = in_order((*diagnostics, *closure.diagnostics))
    if not closure.runs:
        status = give_faults(arguments, Document.CLOSURE, inputs, diagnostics)
        # an option that names what is not there is misuse; what a table names is its fault
        asked = arguments.without or arguments.nitrogen
        wrong = any(d.name is Name.UNKNOWN_QUANTITY for d in closure.diagnostics)
        return Exit.MISUSE if asked and wrong else status
    give_findings(arguments, diagnostics)
    return give_screen(
        arguments, Document.CLOSURE, inputs, diagnostics, closure_record(closure),
        closure_screen(closure), sound=closure.is_sound,
    )  # fmt: skip
