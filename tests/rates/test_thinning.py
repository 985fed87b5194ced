"""A long record is thinned without losing what its averages are worth."""

from __future__ import annotations

import numpy as np
import pytest

from fluxnet.rates.thinning import thin


def noisy(alike: float, rows: int, seed: int) -> np.ndarray:
    generator = np.random.default_rng(seed)
    noise = generator.standard_normal(rows)
    for i in range(1, rows):
        noise[i] = alike * noise[i - 1] + np.sqrt(1 - alike**2) * noise[i]
    return noise


@pytest.mark.parametrize("alike", [0.0, 0.5, 0.8])
def test_the_error_of_an_average_is_the_scatter_of_averages(alike: float) -> None:
    time = np.arange(100_000) / 100
    thinned = thin(time, 0.2 + 0.01 * noisy(alike, time.size, 5), 2.0)

    assert thinned.value.std() == pytest.approx(float(thinned.sd.mean()), rel=0.12)
    assert thinned.alike == pytest.approx(alike, abs=0.03)
    assert thinned.row_sd == pytest.approx(0.01, rel=0.05)


def test_a_trend_is_no_noise() -> None:
    time = np.arange(5000) / 100
    thinned = thin(time, 0.3 * time + 0.01 * noisy(0.0, time.size, 6), 1.0)

    assert thinned.row_sd == pytest.approx(0.01, rel=0.05)
    assert thinned.value == pytest.approx(0.3 * thinned.time, abs=0.006)


def test_chunks_give_the_averages_of_the_whole() -> None:
    time = np.arange(1000) / 7
    value = noisy(0.3, 1000, 7)
    whole, parts = thin(time, value, 3.0), thin(time, value, 3.0, chunk=37)

    assert parts.value == pytest.approx(whole.value, abs=1e-13)
    assert parts.count == pytest.approx(whole.count)
    assert parts.sd == pytest.approx(whole.sd, rel=0.05)
