"""The analyser's offset, drift and carbonate: what they do to gas rates."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest

from fluxnet.cultivation.gas_amounts import held_per_fraction
from fluxnet.cultivation.reckoning import rates_of
from fluxnet.cultivation.result import CultivationRates, Method
from fluxnet.rates.cultivation import Cultivation, Phase, SeriesKind, Setting, SettingKind

WHOLE = [Phase("growth", 0.0, 10.0)]
AT_30 = Setting(SettingKind.TEMPERATURE, 30.0, "°C")


@pytest.fixture
def rates(
    simulated: Callable[..., object], measured: Callable[..., Cultivation],
    gassed: Callable[..., tuple],
) -> Callable[..., CultivationRates]:  # fmt: skip
    truth = simulated(np.linspace(0.0, 10.0, 11))

    def rates(settings: tuple[Setting, ...] = (), **gas: float) -> CultivationRates:
        raw = measured(truth, None, extra=gassed(truth, None, **gas), settings=settings)
        return rates_of(raw, phases=WHOLE)

    return rates


def test_an_analyser_that_is_off_is_set_to_the_inlet_gas(
    rates: Callable[..., CultivationRates],
) -> None:
    off = rates(offset=0.002).phases[0]

    assert off.find("oxygen").value == pytest.approx(-4.209, rel=0.002)
    assert off.rq is not None
    assert off.rq.usable
    assert off.rq.value == pytest.approx(4.818 / 4.209, rel=0.002)
    assert off.rq.low < 4.818 / 4.209 < off.rq.high


def test_without_gas_before_inoculation_rq_is_unusable(
    rates: Callable[..., CultivationRates],
) -> None:
    result = rates(before=0.0)
    (phase,) = result.phases

    assert phase.rq is not None
    assert not phase.rq.usable
    assert "ratio-unusable" in [d.name.value for d in result.diagnostics]


def test_a_drift_before_inoculation_is_told_and_widens_the_error(
    rates: Callable[..., CultivationRates],
) -> None:
    """0.1 % points in an hour are more than 0.05."""
    still, drifting = rates(), rates(drift=0.001)

    assert "analyser-drifts" in [d.name.value for d in drifting.diagnostics]
    assert "analyser-drifts" not in [d.name.value for d in still.diagnostics]
    assert drifting.phases[0].find("oxygen").sd > 5 * still.phases[0].find("oxygen").sd


def test_carbon_dioxide_held_as_bicarbonate_is_counted_within_two_per_cent(
    rates: Callable[..., CultivationRates],
) -> None:
    """pH 7.0, 30 °C: left out it would cost more than 2 %."""
    held = held_per_fraction(1.01325, 7.0, 30.0, 0.1)
    settings = (Setting(SettingKind.PH, 7.0, "1"), AT_30)
    line = rates(settings, held=held).phases[0].find("CO2")

    assert line.value == pytest.approx(4.818, rel=0.02)
    way = line.way(Method.UNHELD)
    assert way.value < 0.98 * 4.818


def test_oxygen_and_carbon_dioxide_share_the_error_of_the_flow(
    rates: Callable[..., CultivationRates],
) -> None:
    (phase,) = rates().phases
    names = [r.quantity.name for r in phase.lines]
    i, j = names.index("oxygen"), names.index("CO2")

    assert phase.covariance[i, j] < 0
    assert phase.run.covariance[i, j] > 0


def test_a_late_analyser_is_moved_back(
    simulated: Callable[..., object], measured: Callable[..., Cultivation],
    gassed: Callable[..., tuple],
) -> None:  # fmt: skip
    truth = simulated(np.linspace(0.0, 10.0, 11))
    late = tuple(
        replace(s, time=s.time + 0.2) if s.kind is SeriesKind.GAS_OUT else s
        for s in gassed(truth, None)
    )
    blind, told = (
        rates_of(measured(truth, None, extra=late, settings=s), phases=WHOLE).phases[0]
        for s in ((), (Setting(SettingKind.LAG, 0.2, "h"),))
    )

    assert told.find("oxygen").value == pytest.approx(-4.209, rel=0.003)
    assert abs(blind.find("oxygen").value + 4.209) > 0.05 * 4.209


def test_ethanol_carried_away_by_the_gas_stands_beside_the_rate_without(
    simulated: Callable[..., object], measured: Callable[..., Cultivation],
    gassed: Callable[..., tuple],
) -> None:  # fmt: skip
    """400 mmol/L and 2.677 mol/h of gas at 30 °C: 0.3 % of it is ethanol, 8 mmol/h."""
    truth = simulated(np.linspace(0.0, 10.0, 11))
    raw = measured(truth, None, extra=gassed(truth, None), settings=(AT_30,))
    renamed = tuple(
        replace(s, name="ethanol", value=s.value * 0 + 400.0) if s.name == "acetate" else s
        for s in raw.series
    )
    (phase,) = rates_of(replace(raw, series=renamed), phases=WHOLE).phases
    line = phase.find("ethanol")

    assert line.way(Method.UNSTRIPPED).value == pytest.approx(0.0, abs=1e-6)
    assert line.value > 0
    assert dict(line.shares)["loss of ethanol with the gas"] > 0.01
