"""``fluxnet explain``: what a diagnostic means and what to do about it."""

from __future__ import annotations

import argparse
import sys
from difflib import get_close_matches

from fluxnet.cli.main import Exit
from fluxnet.ground.names import Name

__all__ = ["EXAMPLES", "add_arguments", "run"]

EXAMPLES = """What a message means, why it matters, what to do.

  fluxnet explain unbalanced-line
  fluxnet explain                    the list of all names
"""


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Options of the command."""
    parser.add_argument("name", nargs="?", help="the name in brackets at the end of a message")


def run(arguments: argparse.Namespace) -> int:
    """Print one explanation, or the list."""
    if arguments.name is None:
        width = max(len(name.value) for name in Name)
        for name in Name:
            print(f"{name.value:<{width}}  {name.severity.value:<7}  {name.headline}")
        return Exit.SOUND
    wanted = arguments.name.strip("()").lower()
    found = next((name for name in Name if name.value == wanted), None)
    if found is None:
        near = get_close_matches(wanted, [name.value for name in Name], 3, 0.5)
        hint = f"; near to it are {', '.join(near)}" if near else ""
        print(f"fluxnet explain: no message has the name {wanted!r}{hint}", file=sys.stderr)
        return Exit.MISUSE
    print(f"{found.value} ({found.severity.value}): {found.headline}")
    print(f"    why it matters  {found.why}")
    print(f"    what to do      {found.remedy}")
    return Exit.SOUND
