"""``fluxnet manual``: the packaged manual, a topic a page."""

from __future__ import annotations

import argparse
import sys
from difflib import get_close_matches
from pathlib import Path

from fluxnet.cli.main import Exit

__all__ = ["EXAMPLES", "MANUAL", "add_arguments", "run"]

EXAMPLES = """The manual.

  fluxnet manual                     the topics
  fluxnet manual language            how a model is written
"""

MANUAL = Path(__file__).resolve().parent.parent / "manual"


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Options of the command."""
    parser.add_argument("topic", nargs="?", help="a topic of the list")


def run(arguments: argparse.Namespace) -> int:
    """Print a topic, or the list of topics."""
    topics = {path.stem: path for path in sorted(MANUAL.glob("*.md"))}
    if arguments.topic is None:
        print("A compartment is a part of metabolism (catabolism, anabolism, maintenance), not a")
        print("place in the cell. By itself it makes or spends carriers, ATP and NADH, which can")
        print("neither leave nor pile up: what one compartment makes, the others spend.\n")
        for name, path in topics.items():
            title = path.read_text(encoding="utf-8").split("\n", 1)[0].lstrip("# ")
            print(f"  fluxnet manual {name:<10}  {title}")
        return Exit.SOUND
    if arguments.topic not in topics:
        near = get_close_matches(arguments.topic, topics, 1, 0.5)
        hint = f"; the nearest is {near[0]}" if near else f"; there are {', '.join(topics)}"
        print(f"fluxnet manual: there is no topic {arguments.topic!r}{hint}", file=sys.stderr)
        return Exit.MISUSE
    print(topics[arguments.topic].read_text(encoding="utf-8"), end="")
    return Exit.SOUND
