"""A file laid out in one way: columns, blanks, signs. Comments stay, and so does the meaning.

A line that cannot be read stays as it is, but for its indentation. What is laid out once does
not change when it is laid out again.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from dataclasses import replace

from fluxnet.ground.record import record
from fluxnet.ground.source import Source
from fluxnet.reading import syntax as s
from fluxnet.reading.layout import Cells, lay_out
from fluxnet.reading.lines import (
    LONGEST,
    LogicalLine,
    indentation_of,
    logical_lines,
    starts_statement,
    without_comment,
)
from fluxnet.reading.parsing import Unparsed, parse_statement
from fluxnet.reading.source import split_lines

__all__ = ["tidy_text"]

_STEP = 4
_WORD_COLUMN = 11
_WIDEST_NAME = 24
_WIDTH = 100
_BREAK = re.compile(r"(?<=\s\+)\s|(?<=->)\s|(?<=,)\s")
_ON_ONE_LINE = ("model", "basis", "variant", "use")
_WIDE_WORDS = ("compartment", "variant", "add to")


@record
class _Row:
    """A line to be written: blank, a comment alone, a statement, or text as it stands.

    ``column`` is the indentation as typed, ``depth`` the number of open blocks.
    """

    column: int = 0
    depth: int = 0
    cells: Cells | None = None
    comment: str = ""
    verbatim: tuple[str, ...] = ()

    @property
    def is_blank(self) -> bool:
        return self.cells is None and not self.comment and not self.verbatim

    @property
    def is_comment(self) -> bool:
        return self.cells is None and not self.verbatim and bool(self.comment)


def tidy_text(text: str) -> str:
    r"""The text in the canonical layout.

    Examples
    --------
    >>> print(tidy_text("compartment c # x\n  a:A+2 B→C\n"), end="")
    compartment c  # x
        a : A + 2 B -> C
    """
    source = Source("", split_lines(text))
    rows = _placed_comments(_without_double_blanks(_rows(source)))
    out: list[str] = []
    for run in _runs(rows):
        out.extend(_set(run))
    return "".join(f"{line}\n" for line in out)


def _rows(source: Source) -> Iterator[_Row]:
    """All lines of a text, statements with their depth."""
    lines = {line.number: line for line in logical_lines(source)}
    blocks: list[int] = []
    number = 1
    while number <= len(source.lines):
        raw = source.line(number)
        line = lines.get(number)
        if line is None:
            comment = raw[len(without_comment(raw)) :].rstrip()
            yield _Row(indentation_of(raw), 0, None, comment)
            number += 1
            continue
        while blocks and line.indentation <= blocks[-1]:
            blocks.pop()
        last = line.pieces[-1].line
        row, opens = _statement_row(line, source, last, len(blocks))
        yield row
        if opens:
            blocks.append(line.indentation)
        number = last + 1


def _statement_row(
    line: LogicalLine, source: Source, last: int, depth: int
) -> tuple[_Row, bool]:
    """A statement's row, and whether it opens a block."""
    raws = tuple(source.line(n).rstrip() for n in range(line.number, last + 1))
    comments = [raw[len(without_comment(raw)) :].rstrip() for raw in raws]
    statement = parse_statement(line.text) if len(line.text) <= LONGEST else Unparsed(0)
    shown = (" " * (_STEP * depth) + raws[0].lstrip(), *raws[1:])
    if isinstance(statement, Unparsed):
        return _Row(line.indentation, depth, None, "", shown), True
    opens = isinstance(statement.line, (s.CompartmentLine, s.VariantLine, s.AdditionLine))
    if any(comments[:-1]):
        return _Row(line.indentation, depth, None, "", shown), opens
    cells = lay_out(statement, line.text)
    return _Row(line.indentation, depth, cells, comments[-1]), opens


def _without_double_blanks(rows: Iterator[_Row]) -> list[_Row]:
    kept: list[_Row] = []
    for row in rows:
        if row.is_blank and (not kept or kept[-1].is_blank):
            continue
        kept.append(row)
    while kept and kept[-1].is_blank:
        kept.pop()
    return kept


