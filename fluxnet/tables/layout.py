"""Where the header of a table is, what stood above it, and which of the two forms it has."""

from __future__ import annotations

from dataclasses import field, replace
from enum import Enum

from fluxnet.ground.record import record
from fluxnet.network.model import Network
from fluxnet.tables.grid import Grid, Row
from fluxnet.tables.quantities import is_quantity_name
from fluxnet.tables.statements import Statements, joined, read_statement
from fluxnet.tables.titles import Key, Title, is_header_part, is_like_unit, read_title, settle_keys
from fluxnet.tables.vocabulary import Vocabulary

__all__ = ["Form", "Layout", "find_layout"]

_DEEPEST = 60
"""Rows in which a header is looked for; notes above a table are not longer."""


class Form(Enum):
    """A long table has a row a quantity, a wide one a row a run."""

    LONG = "long"
    WIDE = "wide"


@record
class Layout:
    """How a grid is to be read; ``form`` is None where no header was found.

    ``titles`` are one a column; ``body`` are the rows below the header; ``score`` counts the
    columns that were understood. ``shifted`` are the lines whose cells stand in wrong columns.
    """

    form: Form | None
    titles: tuple[Title, ...]
    body: tuple[Row, ...]
    header_rows: int
    vocabulary: Vocabulary
    statements: Statements = field(default=Statements())
    score: int = 0
    header: Row | None = None
    shifted: frozenset[int] = frozenset()


@record
class _Judgement:
    """What a row is as a header."""

    form: Form | None
    score: int
    is_sure: bool


def find_layout(grid: Grid, network: Network | None) -> Layout:
    """Read the lines above the table, then find its header.

    A row that only names species (it may be a note) is the header only where no row below it
    shows units or directions. Where no row is a header, the one that comes nearest stands in
    ``header``: what stands below a long table's titles without a rate is not looked at.
    """
    statements = Statements()
    vocabulary = Vocabulary(network)
    likely: Layout | None = None
    nearest: tuple[int, Row | None] = (0, None)
    for index, row in enumerate(grid.rows[:_DEEPEST]):
        statement = read_statement(row)
        if statement is not None:
            statements = joined(statements, statement, row.span)
            vocabulary = replace(vocabulary, declared=statements.species)
            continue
        titles, depth = _titles(grid.rows, index)
        found = _judge(titles, vocabulary)
        if found.form is not None:
            body = grid.rows[index + depth :]
            layout = Layout(
                found.form, titles, body, depth, vocabulary, statements, found.score, row
            )
            if found.is_sure:
                return layout
            likely = likely or layout
        elif _lacks_rate(titles):
            return Layout(None, titles, (), depth, vocabulary, statements, found.score, row)
        if found.score > nearest[0]:
            nearest = (found.score, row)
        text = " ".join(c.text for c in row.cells if c.text)
        statements = joined(statements, Statements(notes=(text,)))
    return likely or Layout(None, (), (), 0, vocabulary, statements, nearest[0], nearest[1])


def _lacks_rate(titles: tuple[Title, ...]) -> bool:
    """Whether titles are a long table's but for the column of the rates."""
    keys = {t.key for t in titles}
    is_long = Key.SPECIES in keys and not keys.isdisjoint({Key.UNIT, Key.DIRECTION, Key.SD})
    return is_long and Key.RATE not in keys


def _titles(rows: tuple[Row, ...], index: int) -> tuple[tuple[Title, ...], int]:
    """The titles of the header that starts at a row, and how many rows it takes."""
    depth = 1
    while depth < 3 and index + depth < len(rows) and _continues(rows[index + depth]):
        depth += 1
    width = max(len(r.cells) for r in rows[index : index + depth])
    below = rows[index + 1 : index + depth]
    titles = (
        read_title(rows[index].cell(j), tuple(r.cell(j).text for r in below)) for j in range(width)
    )
    return settle_keys(tuple(titles)), depth


def _continues(row: Row) -> bool:
    """Whether a row below the titles belongs to the header: units, directions, ``sd``."""
    if row.is_blank or any(c.number is not None or c.fault is not None for c in row.cells):
        return False
    others = [c.text for c in row.cells if not is_header_part(c.text)]
    # unknown units are told as such, and not as numbers that cannot be read
    alike = sum(is_like_unit(c.text) for c in row.cells)
    return not others or (alike > 1 and all(is_like_unit(text) for text in others))


def _judge(titles: tuple[Title, ...], vocabulary: Vocabulary) -> _Judgement:
    """The form that titles tell, and how many of them are understood."""
    keys = {t.key for t in titles if t.key is not None}
    if Key.SPECIES in keys and Key.RATE in keys:
        return _Judgement(Form.LONG, len(keys), True)
    plain = [t for t in titles if t.key is None and t.name and not t.is_sd]
    known = [t for t in plain if is_quantity_name(t.name, vocabulary)]
    marked = [t for t in plain if t.bracketed or t.direction]
    is_sure = any(t in marked for t in known)
    score = len(keys) + len(known) + len(marked)
    if is_sure or len(known) >= 2 or (len(marked) >= 2 and Key.SPECIES not in keys):
        return _Judgement(Form.WIDE, score, is_sure)
    return _Judgement(None, score, False)
