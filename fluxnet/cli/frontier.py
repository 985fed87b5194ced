"""``fluxnet frontier``: the exact trade-off between two quantities."""

from __future__ import annotations

import argparse
import sys
from pathlib import Path

from fluxnet.cli.inputs import load_model
from fluxnet.cli.options import add_model_argument, add_output_options
from fluxnet.cli.output import give_faults, give_findings, give_screen, refuse_outputs
from fluxnet.cli.progress import progress_on
from fluxnet.ground.diagnostic import in_order
from fluxnet.ground.errors import InputError, MisuseError
from fluxnet.presenting.records import Document

__all__ = ["EXAMPLES", "add_arguments", "run"]

EXAMPLES = """What does more of one thing cost of another?

  fluxnet frontier model.flux mu ethanol                  the most ethanol at each growth rate
  fluxnet frontier model.flux mu oxygen --least           the least oxygen that growth needs
  fluxnet frontier model.flux mu ethanol --across "base | anaerobic"
  fluxnet frontier model.flux ethanol --over oxygen --from 0 --to 8
  fluxnet frontier model.flux mu --over PO --from 0.8 --to 1.6
  fluxnet frontier model.flux mu ethanol --only glucose   no other carbon source is taken up
  fluxnet frontier model.flux mu ethanol --figure trade.svg
"""


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Options of the command."""
    add_model_argument(parser)
    words = "a boundary species, `in SPECIES`, a reaction, mu, a carrier, or `2 A + B`"
    parser.add_argument("x", metavar="X", help=f"{words}; or a yield `A / B` of a fixed B")
    parser.add_argument(
        "y", metavar="Y", nargs="?", help="the quantity whose best value is told for each X"
    )
    parser.add_argument("--least", action="store_true", help="the least Y, not the most")
    parser.add_argument(
        "--across", metavar="A|B", action="append", default=[],
        help='variants side by side: "base | anaerobic"; given twice, every combination',
    )  # fmt: skip
    parser.add_argument(
        "--over", metavar="NAME", help="move the limit on NAME, or the parameter NAME"
    )
    parser.add_argument(
        "--from", metavar="A", type=float, dest="start",
        help="where NAME, or without --over X, begins",
    )  # fmt: skip
    parser.add_argument("--to", metavar="B", type=float, dest="stop", help="where it ends")
    parser.add_argument(
        "--only", metavar="SOURCE", action="append", default=[],
        help="take up no carbon source but this; given twice, but these",
    )  # fmt: skip
    parser.add_argument(
        "--figure", metavar="FILE", type=Path, action="append", default=[],
        help="draw it: FILE.svg, .png or .pdf; given several times, into each",
    )
    add_output_options(parser)


def run(arguments: argparse.Namespace) -> int:
    """Trace the curves, and show them."""
    from fluxnet.presenting.frontier_record import frontier_record
    from fluxnet.presenting.frontier_screen import frontier_screen
    from fluxnet.studies.frontier import find_frontier

    refuse_outputs(arguments, Document.FRONTIER)
    for path in arguments.figure:
        from fluxnet.presenting.figures import refuse_figure

        if str(path) == arguments.model:
            raise MisuseError(f"--figure would write over {arguments.model}, which is read")
        refuse_figure(path, force=arguments.force)
    model = load_model(arguments)
    if model.network is None:
        return give_faults(arguments, Document.FRONTIER, model.inputs, model.diagnostics)
    try:
        with progress_on(sys.stderr) as progress:
            result = find_frontier(
                model.network, arguments.x, arguments.y, across=arguments.across,
                least=arguments.least, over=arguments.over, start=arguments.start,
                stop=arguments.stop, only=arguments.only, progress=progress,
            )  # fmt: skip
    except InputError as fault:
        told = (*model.diagnostics, *fault.diagnostics)
        return give_faults(arguments, Document.FRONTIER, model.inputs, told)
    give_findings(arguments, [d for d in in_order(model.told) if d.accepted is None])
    for path in arguments.figure if any(curve.points for curve in result.curves) else ():
        from fluxnet.presenting.frontier_figure import draw_frontier

        draw_frontier(result, path, force=arguments.force)
        print(f"wrote {path}", file=sys.stderr)
    return give_screen(
        arguments, Document.FRONTIER, model.inputs, model.told, frontier_record(result),
        frontier_screen(result), sound=result.is_sound,
    )  # fmt: skip
