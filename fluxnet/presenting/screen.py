"""What one result shows: a sequence of sentences and tables, before any form is chosen."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import replace
from enum import Enum

from fluxnet.ground.record import record
from fluxnet.ground.table import Column, Table

__all__ = [
    "Block", "Data", "Drawing", "Heading", "Mood", "Sentence", "blocks_of_run", "screen_tables",
]


class Mood(Enum):
    """What a sentence says about the state of things; shown by a word, never colour alone."""

    PLAIN = "plain"
    GOOD = "good"
    BAD = "bad"
    DOUBTFUL = "doubtful"
    QUIET = "quiet"


@record
class Heading:
    """The start of a part, such as a run."""

    text: str
    is_run: bool = False


@record
class Sentence:
    """A sentence; ``verdict`` marks the one that ``--quiet`` keeps."""

    text: str
    mood: Mood = Mood.PLAIN
    verdict: bool = False


@record
class Drawing:
    """Lines of characters that stand as they are, below one another."""

    lines: tuple[str, ...]


@record
class Data:
    """Tables that are not shown, and made only when somebody asks for them."""

    make: Callable[[], tuple[Table, ...]]


Block = Heading | Sentence | Table | Drawing | Data


def blocks_of_run(blocks: Iterable[Block], run: str | None) -> tuple[Block, ...]:
    """The blocks with their tables marked as those of one run.

    Examples
    --------
    >>> blocks_of_run([Table("t", "", (), ())], "A")[0].run
    'A'
    """
    return tuple(replace(b, run=run) if isinstance(b, Table) else b for b in blocks)


def screen_tables(screen: tuple[Block, ...]) -> tuple[Table, ...]:
    """The tables of a screen as data: those of several runs as one, with a column ``run``.

    Columns and tables without a key are for the screen only.

    Examples
    --------
    >>> table = Table("t", "", (Column("rate", "rate"),), ((1.0,),))
    >>> (joined,) = screen_tables(blocks_of_run([table], "A") + blocks_of_run([table], "B"))
    >>> [column.key for column in joined.columns], joined.rows
    (['run', 'rate'], (('A', 1.0), ('B', 1.0)))
    """
    groups: dict[str, list[Table]] = {}
    for block in screen:
        tables = block.make() if isinstance(block, Data) else (block,)
        for table in tables:
            if isinstance(table, Table) and table.key:
                groups.setdefault(table.key, []).append(table)
    return tuple(_joined(tables) for tables in groups.values())


def _joined(tables: list[Table]) -> Table:
    first = tables[0]
    kept = [k for k, column in enumerate(first.columns) if column.key]
    columns = tuple(first.columns[k] for k in kept)
    has_runs = any(table.run is not None for table in tables)
    if has_runs:
        columns = (Column("run", "run"), *columns)
    rows = tuple(
        (*((table.run,) if has_runs else ()), *(row[k] for k in kept))
        for table in tables
        for row in table.rows
    )
    return Table(first.key, first.title, columns, rows)
