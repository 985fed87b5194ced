"""``fluxnet compare``: what each variant can make of a substrate, ranked."""

from __future__ import annotations

import argparse
import sys

from fluxnet.cli.inputs import load_model
from fluxnet.cli.options import add_model_argument, add_output_options
from fluxnet.cli.output import give_faults, give_findings, give_screen, refuse_outputs
from fluxnet.cli.progress import progress_on
from fluxnet.ground.diagnostic import in_order
from fluxnet.ground.errors import InputError, MisuseError
from fluxnet.presenting.records import Document

__all__ = ["EXAMPLES", "add_arguments", "run"]

EXAMPLES = """Which variant is worth building: what can each make of a substrate at most?

  fluxnet compare model.flux --product ethanol --from glucose
  fluxnet compare model.flux --product ethanol --from "glucose|xylose" \\
      --across "base|anaerobic" --across "base|glucokinase"
  fluxnet compare model.flux --product lysine --from glucose --uptake 5 --reserve mu=0.05
  fluxnet compare model.flux --product ethanol --from glucose --staircase --detail base
  fluxnet compare model.flux --product ethanol --from glucose --measured 1.7
"""

_NOTHING: dict[str, list[str]] = {"variants": []}


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Options of the command."""
    add_model_argument(parser)
    parser.add_argument("--product", metavar="P", required=True, help="what is to be made")
    parser.add_argument(
        "--from", metavar="S", required=True, dest="substrate",
        help='the substrate that the yield is per, or several: "glucose|xylose"',
    )  # fmt: skip
    parser.add_argument(
        "--across", metavar="A|B", action="append", default=[],
        help="variants to compare, `base` among them; given several times: all combinations",
    )  # fmt: skip
    parser.add_argument(
        "--reserve", metavar="X=N", action="append", default=[],
        help='what is kept back: mu=0.05, "X / glucose = 0.1" (in moles), acetate=2',
    )  # fmt: skip
    parser.add_argument(
        "--uptake", metavar="N", help="the uptake of the substrate, in the unit of the model"
    )
    parser.add_argument(
        "--biomass", metavar="C", help='tell what the best takes per litre too: "20 g/L"'
    )
    parser.add_argument(
        "--beside", metavar="NAME", action="append", default=[],
        help="another source of carbon or electrons that may be taken up as well",
    )  # fmt: skip
    parser.add_argument(
        "--staircase", metavar="NAME", nargs="?", action="append", const=True,
        help="show where the yield of a variant goes (without a name: the best)",
    )  # fmt: skip
    parser.add_argument(
        "--measured", metavar="Y", help="a measured yield [mol/mol], as the staircase's last step"
    )
    parser.add_argument(
        "--detail", metavar="NAME", action="append", default=[],
        help="tell all of this variant (`all`: of every one)",
    )  # fmt: skip
    parser.add_argument(
        "--draws", metavar="N", type=int, default=200,
        help="draws of the numbers with ±, for the intervals (200; 0: none)",
    )  # fmt: skip
    add_output_options(parser)


def run(arguments: argparse.Namespace) -> int:
    """Compare the variants that were asked for, and show them."""
    from fluxnet.presenting.compare_record import compare_record
    from fluxnet.presenting.compare_screen import compare_screen
    from fluxnet.studies.compare import compare

    refuse_outputs(arguments, Document.COMPARE)
    model = load_model(arguments)
    if model.network is None:
        return give_faults(
            arguments, Document.COMPARE, model.inputs, model.diagnostics, _NOTHING
        )
    named = [name for name in arguments.staircase or () if isinstance(name, str)]
    try:
        with progress_on(sys.stderr) as progress:
            found = compare(
                model.network,
                arguments.product,
                arguments.substrate,
                arguments.across,
                arguments.reserve,
                uptake=arguments.uptake,
                biomass=arguments.biomass,
                beside=arguments.beside,
                staircase=named or bool(arguments.staircase),
                measured=arguments.measured,
                draws=arguments.draws,
                progress=progress,
            )
    except InputError as fault:
        told = (*model.told, *fault.diagnostics)
        return give_faults(arguments, Document.COMPARE, model.inputs, told, _NOTHING)
    for name in arguments.detail:
        if name != "all" and found.find(name) is None:
            known = ", ".join(a.name for a in found.abilities[:12])
            raise MisuseError(f"no variant compared is called {name!r}: there are {known}")
    give_findings(arguments, [d for d in in_order(model.told) if d.accepted is None])
    screen = compare_screen(found, detail=arguments.detail, everything=arguments.all)
    return give_screen(
        arguments, Document.COMPARE, model.inputs, model.told, compare_record(found), screen,
        sound=found.is_sound,
    )  # fmt: skip
