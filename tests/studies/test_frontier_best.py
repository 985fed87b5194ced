"""Which curve is the best where, against values on a grid; and how it is told."""

from __future__ import annotations

from fractions import Fraction
from itertools import pairwise

from hypothesis import given
from hypothesis import strategies as st

from fluxnet.solving.parametric import Extreme
from fluxnet.studies.frontier_best import find_stretches, tell_stretches
from fluxnet.studies.frontier_result import Curve, CurveStatus, FrontierPoint, Stretch

Points = list[tuple[int, int]]


def curve(label: str, points: Points) -> Curve:
    told = [FrontierPoint(x, y, None, None, (), str(x), str(y)) for x, y in points]
    return Curve(label, label, CurveStatus.TRACED, tuple(told), "")


def value(points: Points, x: Fraction) -> Fraction | None:
    for (left, y), (right, end) in pairwise(points):
        if left <= x <= right:
            return y + (x - left) * Fraction(end - y, right - left)
    return None


LINE = st.dictionaries(st.integers(0, 6), st.integers(0, 4), min_size=2).map(
    lambda found: sorted(found.items())
)


@given(st.lists(LINE, min_size=2, max_size=5), st.sampled_from(Extreme))
def test_at_every_x_just_those_are_named_that_are_best_there(
    lines: list[Points], extreme: Extreme
) -> None:
    curves = [curve(f"c{k}", points) for k, points in enumerate(lines)]
    stretches = find_stretches(curves, extreme)
    for stretch in stretches:
        low, high = Fraction(stretch.low_exact or ""), Fraction(stretch.high_exact or "")
        assert low < high
        for part in (Fraction(1, 97), Fraction(48, 97), Fraction(96, 97)):
            at = low + (high - low) * part
            there = {c.label: value(p, at) for c, p in zip(curves, lines, strict=True)}
            known = {k: v for k, v in there.items() if v is not None}
            best = (max if extreme is Extreme.MOST else min)(known.values())
            assert set(stretch.labels) == {k for k, v in known.items() if v == best}
            assert stretch.alone == (len(known) == 1)
    # They cover all x at which some line is, and neighbours differ.
    covered = sum(Fraction(s.high_exact or "") - Fraction(s.low_exact or "") for s in stretches)
    ends = sorted({x for points in lines for x, _ in points})
    assert covered == sum(
        b - a for a, b in pairwise(ends)
        if any(p[0][0] <= a and b <= p[-1][0] for p in lines)
    )  # fmt: skip
    for one, other in pairwise(stretches):
        assert one.high_exact != other.low_exact or (one.labels, one.alone) != (
            other.labels, other.alone,
        )  # fmt: skip


def test_the_crossing_of_two_lines_is_told_exactly() -> None:
    found = find_stretches([curve("a", [(0, 3), (6, 9)]), curve("b", [(0, 2), (6, 11)])],
                           Extreme.MOST)  # fmt: skip

    assert [(s.labels, s.low_exact, s.high_exact) for s in found] == [
        (("a",), "0", "2"), (("b",), "2", "6"),
    ]  # fmt: skip
    assert tell_stretches(found, "oxygen in", "mmol/g/h") == (
        "Below oxygen in 2 mmol/g/h a is best; above it b."
    )


def test_a_tie_is_no_change_and_is_told_beside() -> None:
    found = find_stretches([curve("a", [(0, 3), (6, 9)]), curve("b", [(0, 0), (6, 9)]),
                            curve("c", [(0, 3), (6, 9)])], Extreme.MOST)  # fmt: skip
    words = tell_stretches(found, "mu", "1/h")

    assert words == "At every mu, a and c (alike) are best."
    tied = [Stretch(0, 2, ("a",), False), Stretch(2, 4, ("a", "b", "c"), False)]
    assert tell_stretches(tied, "mu", "1/h") == (
        "At every mu, a is best (as good: b and c from 2 to 4)."
    )
    assert tell_stretches(tied, "mu", "1/h", ties=False) == "At every mu, a is best."


def test_where_others_do_not_go_is_told() -> None:
    lines = [curve("a", [(0, 9), (2, 3)]), curve("b", [(0, 5), (6, 4)])]
    found = find_stretches(lines, Extreme.MOST)

    # 9 - 3 x = 5 - x / 6 at x = 24/17
    assert [s.high_exact for s in found] == ["24/17", "2", "6"]
    assert tell_stretches(found, "mu", "") == "Below mu 1.412 a is best; above it b."
    apart = find_stretches([curve("a", [(0, 1), (2, 1)]), curve("b", [(3, 1), (5, 1)]),
                            curve("c", [(1, 0), (4, 0)])], Extreme.MOST)  # fmt: skip
    assert tell_stretches(apart, "mu", "1/h") == (
        "Best by mu [1/h]: a from 0 to 2; c from 2 to 3 (no other goes there); b from 3 to 5."
    )


def test_lines_without_exact_points_or_a_single_one_have_no_crossings() -> None:
    bent = Curve("b", "b", CurveStatus.TRACED, curve("b", [(0, 0), (1, 1)]).points, "", None,
                 ((0.0, 0.0), (0.5, 0.7), (1.0, 1.0)))  # fmt: skip

    assert find_stretches([curve("a", [(0, 1), (2, 1)])], Extreme.MOST) == ()
    assert find_stretches([curve("a", [(0, 1), (2, 1)]), bent], Extreme.MOST) == ()
    assert tell_stretches((), "mu", "1/h") == ""
