"""Trade-offs of whole models, against grids of programmes; bad input is refused in words."""

from __future__ import annotations

from fractions import Fraction
from itertools import pairwise
from pathlib import Path

import numpy as np
import pytest
from scipy.optimize import linprog

from fluxnet.ground.errors import InputError, MisuseError
from fluxnet.network.model import Network
from fluxnet.network.variant import apply_variant
from fluxnet.reading.model import read_model, read_model_text
from fluxnet.solving.build import build_problem
from fluxnet.solving.problem import Problem
from fluxnet.studies.aim_problem import aim_cost, open_carriers
from fluxnet.studies.aims import Aim, Sense
from fluxnet.studies.frontier import find_frontier
from fluxnet.studies.frontier_axis import read_axis
from fluxnet.studies.frontier_result import CurveStatus, Frontier

ROOT = Path(__file__).resolve().parents[2]

MODELS = [
    ("amino-acid", "mu", "lysine"),
    ("heterolactic", "lactate", "ethanol"),
    ("mixed-acid", "mu", "succinate"),
    ("solvent", "butanol", "acetone"),
    ("yeast", "mu", "ethanol"),
    ("yeast", "glycerol", "ATP"),
]

TWO_WAYS = """
substrate glucose
product   ethanol, acetate
exchange  CO2
parameter k = 2
compartment all
    ferment : glucose -> 2 ethanol + 2 CO2
    acetify : glucose -> 3 acetate
limit glucose <= 10
variant more
    limit glucose <= 20
variant less
    limit glucose <= 5
"""


def limited(name: str) -> Network:
    """A model of ours with its substrates limited."""
    text = (ROOT / "models" / f"{name}.flux").read_text(encoding="utf-8")
    network = read_model_text(text).network
    assert network is not None
    sources = [s for s in network.species if s.role.value == "substrate"]
    carbon = [s for s in sources if s.formula is not None and s.formula.count("C")]
    lines = "".join(f"limit {s.name} <= 10\n" for s in carbon)
    if any(s.name == "oxygen" for s in sources):
        lines += "limit oxygen <= 6\n"
    place = text.index("\nvariant") if "\nvariant" in text else len(text)
    found = read_model_text(f"{text[:place]}\n{lines}{text[place:]}").network
    assert found is not None
    return found


def best(problem: Problem, cost: np.ndarray, along: np.ndarray, x: float | None) -> float:
    equal = problem.row_low == problem.row_high
    up = ~equal & np.isfinite(problem.row_high)
    down = ~equal & np.isfinite(problem.row_low)
    matrix, right = problem.matrix[equal], problem.row_low[equal]
    if x is not None:
        matrix, right = np.vstack([matrix, along]), np.append(right, x)
    found = linprog(
        -cost,
        np.vstack([problem.matrix[up], -problem.matrix[down]]),
        np.concatenate([problem.row_high[up], -problem.row_low[down]]),
        matrix, right,
        bounds=list(zip(problem.column_low, problem.column_high, strict=True)),
    )  # fmt: skip
    assert found.status == 0, found.message
    return float(-found.fun)


@pytest.mark.parametrize(("name", "x", "y"), MODELS, ids=lambda v: v)
def test_every_model_agrees_with_a_dense_grid(name: str, x: str, y: str) -> None:
    network = limited(name)
    (curve,) = find_frontier(network, x, y).curves
    built = build_problem(network, None, within=2.0)
    axes = [read_axis(text, network) for text in (x, y)]
    problem = open_carriers(built, Aim(Sense.MAXIMISE, axes[0].terms + axes[1].terms))
    along, cost = (aim_cost(built, axis.aim()) for axis in axes)
    xs, ys = [p.x for p in curve.points], [p.y for p in curve.points]

    assert curve.proof is not None
    assert curve.proof.verified
    assert xs[-1] == pytest.approx(best(problem, along, along, None), abs=1e-7)
    assert xs[0] == pytest.approx(-best(problem, -along, along, None), abs=1e-7)
    for at in np.linspace(xs[0], xs[-1], 41)[1:-1]:
        found = best(problem, cost, along, float(at))
        assert np.interp(at, xs, ys) == pytest.approx(found, rel=1e-7, abs=1e-6)
    slopes = [p.slope_after for p in curve.points if p.slope_after is not None]
    assert all(a > b for a, b in pairwise(slopes))
    for before, after in pairwise(curve.points):
        assert before.slope_after == after.slope_before


