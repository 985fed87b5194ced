"""All raw data of a cultivation with their errors, in one unit of broth."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from fluxnet.cultivation.broth_state import START, Held, RawData
from fluxnet.cultivation.errors import Block
from fluxnet.cultivation.gas_amounts import held_per_fraction
from fluxnet.cultivation.gas_line import GasLine
from fluxnet.cultivation.gas_reading import read_gas_line
from fluxnet.cultivation.losses import LOSS_SD, stripped_per_mole
from fluxnet.cultivation.result import Assumption, Origin
from fluxnet.cultivation.samples import Sampled, read_biomass, read_species
from fluxnet.cultivation.streams import (
    broth_density,
    counts_mass,
    gas_weight,
    read_contents,
    read_streams,
    start_of,
)
from fluxnet.ground.diagnostic import Diagnostic, has_errors
from fluxnet.ground.names import Name
from fluxnet.network.model import Network
from fluxnet.rates.cultivation import Cultivation, Series, SeriesKind, SettingKind

__all__ = ["assemble", "since_start"]

Array = NDArray[np.float64]

_SAMPLED = (SeriesKind.CONCENTRATION, SeriesKind.DRY_WEIGHT, SeriesKind.OPTICAL_DENSITY)
_IONIC = 0.1
_DECIMALS = 6
"""Of an hour: sample times closer than this are one."""


def since_start(raw: Cultivation, told: list[Assumption]) -> Cultivation:
    """The cultivation without samples from before inoculation; what was left out is told."""
    kept: list[Series] = []
    for series in raw.series:
        early = series.time < -(10.0**-_DECIMALS)
        if series.kind in _SAMPLED and early.any():
            told.append(Assumption(
                f"{series.title} before inoculation", f"{int(early.sum())} samples left out",
                Origin.FOUND, f"the first at {series.time[0]:g} h",
            ))  # fmt: skip
            series = _part(series, ~early)
        kept.append(series)
    return replace(raw, series=tuple(s for s in kept if s.value.size))


def _part(series: Series, mask: NDArray[np.bool_]) -> Series:
    places = series.places
    if len(places) == mask.size > 1:
        places = tuple(p for p, keep in zip(places, mask, strict=True) if keep)
    return replace(
        series, time=series.time[mask], value=series.value[mask], places=places,
        sd=None if series.sd is None else series.sd[mask],
        below=None if series.below is None else series.below[mask],
    )  # fmt: skip


def assemble(
    raw: Cultivation, network: Network | None, told: list[Assumption], faults: list[Diagnostic],
    ends: Array | None = None,
) -> RawData | None:
    """Everything that amounts are reckoned from; None with an error among ``faults``.

    Parameters
    ----------
    ends
        The nodes of the account where they are not the sample times (a steady state).
    """
    by_mass = counts_mass(raw)
    density = broth_density(raw, told)
    start = start_of(raw, by_mass=by_mass, density=density, told=told, faults=faults)
    biomass = read_biomass(raw, by_mass=by_mass, density=density, told=told, faults=faults)
    species = read_species(
        raw, network, by_mass=by_mass, density=density, told=told, faults=faults
    )
    line = read_gas_line(raw, told, faults)
    if start is None or biomass is None or has_errors(faults):
        return None
    grown = _rounded(biomass[0])
    species = tuple(_rounded(s) for s in species)
    nodes = ends
    if nodes is None:
        nodes = np.unique(np.concatenate([[0.0], grown.time, *(s.time for s in species)]))
    if nodes.size < 2:
        faults.append(Diagnostic(
            Name.PHASE_WITHOUT_SAMPLES, "there is one sample, and a rate is a difference over time"
        ))  # fmt: skip
        return None
    flows = read_streams(
        raw, nodes, line, by_mass=by_mass, density=density, told=told, faults=faults
    )
    if by_mass and line is not None and ends is None:
        flows = (*flows, gas_weight(line, nodes))
    contents = read_contents(raw, flows, network, by_mass=by_mass, told=told, faults=faults)
    first = Block(START, np.array([start[0]]), np.array([start[1]]))
    data = RawData(
        nodes, first, flows, contents, grown, species, line,
        _held(raw, nodes, line, density if by_mass else 1.0, told),
        _lost(raw, line, species, density if by_mass else 1.0, told),
    )  # fmt: skip
    _check_level(data, faults)
    return None if has_errors(faults) else data


def _rounded(one: Sampled) -> Sampled:
    return replace(one, time=np.round(one.time, _DECIMALS))


def _check_level(data: RawData, faults: list[Diagnostic]) -> None:
    level = float(data.start.value[0]) + sum(
        (-f.total if f.kind.is_removal else f.total for f in data.flows),
        np.zeros(data.nodes.size),
    )
    if (level <= 0).any():
        at = data.nodes[int(np.argmax(level <= 0))]
        faults.append(Diagnostic(
            Name.STREAM_IMPOSSIBLE, f"the streams leave no broth at {at:g} h",
            because=", ".join(f"{f.name} {f.total[-1]:.3g}" for f in data.flows),
        ))  # fmt: skip


def _temperature(raw: Cultivation) -> float | None:
    found = raw.setting(SettingKind.TEMPERATURE)
    series = raw.find(SeriesKind.TEMPERATURE)
    if found is not None:
        return found.value
    return None if series is None else float(np.median(series.value))


def _held(
    raw: Cultivation, nodes: Array, line: GasLine | None, density: float, told: list[Assumption]
) -> Held | None:
    if line is None or "CO2" not in line.fractions:
        return None
    ph, series = raw.setting(SettingKind.PH), raw.find(SeriesKind.PH)
    celsius = _temperature(raw)
    if (ph is None and series is None) or celsius is None:
        told.append(Assumption("CO2 held in the broth", "not counted", Origin.ASSUMED,
                               "it needs pH and temperature"))  # fmt: skip
        return None
    values = np.full(nodes.size, ph.value) if series is None and ph is not None else (
        np.interp(nodes, series.time, series.value) if series is not None else nodes
    )  # fmt: skip
    held = np.array([held_per_fraction(line.bar, float(v), celsius, _IONIC) for v in values])
    told.append(Assumption(
        "CO2 held in the broth", f"{held[-1] / 100:.3g} mmol/L per % in the gas, ± 30 %",
        Origin.MEMORY, f"bicarbonate at pH {values[-1]:.2f}, {celsius:g} °C, ionic strength "
        f"{_IONIC:g} mol/L (pK by Plummer & Busenberg 1982); it stands with the gas that leaves",
    ))  # fmt: skip
    return Held(held / density)


def _lost(
    raw: Cultivation, line: GasLine | None, species: tuple[Sampled, ...], density: float,
    told: list[Assumption],
) -> Mapping[str, float]:
    celsius = _temperature(raw)
    volatile = [s.name for s in species if stripped_per_mole(s.name, 25.0) is not None]
    if line is None or celsius is None:
        told.extend(
            Assumption(f"{name} carried away by the gas", "not counted", Origin.ASSUMED,
                       "it needs gas readings and the temperature")
            for name in volatile
        )  # fmt: skip
        return {}
    found: dict[str, float] = {}
    for one in species:
        per_mole = stripped_per_mole(one.name, celsius, line.bar)
        if per_mole is None:
            continue
        found[one.name] = per_mole * density
        told.append(Assumption(
            f"{one.name} carried away by the gas", f"by its Henry constant, ± {LOSS_SD:.0%}",
            Origin.ASSUMED, "the gas stands with the broth; a condenser would return some",
        ))  # fmt: skip
    return found
