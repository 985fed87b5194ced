"""Optical density, dry weight, ash: how much biomass there is, and how well that is known."""

from __future__ import annotations

import numpy as np
import pytest

from fluxnet.chemistry.reader import read_formula
from fluxnet.cultivation.biomass import carbon_mole_mass, dry_weight_modes, fit_calibration
from fluxnet.ground.errors import MisuseError
from fluxnet.rates.cultivation import CalibrationPoint

DENSITIES = np.array([0.5, 1.0, 2.0, 3.0, 4.0, 6.0])


def points(slope: float, curvature: float, seed: int) -> list[CalibrationPoint]:
    generator = np.random.default_rng(seed)
    true = slope * DENSITIES + curvature * DENSITIES**2
    return [
        CalibrationPoint(float(d), float(w), 0.04 * float(t))
        for d, w, t in zip(
            DENSITIES, true * (1 + 0.04 * generator.standard_normal(DENSITIES.size)), true,
            strict=True,
        )
    ]  # fmt: skip


def test_the_interval_of_the_slope_covers_as_often_as_it_says() -> None:
    inside = []
    for seed in range(600):
        low, high = fit_calibration(points(0.39, 0.0, seed)).interval()
        inside.append(low <= 0.39 <= high)

    assert 0.93 <= np.mean(inside) <= 0.98


def test_a_curved_calibration_is_told_from_a_straight_one() -> None:
    curved = fit_calibration(points(0.39, 0.05, 1))
    straight = [fit_calibration(points(0.39, 0.0, seed)).curvature for seed in range(200)]

    assert curved.interval(1)[0] <= 0.05 <= curved.interval(1)[1]
    assert curved.curvature > 0
    assert np.mean([c != 0 for c in straight]) < 0.03


def test_readings_beyond_the_calibrated_range_are_marked() -> None:
    curve = fit_calibration(points(0.39, 0.0, 3))

    assert curve.beyond(np.array([0.2, 5.9, 6.0, 6.1, -0.1])).tolist() == [
        False, False, False, True, True,
    ]  # fmt: skip


def test_the_modes_of_a_calibration_add_up_to_its_covariance() -> None:
    curve = fit_calibration(points(0.39, 0.05, 1))
    grid = np.array([1.0, 3.0, 5.0])
    columns = np.stack([grid, grid**2], axis=1)
    shifts = np.array([m.shift for m in dry_weight_modes(curve, grid)])

    assert shifts.T @ shifts == pytest.approx(columns @ curve.covariance @ columns.T)


def test_ash_moves_the_carbon_of_a_gram_by_as_much_as_it_weighs() -> None:
    formula = read_formula("CH1.8O0.5N0.2")

    assert carbon_mole_mass(formula, 0.1) == pytest.approx(carbon_mole_mass(formula) / 0.9)
    assert carbon_mole_mass(formula, 0.06, 0.04) == pytest.approx(carbon_mole_mass(formula, 0.1))
    with pytest.raises(MisuseError):
        carbon_mole_mass(formula, 0.7, 0.4)


def test_one_sample_is_no_calibration() -> None:
    with pytest.raises(MisuseError, match="two samples"):
        fit_calibration([CalibrationPoint(1.0, 0.4)])
