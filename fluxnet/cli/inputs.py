"""Inputs named on a command line: models and rates tables, read with everything told."""

from __future__ import annotations

import argparse
import sys
from collections.abc import Iterable
from dataclasses import dataclass
from pathlib import Path

from fluxnet.cli.main import Exit
from fluxnet.ground.diagnostic import Diagnostic, has_errors
from fluxnet.ground.names import Name
from fluxnet.network.model import Network
from fluxnet.network.variant import apply_variant
from fluxnet.presenting.records import Input, hash_bytes, hash_file
from fluxnet.reading.model import ModelReading, read_model, read_model_text

__all__ = ["ReadModel", "exit_of", "load_model", "read_inputs"]

# With one of these the input cannot even be looked at: the command was wrongly used.
_UNREADABLE = frozenset(
    {
        Name.FILE_MISSING,
        Name.NOT_A_FILE,
        Name.BINARY_FILE,
        Name.EMPTY_FILE,
        Name.FILE_TOO_LONG,
        Name.UNKNOWN_RUN,
        Name.UNKNOWN_VARIANT,
    }
)


@dataclass(frozen=True, slots=True)
class ReadModel:
    """A model with its variant applied, all findings, and its hash."""

    network: Network | None
    diagnostics: tuple[Diagnostic, ...]
    inputs: tuple[Input, ...]


def exit_of(diagnostics: tuple[Diagnostic, ...]) -> int:
    """The exit status that findings alone ask for."""
    if any(d.name in _UNREADABLE and d.severity.rank == 0 for d in diagnostics):
        return Exit.MISUSE
    return Exit.FINDING if has_errors(diagnostics) else Exit.SOUND


def load_model(arguments: argparse.Namespace, variant: str = "base") -> ReadModel:
    """Read the model that a command names, and apply a variant to it."""
    reading, inputs = _read(arguments)
    network, diagnostics = reading.network, reading.diagnostics
    if network is not None and variant != "base":
        network, told = apply_variant(network, variant)
        diagnostics = (*diagnostics, *(d for d in told if d not in diagnostics))
    return ReadModel(network, diagnostics, inputs)


def _read(arguments: argparse.Namespace) -> tuple[ModelReading, tuple[Input, ...]]:
    if arguments.model == "-":
        data = sys.stdin.buffer.read()
        text = data.decode("utf-8", errors="replace")
        reading = read_model_text(text, file="standard input", large=arguments.large)
        return reading, (hash_bytes(data, "standard input"),)
    path = Path(arguments.model)
    reading = read_model(path, large=arguments.large, allow_use=tuple(arguments.allow_use))
    return reading, read_inputs(source.file for source in reading.sources)


def read_inputs(files: Iterable[str]) -> tuple[Input, ...]:
    """The hashes of files that were read."""
    paths = dict.fromkeys(file.split("!")[0] for file in files)
    return tuple(hash_file(Path(p), p) for p in paths if Path(p).is_file())
