"""Standard streams, made safe for every encoding, and there even where they were closed."""

from __future__ import annotations

import os
import sys
from contextlib import suppress
from io import TextIOWrapper

__all__ = ["complain", "prepare_streams"]


def prepare_streams() -> None:
    """Let no character stop the output: what cannot be encoded is shown as its escape.

    A stream that was closed (``>&-``) reads nothing and swallows what is written to it.
    """
    for name, mode in (("stdin", "r"), ("stdout", "w"), ("stderr", "w")):
        if getattr(sys, name) is None:
            setattr(sys, name, open(os.devnull, mode, encoding="utf-8"))  # noqa: SIM115
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, TextIOWrapper):
            stream.reconfigure(errors="backslashreplace")


def complain(words: str) -> None:
    """Say what went wrong on standard error; where not even that can be written, keep quiet."""
    with suppress(OSError, ValueError):
        print(words, file=sys.stderr, flush=True)
