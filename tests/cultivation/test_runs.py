"""What comes out is what closure and solve read: runs with names, formulas and covariance."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest

from fluxnet.cultivation.reckoning import rates_of
from fluxnet.rates.covariance import run_covariance
from fluxnet.rates.cultivation import (
    CalibrationPoint,
    Cultivation,
    Form,
    Mode,
    Phase,
    SeriesKind,
    Setting,
    SettingKind,
    make_series,
)
from fluxnet.rates.measured import RatesTable
from fluxnet.studies.closure import close_rates
from fluxnet.tables.rates_table import read_rates_text
from fluxnet.tables.writer import write_covariance_text, write_rates_text

TIME = np.linspace(0.0, 10.0, 11)
WHOLE = [Phase("growth", 0.0, 10.0)]


@pytest.fixture
def raw(
    simulated: Callable[..., object], measured: Callable[..., Cultivation],
    gassed: Callable[..., tuple],
) -> Cultivation:  # fmt: skip
    truth, generator = simulated(TIME), np.random.default_rng(6)
    return measured(truth, generator, common=0.03, extra=gassed(truth, generator))


def written_and_read(table: RatesTable) -> RatesTable:
    reading = read_rates_text(
        write_rates_text(table), covariance=write_covariance_text(table) or None
    )
    assert reading.table is not None, reading.diagnostics
    return reading.table


def rejected(
    count: int, simulated: Callable[..., object], measured: Callable[..., Cultivation],
    gassed: Callable[..., tuple],
) -> int:  # fmt: skip
    """How many of some simulated batches, whose truth balances, closure rejects at 5 %."""
    truth, generator = simulated(TIME), np.random.default_rng(31)
    found = 0
    for _ in range(count):
        span, more, flow = generator.standard_normal(3)
        gas = tuple(
            replace(s, value=s.value * (1 + 0.01 * flow)) if s.kind is SeriesKind.GAS_FLOW
            else replace(s, value=inlet + (s.value - inlet) * (1 + error))
            for s, inlet, error in zip(
                gassed(truth, generator, rows=300), (0.2095, 0.0004, 0.0),
                (0.02 * span, 0.01 * more, 0.0), strict=True,
            )
        )  # fmt: skip
        raw = measured(truth, generator, extra=gas)
        (run,) = close_rates(rates_of(raw, phases=WHOLE).table).runs
        found += not run.is_sound
    return found


def test_rates_of_sound_data_close_as_they_are(
    simulated: Callable[..., object], measured: Callable[..., Cultivation],
    gassed: Callable[..., tuple],
) -> None:  # fmt: skip
    """Two relations are tested; of 12 sound batches more than 3 are rejected once in 500 times."""
    assert rejected(12, simulated, measured, gassed) <= 3


@pytest.mark.slow
def test_closure_rejects_one_in_twenty_of_sound_cultivations(
    simulated: Callable[..., object], measured: Callable[..., Cultivation],
    gassed: Callable[..., tuple],
) -> None:  # fmt: skip
    """20 of 400, give or take 4.4: the errors and their covariance are what they say."""
    assert 8 <= rejected(400, simulated, measured, gassed) <= 33


def test_the_rates_written_as_a_table_are_read_back_with_their_covariance(
    raw: Cultivation,
) -> None:
    table = rates_of(raw, phases=WHOLE).table
    again = written_and_read(table)
    mine, other = table.runs[0], again.runs[0]

    assert [str(r.quantity) for r in other.rates] == [str(r.quantity) for r in mine.rates]
    assert [r.value for r in other.rates] == pytest.approx([r.value for r in mine.rates])
    assert run_covariance(other) == pytest.approx(run_covariance(mine), rel=1e-6, abs=1e-12)


def test_the_slope_of_a_calibration_is_the_error_that_all_specific_rates_share(
    simulated: Callable[..., object], measured: Callable[..., Cultivation]
) -> None:
    truth = simulated(TIME)
    plain = measured(truth, None)
    points = tuple(CalibrationPoint(d, 0.4 * d, 0.016 * d) for d in (1.0, 4.0, 8.0, 16.0))
    density = make_series(SeriesKind.OPTICAL_DENSITY, "biomass", "1", TIME, truth.biomass / 0.4)
    series = tuple(s for s in plain.series if s.kind is not SeriesKind.DRY_WEIGHT)
    dense = replace(plain, series=(*series, density), calibration=points)
    (phase,) = rates_of(dense, phases=WHOLE).phases

    assert phase.run.shared_error == pytest.approx(0.04 / 2, rel=0.01)
    assert phase.find("mu").value == pytest.approx(0.3, rel=1e-6)
    assert phase.find("glucose").value == pytest.approx(-3.2, rel=1e-4)


def test_carbonate_in_the_base_is_not_counted_as_made(
    simulated: Callable[..., object], measured: Callable[..., Cultivation],
    gassed: Callable[..., tuple],
) -> None:  # fmt: skip
    """0.02 L of base with 1 mol/L carbonate: 20 mmol less, over the biomass at work."""
    truth = simulated(TIME)
    base = make_series(SeriesKind.BASE, "base", "L", TIME, 0.002 * TIME, form=Form.TOTAL)
    content = Setting(SettingKind.CONTENT, 1000.0, "mmol/L", of="CO2", stream="base")
    gas = gassed(truth, None)
    kept, less = (
        rates_of(measured(truth, None, extra=(*gas, base), settings=s), phases=WHOLE).phases[0]
        for s in ((), (content,))
    )

    assert kept.find("CO2").total - less.find("CO2").total == pytest.approx(20.0, rel=1e-6)


def test_carbon_is_accounted_for_over_time(raw: Cultivation) -> None:
    """Glucose in; biomass, acetate and CO2 out."""
    account = next(a for a in rates_of(raw, phases=WHOLE).accounts if a.title == "carbon")

    assert account.closure == pytest.approx(1.0, abs=0.06)
    assert account.expected_sd[-1] > 0


def test_a_single_sample_of_a_chemostat_is_a_steady_state() -> None:
    at = np.array([50.0])
    series = (
        make_series(SeriesKind.DRY_WEIGHT, "biomass", "g/L", at, [4.0]),
        make_series(SeriesKind.CONCENTRATION, "glucose", "mmol/L", at, [2.0]),
    )
    settings = (
        Setting(SettingKind.VOLUME, 2.0, "L"), Setting(SettingKind.FLOW, 0.2, "L/h", stream="feed"),
        Setting(SettingKind.CONTENT, 18.0, "g/L", of="glucose", stream="feed"),
    )  # fmt: skip
    result = rates_of(Cultivation("D", Mode.CHEMOSTAT, series, settings))
    (phase,) = result.phases

    assert phase.find("mu").value == pytest.approx(0.1)
    assert phase.find("glucose").value == pytest.approx(
        0.2 * (2.0 - 18000 / 180.156) / 8.0, rel=1e-4
    )
    assert any(a.what == "sd of feed" for a in result.assumptions)
