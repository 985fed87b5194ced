"""``fluxnet demo``: the whole job on an example of ours, each step with its command."""

from __future__ import annotations

import argparse
import shlex
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
_RAW = "3-one-yeast-in-three-vessels"

_STEPS: tuple[tuple[str, tuple[str, ...]], ...] = (
    (
        "What are the rates? From the files of a batch, as the instruments wrote them.",
        ("rates", "raw/batch", "--model", "raw/lv3.flux", "-o", "raw/batch.csv"),
    ),
    (
        "Those rates go on as they are. Do carbon and electrons close?",
        ("closure", "raw/batch.csv", "--model", "raw/lv3.flux", "--run", "vessel 2 growth"),
    ),
    ("Another cell, with rates at hand. Is the reaction list sound?", ("check", "tw4.flux")),
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
    sources = {**_files(_EXAMPLE, folder), **_files(_RAW, folder / "raw")}
    made = [folder / "raw" / name for name in ("batch.csv", "batch.covariance.csv")]
    for path in (*sources, *made):
        if path.parent.is_dir():
            refuse_file(path, force=arguments.force)
    for path, source in sources.items():
        path.parent.mkdir(parents=True, exist_ok=True)
        write_bytes(path, source.read_bytes(), force=arguments.force)
    print(f"{folder / 'README.md'} tells the story; all of it is invented.")
    worst = 0
    for question, words in _STEPS:
        command = [
            str(folder / word) if _is_path(folder / word) else word for word in words
        ]
        if arguments.force and words[0] == "rates":
            command.append("--force")
        print(f"\n{'─' * 78}\n{question}\n  fluxnet {shlex.join(command)}\n", flush=True)
        worst = max(worst, run_command(command))
        if worst == Exit.INTERRUPTED:
            return worst
        sys.stderr.flush()
    print(f"\n{'─' * 78}\nWhat was wrong in which week? {folder / 'answer.md'} tells.")
    return worst if worst > Exit.FINDING else Exit.SOUND


def _files(example: str, folder: Path) -> dict[Path, Path]:
    """Where each file of an example goes, and where it lies."""
    top = resource_folder("examples") / example
    # installing compiles the scripts of a scenario: that is no part of it
    return {
        folder / p.relative_to(top): p
        for p in sorted(top.rglob("*"))
        if p.is_file() and p.suffix != ".pyc"
    }


def _is_path(path: Path) -> bool:
    """Whether a word of a command is a file or a folder of the example, or one it will write."""
    return path.exists() or (path.suffix == ".csv" and path.parent.is_dir())
