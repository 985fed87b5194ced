"""Progress of long work on a terminal: one line, after half a second, gone when done."""

from __future__ import annotations

import sys
import time
from collections.abc import Iterator
from contextlib import contextmanager
from typing import TextIO

from fluxnet.ground.progress import Progress, silent

__all__ = ["progress_on"]

_WAIT = 0.5
_EVERY = 0.1


@contextmanager
def progress_on(stream: TextIO = sys.stderr) -> Iterator[Progress]:
    """A listener that shows progress where the stream is a terminal, else a silent one."""
    if not stream.isatty():
        yield silent
        return
    start = last = time.monotonic()
    shown = False

    def show(what: str, done: int, total: int) -> None:
        nonlocal last, shown
        now = time.monotonic()
        if now - start < _WAIT or (shown and now - last < _EVERY):
            return
        last, shown = now, True
        stream.write(f"\r\x1b[K{what} {done}/{total}")
        stream.flush()

    try:
        yield show
    finally:
        if shown:
            stream.write("\r\x1b[K")
            stream.flush()