@pytest.mark.parametrize(("variant", "last"), [("base", 38), ("usual", 32), ("low", 16)])
def test_atp_over_oxygen_is_the_published_line(variant: str, last: float) -> None:
    # 38 and 32 from memory (99 %), the others computed: most-atp.flux
    network = read_model(ROOT / "tests" / "published" / "most-atp.flux").network
    assert network is not None
    found = find_frontier(network, "in oxygen", "ATP", across=(variant,))
    (curve,) = found.curves
    xs, ys = [p.x for p in curve.points], [p.y for p in curve.points]

    assert (xs[-1], ys[-1]) == (6, last)
    if variant == "base":
        line = np.interp(range(7), xs, ys)
        assert line.tolist() == [4, 10, 16, 21.5, 27, 32.5, 38]
        assert [(p.x_exact, p.y_exact) for p in curve.points] == [
            ("0", "4"), ("2", "16"), ("6", "38"),
        ]  # fmt: skip


@pytest.mark.parametrize("over", ["oxygen", "limit oxygen"])
def test_a_limit_that_is_moved_stops_to_bind(over: str) -> None:
    network = read_model(ROOT / "tests" / "published" / "most-atp.flux").network
    assert network is not None
    (curve,) = find_frontier(network, "ATP", over=over, start=0, stop=8).curves

    assert [(p.x, p.y) for p in curve.points] == [(0, 4), (2, 16), (6, 38), (8, 38)]
    assert "the moved limit no longer binds" in curve.points[2].changes


def test_a_limit_from_below_and_an_exact_one_are_moved_as_they_are() -> None:
    least = read_model_text(TWO_WAYS + "limit acetate >= 3\n").network
    exact = read_model_text(TWO_WAYS.replace("<= 10", "= 10")).network
    assert least is not None
    assert exact is not None
    (down,) = find_frontier(least, "ethanol", over="acetate", start=0, stop=40).curves
    (line,) = find_frontier(exact, "ethanol", over="glucose", start=1, stop=4).curves

    assert [(p.x, p.y) for p in down.points] == [(0, 20), (30, 0)]
    assert "nothing is feasible above it" in down.points[-1].changes
    assert [(p.x, p.y) for p in line.points] == [(1, 2), (4, 8)]


BENT = """
substrate glucose, oxygen
product   lactate, acetate
exchange  CO2
carrier   ATP  carries energy
carrier   NADH carries 2 electrons
parameter P = 1
compartment all
    homo : glucose -> 2 lactate + 2 ATP
    burn : glucose -> 6 CO2 + 12 NADH + 4 ATP
    rN   : NADH + 0.5 oxygen -> P ATP
    half : glucose + 2 oxygen -> 2 acetate + 2 CO2 + 10 ATP
    upkeep : ATP -> nothing
limit glucose <= 10
limit oxygen  <= 20
limit upkeep = 90
"""


