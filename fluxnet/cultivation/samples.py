"""Samples of the broth as raw data with errors: biomass, and species in moles."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.chemistry.catalogue import find_compound
from fluxnet.chemistry.formula import Formula, molar_mass
from fluxnet.cultivation.biomass import DENSITY_SD, DensityCurve, dry_weight_modes, fit_calibration
from fluxnet.cultivation.errors import Block, Mode
from fluxnet.cultivation.gas_reading import catalogue_name
from fluxnet.cultivation.result import Assumption, Origin
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.network.model import Network
from fluxnet.rates.cultivation import (
    CalibrationPoint,
    Cultivation,
    Series,
    SeriesKind,
    SettingKind,
)

__all__ = [
    "BIOMASS", "CONTENT_SD", "Sampled", "formula_of", "own_name", "read_biomass",
    "read_species",
]  # fmt: skip

Array = NDArray[np.float64]

BIOMASS = "biomass"
CONTENT_SD = 0.03
"""Relative sd of a concentration by chromatography or enzymatic test (assumed)."""

FLOOR_SD = 0.005
"""The least sd, of the largest value of the series (assumed)."""

OPTICAL_SD = 0.02
"""Relative sd of reading one optical density (assumed)."""


@record
class Sampled:
    """What samples hold, per unit of the account (L or kg of broth): g of biomass, or mmol."""

    name: str
    time: Array
    block: Block


def formula_of(name: str, network: Network | None) -> Formula | None:
    """The formula of a species by the model, else by the catalogue."""
    species = None if network is None else network.find_species(name)
    if species is not None and species.formula is not None:
        return species.formula
    compound = find_compound(name)
    return None if compound is None else compound.formula


def _factor(series: Series, *, by_mass: bool, density: float) -> float:
    """From the series' litres or kilograms of broth to those of the account."""
    per_kg = series.unit.endswith("/kg")
    if per_kg is by_mass:
        return 1.0
    return 1.0 / density if by_mass else density


def read_biomass(
    raw: Cultivation, *, by_mass: bool, density: float,
    told: list[Assumption], faults: list[Diagnostic],
) -> tuple[Sampled, DensityCurve | None] | None:
    """Dry weight of every sample with its errors, by optical density where that gives more."""
    weighed = raw.find(SeriesKind.DRY_WEIGHT)
    optical = raw.find(SeriesKind.OPTICAL_DENSITY)
    points = raw.calibration or _pairs(weighed, optical)
    curve = fit_calibration(points) if len(points) >= 2 else None
    moisture = raw.setting(SettingKind.MOISTURE)
    dry = 1.0 if moisture is None else 1.0 - moisture.value
    if moisture is not None:
        told.append(Assumption("moisture of the dry weight", f"{moisture.value:.1%}", Origin.GIVEN))
    if optical is not None and curve is not None and (
        weighed is None or optical.value.size > weighed.value.size
    ):  # fmt: skip
        return _by_density(optical, curve, dry, by_mass, density, told, faults), curve
    if weighed is None:
        faults.append(Diagnostic(
            Name.NO_BIOMASS_DATA,
            "there is no dry weight" if optical is None
            else "optical density has no calibration to dry weight",
            mend="add a column of dry weight, or two or more pairs of optical density and dry "
            "weight",
        ))  # fmt: skip
        return None
    factor = dry * _factor(weighed, by_mass=by_mass, density=density)
    kept = weighed.value > 0
    value, time = weighed.value[kept] * factor, weighed.time[kept]
    own = DENSITY_SD * value if weighed.sd is None else weighed.sd[kept] * factor
    if weighed.sd is None:
        told.append(Assumption("sd of a dry weight", f"{DENSITY_SD:.0%}", Origin.ASSUMED,
                               "usual for a single one"))  # fmt: skip
    modes = (Mode("biomass, all samples alike", weighed.common * value),) if weighed.common else ()
    return Sampled(BIOMASS, time, Block(BIOMASS, value, own, modes)), curve


def _pairs(
    weighed: Series | None, optical: Series | None
) -> tuple[CalibrationPoint, ...]:
    """Samples of which both were measured."""
    if weighed is None or optical is None:
        return ()
    _, first, second = np.intersect1d(weighed.time, optical.time, return_indices=True)
    return tuple(
        CalibrationPoint(
            float(optical.value[j]), float(weighed.value[i]),
            None if weighed.sd is None else float(weighed.sd[i]),
        )
        for i, j in zip(first, second, strict=True)
        if optical.value[j] > 0 and weighed.value[i] > 0
    )  # fmt: skip


