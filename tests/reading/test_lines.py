"""Lines: comments, continued lines, blanks and blocks."""

from __future__ import annotations

import pytest

from fluxnet.ground.names import Name
from fluxnet.ground.source import Source
from fluxnet.reading.lines import logical_lines, without_comment
from fluxnet.reading.model import read_model_text

HEAD = "substrate glucose\nproduct ethanol, CO2\n"


@pytest.mark.parametrize(
    ("raw", "left"),
    [
        ("a # b", "a "),
        ("# b", ""),
        ("a", "a"),
        ('use "a#b.flux" # c', 'use "a#b.flux" '),
        ('variant x "one # two"', 'variant x "one # two"'),
        ('model 5" column # note', 'model 5" column '),
        ('a # say "so"', "a "),
        ('use "a" # b "c" # d', 'use "a" '),
    ],
)
def test_a_comment_starts_at_a_hash_that_stands_in_no_quotation(raw, left) -> None:
    assert without_comment(raw) == left


@pytest.mark.parametrize(
    "text",
    [
        "a : A +\n  B -> C",
        "a : A + # more\n  B -> C",
        "a : A +\n  # a remark\n  B -> C",
        "a : A + B ->\n  C",
        "a :\tA + B ->\n\tC",
    ],
)
def test_a_line_that_ends_in_plus_arrow_or_comma_goes_on(text) -> None:
    lines = logical_lines(Source("m", tuple(text.split("\n"))))

    assert len(lines) == 1
    assert lines[0].text.replace("\t", " ") == "a : A + B -> C"


@pytest.mark.parametrize(
    "text",
    [
        "a : A -> NAD+\nb : B -> C",
        "a : A + B +\n\nb : C -> D",
        "a : A + B +\nb : C -> D",
        "product lactate,\nsubstrate glucose",
        "model One, two,\nsubstrate glucose",
        "a : A -> B accept dead-end: one, two,\nb : C -> D",
    ],
)
def test_a_line_does_not_go_on_into_another_statement(text) -> None:
    assert len(logical_lines(Source("m", tuple(text.split("\n"))))) == 2


def test_a_place_in_a_continued_line_is_one_of_the_file() -> None:
    line = logical_lines(Source("m", ("a : A +", "    éB ->  # c", "  C")))[0]
    start = line.text.index("C")

    span = line.span(start, start + 1)

    assert (span.line, span.column, span.end_column) == (3, 3, 4)
    assert line.span(line.text.index("é"), start).line == 2
    assert line.span(line.text.index("é"), start).end_column == 10


@pytest.mark.parametrize("indent", ["    ", "\t", "  ", " "])
def test_any_indentation_makes_a_block(read, indent) -> None:
    network = read(f"{HEAD}compartment c\n{indent}a : glucose -> 2 ethanol + 2 CO2\n"
                   f"{indent}b : 2 ethanol + 2 CO2 -> glucose\n")

    assert [r.compartment for r in network.reactions] == ["c", "c"]


def test_a_tab_is_four_columns(read) -> None:
    network = read(f"{HEAD}compartment c\n\ta : glucose -> 2 ethanol + 2 CO2\n"
                   "    b : 2 ethanol + 2 CO2 -> glucose\n")

    assert len(network.reactions) == 2


@pytest.mark.parametrize("odd", ["a", "b", "c"])
def test_one_line_out_of_step_with_its_block_is_told_once_wherever_it_stands(odd: str) -> None:
    lines = "".join(
        f"{'      ' if name == odd else '    '}{name} : glucose -> 2 ethanol + 2 CO2\n"
        for name in "abc"
    )
    reading = read_model_text(f"{HEAD}compartment all\n{lines}")

    (found,) = [d for d in reading.diagnostics if d.name is Name.BAD_INDENTATION]
    assert found.span.line == len(HEAD.splitlines()) + 2 + "abc".index(odd)
    assert found.message == "this line is indented by 6 columns, its block by 4"
    assert found.mend == "indent it by 4"


def test_a_text_that_is_indented_as_a_whole_is_read(read) -> None:
    text = f"{HEAD}compartment c\n    a : glucose -> 2 ethanol + 2 CO2\n"

    assert read("".join(f"    {line}\n" for line in text.splitlines())).reactions


def test_a_compartment_may_go_on_further_down(read) -> None:
    network = read(f"{HEAD}compartment c\n    a : glucose -> 2 ethanol + 2 CO2\n"
                   "compartment d\n    b : glucose -> 2 ethanol + 2 CO2\n"
                   "compartment c\n    e : glucose -> 2 ethanol + 2 CO2\n")

    assert [c.name for c in network.compartments] == ["c", "d"]
    assert [r.compartment for r in network.reactions] == ["c", "d", "c"]


def test_lines_end_as_any_editor_ends_them(read) -> None:
    text = f"{HEAD}compartment c\n    a : glucose -> 2 ethanol + 2 CO2\n"

    for ending in ("\r\n", "\r"):
        assert read("\ufeff" + text.replace("\n", ending)).reactions[0].span.line == 4


def test_a_rejected_head_of_a_block_makes_no_second_error(fault) -> None:
    found = fault(f"{HEAD}compartmint c\n    a : glucose -> 2 ethanol + 2 CO2\n")

    assert (found.name.value, found.span.line) == ("unknown-statement", 3)
