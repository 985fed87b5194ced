"""Break points of random problems: against grids of programmes, exact, concave."""

from __future__ import annotations

import random
from dataclasses import replace
from fractions import Fraction
from itertools import pairwise

import numpy as np
import pytest
from scipy.optimize import linprog

from fluxnet.exact.simplex import Place
from fluxnet.solving.parametric import Extreme, Path, PathEnd, follow, trace
from fluxnet.solving.parametric_proof import ChangeKind, prove_path
from fluxnet.solving.problem import Problem, Row, RowKind

INF = np.inf


def network_like(dice: random.Random) -> Problem:
    """Balances of some species over reactions of one to three terms; some limits are alike."""
    species, reactions = dice.randint(2, 7), dice.randint(6, 14)
    matrix = np.zeros((species + 3, reactions))
    for j in range(reactions):
        for i in dice.sample(range(species), min(species, dice.randint(1, 3))):
            matrix[i, j] = dice.choice([-2, -1, -1, 1, 1, 2, -0.4, 0.1])
    matrix[species, 0] = matrix[species + 1, 1] = 1.0
    matrix[species + 2, :2] = 1.0
    low, high = np.zeros(species + 3), np.zeros(species + 3)
    low[species:], high[species:] = -INF, (3.0, 3.0, 6.0)
    kinds = [RowKind.BALANCE] * species + [RowKind.LIMIT] * 3
    return Problem(
        tuple(f"r{j}" for j in range(reactions)),
        tuple(Row(kind, str(i)) for i, kind in enumerate(kinds)),
        matrix, low, high,
        np.array([dice.choice([0.0, 0.0, -10.0]) for _ in range(reactions)]),
        np.full(reactions, 40.0),
    )  # fmt: skip


def best_at(problem: Problem, along: np.ndarray, cost: np.ndarray, x: float, sign: int) -> float:
    equal = problem.row_low == problem.row_high
    up = ~equal & np.isfinite(problem.row_high)
    down = ~equal & np.isfinite(problem.row_low)
    found = linprog(
        sign * cost,
        np.vstack([problem.matrix[up], -problem.matrix[down]]),
        np.concatenate([problem.row_high[up], -problem.row_low[down]]),
        np.vstack([problem.matrix[equal], along]),
        np.append(problem.row_low[equal], x),
        bounds=list(zip(problem.column_low, problem.column_high, strict=True)),
    )
    assert found.status == 0, found.message
    return float(sign * found.fun)


def two_rows(dice: random.Random, columns: int) -> tuple[np.ndarray, np.ndarray]:
    def row() -> np.ndarray:
        return np.array([dice.choice([0.0, 0.0, 0.0, 1.0, -1.0, 0.5]) for _ in range(columns)])

    return row(), row()


def cases(seed: str, count: int) -> list[tuple[Problem, np.ndarray, np.ndarray, Extreme]]:
    dice, found = random.Random(seed), []
    while len(found) < count:
        problem = network_like(dice)
        along, cost = two_rows(dice, len(problem.columns))
        extreme = dice.choice(list(Extreme))
        if follow(problem, along, cost, extreme).end is PathEnd.TRACED:
            found.append((problem, along, cost, extreme))
    return found


@pytest.mark.parametrize("part", range(4))
def test_break_points_agree_with_a_dense_grid_of_programmes(part: int) -> None:
    most = 0
    for problem, along, cost, extreme in cases(f"a dense grid {part}", 12):
        breaks = trace(problem, along, cost, extreme)
        xs, ys = [b.x for b in breaks], [b.y for b in breaks]
        most = max(most, len(breaks))
        for x in np.linspace(xs[0], xs[-1], 21)[1:-1]:
            best = best_at(problem, along, cost, float(x), extreme.sign)

            assert np.interp(x, xs, ys) == pytest.approx(best, abs=1e-6)
    assert most > 2  # some have breaks inside


@pytest.mark.parametrize("extreme", Extreme)
def test_the_ends_are_the_least_and_the_most_of_x(extreme: Extreme) -> None:
    for problem, along, cost, _ in cases("ends", 10):
        path = follow(problem, along, cost, extreme)
        if not path.pieces:
            continue
        zero = np.zeros_like(along)
        loose = replace(problem)
        least = best_at(loose, zero, along, 0.0, 1)
        largest = best_at(loose, zero, along, 0.0, -1)
        xs = [x for x, _ in path.points]

        assert (xs[0], xs[-1]) == pytest.approx((least, largest), abs=1e-7)


def test_every_point_is_exact_and_the_slopes_fall_for_a_most_and_rise_for_a_least() -> None:
    for problem, along, cost, extreme in cases("exact points", 40):
        path = follow(problem, along, cost, extreme)
        proven = prove_path(path, None, None, None, along, cost)
        points = [b.exact for b in proven.breaks]

        assert proven.proof.verified, proven.proof.words
        for (before, after), point in zip(pairwise(points), path.points[:-1], strict=True):
            assert before is not None
            assert after is not None
            assert (float(before.x), float(before.y)) == pytest.approx(point, abs=1e-7)
            assert before.slope_after == (after.y - before.y) / (after.x - before.x)
            if before.slope_before is not None:
                assert extreme.sign * (before.slope_after - before.slope_before) > 0


