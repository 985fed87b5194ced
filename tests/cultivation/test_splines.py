"""A smoothing spline as a matrix is the library's own spline of the same stiffness."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.interpolate import make_smoothing_spline

from fluxnet.cultivation.splines import roughness, smooth

TIME = np.sort(np.random.default_rng(1).uniform(0, 40, 60))
SD = np.random.default_rng(3).uniform(0.03, 0.08, 60)
VALUES = np.sin(TIME / 8) + SD * np.random.default_rng(2).standard_normal(60)


def test_the_chosen_stiffness_is_that_of_least_cross_validation() -> None:
    """The library's own choice has a score that is no better, to the width of the grid."""
    weights = 1 / SD**2
    weights = weights / weights.mean()
    found = smooth(TIME, VALUES, SD, TIME)
    other = make_smoothing_spline(TIME, VALUES, weights)

    assert found.value @ VALUES == pytest.approx(other(TIME), abs=0.2 * float(SD.mean()))
    assert np.trace(found.value) == pytest.approx(found.freedom, rel=1e-6)


def test_the_matrix_of_roughness_gives_the_librarys_spline() -> None:
    weights = 1 / SD**2 / np.mean(1 / SD**2)
    stiffness = 3.0
    matrix = np.linalg.solve(np.diag(weights) + stiffness * roughness(TIME), np.diag(weights))

    assert matrix @ VALUES == pytest.approx(
        make_smoothing_spline(TIME, VALUES, weights, stiffness)(TIME), abs=1e-9
    )


def test_the_slope_is_that_of_the_curve() -> None:
    at = np.array([10.0, 20.0])
    step = 1e-4
    found = smooth(TIME, VALUES, SD, at)
    before, after = (smooth(TIME, VALUES, SD, at + d) for d in (-step, step))

    assert found.slope @ VALUES == pytest.approx(
        (after.value - before.value) @ VALUES / (2 * step), abs=1e-6
    )