@pytest.mark.parametrize("aim", ["lactate", "acetate"])
def test_a_moved_parameter_agrees_with_a_dense_grid(aim: str) -> None:
    network = read_model_text(BENT).network
    assert network is not None
    (curve,) = find_frontier(network, aim, over="P", start=0.1, stop=3).curves
    xs = [p.x for p in curve.points]

    assert curve.proof is not None
    assert curve.proof.verified
    for at in np.linspace(0.1, 3, 59):
        built = build_problem(network, None, values={"P": float(at)}, within=2.0)
        cost = aim_cost(built, read_axis(aim, network).aim())
        found = best(built.problem, cost, cost, None)
        # The drawn points are the optima there, and the curve is monotone: it lies between two.
        before = max(point for point in curve.line if point[0] <= at + 1e-12)
        after = min(point for point in curve.line if point[0] >= at - 1e-12)
        low, high = sorted((before[1], after[1]))
        assert low - 1e-6 <= found <= high + 1e-6
    assert xs == sorted(xs)
    assert all(point.changes for point in curve.points[1:-1])


def test_the_break_of_a_moved_parameter_stands_where_the_slopes_say() -> None:
    # Per oxygen burning makes (4 + 12 P) / 6 ATP and `half` 10 / 2: they are alike at P = 13/6.
    text = BENT.replace("    homo : glucose -> 2 lactate + 2 ATP\n", "").replace(
        "product   lactate, acetate", "product   acetate"
    ).replace("limit glucose <= 10", "limit glucose <= 1000").replace("limit upkeep = 90\n", "")
    network = read_model_text(text).network
    assert network is not None
    (curve,) = find_frontier(network, "ATP", over="P", start=0.1, stop=3).curves
    inside = [p.x for p in curve.points[1:-1]]

    assert inside == pytest.approx([13 / 6], abs=1e-9)
    assert [p.y for p in curve.points] == pytest.approx([100, 100, 400 / 3], abs=1e-6)


def two_ways(more: str = "") -> Network:
    network = read_model_text(TWO_WAYS + more).network
    assert network is not None
    return network


def test_two_products_trade_at_their_exact_price() -> None:
    found = find_frontier(two_ways(), "acetate", "ethanol", across=("base | more",))

    assert found.slope_unit == "mmol ethanol per mmol acetate"
    assert [c.label for c in found.curves] == ["base", "more"]
    assert [(p.x, p.y) for c in found.curves for p in c.points] == [
        (0, 20), (30, 0), (0, 40), (60, 0),
    ]  # fmt: skip
    assert Fraction(found.curves[0].points[0].y_exact or "0") == 20


def test_one_combination_typed_in_two_orders_makes_one_curve() -> None:
    found = find_frontier(
        two_ways("variant few\n    limit acetate <= 1\n"), "acetate", "ethanol",
        across=("more * few | few * more",),
    )  # fmt: skip

    assert [c.variant for c in found.curves] == ["more * few"]


def test_the_least_of_y_is_another_side() -> None:
    network = read_model_text(TWO_WAYS.replace("<= 10", "= 10")).network
    assert network is not None
    (curve,) = find_frontier(network, "ethanol", "acetate", least=True).curves

    assert [(p.x, p.y) for p in curve.points] == [(0, 30), (20, 0)]


def test_both_quantities_at_three_values_of_a_limit() -> None:
    found = find_frontier(
        two_ways(), "acetate", "ethanol", over="glucose", start=2, stop=6
    )

    assert [c.label for c in found.curves] == ["glucose <= 2", "glucose <= 4", "glucose <= 6"]
    assert [c.points[0].y for c in found.curves] == [4, 8, 12]


def test_a_part_of_x_can_be_asked_for() -> None:
    (curve,) = find_frontier(two_ways(), "acetate", "ethanol", start=3, stop=6).curves

    assert [(p.x, p.y) for p in curve.points] == [(3, 18), (6, 16)]
    assert curve.points[0].changes == ("asked for",)


def test_a_yield_needs_a_fixed_lower_part() -> None:
    fixed = read_model_text(TWO_WAYS.replace("<= 10", "= 10")).network
    assert fixed is not None
    (curve,) = find_frontier(fixed, "acetate / glucose", "ethanol / glucose").curves

    assert [(p.x, p.y) for p in curve.points] == [(0, 2), (3, 0)]
    with pytest.raises(MisuseError, match="limit glucose = 10"):
        find_frontier(two_ways(), "acetate / glucose", "ethanol")


