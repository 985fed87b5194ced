"""The heat and the Gibbs energy of a run as data."""

from __future__ import annotations

from math import isfinite
from typing import Any

from fluxnet.studies.heat_run import HeatRange, RunHeat

__all__ = ["heat_record"]


def heat_record(heat: RunHeat | None) -> dict[str, Any] | None:
    """What a run gives off, under the key ``heat``."""
    if heat is None:
        return None
    growth = heat.growth
    return {
        "unit": heat.unit,
        "combustion": _range(heat.combustion),
        "oxygen": _range(heat.oxygen),
        "watt_per_litre": heat.watts,
        "substrate": heat.substrate,
        "kJ_per_mol_substrate": heat.per_substrate,
        "kJ_per_mol_oxygen": heat.heat.per_oxygen,
        "method": heat.heat.method.value,
        "words": heat.heat.words,
        "estimated": list(heat.heat.estimated),
        "unknown": list(heat.heat.unknown),
        "enthalpies": [
            {
                "species": term.species,
                "combustion_kJ_mol": term.combustion,
                "estimated": term.estimated,
                "source": term.source,
            }
            for term in heat.heat.terms
        ],
        "gibbs": {
            "value": heat.gibbs,
            "kJ_per_mol_substrate": heat.gibbs_per_substrate,
            "missing": list(heat.free_energy.missing),
            "estimated": list(heat.free_energy.estimated),
        },
        "growth": None
        if growth is None
        else {
            "carbon_source": growth.carbon_source,
            "dissipated_kJ_per_cmol": growth.dissipated,
            "expected_kJ_per_cmol": growth.expected,
            "maintenance_kJ_per_cmol": growth.maintenance,
            "celsius": growth.celsius,
            "celsius_known": heat.is_temperature_known,
            "cmol_per_cmol": growth.biomass_yield,
            "allowed": growth.allowed,
            "allowed_low": growth.allowed_low,
            "allowed_high": growth.allowed_high,
            "plausible": growth.is_plausible,
        },
    }


def _range(told: HeatRange | None) -> dict[str, float | None] | None:
    if told is None:
        return None
    return {
        "value": told.value,
        "sd": told.sd,
        "low": told.low if isfinite(told.low) else None,
        "high": told.high if isfinite(told.high) else None,
    }
