"""``fluxnet lump``: a long reaction list as a smaller model that does the same."""

from __future__ import annotations

import argparse
import sys
from pathlib import Path

from fluxnet.cli.inputs import load_model, load_rates
from fluxnet.cli.main import Exit
from fluxnet.cli.options import add_model_argument, add_output_options, add_table_options
from fluxnet.cli.output import give_faults, give_findings, give_screen, refuse_outputs
from fluxnet.cli.progress import progress_on
from fluxnet.ground.diagnostic import in_order
from fluxnet.ground.errors import InputError, MisuseError
from fluxnet.presenting.files import refuse_file, write_text
from fluxnet.presenting.lump_record import lump_record, overall_record
from fluxnet.presenting.lump_screen import lump_screen, overall_screen
from fluxnet.presenting.records import Document

__all__ = ["EXAMPLES", "add_arguments", "run"]

EXAMPLES = """The same net conversions with fewer reactions; or a compartment as one line.

  fluxnet lump model.flux --keep pyruvate,ethanol             what would be lumped, and why not
  fluxnet lump model.flux --keep pyruvate -o short.flux       written as a model
  fluxnet lump model.flux --keep pyruvate --variant base      without the model's variants
  fluxnet lump model.flux --keep pyruvate --variant anaerobic with one of them applied
  fluxnet lump model.flux --keep pyruvate -o -                the model alone, to standard output
  fluxnet lump model.flux rates.csv --overall anabolism       one reaction at the solved fluxes
"""


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Options of the command."""
    add_model_argument(parser)
    parser.add_argument("rates", metavar="RATES", nargs="?", help="for --overall: a rates table")
    parser.add_argument(
        "--keep", metavar="A,B", action="append", default=[],
        help="species, or reactions, that must not be lumped away",
    )  # fmt: skip
    parser.add_argument(
        "--overall", metavar="COMPARTMENT",
        help="the one reaction that a compartment makes at the solved fluxes",
    )  # fmt: skip
    parser.add_argument(
        "--maximise", "--maximize", metavar="X", help="for --overall: at the best fluxes for X"
    )
    parser.add_argument(
        "--variant", metavar="V", default=None,
        help="such as \"lean * fast\"; base alone leaves the model's variants out",
    )  # fmt: skip
    parser.add_argument("-o", dest="file", metavar="FILE", help="write the lumped model (*.flux)")
    add_table_options(parser)
    add_output_options(parser)


def run(arguments: argparse.Namespace) -> int:
    """Lump a model, or tell an overall reaction."""
    if arguments.overall is not None:
        return _overall(arguments)
    if arguments.rates is not None or arguments.maximise is not None:
        raise MisuseError("rates and an aim are for --overall COMPARTMENT; name one")
    from fluxnet.studies.lump import lump_network

    file = None if arguments.file in (None, "-") else Path(arguments.file)
    if arguments.file == "-" and arguments.json:
        raise MisuseError("standard output can hold the model or --json, not both")
    refuse_outputs(arguments, Document.LUMP)
    if file is not None:
        if arguments.model != "-" and file.resolve() == Path(arguments.model).resolve():
            raise MisuseError(f"-o {file} would write over the model that is read")
        refuse_file(file, force=arguments.force)
    model = load_model(arguments, arguments.variant or "base")
    if model.network is None:
        return give_faults(
            arguments, Document.LUMP, model.inputs, model.diagnostics, {"lumped": []}
        )
    keep = [name for text in arguments.keep for name in _parts(text)]
    if not arguments.keep:
        raise MisuseError("name what must be kept with --keep, such as the species you measure")
    with progress_on(sys.stderr) as progress:
        lumped = lump_network(
            model.network, keep, variants=arguments.variant is None, progress=progress
        )
    give_findings(arguments, [d for d in in_order(model.told) if d.accepted is None])
    if file is not None and lumped.is_sound:
        write_text(file, lumped.text, force=arguments.force)
        print(f"wrote {file}", file=sys.stderr)
    if arguments.file == "-":
        print(lumped.text, end="")
        return Exit.SOUND if lumped.is_sound else Exit.FINDING
    return give_screen(
        arguments, Document.LUMP, model.inputs, model.told, lump_record(lumped),
        lump_screen(lumped), sound=lumped.is_sound,
    )  # fmt: skip


def _parts(text: str) -> list[str]:
    """Names between commas; a comma between digits, as in 2,3-butanediol, parts none."""
    import re

    return [part.strip() for part in re.split(r",(?!\d)|(?<!\d),", text)]


def _overall(arguments: argparse.Namespace) -> int:
    from fluxnet.rates.aligning import align_table
    from fluxnet.studies.lump_overall import find_overall
    from fluxnet.studies.solve import solve_network

    if arguments.keep or arguments.file is not None:
        raise MisuseError("--overall tells one reaction; --keep and -o are for a lumped model")
    refuse_outputs(arguments, Document.LUMP)
    model = load_model(arguments, arguments.variant or "base")
    if model.network is None:
        return give_faults(arguments, Document.LUMP, model.inputs, model.diagnostics)
    table = None
    inputs, told = model.inputs, model.told
    if arguments.rates is not None:
        rates = load_rates(arguments, model.network)
        inputs, told = (*inputs, *rates.inputs), (*told, *rates.diagnostics)
        if rates.table is None:
            return give_faults(arguments, Document.LUMP, inputs, told)
        aligned = align_table(rates.table, model.network)
        if aligned.table is None:
            return give_faults(arguments, Document.LUMP, inputs, (*told, *aligned.diagnostics))
        table = aligned.table
    known = [c.name for c in model.network.compartments]
    if arguments.overall in known:
        try:
            with progress_on(sys.stderr) as progress:
                solution = solve_network(
                    model.network, table, maximise=arguments.maximise, progress=progress
                )
        except InputError as fault:
            return give_faults(arguments, Document.LUMP, inputs, (*told, *fault.diagnostics))
    else:
        from fluxnet.studies.solution import Solution

        solution = Solution(model.network, ())
    overalls = find_overall(solution, arguments.overall)
    give_findings(arguments, [d for d in in_order(told) if d.accepted is None])
    return give_screen(
        arguments, Document.LUMP, inputs, told, overall_record(overalls),
        overall_screen(overalls), sound=overalls.is_sound,
    )  # fmt: skip
