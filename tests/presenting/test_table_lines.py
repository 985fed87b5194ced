"""A table that fits is laid out here as rich would lay it out, and much sooner."""

from __future__ import annotations

import io

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fluxnet.ground.table import Align, Column, Table
from fluxnet.presenting import terminal
from fluxnet.presenting.table_lines import cell_width, lay_out
from fluxnet.presenting.terminal import Terminal

TEXT = st.text(st.sampled_from("aB3 .·→±é"), max_size=12).map(str.strip)


@st.composite
def tables(draw: st.DrawFn) -> Table:
    count = draw(st.integers(1, 5))
    columns = tuple(
        Column(
            draw(TEXT) or "title", f"c{k}", draw(st.sampled_from(["", "1/h"])),
            draw(st.sampled_from(Align)), wrap=draw(st.sampled_from([None, 40])),
        )
        for k in range(count)
    )  # fmt: skip
    row = st.tuples(*(TEXT.map(lambda text: text or "x") for _ in columns))
    return Table("t", draw(TEXT), columns, tuple(draw(st.lists(row, min_size=1, max_size=4))))


def shown(table: Table, *, ascii_only: bool = False, colour: bool = False) -> str:
    stream = io.StringIO()
    Terminal(stream, colour, 200, ascii_only).show((table,))
    return stream.getvalue()


@given(tables(), st.booleans())
def test_both_ways_of_showing_a_table_are_the_same(table: Table, ascii_only: bool) -> None:
    laid_here = shown(table, ascii_only=ascii_only)

    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(terminal, "lay_out", lambda *_: None)
        laid_by_rich = shown(table, ascii_only=ascii_only)

    assert laid_here == laid_by_rich


@pytest.mark.parametrize(
    ("limit", "width", "cell"), [(3, 80, "abcd"), (None, 8, "abcd"), (None, 80, "ab\ncd")]
)
def test_a_table_with_a_text_to_be_broken_is_left_to_rich(
    limit: int | None, width: int, cell: str
) -> None:
    assert lay_out(["x", "yyy"], [[cell, "z"]], [False, False], [limit, None], width) is None
    assert lay_out(["x", "yyy"], [["abcd", "z"]], [False, False], [4, None], 9) is not None


def test_a_title_is_bold_where_colour_is_allowed() -> None:
    table = Table("t", "", (Column("name", "name"),), (("A",),))

    assert "\x1b[1mname\x1b[0m" in shown(table, colour=True)
    assert "\x1b" not in shown(table)


def test_widths_are_those_of_terminal_cells() -> None:
    assert cell_width("e\u0301") == 1
    assert cell_width("日本") == 4
    laid = lay_out(["x", "y"], [["日本", "1"], ["e\u0301", "2"]], [False, True], [None, None], 80)

    assert laid is not None
    assert laid[2] == ("日本  1", "e\u0301     2")
