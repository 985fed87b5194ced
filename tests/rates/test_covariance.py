"""The covariance of a run: own errors, correlations, one shared error."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from fluxnet.ground.errors import MisuseError
from fluxnet.rates.covariance import covariance_at, is_possible, join_errors, run_covariance


def test_a_shared_error_adds_a_matrix_of_rank_one():
    shifts = np.array([0.4, 0.0, 0.2])
    added = join_errors([0.1, 0.2, 0.3], shifts) - join_errors([0.1, 0.2, 0.3])
    assert np.linalg.matrix_rank(added) == 1
    np.testing.assert_allclose(added, np.outer(shifts, shifts), rtol=1e-14)


def test_correlations_are_of_the_own_errors():
    matrix = join_errors([1.0, 2.0], [3.0, 3.0], np.array([[1, 0.5], [0.5, 1]]))
    np.testing.assert_allclose(matrix, [[10, 10], [10, 13]], rtol=1e-14)


def test_a_covariance_cannot_be_changed():
    with pytest.raises(ValueError, match="read-only"):
        join_errors([1.0])[0, 0] = 2


@pytest.mark.parametrize(
    ("matrix", "possible"),
    [
        ([[1.0, 0.5], [0.5, 1.0]], True),
        ([[1.0, 1.0], [1.0, 1.0]], True),
        ([[0.0, 0.0], [0.0, 1.0]], True),
        ([[1.0, 1.1], [1.1, 1.0]], False),
        ([[1e-12, 2e-6], [2e-6, 1.0]], False),
        ([[1.0, 0.5], [0.4, 1.0]], False),
        ([[-1.0, 0.0], [0.0, 1.0]], False),
        ([[0.0, 0.1], [0.1, 1.0]], False),
    ],
)
def test_a_covariance_has_no_negative_variance_in_any_direction(matrix, possible):
    assert is_possible(np.array(matrix)) is possible


def test_a_run_without_a_covariance_has_independent_errors(make_run):
    run = replace(make_run([1.0, 2.0], [0.1, 0.2]), covariance=None)
    np.testing.assert_allclose(run_covariance(run), np.diag([0.01, 0.04]), rtol=1e-14)


def test_at_its_own_values_the_covariance_is_the_run_s(make_run):
    correlations = np.array([[1, 0.3, 0], [0.3, 1, 0], [0, 0, 1]])
    run = make_run([2.0, 5.0, 1.0], [0.1, 0.2, 0.0], [None, 0.04, None], 0.04, correlations)
    np.testing.assert_allclose(
        covariance_at(run, [2.0, 5.0, 1.0]), run.covariance, rtol=1e-12, atol=1e-17
    )


def test_relative_and_shared_errors_follow_other_values(make_run):
    correlations = np.array([[1, 0.5], [0.5, 1]])
    run = make_run([2.0, 5.0], [0.1, 0.2], [None, 0.04], 0.1, correlations)
    expected = join_errors([0.1, 0.16], [0.3, 0.4], correlations)
    np.testing.assert_allclose(covariance_at(run, [3.0, 4.0]), expected, rtol=1e-12)


def test_a_large_shared_error_leaves_small_own_errors_independent(make_run):
    run = make_run([2.0, 5.0], [1e-7, 1e-7], None, 0.3)
    moved = covariance_at(run, [2.0, 5.0])
    smallest = np.linalg.eigvalsh(moved)[0]
    assert moved[0, 1] == pytest.approx(0.09 * 10, rel=1e-15)
    assert smallest > -1e-15


def test_values_are_matched_in_number(make_run):
    with pytest.raises(MisuseError, match="2 measured rates"):
        covariance_at(make_run([1.0, 2.0], [0.1, 0.1]), [1.0])
