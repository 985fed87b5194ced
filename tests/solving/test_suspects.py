"""Suspects by the closed formulas, against least squares with one unknown more."""

from __future__ import annotations

from fractions import Fraction
from hashlib import sha256

import numpy as np
import pytest
from scipy.optimize import minimize

from fluxnet.ground.errors import MisuseError
from fluxnet.solving.statistics import chi_squared_tail
from fluxnet.solving.suspects import (
    first_group,
    number_directions,
    weigh_pairs,
    weigh_suspects,
    whiten_residuals,
)


def seed_of(name: str) -> int:
    return int.from_bytes(sha256(name.encode()).digest()[:8], "big")


def root_of(P):
    return np.linalg.cholesky(P)


def left_by_search(e, P, g):
    """The least h with a free size of one suspect, found by a general minimiser."""
    inverse = np.linalg.inv(P)
    scale = 1 / np.sqrt(g @ inverse @ g)

    def h(size):
        r = e - g * size[0] * scale
        return r @ inverse @ r

    found = minimize(h, [0.0], method="BFGS", options={"gtol": 1e-10})
    return found.fun, found.x[0] * scale


def left_by_fit(e, P, columns):
    """The least h with free sizes of some suspects, by least squares in eigenvectors of P."""
    values, vectors = np.linalg.eigh(P)
    white = (vectors / np.sqrt(values)).T
    sizes = np.linalg.lstsq(white @ columns, white @ e, rcond=None)[0]
    return np.sum((white @ (e - columns @ sizes)) ** 2), sizes


@pytest.fixture
def example(request):
    random = np.random.default_rng(seed_of(request.node.name))
    e = random.standard_normal(4) * [1, 3, 0.2, 40]
    root = random.standard_normal((4, 4)) * [[1], [2], [0.1], [30]]
    return e, root @ root.T, random.standard_normal((7, 4)) * [1, 1, 0.1, 10]


def test_a_suspect_leaves_the_least_h_that_any_size_of_it_can(example):
    e, P, G = example
    found = weigh_suspects(whiten_residuals(e[None], root_of(P)), G, range(7))
    for i, g in enumerate(G):
        left, size = left_by_search(e, P, g)
        assert found.h_left[0, i] == pytest.approx(left, rel=1e-8)
        assert found.sizes[0, i] == pytest.approx(size, rel=1e-4, abs=1e-6)
        assert found.sds[0, i] == pytest.approx((g @ np.linalg.solve(P, g)) ** -0.5)


def test_the_gain_of_a_suspect_is_its_size_in_sds_squared(example):
    e, P, G = example
    found = weigh_suspects(whiten_residuals(e[None], root_of(P)), G, range(7))
    gain = found.h[:, None] - found.h_left
    assert gain == pytest.approx(np.square(found.sizes / found.sds))


def test_p_is_that_of_the_best_of_all_distinct_directions(example):
    e, P, G = example
    twice = np.vstack([G, -3 * G[2]])
    classes = [*range(7), 2]
    found = weigh_suspects(whiten_residuals(e[None], root_of(P)), twice, classes)
    for k in range(8):
        alone = chi_squared_tail(float((found.h - found.h_left[:, k])[0]), 1)
        assert found.p[0, k] == pytest.approx(1 - (1 - alone) ** 7)


def test_chance_gives_the_best_suspect_its_p(request):
    # with few directions that lie far apart the correction is nearly exact; it never errs to the
    # side of too small a p
    random = np.random.default_rng(seed_of(request.node.name))
    white = whiten_residuals(random.standard_normal((4000, 3)), np.eye(3))
    found = weigh_suspects(white, np.eye(3), range(3))
    assert np.mean(found.p.min(axis=1) < 0.05) == pytest.approx(0.05, abs=0.011)


def test_the_separation_is_what_h_would_rise_by_with_the_nearest_other(example):
    _, P, G = example
    truth = 2.5 * G[3]  # without noise h left of another suspect is the square of the distance
    found = weigh_suspects(whiten_residuals(truth[None], root_of(P)), G, range(7))
    others = [k for k in range(7) if k != 3]
    assert found.separation[0, 3] ** 2 == pytest.approx(found.h_left[0, others].min())


def test_twins_do_not_count_as_near(example):
    e, P, G = example
    white = whiten_residuals(e[None], root_of(P))
    alone = weigh_suspects(white, G, range(7))
    with_twin = weigh_suspects(white, np.vstack([G, 5 * G[1]]), [*range(7), 1])
    assert with_twin.separation[0, :7] == pytest.approx(alone.separation[0])
    assert with_twin.separation[0, 7] == pytest.approx(alone.separation[0, 1])
    assert with_twin.h_left[0, 7] == pytest.approx(alone.h_left[0, 1])


def test_a_lone_direction_has_no_neighbour(example):
    e, P, G = example
    white = whiten_residuals(e[None], root_of(P))
    assert np.isinf(weigh_suspects(white, G[:1], [0]).separation).all()


