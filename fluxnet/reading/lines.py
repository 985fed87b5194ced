"""Logical lines: comments taken away, continued lines joined, characters made alike.

The text of a logical line is normalised (NFKC, one kind of minus); each of its characters
knows the column of the user's own line from which it comes.
"""

from __future__ import annotations

import unicodedata
from bisect import bisect_right
from collections.abc import Sequence
from typing import NamedTuple

from fluxnet.ground.pattern import pattern_of
from fluxnet.ground.source import Source, Span

__all__ = [
    "LONGEST", "LogicalLine", "indentation_of", "logical_lines", "starts_statement",
    "without_comment",
]

TAB = 4
LONGEST = 5_000
"""A longer line is no statement, and is not looked into."""

_CLOSED_QUOTE = pattern_of(r'"[^"]*"')
_MINUS = dict.fromkeys(map(ord, "\u2010\u2011\u2012\u2013\u2212"), "-")
_ALIKE = {**_MINUS, ord("\u201c"): '"', ord("\u201d"): '"', ord("\u201e"): '"',
          ord("\u200b"): "", ord("\ufeff"): "", ord("\u2060"): ""}
_TITLE = pattern_of(r"\s*model\b(?!\s*:)")
_REASON = pattern_of(r"\baccept\s+[\w-]+\s*:")
_GOES_ON = pattern_of(r"(?:(?:^|\s)\+|,|->|→|⇌|[-=<>]+>)$")
_STARTS = pattern_of(
    r"\s*(?:[\w,'-]+\+?\s*:"
    r"|(?:model|basis|substrate|product|exchange|biomass|carrier|inside|parameter|compartment"
    r"|limit|variant|add|set|drop|use|free|balance)\s+[\w\"])"
)


class _Piece(NamedTuple):
    """A part of a logical line that comes from one line of the file.

    ``start`` is its first offset in the logical text. ``columns`` are the columns of its
    characters; None where the ``k``-th stands in column ``first + k``.
    """

    start: int
    length: int
    line: int
    first: int
    columns: tuple[int, ...] | None


class LogicalLine(NamedTuple):
    """One statement's text, its indentation in columns, and where it comes from."""

    file: str
    text: str
    indentation: int
    pieces: tuple[_Piece, ...]

    @property
    def number(self) -> int:
        """The line of the file where it starts."""
        return self.pieces[0].line

    def span(self, start: int, end: int) -> Span:
        """The place of a stretch of the text; cut off at the end of a line of the file."""
        at = bisect_right([p.start for p in self.pieces], start) - 1
        piece = self.pieces[max(at, 0)]
        first = min(max(start - piece.start, 0), piece.length)
        last = min(max(end - piece.start, first), piece.length)
        return Span(self.file, piece.line, _column(piece, first), _column(piece, last))

    @property
    def whole(self) -> Span:
        """The place of the whole text (of its first line where it goes on)."""
        return self.span(0, len(self.text))


def _column(piece: _Piece, offset: int) -> int:
    if piece.columns is None:
        return piece.first + offset
    if offset < len(piece.columns):
        return piece.columns[offset]
    return (piece.columns[-1] + 1) if piece.columns else piece.first


def logical_lines(source: Source) -> tuple[LogicalLine, ...]:
    """All statements of a text, as logical lines.

    Examples
    --------
    >>> source = Source("core.flux", ("pdh : pyruvate ->", "    CO2  # gas", "inside pyruvate"))
    >>> [(line.number, line.text) for line in logical_lines(source)]
    [(1, 'pdh : pyruvate -> CO2'), (3, 'inside pyruvate')]
    """
    found: list[LogicalLine] = []
    number = 1
    while number <= len(source.lines):
        taken = _take(source, number)
        if taken is None:
            number += 1
            continue
        line, number = taken
        found.append(line)
    return tuple(found)


def _take(source: Source, number: int) -> tuple[LogicalLine, int] | None:
    """The logical line that starts at a line, and the number of the line behind it."""
    raw = source.line(number)
    body = without_comment(raw)
    lead = len(body) - len(body.lstrip())
    if lead == len(body):
        return None
    text, columns = _normalised(body[lead:].rstrip(), lead)
    pieces = [_Piece(0, len(text), number, lead + 1, columns)]
    behind = number + 1
    free = _TITLE.match(text) or _REASON.search(text)
    while not free and _GOES_ON.search(text[-4:]) and len(text) < LONGEST:
        following = _following(source, behind)
        if following is None:
            break
        behind, more = following
        inner = len(more) - len(more.lstrip())
        addition, columns = _normalised(more[inner:].rstrip(), inner)
        pieces.append(_Piece(len(text) + 1, len(addition), behind, inner + 1, columns))
        text = f"{text} {addition}"
        free = _REASON.search(addition)
        behind += 1
    return LogicalLine(source.file, text, indentation_of(raw), tuple(pieces)), behind


def _following(source: Source, number: int) -> tuple[int, str] | None:
    """The line with which an unfinished one goes on: its number and text.

    Comments may stand between. A blank line, or one that plainly starts a statement, does not
    carry on.
    """
    while number <= len(source.lines):
        raw = source.line(number)
        body = without_comment(raw)
        if body.strip():
            return None if starts_statement(body) else (number, body)
        if not raw.strip():
            return None
        number += 1
    return None


def indentation_of(raw: str) -> int:
    r"""The columns of blanks with which a line begins; a tab counts as four.

    Examples
    --------
    >>> indentation_of("\tpdh"), indentation_of("  pdh")
    (4, 2)
    """
    return sum(TAB if letter == "\t" else 1 for letter in raw[: len(raw) - len(raw.lstrip())])


def starts_statement(text: str) -> bool:
    """Whether a text plainly starts a statement, so that it carries no other line on.

    Examples
    --------
    >>> starts_statement("inside pyruvate"), starts_statement("+ CO2")
    (True, False)
    """
    return _STARTS.match(text) is not None


def without_comment(raw: str) -> str:
    """A line up to its comment; a ``#`` between two quotation marks starts none.

    Examples
    --------
    >>> without_comment('use "a#b.flux"  # a file')
    'use "a#b.flux"  '
    """
    if "#" not in raw:
        return raw
    if '"' not in raw:
        return raw[: raw.index("#")]
    place = 0
    while place < len(raw):
        if raw[place] == "#":
            return raw[:place]
        closed = _CLOSED_QUOTE.match(raw, place)
        place = closed.end() if closed else place + 1
    return raw


def _normalised(text: str, lead: int) -> tuple[str, tuple[int, ...] | None]:
    """The text made alike, and the columns of its characters (None where they just follow)."""
    if text.isascii():
        return text, None
    out: list[str] = []
    columns: list[int] = []
    for start, end in _clusters(text):
        alike = unicodedata.normalize("NFKC", text[start:end]).translate(_ALIKE)
        out.append(alike)
        columns.extend([lead + 1 + start] * len(alike))
    return "".join(out), tuple(columns)


def _clusters(text: str) -> Sequence[tuple[int, int]]:
    """Letters with the accents that belong to them."""
    starts = [i for i, letter in enumerate(text) if i == 0 or not unicodedata.combining(letter)]
    return list(zip(starts, [*starts[1:], len(text)], strict=True))
