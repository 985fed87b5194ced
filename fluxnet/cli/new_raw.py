"""Templates for raw data: for each mode a folder of small tables with invented numbers."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from math import exp, sin

from fluxnet.rates.cultivation import Mode

__all__ = ["raw_files"]

# invented: what the cells of the example of a rates table do [1/h; mmol/g/h]
_MU, _GLUCOSE, _ETHANOL, _OXYGEN, _CO2 = 0.172, 2.05, 0.58, 3.60, 4.40
_GLUCOSE_MASS, _ETHANOL_MASS = 0.180156, 0.046069
_AIR_O2, _AIR_CO2 = 0.2095, 0.0004
_NORMAL_LITRES = 22.414
_LOST = 0.02
"""Part of the ethanol that the gas carries away in an hour."""

_STRONG, _THIN = 400.0, 20.0
"""Glucose in the feed of a fed-batch and of a chemostat [g/L]."""

_PHASE = {Mode.CHEMOSTAT: "steady state", Mode.BATCH: "growth", Mode.FED_BATCH: "feed"}
_HOURS = {Mode.CHEMOSTAT: (40, 80, 5), Mode.BATCH: (0, 14, 1), Mode.FED_BATCH: (0, 10, 1)}


def raw_files(mode: Mode) -> dict[str, str]:
    """The files of a folder that ``fluxnet rates`` reads as it stands.

    Examples
    --------
    >>> list(raw_files(Mode.BATCH))
    ['run-sheet.csv', 'phases.csv', 'samples.csv', 'off-gas.csv', 'base.csv']
    """
    start, end, step = _HOURS[mode]
    times = [float(t) for t in range(start, end + 1, step)]
    files = {
        "run-sheet.csv": _run_sheet(mode),
        "phases.csv": _table([("phase", "start", "end"), (_PHASE[mode], start, end)]),
        "samples.csv": _samples(mode, times),
        "off-gas.csv": _off_gas(mode, end),
        "base.csv": _totals(mode, "base", end),
    }
    if mode is Mode.FED_BATCH:
        files["feed.csv"] = _totals(mode, "feed", end)
    return files


def _run_sheet(mode: Mode) -> str:
    rows: list[Sequence[object]] = [
        ("setting", "value", "unit", "sd"),
        ("mode", mode.value, "", ""),
        ("volume", 1.0, "L", 0.005),
        ("temperature", 30, "°C", ""),
        ("pH", 5.0, "", ""),
        ("gas flow", 1.0, "NL/min", "2 %"),
        ("condenser temperature", 8, "°C", ""),
    ]
    if mode is Mode.CHEMOSTAT:
        rows += [("feed flow", f"{_MU - _base_flow(mode):.4f}", "L/h", 0.002)]
    if mode is not Mode.BATCH:
        strength = _THIN if mode is Mode.CHEMOSTAT else _STRONG
        rows += [("glucose in feed", strength, "g/L", f"{strength / 100:g}")]
    return _table(rows)


def _cells(mode: Mode, time: float) -> float:
    """Grams of cells in the vessel."""
    if mode is Mode.CHEMOSTAT:
        return (_MU * _THIN) / (_GLUCOSE * _GLUCOSE_MASS)
    return (0.3 if mode is Mode.BATCH else 3.0) * exp(_MU * time)


def _grown(mode: Mode, time: float) -> float:
    """The integral of the cells [g h]."""
    if mode is Mode.CHEMOSTAT:
        return _cells(mode, time) * time
    return (_cells(mode, time) - _cells(mode, 0.0)) / _MU


def _ethanol(mode: Mode, time: float) -> float:
    """Ethanol in the vessel [mmol]: what was made, less what left with the broth or the gas."""
    made = _ETHANOL * _cells(mode, 0.0) / (_MU + _LOST)
    return made if mode is Mode.CHEMOSTAT else made * (exp(_MU * time) - exp(-_LOST * time))


def _base_flow(mode: Mode) -> float:
    return 0.5e-3 * _cells(mode, 0.0)


def _volume(mode: Mode, time: float) -> float:
    if mode is Mode.CHEMOSTAT:
        return 1.0
    return 1.0 + _moved(mode, "base", time) + _moved(mode, "feed", time)


def _moved(mode: Mode, stream: str, time: float) -> float:
    """Litres of a stream until a time."""
    if stream == "base":
        return 0.5e-3 * _grown(mode, time)
    if mode is not Mode.FED_BATCH:
        return 0.0
    return _GLUCOSE * _GLUCOSE_MASS * _grown(mode, time) / _STRONG


def _samples(mode: Mode, times: Iterable[float]) -> str:
    rows: list[Sequence[object]] = [
        ("time", "dry weight", "glucose", "ethanol"), ("h", "g/L", "g/L", "g/L"),
    ]  # fmt: skip
    for k, t in enumerate(times):
        off = 1 + 0.02 * sin(5.0 * k + 1)  # errors, the same in every template
        volume, done = _volume(mode, t), _grown(mode, t)
        if mode is Mode.CHEMOSTAT:
            glucose = 0.05
        else:
            used = 0.0 if mode is Mode.FED_BATCH else _GLUCOSE * _GLUCOSE_MASS * done
            glucose = ((20.0 if mode is Mode.BATCH else 1.0) - used) / volume
        ethanol = _ETHANOL_MASS * _ethanol(mode, t) / volume
        weight = _cells(mode, t) / volume * off
        rows.append((f"{t:g}", f"{weight:.3f}", f"{glucose:.3f}", f"{ethanol:.3f}"))
    return _table(rows)


def _off_gas(mode: Mode, end: int) -> str:
    rows: list[Sequence[object]] = [("time [h]", "O2 out [%]", "CO2 out [%]")]
    flow = 60 / _NORMAL_LITRES * 1000  # mmol/h
    for k in range(-10, 10 * end + 1):
        cells = _cells(mode, k / 10) if k >= 0 else 0.0
        leaves = flow + (_CO2 - _OXYGEN) * cells
        oxygen = (flow * _AIR_O2 - _OXYGEN * cells) / leaves + 2e-5 * sin(7.0 * k)
        carbon = (flow * _AIR_CO2 + _CO2 * cells) / leaves + 1e-5 * sin(3.0 * k)
        rows.append((f"{k / 10:g}", f"{100 * oxygen:.3f}", f"{100 * carbon:.3f}"))
    return _table(rows)


def _totals(mode: Mode, stream: str, end: int) -> str:
    rows: list[Sequence[object]] = [("time [h]", f"{stream} total [mL]")]
    rows += [(t, f"{1000 * _moved(mode, stream, t):.1f}") for t in range(end + 1)]
    return _table(rows)


def _table(rows: Iterable[Sequence[object]]) -> str:
    return "".join(",".join(str(cell) for cell in row) + "\n" for row in rows)
