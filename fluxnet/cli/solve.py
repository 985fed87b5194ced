"""``fluxnet solve``: what the cell did, or could do at best."""

from __future__ import annotations

import argparse
import sys
from dataclasses import replace
from typing import TYPE_CHECKING, Any

from fluxnet.cli.inputs import load_model, load_rates, without_limits
from fluxnet.cli.main import Exit
from fluxnet.cli.options import add_model_argument, add_output_options, add_table_options
from fluxnet.cli.output import give_faults, give_findings, give_screen, refuse_outputs
from fluxnet.cli.progress import progress_on
from fluxnet.ground.diagnostic import in_order
from fluxnet.ground.errors import InputError, MisuseError
from fluxnet.ground.names import Name
from fluxnet.ground.progress import Progress
from fluxnet.network.model import Network
from fluxnet.presenting.records import Document
from fluxnet.presenting.solve_screen import solve_screen
from fluxnet.studies.solution import FluxSolution, Solution

if TYPE_CHECKING:
    from fluxnet.rates.measured import RatesTable

__all__ = ["EXAMPLES", "add_arguments", "run"]

EXAMPLES = """What did the cell do; who made and who spent the ATP and the NADH?

  fluxnet solve model.flux rates.csv                      fluxes nearest to the rates
  fluxnet solve model.flux rates.csv --run A              one run of the table
  fluxnet solve model.flux rates.csv --plan "ATP upkeep"  what to measure next, to know that
  fluxnet solve model.flux --maximise ethanol             the best that the model allows
  fluxnet solve model.flux --variant anaerobic --maximise mu
  fluxnet solve model.flux rates.csv --maximise ATP --within 1
  fluxnet solve model.flux --maximise mu --proof          the bill that proves the optimum
"""


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Options of the command."""
    add_model_argument(parser)
    parser.add_argument("rates", metavar="RATES", nargs="?", help="a rates table, or -")
    parser.add_argument("--variant", metavar="V", default="base", help='such as "lean * fast"')
    aim = parser.add_mutually_exclusive_group()
    words = "a boundary species, `in SPECIES`, a reaction, mu, a carrier, or `2 A + B`"
    aim.add_argument(
        "--maximise", "--maximize", metavar="X", help=f"make X as large as possible: {words}"
    )
    aim.add_argument("--minimise", "--minimize", metavar="X", help="make X as small as possible")
    parser.add_argument(
        "--within", metavar="K", type=float, default=2.0,
        help="hold each measured rate within K sd (2): with an aim, or to find what contradicts "
        "what",
    )  # fmt: skip
    parser.add_argument(
        "--fraction", metavar="F", type=float,
        help="with an aim, give ranges at this fraction of the optimum (1)",
    )  # fmt: skip
    parser.add_argument(
        "--proof", action="store_true",
        help="with an aim, show the bill that proves the optimum",
    )  # fmt: skip
    parser.add_argument(
        "--suspects", action="store_true",
        help="without an aim, say what could be wrong in every run, not only in rejected ones",
    )  # fmt: skip
    parser.add_argument(
        "--plan", metavar="X",
        help="what to measure next, to know X: a flux, a rate, mu, a yield `ethanol / glucose`, "
        "or a line of the ledger `ATP growth`",
    )  # fmt: skip
    parser.add_argument(
        "--plan-error", metavar="PERCENT", type=per_cent, default=5.0,
        help="the error of what would be measured anew, in per cent (5)",
    )  # fmt: skip
    parser.add_argument(
        "--shares", action="store_true", help="show where the error of every flux comes from"
    )
    add_table_options(parser)
    add_output_options(parser)


def per_cent(text: str) -> float:
    """A number of per cent, with or without its sign."""
    return float(text.removesuffix("%"))


def run(arguments: argparse.Namespace) -> int:
    """Solve each run that was asked for, and show it."""
    from fluxnet.rates.aligning import align_table

    if arguments.model == "-" and arguments.rates == "-":
        raise MisuseError("standard input can be the model or the rates, not both")
    _refuse_idle(arguments)
    refuse_outputs(arguments, Document.SOLVE)
    model = load_model(arguments, arguments.variant)
    if model.network is None:
        return give_faults(arguments, Document.SOLVE, model.inputs, model.diagnostics)
    table = None
    inputs, diagnostics = model.inputs, model.told
    if arguments.rates is not None:
        limits = tuple(str(x.quantity) for x in model.network.limits if x.is_measured)
        rates = load_rates(arguments, model.network, limits=limits)
        inputs, diagnostics = (*inputs, *rates.inputs), (*diagnostics, *rates.diagnostics)
        if rates.table is None:
            return give_faults(arguments, Document.SOLVE, inputs, diagnostics)
        # What the model does not exchange is a warning to closure, and an error here.
        aligned = align_table(rates.table, model.network)
        if aligned.table is None:
            kept = (d for d in diagnostics if d.name is not Name.NOT_IN_MODEL)
            told = (*kept, *aligned.diagnostics)
            return give_faults(arguments, Document.SOLVE, inputs, told)
        table = aligned.table
    network = without_limits(model.network, arguments.unmeasured)
    try:
        with progress_on(sys.stderr) as progress:
            solution = _solve(arguments, network, table, progress)
    except InputError as fault:
        texts = {source.file: source for source in model.sources}
        told = tuple(
            replace(d, source_line=texts[d.span.file].line(d.span.line))
            if d.span.line and d.span.file in texts
            else d
            for d in fault.diagnostics
        )
        return give_faults(arguments, Document.SOLVE, inputs, (*diagnostics, *told))
    give_findings(arguments, [d for d in in_order(diagnostics) if d.accepted is None])
    total = 1 if table is None else len(table.runs)
    done = len(solution.runs)
    body: dict[str, Any] = {}
    if arguments.json:
        from fluxnet.presenting.solve_record import solve_record

        body = solve_record(solution)
        if done < total:
            body["undone"] = total - done
    status = give_screen(
        arguments, Document.SOLVE, inputs, diagnostics, body,
        solve_screen(
            solution, with_bill=arguments.proof, everything=arguments.all, shares=arguments.shares
        ),
        sound=solution.is_sound,
    )  # fmt: skip
    if done < total:
        print(f"interrupted: {done:,} of {total:,} runs are solved", file=sys.stderr)
        return Exit.INTERRUPTED
    return status


def _solve(
    arguments: argparse.Namespace, network: Network, table: RatesTable | None, progress: Progress
) -> Solution:
    """The answers of all runs, or of those that are done when the user stops."""
    from fluxnet.studies.solve import solve_runs

    solved: list[FluxSolution] = []
    try:
        for run in solve_runs(
            network,
            table,
            maximise=arguments.maximise,
            minimise=arguments.minimise,
            within=arguments.within,
            fraction=1.0 if arguments.fraction is None else arguments.fraction,
            suspects=arguments.suspects,
            plan=arguments.plan,
            plan_error=arguments.plan_error / 100,
            progress=progress,
        ):
            solved.append(run)
    except KeyboardInterrupt:
        if not solved:
            raise
    return Solution(network, tuple(solved))


def _refuse_idle(arguments: argparse.Namespace) -> None:
    """Refuse options that would change nothing."""
    aimed = arguments.maximise is not None or arguments.minimise is not None
    if arguments.fraction is not None and not aimed:
        raise MisuseError("--fraction is a share of an optimum: add --maximise X or --minimise X")
    if arguments.suspects and aimed:
        raise MisuseError("--suspects tells what is wrong with measured rates: leave the aim out")
    if arguments.rates is None and arguments.run:
        raise MisuseError("--run chooses runs of a table: name the table behind the model")