def only(found: Frontier) -> tuple[CurveStatus, str]:
    (curve,) = found.curves
    assert not found.is_sound or curve.points
    return curve.status, curve.words


def test_a_missing_limit_is_named() -> None:
    open_ = read_model_text(TWO_WAYS.replace("limit glucose <= 10", "")).network
    assert open_ is not None
    status, words = only(find_frontier(open_, "acetate", "ethanol"))

    assert status is CurveStatus.UNBOUNDED
    assert "limit glucose <= 10" in words


def test_a_single_point_is_told_as_one() -> None:
    network = read_model_text(TWO_WAYS + "limit acetate = 3\n").network
    assert network is not None
    status, words = only(find_frontier(network, "acetate", "ethanol"))

    assert status is CurveStatus.POINT
    assert words == (
        "A single point: acetate can only be 3, and there the most ethanol is 18 mmol/g/h."
    )


def test_limits_that_contradict_one_another_make_no_curve() -> None:
    network = read_model_text(TWO_WAYS + "limit acetate >= 90\n").network
    assert network is not None
    status, _ = only(find_frontier(network, "acetate", "ethanol"))
    outside, words = only(find_frontier(two_ways(), "acetate", "ethanol", start=50, stop=60))

    assert status is outside is CurveStatus.INFEASIBLE
    assert "50 to 60" in words


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (("ethanol", "ethanol"), "one quantity"),
        (("ethanol", "2 ethanol"), "one quantity"),
        (("ethanol", "acetone"), "no acetone"),
        (("ethanol",), "name two quantities"),
    ],
)
def test_wrong_names_are_refused(arguments: tuple[str, ...], words: str) -> None:
    with pytest.raises(MisuseError, match=words):
        find_frontier(two_ways(), *arguments)


@pytest.mark.parametrize(
    ("over", "start", "stop", "words"),
    [
        ("glucose", None, 3.0, "both ends"),
        ("glucose", 3.0, 3.0, "is empty"),
        ("glucosee", 0.0, 3.0, "near to it are glucose"),
        ("glucose", 0.0, float("nan"), "numbers"),
    ],
)
def test_ranges_without_sense_are_refused(
    over: str, start: float | None, stop: float | None, words: str
) -> None:
    with pytest.raises(MisuseError, match=words):
        find_frontier(two_ways(), "ethanol", over=over, start=start, stop=stop)


def test_clashing_variants_are_skipped_and_told() -> None:
    found = find_frontier(
        two_ways(), "acetate", "ethanol", across=("base | more", "base | less")
    )

    assert [c.label for c in found.curves] == ["base", "less", "more"]
    assert [label for label, _ in found.skipped] == ["more * less"]
    with pytest.raises(InputError):
        find_frontier(two_ways(), "acetate", "ethanol", across=("more", "less"))
    with pytest.raises(InputError):
        find_frontier(two_ways(), "acetate", "ethanol", across=("moar",))


def test_variants_of_the_test_are_sound() -> None:
    for name in ("more", "less"):
        assert apply_variant(two_ways(), name)[0] is not None


TWO_SUGARS = """
substrate glucose, xylose, oxygen
exchange  CO2
product   lactate
carrier   ATP   carries energy
carrier   NADH  carries 2 electrons
compartment all
    homo : glucose -> 2 lactate + 2 ATP
    pent : 3 xylose -> 5 lactate + 5 ATP
    burn : glucose -> 6 CO2 + 12 NADH + 4 ATP
    rN   : NADH + 0.5 oxygen -> 2 ATP
    upkeep : ATP -> nothing
limit glucose <= 10
limit xylose  <= 6
variant no-xylose
    limit xylose <= 0
"""


