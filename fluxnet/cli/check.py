"""``fluxnet check``: is the reaction list sound?"""

from __future__ import annotations

import argparse
import sys
from pathlib import Path

from fluxnet.cli.inputs import exit_of, load_model
from fluxnet.cli.main import Exit
from fluxnet.cli.options import add_model_argument, add_output_options
from fluxnet.cli.output import give_findings, give_screen
from fluxnet.cli.progress import progress_on
from fluxnet.ground.diagnostic import in_order
from fluxnet.ground.errors import MisuseError
from fluxnet.presenting.check_screen import check_record, check_screen, findings_record
from fluxnet.presenting.records import Document

__all__ = ["EXAMPLES", "add_arguments", "run"]

EXAMPLES = """Is my reaction list sound? Nothing unbalanced, no dead end, no ATP out of nothing.

  fluxnet check model.flux
  fluxnet check model.flux --variant anaerobic
  fluxnet check model.flux --tidy            lay the file out in one way, keeping comments
"""


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Options of the command."""
    add_model_argument(parser)
    parser.add_argument("--variant", metavar="V", default="base", help='such as "lean * fast"')
    parser.add_argument("--tidy", action="store_true", help="lay the file out in one way")
    add_output_options(parser)


def run(arguments: argparse.Namespace) -> int:
    """Check a model and show what was found."""
    if arguments.tidy:
        return _tidy(arguments)
    model = load_model(arguments, arguments.variant)
    if model.network is None:
        diagnostics = in_order(model.diagnostics)
        give_findings(arguments, diagnostics)
        if arguments.json:
            give_screen(
                arguments, Document.CHECK, model.inputs, (), findings_record(diagnostics), ()
            )
        elif not arguments.quiet:
            errors = sum(d.severity.rank == 0 for d in diagnostics)
            print(f"{arguments.model}: {errors} error{'s' if errors != 1 else ''}", file=sys.stderr)
        return exit_of(diagnostics)
    from fluxnet.studies.check import check_network

    with progress_on(sys.stderr) as progress:
        result = check_network(
            model.network, model.diagnostics, sources=model.sources, progress=progress
        )
    give_findings(arguments, result.diagnostics)
    return give_screen(
        arguments, Document.CHECK, model.inputs, (), check_record(result),
        check_screen(result, arguments.model), sound=result.sound,
    )  # fmt: skip


def _tidy(arguments: argparse.Namespace) -> int:
    """Lay a model file out: in place, or to standard output for ``-``."""
    from fluxnet.presenting.files import write_text
    from fluxnet.reading.tidy import tidy_text

    if arguments.model == "-":
        sys.stdout.write(tidy_text(sys.stdin.read()))
        return Exit.SOUND
    model = load_model(arguments)
    if not model.sources:
        give_findings(arguments, model.diagnostics)
        return exit_of(model.diagnostics)
    path = Path(arguments.model)
    before = path.read_bytes()
    try:
        text = before.decode("utf-8-sig")
    except UnicodeDecodeError:
        raise MisuseError(f"{path} is not UTF-8; save it as UTF-8 first") from None
    after = tidy_text(text)
    if after.encode("utf-8") == before:
        print(f"{path} is laid out already", file=sys.stderr)
    else:
        write_text(path, after, force=True)
        print(f"laid {path} out", file=sys.stderr)
    return Exit.SOUND
