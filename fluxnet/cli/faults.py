"""A fault of ours: said so, with a file to send, and no traceback on the screen."""

from __future__ import annotations

import platform
import sys
import tempfile
import traceback
from collections.abc import Sequence

import fluxnet
from fluxnet.cli.streams import complain

__all__ = ["report_fault"]


def report_fault(command: str, words: Sequence[str]) -> int:
    """Write what happened into a file, say where it is, and give exit status 3."""
    details = "\n".join(
        [
            f"fluxnet {fluxnet.__version__}, Python {platform.python_version()}, {sys.platform}",
            f"command: fluxnet {command} {' '.join(words)}",
            "",
            traceback.format_exc(),
        ]
    )
    try:
        with tempfile.NamedTemporaryFile(
            "w", prefix="fluxnet-fault-", suffix=".txt", delete=False, encoding="utf-8"
        ) as file:
            file.write(details)
        where = f"it is described in {file.name}: please send that file with your input"
    except OSError:
        where = "its description could not be written"
    complain(f"fluxnet {command}: a fault of ours stopped the command; {where}")
    return 3
