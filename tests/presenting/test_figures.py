"""Figures: names apart, looks that differ without colour, bytes that stay."""

from __future__ import annotations

from collections.abc import Iterable
from itertools import combinations, pairwise
from pathlib import Path
from random import Random
from tempfile import TemporaryDirectory

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure

from fluxnet.ground.errors import MisuseError
from fluxnet.presenting import frontier_figure
from fluxnet.presenting.figures import inches_of, look_of, refuse_figure, spread, wrapped
from fluxnet.presenting.frontier_figure import draw_frontier
from fluxnet.reading.model import read_model_text
from fluxnet.solving.parametric import Extreme
from fluxnet.studies.frontier import find_frontier
from fluxnet.studies.frontier_axis import Axis
from fluxnet.studies.frontier_result import Curve, CurveStatus, Frontier, FrontierPoint

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


def result_of(curves: list[Curve], common: tuple[str, ...] = ()) -> Frontier:
    x, y = Axis((), "oxygen in", "mmol/g/h"), Axis((), "ethanol", "mmol/g/h")
    words = f"With {' * '.join(common)}: the most ethanol." if common else "The most ethanol."
    return Frontier(x, y, Extreme.MOST, None, tuple(curves), "", words, (), common)


def fan(labels: Iterable[str]) -> list[Curve]:
    """Lines from one point to ends that lie close to one another."""
    return [curve(label, (0, 1), (6, 4 + 0.02 * k)) for k, label in enumerate(labels)]


@pytest.mark.parametrize(
    "labels",
    [
        ["base", "anaerobic"],
        ["alanine * on-glucose", "glycerol * on-xylose", "malonyl", "aspartate"],
        [f"by-way-of-an-enzyme-with-a-long-name-{k} * on-the-xylose-of-the-mill * fast"
         for k in range(8)],
        [f"v{k}" for k in range(40)],
    ],
)  # fmt: skip
def test_no_words_of_a_figure_lie_upon_others_or_outside(
    labels: list[str], tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    drawn: list[Figure] = []

    def keep(figure: Figure, *_: object, **__: object) -> None:
        FigureCanvasAgg(figure).print_to_buffer()  # type: ignore[no-untyped-call]
        drawn.append(figure)

    monkeypatch.setattr(frontier_figure, "write_figure", keep)
    draw_frontier(result_of(fan(labels), ("on-a-long-sugar", "growing")), tmp_path / "a.svg")
    (figure,) = drawn
    (axes,) = figure.axes
    across = [t for t in axes.xaxis.get_ticklabels() if 0 <= t.get_position()[0] <= 6]
    up = [t for t in axes.yaxis.get_ticklabels() if t.get_position()[1] <= axes.get_ylim()[1]]
    titles = (axes.xaxis.label, axes.yaxis.label)
    shown = [t for t in (*figure.texts, *axes.texts, *titles, *across, *up) if t.get_text()]
    boxes = [text.get_window_extent() for text in shown]

    assert len(axes.texts) == len(labels)
    assert {" ".join(t.get_text().split()) for t in axes.texts} == set(labels)
    for one, other in combinations(boxes, 2):
        assert not one.overlaps(other)
    outside = [t.get_text() for t, b in zip(shown, boxes, strict=True)
               if min(b.x0, b.y0) < 0 or b.x1 > figure.bbox.x1 or b.y1 > figure.bbox.y1]
    assert outside == []
    assert axes.get_xlim() == (0, 6)
    size = axes.get_window_extent()
    assert size.width >= 4.0 * figure.dpi - 1
    assert size.height >= 2.9 * figure.dpi - 1


def test_a_factor_that_all_lines_share_stands_in_the_title_alone(tmp_path: Path) -> None:
    draw_frontier(result_of(fan(["one", "two"]), ("on-xylose", "growing")), tmp_path / "a.svg")
    text = (tmp_path / "a.svg").read_text(encoding="utf-8")

    assert ">Most ethanol at each oxygen in, on-xylose * growing<" in text
    assert ">The most ethanol.<" in text


NAMES = st.lists(
    st.text("abcdefgh -*<&", min_size=1, max_size=60).filter(str.strip),
    min_size=1, max_size=9, unique_by=lambda text: " ".join(text.split()),
)  # fmt: skip


@settings(max_examples=10)
@given(NAMES, st.randoms(use_true_random=False))
def test_equal_input_gives_equal_bytes(labels: list[str], random: Random) -> None:
    ends = [(random.uniform(1, 6), random.uniform(0, 4)) for _ in labels]
    curves = [curve(n, (0, 1), end) for n, end in zip(labels, ends, strict=True)]
    with TemporaryDirectory() as folder:
        written = []
        for name in ("a.svg", "b.svg"):
            draw_frontier(result_of(curves), Path(folder) / name)
            written.append((Path(folder) / name).read_bytes())

    assert written[0] == written[1]


@given(st.text("abc de", max_size=80), st.floats(0.2, 3))
def test_wrapped_lines_keep_every_word_and_are_as_wide_as_asked(text: str, width: float) -> None:
    lines = wrapped(text, 9, width)

    assert " ".join(lines) == " ".join(text.split())
    assert all(inches_of(line, 9) <= width or " " not in line for line in lines)


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
