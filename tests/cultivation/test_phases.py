"""Phases are proposed where the data change their course."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from fluxnet.cultivation.phases import propose_stretches, steady_stretches
from fluxnet.cultivation.reckoning import rates_of
from fluxnet.rates.cultivation import (
    Cultivation,
    Form,
    Mode,
    SeriesKind,
    Setting,
    SettingKind,
    make_series,
)


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


def test_each_flow_of_a_chemostat_has_a_steady_state_after_three_residence_times() -> None:
    """0.8 L: 0.08 L/h from 20 to 80 h (tau 10 h), then 0.2 L/h to 120 h (tau 4 h)."""
    hours = np.arange(0.0, 121.0, 2.0)
    fed = 0.08 * np.clip(hours - 20, 0, 60) + 0.2 * np.clip(hours - 80, 0, None)
    time = np.arange(10.0, 121.0, 5.0)
    series = (
        make_series(SeriesKind.FEED, "feed", "L", hours, 3.0 + fed, form=Form.TOTAL),
        make_series(SeriesKind.DRY_WEIGHT, "biomass", "g/L", time, np.full(time.size, 5.0)),
    )
    settings = (Setting(SettingKind.VOLUME, 0.8, "L"),)
    raw = Cultivation("D", Mode.CHEMOSTAT, series, settings)
    slow, fast = steady_stretches(raw, time)

    assert (slow.name, fast.name) == ("steady state 1", "steady state 2")
    assert 48 <= slow.start <= 55
    assert slow.end in (75.0, 80.0)
    assert 90 <= fast.start <= 97
    assert fast.end == 120.0