def two_sugars() -> Network:
    network = read_model_text(TWO_SUGARS).network
    assert network is not None
    return network


def test_another_sugar_that_may_be_taken_up_is_told_and_can_be_shut() -> None:
    found = find_frontier(two_sugars(), "oxygen", "lactate")
    alone = find_frontier(two_sugars(), "oxygen", "lactate", only=("glucose",))
    xylose = find_frontier(two_sugars(), "lactate", "xylose")

    assert found.notes[0] == "xylose may be taken up beside glucose: `--only glucose` shuts it."
    assert max(p.y for p in found.curves[0].points) == 30
    assert max(p.y for p in alone.curves[0].points) == 20
    assert not any("--only" in note for note in alone.notes)
    assert xylose.notes == ("glucose may be taken up beside xylose: `--only xylose` shuts it.",)
    assert find_frontier(two_sugars(), "glucose", "xylose").notes == ()
    shut = find_frontier(two_sugars(), "oxygen", "lactate", across=("no-xylose",))
    assert not any("--only" in note for note in shut.notes)


def test_only_takes_the_names_of_carbon_sources() -> None:
    for name in ("oxygen", "glucos", "lactate", "CO2"):
        with pytest.raises(MisuseError, match="glucose"):
            find_frontier(two_sugars(), "oxygen", "lactate", only=(name,))


def test_a_line_that_falls_for_forced_uptake_is_told_with_the_other_question() -> None:
    found = find_frontier(two_sugars(), "oxygen", "lactate", only=("glucose",), stop=30)
    (note,) = found.notes
    freed = find_frontier(
        two_sugars(), "lactate", over="oxygen", start=0, stop=30, only=("glucose",)
    )

    assert found.curves[0].points[-1].y < 20
    assert "`frontier MODEL lactate --over oxygen --from 0 --to 30`" in note
    assert freed.notes == ()
    assert freed.curves[0].points[-1].y == 20
    assert find_frontier(two_sugars(), "lactate", "ATP", only=("glucose",)).notes == ()


def test_an_end_is_the_most_there_is_whatever_was_asked_for() -> None:
    (beyond,) = find_frontier(two_ways(), "acetate", "ethanol", stop=90).curves
    (just,) = find_frontier(two_ways(), "acetate", "ethanol", stop=30).curves
    (within,) = find_frontier(two_ways(), "acetate", "ethanol", start=-1, stop=29).curves

    assert beyond.points[-1].changes[-1] == (
        "the most acetate there is (not 90): limit glucose <= 10"
    )
    assert just.points[-1].changes[-1] == "the most acetate: limit glucose <= 10"
    assert within.points[-1].changes[-1] == "asked for"
    assert within.points[0].changes[0] == "the least acetate there is (not -1)"


def test_variants_are_chosen_by_where_their_lines_cross() -> None:
    text = TWO_WAYS + "variant aside\n    limit ethanol <= 15\n"
    network = read_model_text(text.replace("limit glucose <= 10", "limit glucose <= 9")).network
    assert network is not None
    found = find_frontier(network, "acetate", "ethanol", across=("less | aside | base",))

    assert found.choice == "At every acetate, base is best (as good: aside from 4.5 to 27)."
    assert find_frontier(network, "acetate", "ethanol").choice == ""
    moved = find_frontier(network, "acetate", "ethanol", over="glucose", start=1, stop=3)
    assert moved.stretches == ()


def test_the_variants_that_all_share_are_named_once() -> None:
    one = find_frontier(two_ways(), "acetate", "ethanol", across=("more",))
    moved = find_frontier(
        two_ways(), "acetate", "ethanol", across=("more",), over="glucose", start=2, stop=6
    )

    assert one.common == moved.common == ("more",)
    assert one.words.startswith("With more: the most ethanol falls from 40")
    assert [c.label for c in moved.curves] == ["glucose <= 2", "glucose <= 4", "glucose <= 6"]
