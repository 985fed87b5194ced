"""Raw data that make no rate, or one that needs a warning, are told by name."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest

from fluxnet.cultivation.reckoning import rates_of
from fluxnet.ground.names import Name, Severity
from fluxnet.rates.cultivation import (
    CalibrationPoint,
    Cultivation,
    Form,
    Mode,
    Phase,
    Series,
    SeriesKind,
    Setting,
    SettingKind,
    make_series,
)

TIME = np.linspace(0.0, 10.0, 11)
WHOLE = (Phase("growth", 0.0, 10.0),)
Change = Callable[[Cultivation], Cultivation]


def without(kind: SeriesKind) -> Change:
    return lambda raw: replace(raw, series=tuple(s for s in raw.series if s.kind is not kind))


def changed(kind: SeriesKind, name: str, change: Callable[[Series], Series]) -> Change:
    return lambda raw: replace(raw, series=tuple(
        change(s) if s.kind is kind and s.name == name else s for s in raw.series
    ))  # fmt: skip


def added(*series: Series) -> Change:
    return lambda raw: replace(raw, series=(*raw.series, *series))


def _by_density(raw: Cultivation) -> Cultivation:
    weights = raw.find(SeriesKind.DRY_WEIGHT)
    assert weights is not None
    density = make_series(SeriesKind.OPTICAL_DENSITY, "biomass", "1", TIME, weights.value / 0.4)
    points = tuple(CalibrationPoint(d, 0.4 * d) for d in (1.0, 2.0, 4.0, 8.0))
    series = tuple(s for s in raw.series if s.kind is not SeriesKind.DRY_WEIGHT)
    return replace(raw, series=(*series, density), calibration=points)


FALLS = make_series(
    SeriesKind.BASE, "base", "L", TIME, [0, 1, 2, 3, 4, 0, 1, 2, 3, 4, 5], form=Form.TOTAL
)
CASES: dict[Name, Change] = {
    Name.NO_BIOMASS_DATA: without(SeriesKind.DRY_WEIGHT),
    Name.BROTH_UNKNOWN: lambda raw: replace(raw, settings=()),
    Name.FLOW_WITHOUT_REFERENCE: changed(
        SeriesKind.GAS_FLOW, "", lambda s: replace(s, unit="L/h", places=("gas.csv!C2",))
    ),
    Name.IMPOSSIBLE_GAS: changed(
        SeriesKind.GAS_OUT, "O2", lambda s: replace(s, value=100 * s.value)
    ),
    Name.PHASE_WITHOUT_SAMPLES: lambda raw: replace(raw, phases=(Phase("late", 9.5, 10.0),)),
    Name.STREAM_IMPOSSIBLE: added(
        make_series(SeriesKind.EVAPORATION, "", "L/h", [0.0], [0.2], form=Form.RATE)
    ),
    Name.BEYOND_CALIBRATION: _by_density,
    Name.TOTALISER_RESET: added(replace(FALLS, value=FALLS.value / 100)),
    Name.RATE_NOT_CONSTANT: changed(
        SeriesKind.CONCENTRATION, "glucose", lambda s: replace(s, sd=s.sd / 100)
    ),
    Name.BROTH_NOT_CLOSED: added(make_series(SeriesKind.BROTH, "", "L", [0, 10], [1.0, 0.8])),
    Name.GAS_TAKEN_AS_INERT: lambda raw: raw,
    Name.SPECIES_UNKNOWN: changed(
        SeriesKind.CONCENTRATION, "acetate", lambda s: replace(s, name="goo", unit="g/L")
    ),
}


@pytest.fixture
def raw(
    simulated: Callable[..., object], measured: Callable[..., Cultivation],
    gassed: Callable[..., tuple],
) -> Cultivation:  # fmt: skip
    truth, generator = simulated(TIME), np.random.default_rng(6)
    return measured(truth, generator, extra=gassed(truth, generator), mode=Mode.BATCH)


@pytest.mark.parametrize("name", CASES, ids=lambda n: n.value)
def test_a_fault_of_raw_data_is_told_by_its_name(name: Name, raw: Cultivation) -> None:
    faulty = CASES[name](raw)
    result = rates_of(faulty, phases=faulty.phases or WHOLE)
    found = [d for d in result.diagnostics if d.name is name]

    assert len(found) == 1, [str(d) for d in result.diagnostics]
    if name.severity is Severity.ERROR:
        assert result.phases == ()
    sound = rates_of(raw, phases=WHOLE).diagnostics
    assert name is Name.GAS_TAKEN_AS_INERT or name not in [d.name for d in sound]


def test_a_flow_without_a_reference_state_says_what_is_at_stake(raw: Cultivation) -> None:
    faulty = CASES[Name.FLOW_WITHOUT_REFERENCE](raw)
    (found,) = [
        d for d in rates_of(faulty).diagnostics if d.name is Name.FLOW_WITHOUT_REFERENCE
    ]

    assert "7.3 %" in found.message
    assert "gas.csv!C2" in found.message
    given = replace(
        faulty, settings=(*faulty.settings, Setting(SettingKind.REFERENCE, 0.0, "°C"))
    )
    assert rates_of(given, phases=WHOLE).phases


def test_other_warnings_are_shown_by_the_tests_of_their_modes() -> None:
    """Name.NOT_STEADY in test_chemostat; Name.RATIO_UNUSABLE and Name.ANALYSER_DRIFTS in
    test_gas_reading: by their names in words."""
    from pathlib import Path

    here = Path(__file__).parent
    for name, file in ((Name.NOT_STEADY, "test_chemostat.py"),
                       (Name.RATIO_UNUSABLE, "test_gas_reading.py"),
                       (Name.ANALYSER_DRIFTS, "test_gas_reading.py")):  # fmt: skip
        assert f'"{name.value}"' in (here / file).read_text("utf-8")


def test_samples_from_before_inoculation_are_left_out_and_told(raw: Cultivation) -> None:
    early = changed(
        SeriesKind.CONCENTRATION, "glucose",
        lambda s: replace(
            s, time=np.r_[-1.0, s.time], value=np.r_[500.0, s.value], sd=np.r_[1.0, s.sd]
        ),
    )(raw)  # fmt: skip
    plain, other = (rates_of(r, phases=WHOLE) for r in (raw, early))

    assert other.phases[0].find("glucose").value == plain.phases[0].find("glucose").value
    assert any("before inoculation" in a.what for a in other.assumptions)
