"""``fluxnet check``: is the reaction list sound?"""

from __future__ import annotations

import argparse
import sys
from pathlib import Path

from fluxnet.cli.inputs import exit_of, load_model, load_rates
from fluxnet.cli.main import Exit
from fluxnet.cli.options import add_model_argument, add_output_options, add_table_options
from fluxnet.cli.output import give_faults, give_findings, give_screen, refuse_outputs
from fluxnet.cli.progress import progress_on
from fluxnet.ground.diagnostic import Diagnostic, in_order
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.names import Name
from fluxnet.presenting.check_screen import check_record, check_screen, findings_record
from fluxnet.presenting.records import Document, Input, document_text, hash_bytes
from fluxnet.reading.source import MOST_BYTES, source_of_bytes

__all__ = ["EXAMPLES", "add_arguments", "run"]

EXAMPLES = """Is my reaction list sound? Nothing unbalanced, no dead end, no ATP out of nothing.

  fluxnet check model.flux
  fluxnet check model.flux --variant anaerobic
  fluxnet check model.flux --rates rates.csv --run A     which fluxes do these determine?
  fluxnet check model.flux --tidy            lay the file out in one way, keeping comments
"""


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Options of the command."""
    add_model_argument(parser)
    parser.add_argument("--variant", metavar="V", default="base", help='such as "lean * fast"')
    parser.add_argument("--tidy", action="store_true", help="lay the file out in one way")
    parser.add_argument(
        "--rates", metavar="RATES", help="tell which fluxes the first run of a table determines"
    )
    add_table_options(parser)
    add_output_options(parser)


def run(arguments: argparse.Namespace) -> int:
    """Check a model and show what was found."""
    if arguments.tidy:
        return _tidy(arguments)
    if arguments.model == "-" and arguments.rates == "-":
        raise MisuseError("standard input can be the model or the rates, not both")
    refuse_outputs(arguments, Document.CHECK)
    model = load_model(arguments, arguments.variant)
    inputs, run_asked = model.inputs, None
    if model.network is None:
        return _faulty(arguments, inputs, model.diagnostics)
    if arguments.rates is not None:
        rates = load_rates(arguments, model.network)
        inputs = (*inputs, *rates.inputs)
        if rates.table is None:
            return _faulty(arguments, inputs, rates.diagnostics)
        run_asked = rates.table.runs[0]
    from fluxnet.studies.check import check_network

    with progress_on(sys.stderr) as progress:
        result = check_network(
            model.network,
            model.diagnostics,
            rates=run_asked,
            sources=model.sources,
            progress=progress,
        )
    give_findings(arguments, result.diagnostics)
    return give_screen(
        arguments, Document.CHECK, inputs, (), check_record(result),
        check_screen(result, arguments.model), sound=result.sound,
    )  # fmt: skip


def _faulty(
    arguments: argparse.Namespace, inputs: tuple[Input, ...], diagnostics: tuple[Diagnostic, ...]
) -> int:
    body = findings_record(in_order(diagnostics))
    return give_faults(arguments, Document.CHECK, inputs, diagnostics, body)


def _tidy(arguments: argparse.Namespace) -> int:
    """Lay a model file out: in place, or to standard output for ``-``."""
    from fluxnet.presenting.files import write_text
    from fluxnet.reading.tidy import tidy_text

    if arguments.model == "-":
        data = sys.stdin.buffer.read(MOST_BYTES + 1)
        inputs = (hash_bytes(data, "standard input"),)
        source, told = source_of_bytes(data, "standard input", large=arguments.large)
        if source is None:
            return _not_laid_out(arguments, inputs, told)
        give_findings(arguments, told)
        before = "\n".join((*source.lines, ""))
        after = tidy_text(before)
        if not arguments.json:
            sys.stdout.write(after)
        return _laid_out(arguments, inputs, told, after, changed=after != before)
    model = load_model(arguments)
    if not model.sources or any(d.name is Name.WRONG_KIND_OF_FILE for d in model.diagnostics):
        return _not_laid_out(arguments, model.inputs, model.diagnostics)
    path = Path(arguments.model)
    data = path.read_bytes()
    try:
        text = data.decode("utf-8-sig")
    except UnicodeDecodeError:
        raise MisuseError(f"{path} is not UTF-8; save it as UTF-8 first") from None
    after = tidy_text(text)
    changed = after.encode("utf-8") != data
    if changed:
        write_text(path, after, force=True)
    said = f"laid {path} out" if changed else f"{path} is laid out already"
    if not arguments.quiet:
        print(said, file=sys.stderr)
    return _laid_out(arguments, model.inputs, (), after, changed=changed)


def _laid_out(
    arguments: argparse.Namespace, inputs: tuple[Input, ...], told: tuple[Diagnostic, ...],
    text: str, *, changed: bool,
) -> int:  # fmt: skip
    if arguments.json:
        print(document_text(Document.TIDY, inputs, told, {"text": text, "changed": changed}))
    return Exit.SOUND


def _not_laid_out(
    arguments: argparse.Namespace, inputs: tuple[Input, ...], told: tuple[Diagnostic, ...]
) -> int:
    if arguments.json:
        print(document_text(Document.TIDY, inputs, told, {"text": None, "changed": False}))
    give_findings(arguments, told)
    return exit_of(told)
