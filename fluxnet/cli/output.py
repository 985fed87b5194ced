"""Where a result goes: the terminal, JSON, CSV files, a workbook."""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import Any

from fluxnet.cli.inputs import exit_of
from fluxnet.cli.main import Exit
from fluxnet.ground.diagnostic import Diagnostic, in_order
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.names import Severity
from fluxnet.presenting.accepted import accepted_blocks
from fluxnet.presenting.records import Document, Input, document_text
from fluxnet.presenting.screen import Block, screen_tables
from fluxnet.presenting.terminal import Terminal

__all__ = [
    "ALWAYS_WRITTEN", "NAMES_OF_TABLES", "give_faults", "give_findings", "give_screen",
    "refuse_outputs",
]  # fmt: skip

ALWAYS_WRITTEN = {
    Document.CLOSURE: ("overview", "balances", "rates"),
    Document.SOLVE: ("overview",),
    Document.CATALOGUE: (),
    Document.CHECK: ("findings",),
    Document.FRONTIER: ("points",),
    Document.ROUTES: ("routes", "route_reactions"),
    Document.COMPARE: ("variants",),
    Document.LUMP: (),
    Document.RATES: ("rates", "assumptions"),
}
"""The tables that a command writes whatever its answer is."""

NAMES_OF_TABLES = frozenset({
    "accounts", "alternatives", "assumptions", "balances", "bill", "bill_prices", "by_products",
    "carriers", "catalogue", "compound", "conflict", "courses", "cuts", "destinations",
    "doubtful", "equations", "estimators", "findings", "fluxes", "gone", "heat", "holding",
    "kept", "least_change", "ledger", "left_out", "limits", "lumped", "mode_yields",
    "most_energy", "odds", "overall", "overview", "parameters", "plan", "points", "prices",
    "rates", "relations", "route_reactions", "routes", "shares", "spread", "staircase",
    "steadiness", "suspects", "unbounded", "variants", "yields",
})  # fmt: skip
"""Every table that some command writes."""


def refuse_outputs(arguments: argparse.Namespace, document: Document) -> None:
    """Refuse, before anything is read or computed, results that could not be written.

    Raises
    ------
    MisuseError
        Where a file exists and is not to be overwritten, is one of the inputs, or needs a
        package that is not installed.
    """
    if arguments.csv is None and arguments.xlsx is None:
        return
    from fluxnet.presenting.files import refuse_file, refuse_workbook

    given = (getattr(arguments, name, None) for name in ("rates", "model"))
    inputs = [Path(file) for file in given if file not in (None, "-")]
    if arguments.csv is not None:
        folder: Path = arguments.csv
        if folder.exists() and not folder.is_dir():
            raise MisuseError(f"{folder} is no folder; --csv takes the folder for the tables")
        for file in inputs:
            is_there = _real(file).parent == _real(folder)
            if is_there and file.suffix == ".csv" and file.stem in NAMES_OF_TABLES:
                raise MisuseError(f"--csv {folder} would write over {file}; name another folder")
        if folder.is_dir():
            for name in ALWAYS_WRITTEN[document]:
                refuse_file(folder / f"{name}.csv", force=arguments.force)
    if arguments.xlsx is not None:
        if any(_real(file) == _real(arguments.xlsx) for file in inputs):
            raise MisuseError(f"--xlsx would write over {arguments.xlsx}, which is read")
        refuse_workbook(arguments.xlsx, force=arguments.force)


def _real(path: Path) -> Path:
    """Where a path leads; links in a circle lead to themselves, and are told where opened."""
    return Path(os.path.realpath(path))


def give_screen(
    arguments: argparse.Namespace,
    document: Document,
    inputs: Sequence[Input],
    diagnostics: Sequence[Diagnostic],
    body: Mapping[str, Any],
    screen: tuple[Block, ...],
    *,
    sound: bool = True,
) -> int:
    """Give one result in every form that was asked for, and the exit status.

    Standard output carries the result; where files were written is said on standard error.
    """
    screen = (*screen, *accepted_blocks(diagnostics))
    tables = screen_tables(screen)
    if arguments.csv is not None or arguments.xlsx is not None:
        from fluxnet.presenting.files import write_csv, write_workbook
    if arguments.csv is not None:
        paths = write_csv(tables, arguments.csv, force=arguments.force)
        written = "1 table" if len(paths) == 1 else f"{len(paths)} tables"
        print(f"wrote {written} into {arguments.csv}", file=sys.stderr)
    if arguments.xlsx is not None:
        write_workbook(tables, arguments.xlsx, force=arguments.force)
        print(f"wrote {arguments.xlsx}", file=sys.stderr)
    if arguments.json:
        print(document_text(document, inputs, diagnostics, body))
    else:
        Terminal.on(no_color=arguments.no_color).show(screen, quiet=arguments.quiet)
    return Exit.SOUND if sound else Exit.FINDING


def give_findings(arguments: argparse.Namespace, diagnostics: Sequence[Diagnostic]) -> None:
    """Tell findings about the input, on standard error; JSON carries them itself.

    Quiet leaves out what is no error.
    """
    told = tuple(d for d in diagnostics if not (arguments.quiet and d.severity.rank > 0))
    if told and not arguments.json:
        most = len(told) if arguments.all else 20
        Terminal.on(sys.stderr, no_color=arguments.no_color).show_diagnostics(told, most=most)


def give_faults(
    arguments: argparse.Namespace,
    document: Document,
    inputs: Sequence[Input],
    diagnostics: Sequence[Diagnostic],
    body: Mapping[str, Any] | None = None,
) -> int:
    """Tell the faults of an input of which nothing can be made; the exit status they ask for."""
    told = in_order(diagnostics)
    give_findings(arguments, told)
    if arguments.json:
        print(document_text(document, inputs, told, body or {"runs": []}))
    elif not arguments.quiet:
        errors = sum(d.severity is Severity.ERROR for d in told)
        print(f"nothing was computed: {errors} error{'s' if errors != 1 else ''}", file=sys.stderr)
    return exit_of(told)
