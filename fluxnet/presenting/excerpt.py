"""The user's own line below a finding, its words marked; signs that steer a terminal made seen."""

from __future__ import annotations

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.pattern import pattern_of
from fluxnet.ground.source import Span
from fluxnet.presenting.table_lines import cell_width

__all__ = ["excerpt_lines", "place_of", "seen"]

# Control characters, and those that turn the direction of writing.
_UNSEEN = pattern_of("[\x00-\x1f\x7f-\x9f\u200e\u200f\u202a-\u202e\u2066-\u2069\ud800-\udfff]")
_WIDEST = 240
_BEFORE = 80


def seen(text: str) -> str:
    r"""The text with what steers a terminal shown as its escape.

    Examples
    --------
    >>> print(seen("a\x1b[31mb"))
    a\x1b[31mb
    """
    if _UNSEEN.search(text) is None:
        return text
    return _UNSEEN.sub(lambda m: m[0].encode("unicode_escape", "surrogatepass").decode(), text)


def place_of(span: Span) -> str:
    """A place in words; only the file where nothing in it is meant.

    Examples
    --------
    >>> place_of(Span("m.flux", 3, 7, 9))
    'm.flux, line 3, column 7'
    """
    return f"{span.file}, line {span.line}, column {span.column}" if span.line else span.file


def excerpt_lines(diagnostic: Diagnostic) -> tuple[str, ...]:
    """The line of a finding, cut to what stands around the words that are meant, and their mark."""
    if diagnostic.source_line is None:
        return ()
    span, source = diagnostic.span, diagnostic.source_line.rstrip()
    start = max(0, span.column - 1)
    first, last = len(source) - len(source.lstrip()), len(source)
    if last - first > _WIDEST:
        first = max(first, min(start, last) - _BEFORE)
        last = min(last, first + _WIDEST)
    head = "... " if source[:first].strip() else ""
    tail = " ..." if last < len(source) else ""
    before = seen(source[first:start].expandtabs(4))
    marked = max(1, min(span.end_column - span.column, last - start))
    return (
        f"    {head}{seen(source[first:last].expandtabs(4))}{tail}",
        " " * (4 + len(head) + cell_width(before)) + "‾" * marked,
    )
