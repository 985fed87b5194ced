"""How a faulty file says what should be found in it.

A comment on a line of its own, above the line in question::

    # expect: NAME "WORDS" [N] [certain]

``NAME`` is the diagnostic's name. ``"WORDS"`` is the stretch of the next line that should be
underlined, its ``N``-th occurrence (the first where no number stands). ``certain`` says that the
mend needs no decision: the finding brings the replacement of text that carries it out. Several
such comments may stand above one line. ``# expect: NAME file`` means the file as a whole. In a
table ``WORDS`` is what stands in the cell.

A file holds nothing else that is an error or a warning. Notes count where they are expected.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator
from dataclasses import dataclass

from fluxnet.ground.diagnostic import Diagnostic, Edit
from fluxnet.ground.source import Source, Span

_FORM = re.compile(
    r'^\s*#\s*expect:\s*(?P<name>[a-z-]+)\s+(?:(?P<file>file)|"(?P<words>[^"]*)"\s*(?P<n>\d+)?)'
    r"\s*(?P<certain>certain)?\s*$"
)


@dataclass(frozen=True, order=True)
class Expected:
    """One expected finding: its name and its place."""

    name: str
    file: str
    line: int
    column: int
    end_column: int
    certain: bool = False


def expectations(sources: Iterable[Source]) -> list[Expected]:
    """All that some texts expect to be found in them."""
    return sorted(e for source in sources for e in _of_text(source))


def _of_text(source: Source) -> Iterator[Expected]:
    waiting: list[re.Match[str]] = []
    for number, line in enumerate(source.lines, start=1):
        match = _FORM.match(line)
        if match is None:
            assert "expect:" not in line, f"{source.file} line {number}: {line}"
            for one in waiting:
                start = _occurrence(line, one["words"], int(one["n"] or 1), source.file, number)
                end = start + len(one["words"])
                yield Expected(
                    one["name"], source.file, number, start + 1, end + 1, bool(one["certain"])
                )
            waiting = []
        elif match["file"]:
            yield Expected(match["name"], source.file, 0, 1, 1, bool(match["certain"]))
        else:
            waiting.append(match)
    assert not waiting, f"{source.file}: an expectation stands above nothing"


def _occurrence(line: str, words: str, which: int, file: str, number: int) -> int:
    place = -1
    for _ in range(which):
        place = line.find(words, place + 1)
        assert place >= 0, f"{file} line {number} does not hold {words!r} {which} times"
    return place


def place_of(found: Diagnostic) -> Expected:
    """A finding, as what is expected is written."""
    span = found.span
    return Expected(
        found.name.value, span.file, span.line, span.column, span.end_column, bool(found.edits)
    )


def mended(source: Source, edits: Iterable[Edit]) -> str:
    """The text with replacements carried out."""
    lines = list(source.lines)

    def place(edit: Edit) -> Span:
        return edit.span

    for edit in sorted(dict.fromkeys(edits), key=place, reverse=True):
        line = lines[edit.span.line - 1]
        lines[edit.span.line - 1] = (
            line[: edit.span.column - 1] + edit.text + line[edit.span.end_column - 1 :]
        )
    return "".join(f"{line}\n" for line in lines)
