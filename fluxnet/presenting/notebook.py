"""Screens as HTML for a notebook: headings, sentences, tables with their notes."""

from __future__ import annotations

from html import escape

from fluxnet.ground.table import Align, Table
from fluxnet.presenting.cells import table_cells
from fluxnet.presenting.screen import Block, Drawing, Heading, Sentence

__all__ = ["screen_html"]


def screen_html(screen: tuple[Block, ...]) -> str:
    """A screen as a piece of a page: what a terminal shows, in the same order.

    Examples
    --------
    >>> screen_html((Heading("run 1"), Sentence("1 < 2.")))
    '<div><h4>run 1</h4><p>1 &lt; 2.</p></div>'
    """
    return f"<div>{''.join(_block_html(block) for block in screen)}</div>"


def _block_html(block: Block) -> str:
    if isinstance(block, Heading):
        return f"<h4>{escape(block.text)}</h4>"
    if isinstance(block, Sentence):
        return f"<p>{escape(block.text)}</p>"
    if isinstance(block, Drawing):
        return f"<pre>{escape(chr(10).join(block.lines))}</pre>"
    return _table_html(block) if isinstance(block, Table) and block.is_shown else ""


def _table_html(table: Table) -> str:
    columns, rows = table_cells(table)
    sides = [
        ' style="text-align:right"' if column.align is Align.RIGHT else ' style="text-align:left"'
        for column in columns
    ]
    titles = (f"{c.title} [{c.unit}]" if c.unit else c.title for c in columns)
    head = "".join(f"<th{s}>{escape(t)}</th>" for s, t in zip(sides, titles, strict=True))
    body = "".join(
        f"<tr>{''.join(f'<td{s}>{escape(c)}</td>' for s, c in zip(sides, row, strict=True))}</tr>"
        for row in rows
    )
    caption = f"<caption>{escape(table.title)}</caption>" if table.title else ""
    notes = "".join(f"<p>{escape(note)}</p>" for note in table.notes)
    return (
        f"<table>{caption}<thead><tr>{head}</tr></thead><tbody>{body}</tbody></table>{notes}"
    )
