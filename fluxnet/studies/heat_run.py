"""The heat and the Gibbs energy of a run, in the unit of its rates."""

from __future__ import annotations

from collections.abc import Mapping
from math import isnan

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.matrices.stoichiometry import Stoichiometry
from fluxnet.network.biomass import growth_factor
from fluxnet.network.free_energy import FreeEnergy, find_free_energy
from fluxnet.network.model import Basis, Network, Role
from fluxnet.studies.dissipation import Growth, judge_growth
from fluxnet.studies.heat import HEAT_PER_OXYGEN, Heat, is_oxygen

__all__ = ["HeatRange", "RunHeat", "energy_unit", "heat_rows", "run_heat", "temperature_of"]

Array = NDArray[np.float64]

_USUAL = 30.0
"""The temperature taken where the rates do not come with one [°C]."""


@record
class HeatRange:
    """A heat in the unit of the run; ``sd`` from the rates alone, None where it is a range."""

    value: float
    sd: float | None
    low: float
    high: float


@record
class RunHeat:
    """What a run gives off [``unit``: kJ/g/h, kJ/L/h, kJ/C-mol/h or kJ], positive: given off.

    ``combustion`` is from enthalpies, ``oxygen`` 460 kJ per mole of oxygen taken up (None
    without). ``watts`` is the former in W/L, for rates per litre and hour. ``per_substrate``
    and ``gibbs_per_substrate`` are kJ per mole of ``substrate``. ``heat`` and ``free_energy``
    tell what they are from, per mole as the rates stand. ``growth`` puts the run beside the
    correlations of growth; ``is_temperature_known`` says if its temperature is the run's.
    """

    unit: str
    heat: Heat
    combustion: HeatRange | None
    oxygen: HeatRange | None
    watts: float | None
    substrate: str | None
    per_substrate: float | None
    free_energy: FreeEnergy
    gibbs: float | None
    gibbs_per_substrate: float | None
    growth: Growth | None
    is_temperature_known: bool


def energy_unit(unit: str) -> tuple[str, float]:
    """The unit of energy beside a unit of rates, and how many of it a kJ per mole makes.

    Examples
    --------
    >>> energy_unit("mmol/g/h"), energy_unit("C-mol/C-mol/h"), energy_unit("mmol")
    (('kJ/g/h', 0.001), ('kJ/C-mol/h', 1.0), ('kJ', 0.001))
    """
    amount, slash, per = unit.partition("/")
    return f"kJ{slash}{per}", 1e-3 if amount == "mmol" else 1.0


def heat_rows(heat: Heat | None, network: Network, matrix: Stoichiometry, made: Array) -> Array:
    """The heat by enthalpies and that by oxygen as rows over the fluxes [kJ/mol].

    ``made`` is the stoichiometric matrix, species x reactions, or its derivative. No row where
    the heat is not known; one where no oxygen is taken up.
    """
    if heat is None or heat.value is None:
        return np.zeros((0, made.shape[1]))
    rows = np.zeros((1 if heat.by_oxygen is None else 2, made.shape[1]))
    for term in heat.terms:
        if term.species in matrix.species:
            rows[0] -= term.combustion * made[matrix.row(term.species)]
    if len(rows) > 1:
        for species in network.boundary:
            if is_oxygen(species):
                rows[1] -= HEAT_PER_OXYGEN * made[matrix.row(species.name)]
    return rows


def run_heat(
    heat: Heat,
    network: Network,
    releases: Mapping[str, float],
    substrate: str | None,
    unit: str,
    basis: Basis,
    ranges: tuple[HeatRange, ...],
    celsius: float | None,
) -> RunHeat:
    """What a run gives off, in its own unit.

    Parameters
    ----------
    ranges
        Those of the rows of :func:`heat_rows`, in kJ per mole as the rates stand.
    celsius
        The temperature of the run, None where it is not told.
    """
    unit, factor = energy_unit(unit)
    told = tuple(
        HeatRange(
            r.value * factor,
            None if r.sd is None or isnan(r.sd) else r.sd * factor,
            r.low * factor,
            r.high * factor,
        )
        for r in ranges
    )
    free = find_free_energy(network, releases)
    used = -releases[substrate] if substrate is not None else None
    return RunHeat(
        unit=unit,
        heat=heat,
        combustion=told[0] if told else None,
        oxygen=told[1] if len(told) > 1 else None,
        watts=told[0].value / 3.6 if told and unit == "kJ/L/h" else None,
        substrate=substrate,
        per_substrate=None if heat.value is None or used is None else heat.value / used,
        free_energy=free,
        gibbs=None if free.value is None else free.value * factor,
        gibbs_per_substrate=None if free.value is None or used is None else free.value / used,
        growth=judge_growth(
            network, releases, _growth_rate(network, releases, basis),
            _USUAL if celsius is None else celsius,
        ),
        is_temperature_known=celsius is not None,
    )  # fmt: skip


def _growth_rate(
    network: Network, releases: Mapping[str, float], basis: Basis
) -> float | None:
    rates = [
        releases.get(s.name, 0.0) * factor
        for s in network.boundary
        if s.role is Role.BIOMASS and (factor := growth_factor(s, basis)) is not None
    ]
    return sum(rates) if rates else None


def temperature_of(extras: tuple[tuple[str, str], ...]) -> float | None:
    """The temperature [°C] among the columns that a table carries through, or None.

    Examples
    --------
    >>> temperature_of((("temperature", "37"),)), temperature_of((("note", "warm"),))
    (37.0, None)
    """
    for name, text in extras:
        if name.casefold().startswith("temp"):
            try:
                value = float(text.replace(",", "."))
            except ValueError:
                continue
            if 0.0 < value < 120.0:
                return value
    return None