def test_lost_bases_are_found_again_by_exact_programmes() -> None:
    for problem, along, cost, extreme in cases("lost bases", 12):
        path = follow(problem, along, cost, extreme)
        good = prove_path(path, None, None, None, along, cost)
        rows, columns = path.problem.matrix.shape
        spoilt = (Place.LOW,) * columns + (Place.BASIC,) * rows
        pieces = tuple(replace(p, first=spoilt, last=spoilt) for p in path.pieces)
        other = prove_path(
            replace(path, pieces=pieces, low_places=spoilt, high_places=spoilt),
            None, None, None, along, cost,
        )  # fmt: skip

        assert other.proof.verified
        assert [b.exact for b in other.breaks] == [b.exact for b in good.breaks]


def test_a_certain_change_has_its_bound_met_in_all_solutions_of_its_side() -> None:
    seen = 0
    for problem, along, cost, extreme in cases("changes", 25):
        breaks = trace(problem, along, cost, extreme)
        for k, one in enumerate(breaks[1:-1], start=1):
            step = min(one.x - breaks[k - 1].x, breaks[k + 1].x - one.x) / 4
            for change in one.changes:
                hold = change.hold
                is_left = change.kind is ChangeKind.LEAVES
                x = one.x + (-step if is_left else step)
                row = (
                    np.eye(len(problem.columns))[hold.column]
                    if hold.column is not None
                    else problem.matrix[hold.row]
                )
                held = best_at(problem, along, cost, x, extreme.sign)
                pinned = replace(
                    problem,
                    matrix=np.vstack([problem.matrix, cost]),
                    rows=(*problem.rows, Row(RowKind.LIMIT, "y")),
                    row_low=np.append(problem.row_low, held - 1e-6),
                    row_high=np.append(problem.row_high, held + 1e-6),
                )
                ends = [best_at(pinned, along, row, x, sign) for sign in (1, -1)]
                if change.certain:
                    seen += 1
                    assert ends == pytest.approx([hold.bound] * 2, abs=1e-3)
    assert seen > 5


def test_a_part_of_the_range_can_be_asked_for() -> None:
    rows = (Row(RowKind.LIMIT, "limit a <= 2"), Row(RowKind.LIMIT, "limit a + b <= 3"))
    problem = Problem(
        ("a", "b"), rows, np.array([[1.0, 0.0], [1.0, 1.0]]), np.full(2, -INF),
        np.array([2.0, 3.0]), np.zeros(2), np.full(2, INF),
    )  # fmt: skip
    b, a = np.array([0.0, 1.0]), np.array([1.0, 0.0])
    found = trace(problem, b, a, Extreme.MOST, 0.5, 2.5)

    assert [(p.x, p.y) for p in found] == [(0.5, 2.0), (1.0, 2.0), (2.5, 0.5)]
    assert found[1].exact is not None
    assert found[1].exact.x == Fraction(1)


def test_endless_and_impossible_paths_say_so() -> None:
    rows = (Row(RowKind.LIMIT, "limit a >= 1"),)
    problem = Problem(
        ("a", "b"), rows, np.array([[1.0, 0.0]]), np.ones(1), np.array([INF]), np.zeros(2),
        np.array([INF, 5.0]),
    )  # fmt: skip
    a, b = np.eye(2)

    def end(path: Path) -> tuple[PathEnd, bool]:
        return path.end, path.upwards

    assert end(follow(problem, a, b, Extreme.MOST)) == (PathEnd.X_ENDLESS, True)
    assert end(follow(problem, b, a, Extreme.MOST)) == (PathEnd.Y_ENDLESS, True)
    assert follow(problem, a, b, Extreme.MOST, high=4.0).points == ((1.0, 5.0), (4.0, 5.0))
    assert follow(problem, b, a, Extreme.MOST, low=6.0).end is PathEnd.INFEASIBLE
    never = replace(problem, row_high=np.array([0.0]))
    assert follow(never, a, b, Extreme.MOST).end is PathEnd.INFEASIBLE


def test_a_single_point_is_one() -> None:
    rows = (Row(RowKind.LIMIT, "limit a = 1"),)
    problem = Problem(
        ("a", "b"), rows, np.array([[1.0, 0.0]]), np.ones(1), np.ones(1), np.zeros(2),
        np.array([INF, 5.0]),
    )  # fmt: skip
    path = follow(problem, *np.eye(2), Extreme.MOST)

    assert path.end is PathEnd.POINT
    assert path.points == ((1.0, 5.0),)
    (point,) = trace(problem, *np.eye(2), Extreme.MOST)
    assert (point.x, point.y, point.slope_before, point.slope_after) == (1.0, 5.0, None, None)
