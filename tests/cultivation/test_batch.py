"""Batches whose rates are known: values, intervals, covariance, and the other ways beside them."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest

from fluxnet.cultivation.assembling import assemble
from fluxnet.cultivation.batch import (
    PhaseFit,
    estimate_phase,
    fit_phase,
    names_of,
    propagate_phase,
    widened,
)
from fluxnet.cultivation.broth_state import RawData
from fluxnet.cultivation.errors import draw_errors
from fluxnet.cultivation.reckoning import rates_of
from fluxnet.cultivation.result import Method
from fluxnet.rates.covariance import run_covariance
from fluxnet.rates.cultivation import Cultivation, Phase, Setting, SettingKind

TIME = np.linspace(0.0, 10.0, 11)
WHOLE = Phase("growth", 0.0, 10.0)


def fitted(raw: Cultivation, phase: Phase = WHOLE) -> tuple[RawData, PhaseFit]:
    data = assemble(raw, None, [], [])
    assert data is not None
    fit = fit_phase(data, phase)
    assert fit is not None
    return widened(data, fit), fit


def test_data_without_errors_give_the_rates_that_made_them(
    simulated: Callable[..., object], measured: Callable[..., Cultivation],
    gassed: Callable[..., tuple],
) -> None:  # fmt: skip
    truth = simulated(TIME)
    raw = measured(truth, None, extra=gassed(truth, None))
    (phase,) = rates_of(raw, phases=[WHOLE]).phases

    assert phase.curve == "straight line"
    assert phase.find("mu").value == pytest.approx(truth.mu, rel=1e-6)
    for name, rate in truth.rates.items():
        assert phase.find(name).value == pytest.approx(rate, rel=2e-4), name
    for line in phase.lines:
        way = line.way(Method.SPLINE)
        assert way.difference == pytest.approx(0.0, abs=0.01 * abs(line.value))
        assert way.difference_sd > 0
        assert sum(share for _, share in line.shares) == pytest.approx(1.0)


def test_a_monte_carlo_of_the_raw_data_gives_the_covariance_that_was_propagated(
    simulated: Callable[..., object], measured: Callable[..., Cultivation],
    gassed: Callable[..., tuple],
) -> None:  # fmt: skip
    """All variances within 5 %, all correlations within 0.03; 20,000 draws are good to 1 %."""
    truth = simulated(TIME)
    generator = np.random.default_rng(11)
    settings = (
        Setting(SettingKind.PH, 7.0, "1"), Setting(SettingKind.TEMPERATURE, 30.0, "°C"),
    )  # fmt: skip
    raw = measured(
        truth, generator, common=0.03, extra=gassed(truth, generator, rows=300), settings=settings
    )
    data, fit = fitted(raw)
    found = propagate_phase(data, fit)
    drawn = np.concatenate([
        estimate_phase(draw_errors(data.blocks, 2000, generator), data, fit) for _ in range(10)
    ])  # fmt: skip
    covariance = np.cov(drawn.T)
    scale = np.sqrt(np.diag(covariance))

    assert np.diag(found.covariance) == pytest.approx(np.diag(covariance), rel=0.05)
    outer = np.outer(scale, scale)
    assert found.covariance / outer == pytest.approx(covariance / outer, abs=0.03)
    assert drawn.mean(axis=0) == pytest.approx(found.value, abs=float(0.2 * found.sd.max()))


def test_an_error_that_all_biomass_shares_is_told_as_the_runs_shared_error(
    simulated: Callable[..., object], measured: Callable[..., Cultivation]
) -> None:
    truth = simulated(TIME)
    run = rates_of(measured(truth, None, common=0.03), phases=[WHOLE]).runs[0]
    covariance = run_covariance(run)

    assert run.shared_error == pytest.approx(0.03, rel=1e-3)
    for i, rate in enumerate(run.rates):
        assert covariance[i, i] == pytest.approx(rate.sd**2)
        if rate.own_sd is not None:
            shared = run.shared_error * rate.value
            assert rate.sd**2 == pytest.approx(rate.own_sd**2 + shared**2)
    mu = next(i for i, r in enumerate(run.rates) if str(r.quantity) == "mu")
    assert run.rates[mu].own_sd is None


def cover(
    count: int, simulated: Callable[..., object], measured: Callable[..., Cultivation]
) -> tuple[np.ndarray, np.ndarray]:
    """Shares of intervals that hold the truth, and z of every rate of every batch."""
    truth = simulated(TIME)
    generator = np.random.default_rng(20)
    scores = []
    for _ in range(count):
        data, fit = fitted(measured(truth, generator))
        plain = replace(fit, spline=None)
        found = propagate_phase(data, plain)
        true = [truth.mu, *(truth.rates[n] for n in names_of(plain)[1:])]
        scores.append((found.value - true) / found.sd)
    z = np.array(scores)
    return (np.abs(z) < 1.959964).mean(axis=0), z


def test_intervals_of_sixty_batches_hold_the_truth_nearly_always(
    simulated: Callable[..., object], measured: Callable[..., Cultivation]
) -> None:
    """Of 60 about 57 +- 1.7 do."""
    shares, _ = cover(60, simulated, measured)

    assert (shares >= 0.87).all(), shares


@pytest.mark.slow
def test_intervals_of_a_thousand_batches_with_4_per_cent_dry_weight_error_cover_95_per_cent(
    simulated: Callable[..., object], measured: Callable[..., Cultivation]
) -> None:
    """mu and q, from the raw data, every choice made anew: 93 to 97 %; sds within 5 %."""
    shares, z = cover(1000, simulated, measured)

    assert ((shares >= 0.93) & (shares <= 0.97)).all(), shares
    assert z.std(axis=0) == pytest.approx(1.0, abs=0.05)


def test_samples_that_scatter_beyond_their_errors_widen_the_sd_and_are_told(
    simulated: Callable[..., object], measured: Callable[..., Cultivation]
) -> None:
    truth = simulated(TIME)
    raw = measured(truth, np.random.default_rng(1))
    tight = tuple(
        replace(s, sd=s.sd / 10) if s.name == "glucose" else s for s in raw.series
    )
    result = rates_of(replace(raw, series=tight), phases=[WHOLE])

    assert result.phases[0].find("glucose").widened > 1.5
    assert "rate-not-constant" in [d.name.value for d in result.diagnostics]


def test_an_upper_limit_counts_as_anything_below_it(
    simulated: Callable[..., object], measured: Callable[..., Cultivation]
) -> None:
    truth = simulated(TIME)
    raw = measured(truth, None)
    below = np.zeros(TIME.size, dtype=bool)
    below[0] = True
    limited = tuple(
        replace(s, value=np.where(below, 0.4, s.value), below=below) if s.name == "acetate" else s
        for s in raw.series
    )
    result = rates_of(replace(raw, series=limited), phases=[WHOLE])

    assert result.phases[0].find("acetate").value == pytest.approx(1.1, rel=0.01)
    assert any("below its limit" in a.what for a in result.assumptions)
