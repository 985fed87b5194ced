"""The streams of a cultivation in the unit of its account: what flows, and what it holds."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from fluxnet.chemistry.formula import molar_mass
from fluxnet.chemistry.gas import ATMOSPHERE, water_fraction
from fluxnet.cultivation.broth_state import Content
from fluxnet.cultivation.gas import inert_balance
from fluxnet.cultivation.gas_amounts import integration
from fluxnet.cultivation.gas_line import GasLine
from fluxnet.cultivation.result import Assumption, Origin
from fluxnet.cultivation.samples import formula_of, own_name
from fluxnet.cultivation.volumes import PUMP_SD, WATER, Flow, read_flow, resets
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.network.model import Network
from fluxnet.rates.cultivation import (
    Cultivation,
    Form,
    Series,
    SeriesKind,
    Setting,
    SettingKind,
    make_series,
)

__all__ = [
    "broth_density", "counts_mass", "gas_weight", "read_contents", "read_streams", "start_of",
]  # fmt: skip

Array = NDArray[np.float64]

_CONTENT_SD = 0.01
"""Relative sd of what a feed or base holds, weighed in (assumed)."""

_EVAPORATION_SD = 0.2
_START_SD = 0.005
"""Relative sd of the broth at inoculation (assumed)."""

_WATER_KG = 0.018015


def counts_mass(raw: Cultivation) -> bool:
    """Whether amounts are per kilogram of broth: as most of the samples are."""
    kinds = (SeriesKind.CONCENTRATION, SeriesKind.DRY_WEIGHT)
    units = [s.unit for s in raw.series if s.kind in kinds]
    return 2 * sum(u.endswith("/kg") for u in units) > len(units)


def broth_density(raw: Cultivation, told: list[Assumption]) -> float:
    """kg/L of the broth; 1 where none is given."""
    found = raw.setting(SettingKind.DENSITY)
    value = 1.0 if found is None else found.value
    told.append(Assumption("density of the broth", f"{value:g} kg/L",
                           Origin.ASSUMED if found is None else Origin.GIVEN))  # fmt: skip
    return value


def start_of(
    raw: Cultivation, *, by_mass: bool, density: float, told: list[Assumption],
    faults: list[Diagnostic],
) -> tuple[float, float] | None:
    """Broth at inoculation in the unit of the account, with its sd."""
    for kind in (SettingKind.MASS, SettingKind.VOLUME) if by_mass else (
        SettingKind.VOLUME, SettingKind.MASS
    ):  # fmt: skip
        found = raw.setting(kind)
        if found is not None and found.value > 0:
            factor = _to_account(kind is SettingKind.MASS, by_mass, density)
            sd = _START_SD * found.value if found.sd is None else found.sd
            if found.sd is None:
                told.append(Assumption("sd of the broth at the start", f"{_START_SD:.1%}",
                                       Origin.ASSUMED))  # fmt: skip
            return found.value * factor, sd * factor
    level = raw.find(SeriesKind.BROTH)
    if level is not None:
        factor = _to_account(level.unit == "kg", by_mass, density)
        first = float(np.interp(0.0, level.time, level.value))
        return first * factor, 1e-3 * factor
    faults.append(Diagnostic(
        Name.BROTH_UNKNOWN, "nothing says how much broth there was",
        mend="give the volume [L] or the mass [kg] at inoculation as a setting",
    ))  # fmt: skip
    return None


def _to_account(is_mass: bool, by_mass: bool, density: float) -> float:
    """How much of the account's unit one litre or kilogram of a stream is."""
    if is_mass is by_mass:
        return 1.0
    return density if by_mass else 1.0 / density


