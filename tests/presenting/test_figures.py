"""Figures: names apart, looks that differ without colour, bytes that stay."""

from __future__ import annotations

from itertools import pairwise
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fluxnet.ground.errors import MisuseError
from fluxnet.presenting.figures import look_of, refuse_figure, spread
from fluxnet.presenting.frontier_figure import draw_frontier
from fluxnet.presenting.frontier_labels import are_apart, name_of
from fluxnet.reading.model import read_model_text
from fluxnet.studies.frontier import find_frontier
from fluxnet.studies.frontier_result import Curve, CurveStatus, FrontierPoint

MODEL = """
substrate glucose
product   ethanol, acetate
exchange  CO2
compartment all
    ferment : glucose -> 2 ethanol + 2 CO2
    acetify : glucose -> 3 acetate
limit glucose <= 10
"""


@given(st.lists(st.floats(-5, 5), min_size=1, max_size=9), st.floats(0.01, 2))
def test_spread_places_keep_their_order_and_their_middle(
    places: list[float], least: float
) -> None:
    found = spread(places, least)
    order = sorted(range(len(places)), key=lambda k: (places[k], k))

    assert all(found[b] - found[a] >= least - 1e-9 for a, b in pairwise(order))
    assert sum(found) == pytest.approx(sum(places), abs=1e-9)


def test_lines_differ_without_their_colours() -> None:
    looks = [(str(look_of(k).dash), look_of(k).marker) for k in range(30)]

    assert len(set(looks)) == 30


def curve(label: str, *points: tuple[float, float]) -> Curve:
    told = tuple(FrontierPoint(x, y, None, None) for x, y in points)
    return Curve(label, label, CurveStatus.TRACED, told, "")


def test_names_stand_beside_ends_only_where_there_is_room() -> None:
    one, two = curve("one", (0, 4), (2, 0)), curve("two", (0, 6), (6, 3))

    assert are_apart([[one], [two]])
    assert not are_apart([[one], [curve("three", (0, 5), (2.1, 0))]])
    assert name_of([one, two]) == ["one, two"]


@pytest.mark.parametrize("name", ["a.jpg", "a", "a.svg.txt"])
def test_other_kinds_of_figures_are_refused(name: str) -> None:
    with pytest.raises(MisuseError, match=r"\.svg, \.png or \.pdf"):
        refuse_figure(Path(name), force=False)


@pytest.mark.parametrize("over", [{}, {"over": "glucose", "start": 0.0, "stop": 4.0}])
def test_a_figure_of_one_or_more_lines_is_drawn(
    over: dict[str, object], tmp_path: Path
) -> None:
    network = read_model_text(MODEL).network
    assert network is not None
    found = find_frontier(network, "acetate", "ethanol", **over)  # type: ignore[arg-type]
    draw_frontier(found, tmp_path / "a.svg")
    text = (tmp_path / "a.svg").read_text(encoding="utf-8")

    named = found.curves if over else ()
    assert all(c.label in text.replace("&lt;", "<") for c in named)
    assert len(found.curves) == (3 if over else 1)
    assert "Most ethanol at each acetate" in text
