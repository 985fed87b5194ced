"""Rates as runs: what ``closure`` and ``solve`` read, covariance included."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from fluxnet.chemistry.catalogue import find_compound
from fluxnet.chemistry.formula import Formula
from fluxnet.chemistry.reader import read_formula
from fluxnet.cultivation.result import RateLine
from fluxnet.network.model import Basis, Direction, Network, Quantity, QuantityKind, Role, Species
from fluxnet.rates.cultivation import Cultivation, SettingKind
from fluxnet.rates.measured import MeasuredRate, RatesTable, Run

__all__ = ["ash_of", "biomass_formula", "quantity_of", "run_of", "shared_biomass_error", "table_of"]

Array = NDArray[np.float64]

_ALIKE = 0.02
"""A shared error moves all specific rates by the same part; within this they count as the same."""


def biomass_species(network: Network | None) -> Species | None:
    """The model's biomass where it has one."""
    if network is None:
        return None
    return next((s for s in network.boundary if s.role is Role.BIOMASS), None)


def biomass_formula(network: Network | None) -> Formula:
    """The model's biomass formula, else CH1.8O0.5N0.2 (common practice)."""
    species = biomass_species(network)
    if species is not None and species.formula is not None:
        return species.formula
    return read_formula("CH1.8O0.5N0.2")


def ash_of(raw: Cultivation, network: Network | None) -> tuple[float, float]:
    """Ash of the dry weight, and 0 for moisture, which is taken from the weight itself."""
    setting = raw.setting(SettingKind.ASH)
    if setting is not None:
        return setting.value, 0.0
    species = biomass_species(network)
    return (float(species.ash) if species is not None else 0.0), 0.0


def quantity_of(name: str, value: float, network: Network | None) -> Quantity:
    """The quantity of a rate: the direction by its role in the model, else by its sign."""
    if name == "mu":
        return Quantity(QuantityKind.MU)
    species = None if network is None else network.find_species(name)
    direction = Direction.IN if value < 0 else Direction.OUT
    if species is not None and species.role is Role.SUBSTRATE:
        direction = Direction.IN
    if species is not None and species.role is Role.PRODUCT:
        direction = Direction.OUT
    return Quantity(QuantityKind.RATE, name, direction)


def shared_biomass_error(values: Array, shifts: Array, is_specific: NDArray[np.bool_]) -> float:
    """The relative error of the biomass that all specific rates share; 0 where none is one.

    Parameters
    ----------
    shifts
        Of each rate, per one sd of the error that all biomass values share.
    is_specific
        Which are divided by biomass: all but mu.
    """
    counted = is_specific & (np.abs(values) > 0)
    if not counted.any():
        return 0.0
    parts = -shifts[counted] / values[counted]
    middle = float(np.median(parts))
    if not middle or (np.abs(parts - middle) > _ALIKE * abs(middle)).any():
        return 0.0
    return abs(middle)


def run_of(
    name: str, lines: Sequence[RateLine], covariance: Array, shared: float,
    extras: tuple[tuple[str, str], ...],
) -> Run:
    """One run of rates as magnitudes in their directions.

    Parameters
    ----------
    covariance
        Square over the lines, of the signed rates.
    shared
        The relative error of the biomass that all rates but mu share; it is in the covariance.
    """
    signs = np.array([
        1.0 if r.quantity.direction is None else float(r.quantity.direction.sign) for r in lines
    ])  # fmt: skip
    own = covariance * np.outer(signs, signs)
    own = (own + own.T) / 2
    own.setflags(write=False)
    rates: list[MeasuredRate] = []
    for line, sign in zip(lines, signs, strict=True):
        value = float(sign) * line.value
        is_mu = line.quantity.kind is QuantityKind.MU
        own_sd = None
        if shared and not is_mu:
            own_sd = float(np.sqrt(max(line.sd**2 - (shared * value) ** 2, 0.0)))
        rates.append(MeasuredRate(
            line.quantity, value, line.sd, unit="1/h" if is_mu else "mmol/g/h", own_sd=own_sd,
        ))  # fmt: skip
    return Run(
        name, Basis.SPECIFIC, tuple(rates), own, extras, shared_error=shared or None
    )


def table_of(
    runs: tuple[Run, ...], names: Sequence[str], raw: Cultivation, network: Network | None
) -> RatesTable:
    """The runs with the species that they name."""
    species: list[Species] = []
    for name in names:
        if not name:
            continue
        known = None if network is None else network.find_species(name)
        compound = find_compound(name)
        if known is not None:
            species.append(known)
        else:
            formula = None if compound is None else compound.formula
            entry = None if compound is None else compound.name
            species.append(Species(name, Role.EXCHANGE, formula, entry=entry))
    grown = biomass_species(network)
    if grown is None:
        ash = Fraction(repr(ash_of(raw, network)[0]))
        grown = Species("biomass", Role.BIOMASS, biomass_formula(network), entry="biomass", ash=ash)
    return RatesTable(runs, raw.understood, (*species, grown))