def _placed_comments(rows: Sequence[_Row]) -> list[_Row]:
    """Comments that stand alone, indented like the statement above or below them."""
    out = list(rows)
    for at, row in enumerate(rows):
        if not row.is_comment:
            continue
        above = next((r for r in reversed(rows[:at]) if r.cells or r.verbatim), None)
        below = next((r for r in rows[at + 1 :] if r.cells or r.verbatim), None)
        near = [r for r in (below, above) if r is not None]
        if row.column == 0 or not near:
            continue
        chosen = min(near, key=lambda r: abs(r.column - row.column))
        out[at] = replace(row, depth=chosen.depth)
    return out


def _runs(rows: Sequence[_Row]) -> Iterator[list[_Row]]:
    """Rows that are set together: those between blank lines, of one depth."""
    run: list[_Row] = []
    for row in rows:
        if run and (row.is_blank or run[-1].is_blank or row.depth != run[-1].depth):
            yield run
            run = []
        run.append(row)
    if run:
        yield run


def _set(run: Sequence[_Row]) -> Iterator[str]:
    """The lines of a run, in columns."""
    statements = [r.cells for r in run if r.cells is not None]
    labels = max((len(c.name) for c in statements if c.is_reaction), default=0)
    names: dict[str, int] = {}
    for cells in statements:
        if cells.name and cells.rest and not cells.is_reaction:
            width = min(len(cells.name), _WIDEST_NAME)
            names[_group(cells)] = max(names.get(_group(cells), 0), width)
    inside = any(r.depth for r in run)
    words = max(
        (len(c.word) for c in statements if not c.is_reaction and c.word not in _WIDE_WORDS),
        default=0,
    )
    column = words + 2 if inside else _WORD_COLUMN
    texts = [_text(r, column, labels, names) for r in run]
    edge = max(
        (len(t[-1]) for r, t in zip(run, texts, strict=True) if r.cells and r.comment), default=0
    )
    for row, text in zip(run, texts, strict=True):
        yield from text[:-1]
        if row.cells is not None and row.comment:
            yield f"{text[-1].ljust(edge)}  {row.comment}"
        else:
            yield text[-1]


def _group(cells: Cells) -> str:
    return "parameter" if cells.word in ("parameter", "set") else "species"


def _text(row: _Row, column: int, labels: int, names: dict[str, int]) -> list[str]:
    """A row's text, over several lines where it is long."""
    lead = " " * (_STEP * row.depth)
    if row.verbatim:
        return list(row.verbatim)
    cells = row.cells
    if cells is None:
        return [f"{lead}{row.comment}" if row.comment else ""]
    if cells.is_reaction:
        return _broken(f"{lead}{cells.name.ljust(labels)} {cells.rest}", len(lead))
    word = f"{cells.word} " if cells.word in _WIDE_WORDS else cells.word.ljust(column)
    name = cells.name
    if name and cells.rest:
        gap = " " if _group(cells) == "parameter" else "  "
        name = name.ljust(names[_group(cells)]) + gap
    text = f"{lead}{word}{name}{cells.rest}".rstrip()
    return [text] if cells.word in _ON_ONE_LINE else _broken(text, len(lead))


def _broken(text: str, lead: int) -> list[str]:
    """A text broken behind `+`, an arrow or a comma where it is too wide."""
    lines: list[str] = []
    indent = " " * (lead + 2 * _STEP)
    accept = re.search(r"\s+accept\s+[\w-]+\s*:", text)
    last = accept.start() if accept else len(text)
    while len(text) > _WIDTH:
        found = _BREAK.finditer(text, lead, min(_WIDTH, last))
        places = [m for m in found if not starts_statement(text[m.end() :])]
        if not places or not text[: places[-1].start()].strip():
            break
        cut = places[-1]
        lines.append(text[: cut.start()])
        rest = text[cut.end() :]
        last += len(indent) - cut.end()
        text = indent + rest
        lead = len(indent)
    return [*lines, text]
