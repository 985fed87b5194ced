"""Standard output and error, made safe for every encoding."""

from __future__ import annotations

import sys
from io import TextIOWrapper

__all__ = ["prepare_streams"]


def prepare_streams() -> None:
    """Let no character stop the output: what cannot be encoded is shown as its escape."""
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, TextIOWrapper):
            stream.reconfigure(errors="backslashreplace")
