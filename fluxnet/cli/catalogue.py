"""``fluxnet catalogue``: the compounds that need no formula."""

from __future__ import annotations

import argparse
import sys

from fluxnet.chemistry.catalogue import load_catalogue
from fluxnet.cli.main import Exit
from fluxnet.cli.options import add_output_options
from fluxnet.cli.output import give_screen, refuse_outputs
from fluxnet.presenting.catalogue_screen import catalogue_record, catalogue_screen, compound_screen
from fluxnet.presenting.records import Document

__all__ = ["EXAMPLES", "add_arguments", "run"]

EXAMPLES = """The compounds that need no formula, with their sources.

  fluxnet catalogue                  all of them
  fluxnet catalogue acetic acid      one, by any of its names
"""


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Options of the command."""
    parser.add_argument("name", nargs="*", help="a name or synonym")
    add_output_options(parser)


def run(arguments: argparse.Namespace) -> int:
    """Show one compound, or all."""
    refuse_outputs(arguments, Document.CATALOGUE)
    catalogue = load_catalogue()
    if not arguments.name:
        compounds = tuple(catalogue)
        return give_screen(
            arguments, Document.CATALOGUE, (), (), catalogue_record(compounds),
            catalogue_screen(compounds),
        )  # fmt: skip
    name = " ".join(arguments.name)
    compound = catalogue.find(name)
    if compound is None:
        near = catalogue.nearest(name)
        hint = f"; near to it are {', '.join(near)}" if near else ""
        print(f"fluxnet catalogue: no compound has the name {name!r}{hint}", file=sys.stderr)
        return Exit.MISUSE
    return give_screen(
        arguments, Document.CATALOGUE, (), (), catalogue_record((compound,)),
        compound_screen(compound),
    )  # fmt: skip
