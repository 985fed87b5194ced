"""From a cultivation's gas series and settings to its gas line, with what was assumed."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from fluxnet.chemistry.catalogue import find_compound
from fluxnet.chemistry.gas import AIR_CO2, AIR_O2, ATMOSPHERE, litres_to_moles, water_fraction
from fluxnet.cultivation.gas import at_pressure
from fluxnet.cultivation.gas_line import DRIFT, FLOW_SD, Analyser, GasLine, read_analyser
from fluxnet.cultivation.result import Assumption, Origin
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.rates.cultivation import Cultivation, Series, SeriesKind, SettingKind

__all__ = ["catalogue_name", "read_gas_line"]

Array = NDArray[np.float64]

_AIR = {"oxygen": AIR_O2, "CO2": AIR_CO2}
_INERT = {"N2": 0.7809, "argon": 0.0093, "Ar": 0.0093}
"""What a mass spectrometer shows of air beside them (handbook, from memory)."""


def catalogue_name(name: str) -> str:
    """A species by its name in the catalogue where that knows it: ``O2`` is ``oxygen``."""
    compound = find_compound(name)
    return name if compound is None else compound.name


def read_gas_line(
    raw: Cultivation, told: list[Assumption], faults: list[Diagnostic]
) -> GasLine | None:
    """The gas line, or None where there is none or it cannot be used; both lists are added to."""
    series = {catalogue_name(s.name): s for s in raw.of_kind(SeriesKind.GAS_OUT)}
    if raw.find(SeriesKind.GAS_FLOW_OUT) is None:
        for name in [n for n in series if n in _INERT]:
            told.append(Assumption(f"{name} in the gas", "inert", Origin.ASSUMED,
                                   "it counts only where the outlet flow is measured too"))
            del series[name]
    if not series:
        return None
    before = len(faults)
    for one in series.values():
        wrong = np.flatnonzero((one.value < -0.005) | (one.value > 1.0))
        if wrong.size:
            faults.append(Diagnostic(
                Name.IMPOSSIBLE_GAS,
                f"{one.title} is {one.value[wrong[0]]:g} mol/mol at {one.time[wrong[0]]:g} h "
                f"({one.place(int(wrong[0]))}), and {wrong.size} readings are like that",
            ))  # fmt: skip
    flow = _flow(raw, SeriesKind.GAS_FLOW, told, faults)
    if len(faults) > before or flow is None:
        return None
    bar = _number(raw, SettingKind.PRESSURE, ATMOSPHERE, "bar", told)
    water = _water(raw, bar, told)
    lag = _number(raw, SettingKind.LAG, 0.0, "h", told)
    analysers: list[Analyser] = []
    for name, one in series.items():
        inlet = _inlet(raw, name, told)
        own_inlet = any(catalogue_name(s.name) == name for s in raw.of_kind(SeriesKind.GAS_IN))
        analyser = read_analyser(
            _pressed(raw, one), name, inlet, water, lag, same_analyser=own_inlet
        )
        analysers.append(analyser)
        _tell_analyser(analyser, one, told, faults)
    for name in ("oxygen", "CO2"):
        if name not in series:
            told.append(Assumption(
                f"{name} in the gas", "taken as inert", Origin.ASSUMED,
                "it was not measured, so it has no rate from the gas",
            ))  # fmt: skip
    if raw.find(SeriesKind.GAS_FLOW_OUT) is None:
        others = ", ".join(n for n in series if n not in _AIR)
        inert = f"all but {', '.join(series)}"
        faults.append(Diagnostic(
            Name.GAS_TAKEN_AS_INERT,
            f"the outlet flow is reckoned from {inert} being inert"
            + (f"; {others} is measured" if others else ""),
        ))  # fmt: skip
        told.append(Assumption("inert gas", inert, Origin.ASSUMED,
                               "hydrogen or methane made, or N2 taken up, would spoil the balance"))
    longest = max(analysers, key=lambda a: a.time.size)
    inside = longest.time >= 0.0
    grid = longest.time[inside] if inside.any() else longest.time
    fractions = {a.name: np.interp(grid, a.time, a.value) for a in analysers}
    out = _flow(raw, SeriesKind.GAS_FLOW_OUT, told, faults)
    flow_in, sd = flow
    return GasLine(
        time=grid,
        flow_in=_at(flow_in, grid),
        flow_sd=sd,
        flow_out=None if out is None else _at(out[0], grid),
        flow_out_sd=0.0 if out is None else out[1],
        analysers=tuple(analysers),
        fractions=fractions,
        bar=bar,
    )


def _at(flow: Series | float, grid: Array) -> Array:
    if isinstance(flow, float):
        return np.full(grid.size, flow)
    return np.asarray(np.interp(grid, flow.time, flow.value))


def _flow(
    raw: Cultivation, kind: SeriesKind, told: list[Assumption], faults: list[Diagnostic]
) -> tuple[Series | float, float] | None:
    """The dry flow in mol/h as a series or one number, with its relative sd."""
    series = raw.find(kind)
    setting = raw.setting(SettingKind.GAS_FLOW) if kind is SeriesKind.GAS_FLOW else None
    if series is None and setting is None:
        if kind is SeriesKind.GAS_FLOW:
            faults.append(Diagnostic(
                Name.STREAM_IMPOSSIBLE, "gas fractions are given, and no gas flow",
                mend="give the inlet flow as a column or a setting",
            ))  # fmt: skip
        return None
    unit = series.unit if series is not None else setting.unit if setting is not None else ""
    factor = 1.0
    if unit != "mol/h":
        reference = raw.setting(SettingKind.REFERENCE)
        if reference is None:
            place = series.place(0) if series is not None else setting.place if setting else ""
            faults.append(Diagnostic(
                Name.FLOW_WITHOUT_REFERENCE,
                f"the gas flow in {unit} ({place or kind.value}) has no reference temperature: "
                "7.3 % are at stake between litres at 0 °C and at 20 °C",
                mend="write NL/h for litres at 0 °C, or give the reference temperature",
            ))  # fmt: skip
            return None
        factor = litres_to_moles(1.0, reference.value)
        at = f"{reference.value:g} °C, 1.01325 bar"
        told.append(Assumption("litres of gas", at, Origin.GIVEN))
    humidity = raw.setting(SettingKind.HUMIDITY_IN)
    if humidity is not None and kind is SeriesKind.GAS_FLOW:
        factor *= 1.0 - water_fraction(20.0, humidity=humidity.value)
        told.append(Assumption("water in the inlet gas", "by its humidity at 20 °C", Origin.GIVEN))
    elif kind is SeriesKind.GAS_FLOW:
        told.append(Assumption("water in the inlet gas", "none", Origin.ASSUMED))
    sd = _flow_sd(series, setting.sd if setting else None, setting.value if setting else 0.0)
    if sd is None:
        sd = FLOW_SD
        told.append(Assumption(f"sd of the {kind.value}", f"{sd:.1%}", Origin.ASSUMED,
                               "usual for a thermal mass-flow controller"))  # fmt: skip
    if series is not None:
        return replace(series, value=series.value * factor, unit="mol/h"), sd
    assert setting is not None
    return float(setting.value * factor), sd


def _flow_sd(series: Series | None, sd: float | None, value: float) -> float | None:
    if series is not None:
        return series.common
    return None if sd is None or not value else sd / value


def _number(
    raw: Cultivation, kind: SettingKind, usual: float, unit: str, told: list[Assumption]
) -> float:
    found = raw.setting(kind)
    value = usual if found is None else found.value
    origin = Origin.ASSUMED if found is None else Origin.GIVEN
    told.append(Assumption(kind.value, f"{value:g} {unit}", origin))
    return value


def _water(raw: Cultivation, bar: float, told: list[Assumption]) -> float:
    """Moles of water in a mole of gas at the analyser."""
    humidity = raw.setting(SettingKind.HUMIDITY_OUT)
    if humidity is None:
        told.append(Assumption("water at the analyser", "none", Origin.ASSUMED, "dried before it"))
        return 0.0
    cooled = raw.setting(SettingKind.CONDENSER) or raw.setting(SettingKind.TEMPERATURE)
    celsius = 20.0 if cooled is None else cooled.value
    water = water_fraction(celsius, ATMOSPHERE, humidity.value)
    told.append(Assumption("water at the analyser", f"{100 * water:.2f} % at {celsius:g} °C",
                           Origin.GIVEN if cooled is not None else Origin.ASSUMED))  # fmt: skip
    return water


def _inlet(raw: Cultivation, name: str, told: list[Assumption]) -> float:
    series = next(
        (s for s in raw.of_kind(SeriesKind.GAS_IN) if catalogue_name(s.name) == name), None
    )
    if series is not None:
        value, origin = float(series.value.mean()), Origin.FOUND
    else:
        setting = next((s for s in raw.settings if s.kind is SettingKind.INLET
                        and catalogue_name(s.of) == name), None)  # fmt: skip
        value = {**_AIR, **_INERT}.get(name, 0.0) if setting is None else setting.value
        origin = Origin.ASSUMED if setting is None else Origin.GIVEN
    told.append(Assumption(f"{name} in the inlet gas", f"{100 * value:.2f} %", origin,
                           "dry air" if origin is Origin.ASSUMED and name in _AIR else ""))
    return value


def _pressed(raw: Cultivation, series: Series) -> Series:
    """Readings of an analyser whose pressure was measured, at the pressure of its calibration."""
    pressure = raw.find(SeriesKind.PRESSURE, "analyser")
    if pressure is None:
        return series
    at = np.interp(series.time, pressure.time, pressure.value)
    return replace(series, value=at_pressure(series.value, at, float(pressure.value[0])))


def _tell_analyser(
    one: Analyser, series: Series, told: list[Assumption], faults: list[Diagnostic]
) -> None:
    origin = Origin.ASSUMED if series.common is None else Origin.GIVEN
    if one.stretch is None and one.span:
        told.append(Assumption(
            f"{one.name} analyser", f"span ± {one.span:.1%}", origin,
            "it read the inlet gas as well, so only the difference is uncertain",
        ))  # fmt: skip
        return
    if one.stretch is None:
        told.append(Assumption(
            f"{one.name} analyser", f"± {100 * one.offset_sd:.2f} % points, all readings alike",
            origin, "no stretch before inoculation shows the inlet gas, so the whole calibration "
            "counts",
        ))  # fmt: skip
        return
    told.append(Assumption(
        f"{one.name} analyser",
        f"set to the inlet by {100 * -one.offset:+.3f} % points; span ± {one.span:.1%}",
        origin, f"readings from {one.stretch[0]:.2g} to {one.stretch[1]:.2g} h see the inlet gas",
    ))  # fmt: skip
    if one.drifts and one.drift is not None:
        faults.append(Diagnostic(
            Name.ANALYSER_DRIFTS,
            f"the {one.name} analyser drifted by {100 * one.drifted:+.3f} % points before "
            f"inoculation (more than {100 * DRIFT:g}); its errors grow as if it went on",
        ))  # fmt: skip
