"""One fault of a line that could not be read, and the signs by which faults are told."""

from __future__ import annotations

import re
from typing import NamedTuple

from fluxnet.ground.names import Name
from fluxnet.ground.pattern import pattern_of

__all__ = [
    "DECIMAL_COMMA", "NAME", "NUMBER", "Change", "Fault", "Known", "decimal_commas",
    "put_in", "replace_by", "unreadable",
]

NAME = r"(?:\d+(?:[,']\d+)+-)?(?=(?:\w+-)*\w*[^\W\d_])\w+(?:-\w+)*\+?"
NUMBER = r"(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d{1,3})?(?![\w.,])"
DECIMAL_COMMA = pattern_of(r"(?<![\w,.'])\d+,\d+(?!\d*[,'-])")


class Change(NamedTuple):
    """Text to stand in the place of a stretch."""

    start: int
    end: int
    text: str


class Fault(NamedTuple):
    """What is wrong, where, and what mends it; ``changes`` carry the mend out."""

    name: Name
    message: str
    start: int
    end: int
    mend: str | None = None
    changes: tuple[Change, ...] = ()
    because: str | None = None


class Known(NamedTuple):
    """The names that readable lines declare."""

    species: frozenset[str] = frozenset()
    parameters: frozenset[str] = frozenset()


def put_in(place: int, text: str) -> Change:
    """Text put in between.

    Examples
    --------
    >>> put_in(8, ",")
    Change(start=8, end=8, text=',')
    """
    return Change(place, place, text)


def replace_by(match: re.Match[str], text: str, group: int = 0) -> Change:
    """Text in the place of a match.

    Examples
    --------
    >>> import re
    >>> replace_by(re.search("=>", "A => B"), "->")
    Change(start=2, end=4, text='->')
    """
    return Change(match.start(group), match.end(group), text)


def unreadable(
    message: str, start: int, end: int, mend: str | None = None, *changes: Change
) -> Fault:
    """A fault without a name of its own."""
    return Fault(Name.UNREADABLE_LINE, message, start, end, mend, changes)


def decimal_commas(
    text: str, start: int, end: int, pattern: re.Pattern[str] = DECIMAL_COMMA
) -> list[Fault]:
    """Numbers with a decimal comma in a stretch of a text.

    Parameters
    ----------
    text
        The whole logical line.
    start, end
        The stretch of it to look at: one past its first word, and one past the last character.
    pattern
        What a number with a comma looks like there.

    Examples
    --------
    >>> text = "limit oxygen <= 2,5"
    >>> [(text[f.start : f.end], f.mend) for f in decimal_commas(text, 5, len(text))]
    [('2,5', 'write 2.5')]
    """
    found: list[Fault] = []
    for match in pattern.finditer(text, start, end):
        comma = match.start() + match[0].index(",")
        found.append(
            Fault(
                Name.DECIMAL_COMMA, f"{match[0]} is written with a decimal comma",
                match.start(), match.end(), f"write {match[0].replace(',', '.')}",
                (Change(comma, comma + 1, "."),),
            )
        )
    return found
