"""``fluxnet routes``: the elementary routes of a network."""

from __future__ import annotations

import argparse
import re
import sys
from fractions import Fraction

from fluxnet.cli.inputs import load_model
from fluxnet.cli.main import Exit
from fluxnet.cli.options import add_model_argument, add_output_options
from fluxnet.cli.output import give_faults, give_findings, give_screen, refuse_outputs
from fluxnet.cli.progress import progress_on
from fluxnet.ground.diagnostic import in_order
from fluxnet.modes.enumerate import Ending
from fluxnet.presenting.records import Document
from fluxnet.presenting.routes_record import routes_record
from fluxnet.presenting.routes_screen import routes_screen
from fluxnet.studies.routes import MEMORY, find_routes

__all__ = ["EXAMPLES", "add_arguments", "memory_size", "run"]

EXAMPLES = """By which routes can it get there; what would have to go?

  fluxnet routes model.flux                               every elementary route
  fluxnet routes model.flux --from glucose --to ethanol   with their yields, the best first
  fluxnet routes model.flux --to ethanol --best 10        the best alone, without all the others
  fluxnet routes model.flux --to ethanol --drain ATP      and the ATP that each route makes
  fluxnet routes model.flux --to ethanol --keep-above 1.5 what to take out, to keep only these
  fluxnet routes model.flux --variant anaerobic --memory 8GB
"""

_SIZE = re.compile(r"(\d+(?:\.\d+)?)\s*(?:([kMGT])i?B?|B)?", re.IGNORECASE)
_UNITS = {"k": 1e3, "m": 1e6, "g": 1e9, "t": 1e12}


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Options of the command."""
    add_model_argument(parser)
    parser.add_argument("--variant", metavar="V", default="base", help='such as "lean * fast"')
    parser.add_argument("--from", dest="substrate", metavar="S", help="what yields are told per")
    parser.add_argument("--to", dest="product", metavar="P", help="the product that counts")
    parser.add_argument(
        "--best", metavar="N", type=int,
        help="only so many routes of the largest yield, without looking for all",
    )  # fmt: skip
    parser.add_argument(
        "--drain", metavar="CARRIER", action="append", default=[],
        help="let a carrier leave, to be told what each route makes of it",
    )  # fmt: skip
    parser.add_argument(
        "--open", dest="opened", metavar="CARRIER", action="append", default=[],
        help="do not balance a carrier: routes may make it and spend it",
    )  # fmt: skip
    parser.add_argument(
        "--keep-above", metavar="YIELD", type=_number,
        help="say which reactions have to go so that only routes of this yield, mol/mol, are left",
    )  # fmt: skip
    parser.add_argument(
        "--memory", metavar="SIZE", type=memory_size, default=MEMORY,
        help="stop before routes take more than this, such as 500MB (2GB)",
    )  # fmt: skip
    add_output_options(parser)


def memory_size(text: str) -> float:
    """A size in bytes as one types it.

    Examples
    --------
    >>> memory_size("2GB"), memory_size("500 MB")
    (2000000000.0, 500000000.0)
    """
    found = _SIZE.fullmatch(text.strip())
    if found is None or not float(found[1]):
        raise argparse.ArgumentTypeError(f"a size such as 2GB or 500MB is needed, not {text!r}")
    return float(found[1]) * _UNITS.get((found[2] or "").lower(), 1.0)


def _number(text: str) -> Fraction:
    try:
        return Fraction(text)
    except (ValueError, ZeroDivisionError):
        raise argparse.ArgumentTypeError(f"a number is needed, not {text!r}") from None


def run(arguments: argparse.Namespace) -> int:
    """Find the routes, and show them."""
    refuse_outputs(arguments, Document.ROUTES)
    model = load_model(arguments, arguments.variant)
    if model.network is None:
        nothing: dict[str, list[str]] = {"groups": []}
        return give_faults(arguments, Document.ROUTES, model.inputs, model.diagnostics, nothing)
    with progress_on(sys.stderr) as progress:
        routes = find_routes(
            model.network,
            substrate=arguments.substrate,
            product=arguments.product,
            best=arguments.best,
            drain=_names(arguments.drain),
            open_carriers=_names(arguments.opened),
            keep_above=arguments.keep_above,
            memory=arguments.memory,
            progress=progress,
        )
    give_findings(arguments, [d for d in in_order(model.told) if d.accepted is None])
    body = routes_record(routes, everything=arguments.all) if arguments.json else {}
    status = give_screen(
        arguments, Document.ROUTES, model.inputs, model.told, body,
        routes_screen(routes, everything=arguments.all), sound=routes.is_sound,
    )  # fmt: skip
    return Exit.INTERRUPTED if routes.ending is Ending.INTERRUPTED else status


def _names(given: list[str]) -> list[str]:
    return [name.strip() for text in given for name in text.split(",") if name.strip()]
