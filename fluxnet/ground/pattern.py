"""Patterns of texts that are compiled when they are first used.

Compiling the patterns of a module took longer than all else that its import does, and one run
uses few of them.
"""

from __future__ import annotations

import re
from typing import Any, cast

__all__ = ["pattern_of"]


class _Pattern:
    """Becomes a compiled pattern at its first use."""

    def __init__(self, text: str, flags: int) -> None:
        self._text, self._flags = text, flags

    def __getattr__(self, name: str) -> Any:
        # Asked only for what is not there yet; from then on the compiled one's own methods are.
        compiled = re.compile(self._text, self._flags)
        for method in ("match", "fullmatch", "search", "sub", "split", "findall", "finditer"):
            self.__dict__[method] = getattr(compiled, method)
        return getattr(compiled, name)


def pattern_of(text: str, flags: int = 0) -> re.Pattern[str]:
    r"""A compiled pattern, as :func:`re.compile` gives it, but compiled at its first use.

    Examples
    --------
    >>> word = pattern_of(r"\w+")
    >>> word.match("two words")[0], word.findall("two words"), word.pattern
    ('two', ['two', 'words'], '\\w+')
    """
    return cast("re.Pattern[str]", _Pattern(text, flags))
