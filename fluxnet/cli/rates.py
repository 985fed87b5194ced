"""``fluxnet rates``: from raw data of a cultivation to rates with errors."""

from __future__ import annotations

import argparse
import sys
from pathlib import Path
from typing import TYPE_CHECKING, Any

from fluxnet.cli.inputs import load_model, read_inputs
from fluxnet.cli.options import add_model_argument, add_output_options
from fluxnet.cli.output import give_faults, give_findings, give_screen, refuse_outputs
from fluxnet.cli.progress import progress_on
from fluxnet.cli.table_files import refuse_table, write_table
from fluxnet.ground.diagnostic import Diagnostic, has_errors, in_order
from fluxnet.ground.errors import MisuseError
from fluxnet.network.model import Network
from fluxnet.presenting.files import refuse_file
from fluxnet.presenting.records import Document, Input
from fluxnet.rates.cultivation import Mode, Phase

if TYPE_CHECKING:
    from fluxnet.studies.rates import FoundRates
    from fluxnet.tables.cultivation_tables import CultivationReading

__all__ = ["EXAMPLES", "add_arguments", "run"]

EXAMPLES = """What are the rates, from the files as they came?

  fluxnet rates run.xlsx                        what was understood, rates, accounts
  fluxnet rates batch/ -o rates.csv             a folder of exports; the rates as a table
  fluxnet rates run.xlsx --phase "growth 2 to 9" --phase "late 9 to 12"
  fluxnet rates batch/ --phases phases.csv      writes the phases that it proposes; mend them
  fluxnet rates batch/ --columns columns.csv    writes how each column was understood; mend it
  fluxnet rates run.xlsx --model model.flux --figures plots
"""


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Options of the command."""
    parser.add_argument("data", metavar="DATA", type=Path, help="a workbook, a table, or a folder")
    add_model_argument(parser, optional=True)
    parser.add_argument(
        "--table", "-o", metavar="FILE", type=Path,
        help="write the rates as a table that closure and solve read",
    )  # fmt: skip
    parser.add_argument(
        "--phase", metavar="'NAME A to B'", action="append", default=[],
        help="rates of these hours; in place of those in the data",
    )  # fmt: skip
    parser.add_argument(
        "--phases", metavar="FILE", type=Path,
        help="the phases, one a line; where FILE is not there it is written",
    )  # fmt: skip
    parser.add_argument("--mode", choices=[m.value for m in Mode], help="how it was run")
    parser.add_argument(
        "--columns", metavar="FILE", type=Path, help="write how each column was understood"
    )
    parser.add_argument("--figures", metavar="DIR", type=Path, help="draw figures into DIR")
    add_output_options(parser)


def run(arguments: argparse.Namespace) -> int:
    """Read the raw data, reckon the rates, and show them."""
    refuse_outputs(arguments, Document.RATES)
    if arguments.phase and arguments.phases is not None:
        raise MisuseError("--phase and --phases: give one of the two")
    for path in (arguments.table, arguments.columns):
        if path is not None and path.resolve() == arguments.data.resolve():
            raise MisuseError(f"{path} is what is read; name another file to write")
    if arguments.table is not None:
        refuse_table(arguments.table, force=arguments.force)
    if arguments.columns is not None:
        refuse_file(arguments.columns, force=arguments.force)
    if arguments.phases is not None:
        refuse_file(arguments.phases, force=True)
    from fluxnet.presenting.rates_record import rates_record
    from fluxnet.presenting.rates_screen import rates_screen
    from fluxnet.studies.rates import find_rates, read_phase
    from fluxnet.tables.cultivation_tables import read_cultivation

    typed = tuple(read_phase(text) for text in arguments.phase)
    network: Network | None = None
    inputs: tuple[Input, ...] = ()
    told: tuple[Diagnostic, ...] = ()
    nothing: dict[str, Any] = {"cultivations": []}
    if arguments.model is not None:
        model = load_model(arguments)
        network, inputs, told = model.network, model.inputs, model.told
        if network is None:
            return give_faults(arguments, Document.RATES, inputs, told, nothing)
    mode = None if arguments.mode is None else Mode(arguments.mode)
    with progress_on(sys.stderr) as progress:
        reading = read_cultivation(arguments.data, network, mode=mode, progress=progress)
        inputs = (*inputs, *read_inputs(source.file for source in reading.sources))
        told = (*told, *reading.diagnostics)
        _write_columns(arguments, reading)
        if has_errors(reading.diagnostics) or not reading.cultivations:
            return give_faults(arguments, Document.RATES, inputs, told, nothing)
        result = find_rates(
            reading.cultivations, network, phases=typed or _read_phases(arguments),
            progress=progress,
        )  # fmt: skip
    told = in_order((*told, *result.diagnostics))
    if not any(one.phases for one in result.found):
        return give_faults(arguments, Document.RATES, inputs, told, nothing)
    give_findings(arguments, [d for d in told if d.accepted is None])
    _write_files(arguments, result)
    return give_screen(
        arguments, Document.RATES, inputs, told, rates_record(result) if arguments.json else {},
        rates_screen(result), sound=result.is_sound,
    )  # fmt: skip


def _read_phases(arguments: argparse.Namespace) -> tuple[Phase, ...]:
    """The phases of the file, where it is there."""
    path: Path | None = arguments.phases
    if path is None or not path.exists():
        return ()
    from fluxnet.studies.rates import read_phases_text

    return read_phases_text(path.read_text(encoding="utf-8-sig"), str(path))


def _write_columns(arguments: argparse.Namespace, reading: CultivationReading) -> None:
    """Write how columns were understood, also where that leaves faults to be mended."""
    path: Path | None = arguments.columns
    if path is None:
        return
    from fluxnet.presenting.files import write_text
    from fluxnet.tables.mapping import mapping_text

    write_text(path, mapping_text(reading.columns), force=arguments.force)
    print(f"wrote {path}", file=sys.stderr)


def _write_files(arguments: argparse.Namespace, result: FoundRates) -> None:
    """Write what was asked for: the table, proposed phases, figures."""
    if arguments.table is not None:
        write_table(result.table, arguments.table, force=arguments.force)
    if arguments.phases is not None and not arguments.phases.exists():
        from fluxnet.presenting.files import write_text
        from fluxnet.studies.rates import phases_text

        write_text(arguments.phases, phases_text(result.found))
        print(f"wrote {arguments.phases}: mend it, and give the same command", file=sys.stderr)
    if arguments.figures is not None:
        from fluxnet.presenting.rates_figures import draw_rates

        arguments.figures.mkdir(parents=True, exist_ok=True)
        paths = draw_rates(result, arguments.figures, force=arguments.force)
        figures = "1 figure" if len(paths) == 1 else f"{len(paths)} figures"
        print(f"wrote {figures} into {arguments.figures}", file=sys.stderr)
