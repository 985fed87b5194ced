"""A trade-off as characters: each line seen, its break points marked, or left out and said so."""

from __future__ import annotations

import pytest

from fluxnet.presenting.frontier_plot import frontier_plot
from fluxnet.presenting.screen import Drawing, Sentence
from fluxnet.solving.parametric import Extreme
from fluxnet.studies.frontier_axis import Axis
from fluxnet.studies.frontier_result import Curve, CurveStatus, Frontier, FrontierPoint

Points = list[tuple[float, float]]
BENT: Points = [(0, 1), (2, 8), (6, 0)]


def curve(label: str, points: Points) -> Curve:
    told = tuple(FrontierPoint(x, y, None, None) for x, y in points)
    return Curve(label, label, CurveStatus.TRACED, told, "")


def frontier(*curves: Curve) -> Frontier:
    x, y = Axis((), "oxygen in", "mmol/g/h"), Axis((), "acid", "mmol/g/h")
    return Frontier(x, y, Extreme.MOST, None, curves, "", "")


def drawn(*curves: Curve) -> tuple[str, ...]:
    (block,) = frontier_plot(frontier(*curves))
    assert isinstance(block, Drawing)
    return block.lines


def test_one_line_has_its_three_points_and_no_key() -> None:
    lines = drawn(curve("base", BENT))

    assert lines[0] == "acid [mmol/g/h]"
    assert "".join(lines[1:15]).count("o") == 3
    assert max(map(len, lines)) <= 80
    assert lines[1].lstrip().startswith("8 |")
    assert lines[1].index("o") - lines[1].index("|") - 1 == round(2 / 6 * 65)
    assert lines[-1].split() == ["0", "oxygen", "in", "[mmol/g/h]", "6"]


def test_every_column_has_a_place_of_a_line_and_steep_ones_have_no_gap() -> None:
    lines = drawn(curve("base", [(0, 0), (1, 100), (2, 100)]))
    rows = [line.partition("|")[2].ljust(66) for line in lines[1:15]]

    assert all(any(row[k] != " " for row in rows) for k in range(66))
    assert all(row.strip() for row in rows)


def test_several_lines_have_letters_and_a_key() -> None:
    lines = drawn(curve("long", BENT), curve("short", [(0, 5), (6, 4)]))
    text = "\n".join(lines)

    assert "a long; b short; capitals: break points" in text
    assert text.count("A") == 3
    assert text.count("B") == 2


def test_lines_upon_one_another_share_a_letter() -> None:
    lines = drawn(curve("one", BENT), curve("two", BENT), curve("low", [(0, 0), (1, 0)]))

    assert any("a one, two; b low" in line for line in lines)


def test_straight_lines_are_not_drawn() -> None:
    assert frontier_plot(frontier(curve("a", [(0, 1), (6, 0)]))) == ()
    assert frontier_plot(frontier(curve("a", [(1, 1)]))) == ()


@pytest.mark.parametrize(
    "curves",
    [
        [curve("a", BENT), curve("b", [(0, 1), (2, 8.0), (6, 0.3)])],
        [curve(name, [(0, k), (2, k + 2), (6, k)]) for k, name in enumerate("abcdefg")],
    ],
    ids=["too close", "too many"],
)
def test_lines_that_cannot_be_told_apart_are_left_out_and_that_is_said(
    curves: list[Curve],
) -> None:
    (block,) = frontier_plot(frontier(*curves))

    assert isinstance(block, Sentence)
    assert "--figure" in block.text
