"""Phases are proposed where the data change their course."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from fluxnet.cultivation.phases import propose_stretches
from fluxnet.cultivation.reckoning import rates_of
from fluxnet.rates.cultivation import Cultivation, Mode


def test_noisy_growth_is_cut_into_lag_growth_and_rest() -> None:
    generator = np.random.default_rng(2)
    right = 0
    for _ in range(40):
        t = np.arange(0.0, 16.0)
        logs = 0.35 * np.clip(t - 3, 0, 7) + 0.04 * generator.standard_normal(t.size)
        found = propose_stretches(t, logs, np.full(t.size, 0.04))
        names = [p.name for p in found]
        right += names == ["lag", "growth", "stationary"] and abs(found[1].start - 3) <= 1
    assert right >= 36


def test_one_straight_course_is_one_phase() -> None:
    generator = np.random.default_rng(3)
    t = np.arange(0.0, 12.0)
    counts = [
        len(propose_stretches(t, 0.3 * t + 0.04 * generator.standard_normal(12), np.full(12, 0.04)))
        for _ in range(100)
    ]

    assert np.mean([c == 1 for c in counts]) > 0.9


def test_a_fed_batch_is_cut_where_its_feed_begins(
    simulated: Callable[..., object], measured: Callable[..., Cultivation]
) -> None:
    time = np.linspace(0.0, 12.0, 25)
    truth = simulated(time, feed=0.15, glucose=40.0)
    result = rates_of(measured(truth, np.random.default_rng(1), mode=Mode.FED_BATCH))

    assert result.phases[-1].phase.name == "feed"
    assert result.phases[-1].phase.end == 12.0