def read_streams(
    raw: Cultivation, nodes: Array, line: GasLine | None, *, by_mass: bool, density: float,
    told: list[Assumption], faults: list[Diagnostic],
) -> tuple[Flow, ...]:
    """All streams at the nodes, evaporation reckoned from the gas where nobody measured it."""
    flows: list[Flow] = []
    kinds = {s.kind for s in raw.series}
    for series in (*(s for s in raw.series if s.kind.is_addition or s.kind.is_removal),
                   *_constant(raw, nodes)):  # fmt: skip
        kinds.add(series.kind)
        removes = series.kind in (SeriesKind.SAMPLE, SeriesKind.EFFLUENT)
        usual = density if removes else WATER if series.kind is SeriesKind.EVAPORATION else 1.0
        given = None
        for stream in (series.name, series.kind.value):
            given = given or raw.setting(SettingKind.DENSITY, "", stream)
        value = usual if given is None else given.value
        sd = 0.0 if given is None or given.sd is None else given.sd
        crosses = series.unit.startswith("kg") is not by_mass
        if crosses and series.kind.is_addition:
            origin = Origin.ASSUMED if given is None else Origin.GIVEN
            told.append(Assumption(f"density of {series.title}", f"{value:g} kg/L", origin,
                                   "a concentrated sugar feed can be 1.2 kg/L"
                                   if given is None else ""))  # fmt: skip
            sd = 0.02 if given is None else sd
        whole = _mended(series, faults)
        if series.sd is None and series.common is None:
            error = f"{PUMP_SD:.0%}, all alike" if series.form is Form.RATE else "1 g, or 1 mL"
            told.append(Assumption(f"sd of {series.title}", error, Origin.ASSUMED,
                                   "usual for a pump" if series.form is Form.RATE
                                   else "usual for a balance"))  # fmt: skip
        flow = read_flow(whole, nodes, by_mass=by_mass, density=value, density_sd=sd)
        flows.append(replace(flow, name=_stream_name(series)))
    if SeriesKind.EVAPORATION not in kinds:
        evaporated = _evaporation(raw, nodes, line, by_mass, told)
        flows.extend([] if evaporated is None else [evaporated])
    for kind in (SeriesKind.SAMPLE, SeriesKind.BASE):
        if kind not in kinds:
            told.append(Assumption(f"{kind.value} volume", "none", Origin.ASSUMED, "not given"))
    return tuple(flows)


def _stream_name(series: Series) -> str:
    kind = series.kind.value
    return series.title if kind in series.title else f"{series.title} ({kind})"


def _constant(raw: Cultivation, nodes: Array) -> list[Series]:
    """Flows that were given as one number."""
    found: list[Series] = []
    for setting in raw.settings:
        if setting.kind is SettingKind.FLOW:
            kind = next(
                (k for k in SeriesKind if k.value == setting.stream.split()[0]), SeriesKind.FEED
            )
            common = None if setting.sd is None else setting.sd / setting.value
            found.append(make_series(
                kind, setting.stream, setting.unit, [min(0.0, float(nodes[0]))], [setting.value],
                form=Form.RATE, common=common, places=(setting.place,) if setting.place else (),
            ))  # fmt: skip
    return found


def _mended(series: Series, faults: list[Diagnostic]) -> Series:
    """A total that goes on where it was set back."""
    places = resets(series)
    if not places.size:
        return series
    value = series.value.copy()
    for place in places:
        value[place:] += value[place - 1] - value[place]
        faults.append(Diagnostic(
            Name.TOTALISER_RESET,
            f"the total of {series.title} falls from {series.value[place - 1]:g} to "
            f"{series.value[place]:g} {series.unit} at {series.time[place]:g} h "
            f"({series.place(int(place))}); it goes on from there",
        ))  # fmt: skip
    return replace(series, value=value)


def _evaporation(
    raw: Cultivation, nodes: Array, line: GasLine | None, by_mass: bool, told: list[Assumption]
) -> Flow | None:
    condenser = raw.setting(SettingKind.CONDENSER)
    if line is None or condenser is None:
        told.append(Assumption("evaporation", "none", Origin.ASSUMED,
                               "not given; usually 10 to 20 % of the broth in a week"))  # fmt: skip
        return None
    wet = water_fraction(condenser.value, line.bar or ATMOSPHERE)
    gas = integration(line.time, nodes) @ line.flow_in
    total = gas * wet / (1 - wet) * _WATER_KG / (1.0 if by_mass else WATER)
    told.append(Assumption(
        "evaporation", f"{total[-1]:.3g} {'kg' if by_mass else 'L'} ± 20 %", Origin.ASSUMED,
        f"gas leaves moist at {condenser.value:g} °C, and comes in dry",
    ))  # fmt: skip
    half = np.full(max(nodes.size - 1, 0), 0.5)
    return Flow("evaporation", SeriesKind.EVAPORATION, total, np.zeros(nodes.size),
                _EVAPORATION_SD * total, half)  # fmt: skip


