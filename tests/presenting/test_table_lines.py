"""Tables as lines: numbers one below the other, long texts broken between words."""

from __future__ import annotations

import io
from unicodedata import combining, east_asian_width

from hypothesis import given
from hypothesis import strategies as st

from fluxnet.ground.table import Align, Column, Table
from fluxnet.presenting.points import align_points, common_decimals
from fluxnet.presenting.table_lines import GLUE, cell_width, lay_out
from fluxnet.presenting.terminal import Terminal

TEXT = st.text(st.sampled_from("aB3 .·→±é日"), max_size=30)
NUMBER = st.floats(-1e6, 1e6).map(lambda x: f"{x:.4g}") | st.integers(-999, 999).map(str)


def shown(table: Table, *, ascii_only: bool = False, colour: bool = False) -> str:
    stream = io.StringIO()
    Terminal(stream, colour, 200, ascii_only).show((table,))
    return stream.getvalue()


@given(st.lists(st.tuples(TEXT, TEXT), min_size=1, max_size=4), st.integers(30, 90))
def test_no_line_is_wider_than_the_table_may_be_and_no_letter_is_lost(rows, width) -> None:
    rows = [tuple(" ".join(cell.split()) for cell in row) for row in rows]
    head, rule, lines = lay_out(
        ["left", "right"], rows, [False, False], [None, 10], width, width, "-"
    )

    assert all(cell_width(line) <= width for line in (head, rule, *lines))
    letters = sorted("".join(lines).replace(" ", ""))
    assert letters == sorted("".join(a + b for a, b in rows).replace(" ", ""))


@given(
    st.lists(
        NUMBER
        | st.tuples(NUMBER, NUMBER, st.sampled_from([" ± ", " to ", " +- "])).map(
            lambda t: t[2].join(t[:2])
        ),
        min_size=1,
        max_size=5,
    )
)
def test_points_stand_below_one_another(cells) -> None:
    aligned = align_points(cells)

    assert [line.replace(" ", "") for line in aligned] == [c.replace(" ", "") for c in cells]
    if any("e" in cell for cell in cells):
        return
    assert len({len(line) for line in aligned}) == 1
    # the place behind the whole part of the first number
    units = {line.index(cell.split(" ")[0]) + len(cell.split(" ")[0].split(".")[0])
             for line, cell in zip(aligned, cells, strict=True)}
    assert len(units) == 1
    signs = {line.index(sign) for line in aligned for sign in "±" if sign in line}
    assert len(signs) <= 1


def test_numbers_of_a_column_have_the_same_decimals() -> None:
    columns = (Column("made", "made", align=Align.RIGHT, even=True),)
    table = Table("t", "", columns, ((26.704,), (8.51,), (0.0,), (0.765,)))

    assert shown(table).split("\n")[3:7] == ["26.70", " 8.51", " 0", " 0.77"]
    assert common_decimals([0.0]) == 0
    assert common_decimals([1234.0, 0.001]) == 1


def test_a_text_is_broken_only_where_it_may_be() -> None:
    text = f"2{GLUE}glucose +{GLUE}3{GLUE}oxygen ->{GLUE}4{GLUE}CO2"
    _, _, lines = lay_out(["a", "b"], [["n", text]], [False, False], [None, 5], 80, 22)

    assert lines == ("n  2 glucose", "   + 3 oxygen -> 4 CO2")


def test_a_text_that_may_be_broken_is_as_wide_as_the_others_leave_room_for() -> None:
    text = "one two three four five six seven"
    for width in (60, 30, 20):
        _, _, lines = lay_out(["a", "b"], [["name", text]], [False, False], [None, 5], width)
        assert max(map(len, lines)) <= width
        assert len(lines) == -(-len(text) // (width - 6)) or width == 20


def test_a_title_is_bold_where_colour_is_allowed() -> None:
    table = Table("t", "", (Column("name", "name"),), (("A",),))

    assert "\x1b[1mname\x1b[0m" in shown(table, colour=True)
    assert "\x1b" not in shown(table)


def test_widths_are_those_of_terminal_cells() -> None:
    assert cell_width("e\u0301") == 1
    assert cell_width("日本") == 4
    laid = lay_out(["x", "y"], [["日本", "1"], ["e\u0301", "2"]], [False, True], [None, None], 80)

    assert laid[2] == ("日本  1", "e\u0301     2")


def test_every_letter_takes_the_cells_that_unicode_gives_it() -> None:
    for number in range(0x3000):
        letter = chr(number)
        if combining(letter):
            assert cell_width(letter) == 0, hex(number)
        else:
            assert cell_width(letter) == (2 if east_asian_width(letter) in "WF" else 1)