def _by_density(
    optical: Series, curve: DensityCurve, dry: float, by_mass: bool, density: float,
    told: list[Assumption], faults: list[Diagnostic],
) -> Sampled:
    kept = optical.value > 0
    reading, time = optical.value[kept], optical.time[kept]
    factor = dry / density if by_mass else dry
    value = curve.dry_weight(reading) * factor
    sd = OPTICAL_SD * reading if optical.sd is None else optical.sd[kept]
    if optical.sd is None:
        told.append(Assumption("sd of an optical density", f"{OPTICAL_SD:.0%}", Origin.ASSUMED))
    own = np.abs(curve.slope_at(reading)) * sd * factor
    low, high = curve.interval()
    told.append(Assumption(
        "dry weight by optical density",
        f"{curve.slope:.4g} g/L per unit ({low:.4g} to {high:.4g})"
        + (f", curvature {curve.curvature:.3g}" if curve.curvature else ""),
        Origin.FOUND, f"from {curve.points} samples between {curve.lowest:g} and {curve.highest:g}",
    ))  # fmt: skip
    beyond = curve.beyond(reading)
    if beyond.any():
        worst = int(np.argmax(np.where(beyond, reading, -np.inf)))
        faults.append(Diagnostic(
            Name.BEYOND_CALIBRATION,
            f"{int(beyond.sum())} optical densities lie beyond the calibration, up to "
            f"{reading[worst]:g} at {time[worst]:g} h; it ends at {curve.highest:g}",
        ))  # fmt: skip
    modes = tuple(
        Mode(mode.name, mode.shift * factor) for mode in dry_weight_modes(curve, reading)
    )
    return Sampled(BIOMASS, time, Block(BIOMASS, value, own, modes))


def read_species(
    raw: Cultivation, network: Network | None, *, by_mass: bool, density: float,
    told: list[Assumption], faults: list[Diagnostic],
) -> tuple[Sampled, ...]:
    """Every species of the samples in mmol, with its errors; upper limits as half of them."""
    found: list[Sampled] = []
    for series in raw.of_kind(SeriesKind.CONCENTRATION):
        name = own_name(series.name, network)
        factor = _factor(series, by_mass=by_mass, density=density)
        if series.unit.startswith("g/"):
            formula = formula_of(series.name, network)
            if formula is None:
                faults.append(Diagnostic(
                    Name.SPECIES_UNKNOWN,
                    f"{series.name} is in {series.unit}, and nothing says its formula",
                    mend="declare it, or give it in mmol/L",
                ))  # fmt: skip
                continue
            factor *= 1000.0 / molar_mass(formula)
        value = series.value * factor
        if series.sd is not None:
            own = series.sd * factor
        else:
            largest = float(np.abs(value).max()) if value.size else 0.0
            own = np.hypot(CONTENT_SD * value, FLOOR_SD * largest)
            told.append(Assumption(
                f"sd of {name}",
                f"{CONTENT_SD:.0%} of the value, and {FLOOR_SD:.1%} of the largest",
                Origin.ASSUMED,
            ))  # fmt: skip
        modes: list[Mode] = []
        if series.below is not None and series.below.any():
            # what hides below the limit is alike in all samples: a mean of many knows no more
            hidden = np.where(series.below, value / np.sqrt(12), 0.0)
            modes.append(Mode(f"{name}, below its limit", hidden))
            own = np.where(series.below, value / np.sqrt(12), own)
            value = np.where(series.below, value / 2, value)
            told.append(Assumption(
                f"{name} below its limit", "half the limit, sd limit / sqrt(12)", Origin.ASSUMED,
                f"{int(series.below.sum())} samples: anything from 0 to the limit is as likely",
            ))  # fmt: skip
        if series.common:
            modes.append(Mode(f"{name}, calibration", series.common * value))
        found.append(Sampled(name, series.time, Block(name, value, own, tuple(modes))))
    return tuple(found)


def own_name(name: str, network: Network | None) -> str:
    """The model's name of a species, else the catalogue's."""
    entry = catalogue_name(name)
    if network is not None:
        if network.find_species(name) is not None:
            return name
        for species in network.boundary:
            if species.entry == entry:
                return species.name
    return entry
