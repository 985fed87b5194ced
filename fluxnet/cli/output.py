"""Where a result goes: the terminal, JSON, CSV files, a workbook."""

from __future__ import annotations

import argparse
import sys
from collections.abc import Mapping, Sequence
from typing import Any

from fluxnet.cli.inputs import exit_of
from fluxnet.cli.main import Exit
from fluxnet.ground.diagnostic import Diagnostic, in_order
from fluxnet.ground.names import Severity
from fluxnet.presenting.records import Input, document_text
from fluxnet.presenting.screen import Block, screen_tables
from fluxnet.presenting.terminal import Terminal

__all__ = ["give_faults", "give_findings", "give_screen"]


def give_screen(
    arguments: argparse.Namespace,
    document: str,
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
    tables = screen_tables(screen)
    if arguments.csv is not None or arguments.xlsx is not None:
        from fluxnet.presenting.files import write_csv, write_workbook
    if arguments.csv is not None:
        paths = write_csv(tables, arguments.csv, force=arguments.force)
        print(f"wrote {len(paths)} tables into {arguments.csv}", file=sys.stderr)
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
    document: str,
    inputs: Sequence[Input],
    diagnostics: Sequence[Diagnostic],
    body: Mapping[str, Any] | None = None,
) -> int:
    """Tell the faults of an input of which nothing can be made; the exit status they ask for."""
    told = in_order(diagnostics)
    give_findings(arguments, told)
    if arguments.json:
        give_screen(arguments, document, inputs, told, body or {"runs": []}, ())
    elif not arguments.quiet:
        errors = sum(d.severity is Severity.ERROR for d in told)
        print(f"nothing was computed: {errors} error{'s' if errors != 1 else ''}", file=sys.stderr)
    return exit_of(told)
