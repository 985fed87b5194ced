"""Progress of long work, told to whoever listens."""

from __future__ import annotations

from collections.abc import Callable

__all__ = ["Progress", "silent"]

Progress = Callable[[str, int, int], None]
"""Called with what is being done, how many are done, and how many there are."""


def silent(what: str, done: int, total: int) -> None:
    """Tell nobody.

    Examples
    --------
    >>> silent("ranges", 1, 10)
    """
