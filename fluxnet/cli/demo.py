"""``fluxnet demo``: the whole job on an example of ours, each step with its command."""

from __future__ import annotations

import argparse
import sys
from pathlib import Path

from fluxnet.cli.main import Exit
from fluxnet.cli.main import run as run_command
from fluxnet.ground.resources import resource_folder
from fluxnet.presenting.files import refuse_file, write_bytes

__all__ = ["EXAMPLES", "add_arguments", "run"]

EXAMPLES = """Writes an example into a folder and runs the whole job on it.

  fluxnet demo                       into fluxnet-demo
  fluxnet demo somewhere-else
"""

_EXAMPLE = "1-four-weeks-of-a-diol"

_STEPS: tuple[tuple[str, tuple[str, ...]], ...] = (
    ("Is the reaction list sound?", ("check", "tw4.flux")),
    (
        "Do carbon and electrons close, week by week? One of the four does not hold.",
        ("closure", "rates.csv", "--model", "tw4.flux", "--quiet"),
    ),
    (
        "The week that does not: what could be wrong with it?",
        ("closure", "rates.csv", "--model", "tw4.flux", "--run", "W11"),
    ),
    (
        "A week that closes: what did the cells do, and who made and spent the carriers?",
        ("solve", "tw4.flux", "rates.csv", "--run", "W15"),
    ),
    (
        "The slow week: how much diol could the cells have made at most?",
        ("solve", "tw4.flux", "rates.csv", "--run", "W14", "--maximise", "2,3-butanediol"),
    ),
)


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Options of the command."""
    parser.add_argument("folder", nargs="?", type=Path, default=Path("fluxnet-demo"))
    parser.add_argument("--force", "-f", action="store_true", help="overwrite files that exist")


def run(arguments: argparse.Namespace) -> int:
    """Write the example, run each step, and say where to read on."""
    folder: Path = arguments.folder
    sources = sorted(p for p in (resource_folder("examples") / _EXAMPLE).iterdir() if p.is_file())
    folder.mkdir(parents=True, exist_ok=True)
    for source in sources:
        refuse_file(folder / source.name, force=arguments.force)
    for source in sources:
        write_bytes(folder / source.name, source.read_bytes(), force=arguments.force)
    print(f"{folder / 'README.md'} tells the story; all of it is invented.")
    worst = 0
    for question, words in _STEPS:
        command = [
            str(folder / word) if (folder / word).is_file() else word for word in words
        ]
        print(f"\n{'─' * 78}\n{question}\n  fluxnet {' '.join(command)}\n", flush=True)
        worst = max(worst, run_command(command))
        if worst == Exit.INTERRUPTED:
            return worst
        sys.stderr.flush()
    print(f"\n{'─' * 78}\nWhat was wrong in which week? {folder / 'answer.md'} tells.")
    return worst if worst > Exit.FINDING else Exit.SOUND
