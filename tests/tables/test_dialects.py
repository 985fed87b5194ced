"""One cultivation in nineteen dialects gives one table."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from fluxnet.rates.cultivation import Cultivation, Form, Mode, SeriesKind, SettingKind
from fluxnet.tables.cultivation_tables import read_cultivation

HERE = Path(__file__).resolve().parent / "dialects"
PATHS = sorted(p for p in HERE.iterdir() if p.name[:1].isdigit())

K = SeriesKind
TIMES = [0.0, 2.5, 13.25, 25.75, 37.0]
NORMAL = 1.01325 / (0.0831446261815324 * 273.15)  # mol in a litre at 0 °C
TRUTH = {
    (K.OPTICAL_DENSITY, "biomass", "1"): [0.25, 0.75, 3.5, 8.25, 12.5],
    (K.DRY_WEIGHT, "biomass", "g/L"): [0.1, 0.3, 1.4, 3.3, 5.0],
    (K.CONCENTRATION, "glucose", "mmol/L"): [
        x / 0.180156 for x in (20.0, 19.25, 15.5, 8.75, 1.25)
    ],
    (K.CONCENTRATION, "ethanol", "mmol/L"): [x / 0.046069 for x in (0.05, 1.5, 4.75)],
    (K.BASE, "base", "L"): [1.0125, 1.01375, 1.01925, 1.0315, 1.044],
    (K.GAS_OUT, "oxygen", "mol/mol"): [0.2095, 0.208, 0.202, 0.195, 0.1905],
    (K.GAS_OUT, "CO2", "mol/mol"): [0.0004, 0.0019, 0.0078, 0.0145, 0.019],
    (K.GAS_FLOW, "", "mol/h"): [x * NORMAL for x in (60.0, 60.0, 60.0, 62.5, 62.5)],
}  # fmt: skip


def read(path: Path) -> Cultivation:
    reading = read_cultivation(path)
    told = [f"{d.name.value}: {d.message}" for d in reading.diagnostics]
    assert len(reading.cultivations) == 1, told
    assert {d.severity.value for d in reading.diagnostics} <= {"note"}, told
    return reading.cultivations[0]


def test_there_are_at_least_fourteen_dialects() -> None:
    assert len(PATHS) >= 14


@pytest.mark.parametrize("path", PATHS, ids=lambda p: p.name)
def test_every_dialect_gives_the_same_table(path: Path) -> None:
    raw = read(path)

    assert raw.mode is Mode.BATCH
    assert {(s.kind, s.name, s.unit) for s in raw.series} == set(TRUTH)
    for series in raw.series:
        expected = TRUTH[(series.kind, series.name, series.unit)]
        times = [0.0, 13.25, 37.0] if series.name == "ethanol" else TIMES
        np.testing.assert_allclose(series.time, times, rtol=0, atol=1e-8)
        np.testing.assert_allclose(series.value, expected, rtol=1e-12)
        assert series.form is (Form.TOTAL if series.kind is K.BASE else Form.STATE)
        assert len(series.places) == len(times)


@pytest.mark.parametrize("path", PATHS, ids=lambda p: p.name)
def test_every_dialect_keeps_limits_gaps_and_settings(path: Path) -> None:
    raw = read(path)
    ethanol = raw.find(K.CONCENTRATION, "ethanol")
    volume, inlet = raw.setting(SettingKind.VOLUME), raw.setting(SettingKind.INLET, "CO2")

    assert ethanol is not None
    assert ethanol.below is not None
    assert ethanol.below.tolist() == [True, False, False]
    assert sorted(d.what_was_done for d in raw.doubtful) == [
        "blank: not measured", "kept as an upper limit", "taken as not measured",
    ]  # fmt: skip
    assert volume is not None
    assert inlet is not None
    assert (volume.value, volume.unit) == (1.5, "L")
    assert inlet.value == pytest.approx(0.0004, rel=1e-12)


@pytest.mark.parametrize("path", PATHS, ids=lambda p: p.name)
def test_what_was_understood_stands_in_three_lines(path: Path) -> None:
    first, second, third = read(path).understood

    assert first.startswith("read: ")
    assert second.startswith("time: ")
    assert second.endswith("0 to 37 h; batch")
    assert "glucose" in third


def test_the_files_are_what_the_script_writes(tmp_path: Path, monkeypatch: object) -> None:
    import importlib.util

    spec = importlib.util.spec_from_file_location("make", HERE / "make.py")
    assert spec is not None
    assert spec.loader is not None
    make = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(make)
    make.HERE = tmp_path
    for dialect in make.DIALECTS:
        dialect()
    for path in tmp_path.rglob("*"):
        if path.is_file() and path.suffix != ".xlsx":  # xlsx holds the version of its writer
            assert path.read_bytes() == (HERE / path.relative_to(tmp_path)).read_bytes(), path.name
