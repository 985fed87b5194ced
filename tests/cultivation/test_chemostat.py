"""Steady states: rates by hand, steadiness, replicates, and an error that all of them share."""

from __future__ import annotations

import numpy as np
import pytest

from fluxnet.cultivation.assembling import assemble
from fluxnet.cultivation.chemostat import estimate_steady, fit_steady, propagate_steady
from fluxnet.cultivation.errors import draw_errors
from fluxnet.cultivation.reckoning import rates_of
from fluxnet.cultivation.result import Method
from fluxnet.rates.cultivation import (
    Cultivation,
    Form,
    Mode,
    Phase,
    SeriesKind,
    Setting,
    SettingKind,
    make_series,
)

TIME = np.array([40.0, 45.0, 50.0, 55.0, 60.0])
STATE = Phase("steady state", 40.0, 60.0)
FEED, BASE, AWAY, VOLUME = 0.20, 0.010, 0.004, 2.0


def chemostat(
    generator: np.random.Generator | None = None, *, trend: float = 0.0, oxygen: float = 0.19,
) -> Cultivation:
    """2 L, feed 0.20 L/h of 100 mmol/L glucose, base 0.010 L/h, 0.004 L/h evaporate."""
    def series(kind: SeriesKind, name: str, unit: str, value: float, part: float, rise: float = 0):
        values = value * (1 + rise * (TIME - TIME[0]))
        if generator is not None:
            values = values * (1 + part * generator.standard_normal(TIME.size))
        return make_series(kind, name, unit, TIME, values, part * value)

    gas = np.linspace(38.0, 60.0, 200)
    all_series = (
        series(SeriesKind.DRY_WEIGHT, "biomass", "g/L", 4.0, 0.04, trend),
        series(SeriesKind.CONCENTRATION, "glucose", "mmol/L", 2.0, 0.02),
        series(SeriesKind.CONCENTRATION, "acetate", "mmol/L", 15.0, 0.02),
        make_series(SeriesKind.FEED, "feed", "L/h", [0.0], [FEED], form=Form.RATE, common=0.01),
        make_series(SeriesKind.BASE, "base", "L/h", [0.0], [BASE], form=Form.RATE, common=0.05),
        make_series(SeriesKind.EVAPORATION, "evaporation", "L/h", [0.0], [AWAY], form=Form.RATE,
                    common=0.2),
        make_series(SeriesKind.GAS_OUT, "oxygen", "mol/mol", gas, np.full(200, oxygen),
                    common=0.0005),
        make_series(SeriesKind.GAS_OUT, "CO2", "mol/mol", gas, np.full(200, 0.02), common=0.01),
        make_series(SeriesKind.GAS_FLOW, "", "mol/h", gas, np.full(200, 5.0), common=0.01),
    )  # fmt: skip
    settings = (
        Setting(SettingKind.VOLUME, VOLUME, "L", sd=0.01),
        Setting(SettingKind.CONTENT, 100.0, "mmol/L", sd=0.5, of="glucose", stream="feed"),
    )
    return Cultivation("D", Mode.CHEMOSTAT, all_series, settings)


def test_rates_of_a_steady_state_are_those_worked_by_hand() -> None:
    (phase,) = rates_of(chemostat(), phases=[STATE]).phases
    out = FEED + BASE - AWAY
    biomass = 4.0 * VOLUME
    flow_out = 5.0 * (1 - 0.2095 - 0.0004) / (1 - 0.19 - 0.02)

    assert phase.find("mu").value == pytest.approx(out / VOLUME, rel=1e-9)
    assert phase.find("glucose").value == pytest.approx((out * 2 - FEED * 100) / biomass, rel=1e-9)
    assert phase.find("acetate").value == pytest.approx(out * 15 / biomass, rel=1e-9)
    assert phase.find("oxygen").value == pytest.approx(
        1000 * (flow_out * 0.19 - 5.0 * 0.2095) / biomass, rel=1e-9
    )
    assert phase.find("CO2").value == pytest.approx(
        1000 * (flow_out * 0.02 - 5.0 * 0.0004) / biomass, rel=1e-9
    )
    assert phase.find("mu").way(Method.NAIVE).value == pytest.approx(FEED / VOLUME)
    assert phase.run.extras == (("phase", "steady state"), ("mode", "chemostat"))


def test_a_monte_carlo_of_a_steady_state_gives_its_propagated_covariance() -> None:
    generator = np.random.default_rng(4)
    data = assemble(chemostat(generator), None, [], [], np.array([40.0, 60.0]))
    assert data is not None
    fit = fit_steady(data, STATE)
    assert fit is not None
    found = propagate_steady(data, fit)
    drawn = np.concatenate([
        estimate_steady(draw_errors(data.blocks, 2000, generator), data, fit) for _ in range(10)
    ])  # fmt: skip
    covariance = np.cov(drawn.T)
    scale = np.outer(*(2 * [np.sqrt(np.diag(covariance))]))

    assert np.diag(found.covariance) == pytest.approx(np.diag(covariance), rel=0.05)
    assert found.covariance / scale == pytest.approx(covariance / scale, abs=0.03)


def test_the_interval_of_a_steady_rate_covers_as_often_as_it_says() -> None:
    generator = np.random.default_rng(9)
    truth = (0.206 * 2 - 20) / 8.0
    inside = []
    for _ in range(300):
        data = assemble(chemostat(generator), None, [], [], np.array([40.0, 60.0]))
        assert data is not None
        fit = fit_steady(data, STATE)
        assert fit is not None
        found = propagate_steady(data, fit)
        at = fit.names.index("glucose")
        inside.append(abs(found.value[at] - truth) < 1.96 * found.sd[at])

    assert np.mean(inside) > 0.93


def test_a_culture_that_still_grows_is_not_called_steady() -> None:
    steady, rising = (
        rates_of(chemostat(np.random.default_rng(2), trend=t), phases=[STATE])
        for t in (0.0, 0.03)
    )

    assert all(s.steady for s in steady.phases[0].steadiness)
    assert steady.phases[0].find("mu") is not None
    found = [d.message for d in rising.diagnostics if d.name.value == "not-steady"]
    assert len(found) == 1
    assert "biomass" in found[0]


def test_two_steady_states_are_two_runs() -> None:
    result = rates_of(chemostat(), phases=[Phase("a", 40.0, 50.0), Phase("b", 50.0, 60.0)])

    assert [r.name for r in result.runs] == ["D a", "D b"]