def gas_weight(line: GasLine, nodes: Array) -> Flow:
    """What the broth loses in weight through the gas: CO2 given off less oxygen taken up [kg]."""
    inlet: dict[str, Array | float] = {"oxygen": 0.0, "CO2": 0.0}
    outlet: dict[str, Array | float] = {"oxygen": 0.0, "CO2": 0.0}
    for one in line.analysers:
        inlet[one.name], outlet[one.name] = one.inlet, line.fractions[one.name]
    rates = inert_balance(line.flow_in, inlet, outlet, line.flow_out)
    weight = 0.04401 * rates.released["CO2"] - 0.031998 * rates.uptake
    total = integration(line.time, nodes) @ np.broadcast_to(weight, line.time.shape)
    half = np.full(max(nodes.size - 1, 0), 0.5)
    return Flow("CO2 less oxygen (gas)", SeriesKind.EVAPORATION, total, np.zeros(nodes.size),
                0.05 * total, half)  # fmt: skip


def read_contents(
    raw: Cultivation, flows: Sequence[Flow], network: Network | None, *, by_mass: bool,
    told: list[Assumption], faults: list[Diagnostic],
) -> tuple[Content, ...]:
    """What feeds and base hold, per unit of the account."""
    found: list[Content] = []
    for setting in raw.settings:
        if setting.kind is not SettingKind.CONTENT:
            continue
        hits = [f for f in flows if setting.stream in (f.name, f.kind.value)
                or f.name.startswith(f"{setting.stream} (")]  # fmt: skip
        if not hits:
            faults.append(Diagnostic(
                Name.STREAM_IMPOSSIBLE,
                f"{setting.of} in {setting.stream} is given, and there is no such stream",
                mend="name one of: " + (", ".join(f.name for f in flows) or "none is there"),
            ))  # fmt: skip
            continue
        value = _content(setting, raw, network, by_mass, faults)
        if value is None:
            continue
        sd = _CONTENT_SD if setting.sd is None or not setting.value else setting.sd / setting.value
        if setting.sd is None:
            told.append(Assumption(f"sd of {setting.of} in {setting.stream}", f"{sd:.0%}",
                                   Origin.ASSUMED))  # fmt: skip
        found.append(Content(own_name(setting.of, network), hits[0].name, value, sd))
    sampled = {own_name(s.name, network) for s in raw.of_kind(SeriesKind.CONCENTRATION)}
    for content in found:
        if content.species not in sampled and content.species != "CO2":
            told.append(Assumption(
                f"{content.species} in {content.stream}", "no rate", Origin.ASSUMED,
                "it is fed, and nobody measured what is left of it in the broth",
            ))  # fmt: skip
    fed = {c.stream for c in found}
    for flow in flows:
        if flow.kind is SeriesKind.FEED and flow.name not in fed:
            faults.append(Diagnostic(
                Name.STREAM_IMPOSSIBLE, f"nothing says what {flow.name} holds",
                mend="give the concentration of each species in it as a setting",
            ))  # fmt: skip
    return tuple(found)


def _content(
    setting: Setting, raw: Cultivation, network: Network | None, by_mass: bool,
    faults: list[Diagnostic],
) -> float | None:
    value = setting.value
    if setting.unit.startswith("g/"):
        formula = formula_of(setting.of, network)
        if formula is None:
            faults.append(Diagnostic(
                Name.SPECIES_UNKNOWN, f"{setting.of} in {setting.stream} is in {setting.unit}, "
                "and nothing says its formula",
            ))  # fmt: skip
            return None
        value *= 1000.0 / molar_mass(formula)
    density = raw.setting(SettingKind.DENSITY, "", setting.stream)
    is_mass = setting.unit.endswith("/kg")
    return value / _to_account(is_mass, by_mass, 1.0 if density is None else density.value)