def test_runs_at_once_are_the_runs_one_by_one(request):
    random = np.random.default_rng(seed_of(request.node.name))
    e = random.standard_normal((5, 3))
    roots = random.standard_normal((5, 3, 3))
    G = random.standard_normal((6, 3))
    together = weigh_suspects(whiten_residuals(e, roots), G, range(6))
    for run in range(5):
        alone = weigh_suspects(whiten_residuals(e[run : run + 1], roots[run]), G, range(6))
        for name in ("h", "sizes", "sds", "h_left", "p", "separation"):
            assert getattr(together, name)[run] == pytest.approx(getattr(alone, name)[0]), name


def test_scaling_and_mixing_the_relations_changes_nothing(request, example):
    e, P, G = example
    random = np.random.default_rng(seed_of(request.node.name))
    mix = random.standard_normal((4, 4)) * [[1e-5], [1], [1e4], [3]]
    before = weigh_suspects(whiten_residuals(e[None], root_of(P)), G, range(7))
    after = weigh_suspects(whiten_residuals((mix @ e)[None], mix @ root_of(P)), G @ mix.T, range(7))
    for name in ("h", "sizes", "sds", "h_left", "separation"):
        assert getattr(after, name) == pytest.approx(getattr(before, name), rel=1e-6), name


def test_a_pair_leaves_the_least_h_of_any_two_sizes(request):
    random = np.random.default_rng(seed_of(request.node.name))
    root = random.standard_normal((4, 4))
    P, G = root @ root.T, random.standard_normal((6, 4))
    e = 6 * root @ random.standard_normal(4)
    pairs = weigh_pairs(whiten_residuals(e[None], root_of(P)), 0, G, range(6))
    assert len(pairs.first)
    assert (np.diff(pairs.h_left) >= 0).all()
    single = weigh_suspects(whiten_residuals(e[None], root_of(P)), G, range(6)).h_left[0]
    for i, j, sizes, left in zip(
        pairs.first, pairs.second, pairs.sizes, pairs.h_left, strict=True
    ):
        least, found = left_by_fit(e, P, G[[i, j]].T)
        assert left == pytest.approx(least, rel=1e-6)
        assert sizes == pytest.approx(found, rel=1e-6)
        assert left + 3.84 < min(single[i], single[j])  # each is needed


def test_pairs_that_are_left_out_hold_one_that_is_not_needed(request):
    random = np.random.default_rng(seed_of(request.node.name))
    G = random.standard_normal((5, 4))
    white = whiten_residuals((3 * G[0] + 0.1 * G[1])[None], np.eye(4))
    kept = weigh_pairs(white, 0, G, range(5))
    told = set(zip(kept.first.tolist(), kept.second.tolist(), strict=True))
    single = weigh_suspects(white, G, range(5)).h_left[0]
    for i in range(5):
        for j in range(i + 1, 5):
            least, _ = left_by_fit(white.residuals[0], np.eye(4), G[[i, j]].T)
            assert ((i, j) in told) == (min(single[i], single[j]) - least > 3.8415), (i, j)


def test_directions_are_one_only_where_they_are_exactly_parallel():
    third = Fraction(1, 3)
    nearly = Fraction(333333333333333333333, 10**21)
    vectors = [(third, Fraction(1)), (Fraction(-1), Fraction(-3)), (nearly, Fraction(1))]
    assert number_directions(vectors) == (0, 0, 1)


def test_the_first_group_is_measured_from_the_best_that_is_possible():
    left = np.array([[0.0, 1.0, 4.0, 5.0], [0.0, 1.0, 4.0, 5.0]])
    possible = np.array([[True] * 4, [False, False, True, True]])
    assert first_group(left, possible).tolist() == [[True, True, False, False], [True] * 4]


def test_where_nothing_is_possible_the_best_of_all_counts():
    left = np.array([[2.0, 1.0, 6.0]])
    assert first_group(left, np.zeros((1, 3), dtype=bool)).tolist() == [[True, True, False]]


def test_errors_that_leave_a_relation_without_any_are_refused():
    with pytest.raises(MisuseError):
        whiten_residuals(np.ones((1, 2)), np.array([[1.0, 2.0], [2.0, 4.0]]))
    with pytest.raises(MisuseError):
        whiten_residuals(np.ones((1, 2)), np.array([[1.0, 2.0], [0.0, 0.0]]))
    with pytest.raises(MisuseError):
        whiten_residuals(np.array([[1.0, np.nan]]), np.eye(2))


def test_a_suspect_without_effect_is_refused():
    with pytest.raises(MisuseError):
        weigh_suspects(whiten_residuals(np.ones((1, 2)), np.eye(2)), np.zeros((1, 2)), [0])


def test_sds_that_differ_by_ten_decades_keep_their_digits():
    # two relations share an error that is huge beside what each has of its own
    shared, own = 1e6, np.array([1e-4, 2e-4])
    roots = np.array([[shared, own[0], 0.0], [shared, 0.0, own[1]]])
    found = weigh_suspects(whiten_residuals(np.array([[3e-4, 0.0]]), roots), np.eye(2), [0, 1])
    # their difference alone is known: 3e-4 with a variance of 5e-8
    assert found.h[0] == pytest.approx(9e-8 / 5e-8, rel=1e-5)
    assert found.sizes[0] == pytest.approx([3e-4, -3e-4], rel=1e-5)
