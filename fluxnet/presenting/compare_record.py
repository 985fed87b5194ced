"""A comparison as data."""

from __future__ import annotations

from fractions import Fraction
from typing import Any

from fluxnet.presenting.caution import CAUTION
from fluxnet.studies.compare_result import Ability, Comparison, Facts, ModeYield, Supply
from fluxnet.studies.compare_supply import per_litre, units_of
from fluxnet.studies.staircase import Staircase

__all__ = ["compare_record"]

Record = dict[str, Any]


def compare_record(comparison: Comparison) -> Record:
    """The body of the document ``compare/1``: the variants, the best first."""
    return {
        "product": comparison.product,
        "unit": comparison.unit,
        "modes": [mode.value for mode in comparison.modes],
        "reserve": comparison.reserve or None,
        "common": list(comparison.common),
        "biomass": comparison.biomass,
        "words": comparison.words,
        "second": comparison.second or None,
        "variants": [_ability(a, comparison) for a in comparison.abilities],
        "skipped": [{"variant": s.variant, "words": s.words} for s in comparison.skipped],
        "notes": list(comparison.notes),
        "uncertain": list(comparison.uncertain),
        "odds": [
            {"better": o.better, "worse": o.worse, "probability": o.probability}
            for o in comparison.odds
        ],
        "draws": comparison.draws,
        "seed": comparison.seed if comparison.draws else None,
        "caution": CAUTION,
    }


def _ability(a: Ability, comparison: Comparison) -> Record:
    return {
        "name": a.name,
        "variant": a.variant,
        "parts": list(a.parts),
        "substrate": a.substrate,
        "rank": a.rank,
        "tied": list(a.tied),
        "best_of_all": a.is_best_of_all,
        "electron_limit": a.ceiling,
        "yields": [_yield(y) for y in a.yields],
        "without_growth": a.without_growth,
        "most_growth": a.most_growth,
        "forced": a.forced,
        "reason": a.reason or None,
        "left_out": list(a.left_out),
        "optimum": None if a.facts is None else _facts(a.facts),
        "supply": None if a.supply is None else _supply(a.supply, comparison),
        "staircase": None if a.staircase is None else _staircase(a.staircase),
    }


def _supply(supply: Supply, comparison: Comparison) -> Record:
    units = units_of(comparison.network.basis)
    grams = comparison.biomass
    litre = None if grams is None else per_litre(supply, grams)
    return {
        **_rates(supply, units.moles, units.heat),
        "per_litre": None if litre is None else _rates(litre, "mmol/L/h", "W/L"),
    }


def _rates(supply: Supply, unit: str, heat_unit: str) -> Record:
    return {
        "unit": unit,
        "uptake": supply.uptake,
        "product": supply.product,
        "oxygen": supply.oxygen,
        "carbon_dioxide": supply.carbon_dioxide,
        "base": supply.base,
        "heat": supply.heat,
        "heat_unit": heat_unit,
    }


def _yield(y: ModeYield) -> Record:
    return {
        "mode": y.mode.value,
        "outcome": y.outcome.value,
        "per_mole": y.moles,
        "exactly": _exactly(y.moles),
        "per_carbon": y.carbon,
        "per_mass": y.mass,
        "share": y.share,
        "uptake": y.uptake,
        "cut": y.is_cut,
        "low": y.low,
        "high": y.high,
        "proof": {"verified": y.proven, "words": y.proof},
    }


def _facts(f: Facts) -> Record:
    heat = f.heat
    return {
        "held_back_by": [{"kind": h.kind.value, "name": h.name, "gain": h.gain} for h in f.holding],
        "prices": [
            {
                "species": p.species,
                "price": p.price,
                "price_low": p.price_low,
                "price_high": p.price_high,
            }
            for p in f.prices
        ],
        "surplus": [{"carrier": name, "most": amount} for name, amount in f.surplus],
        "oxygen": f.oxygen,
        "oxygen_most": f.oxygen_most,
        "carbon_dioxide": f.carbon_dioxide,
        "heat_kJ": None if heat is None else heat.value,
        "heat_per_oxygen_kJ": None if heat is None else heat.per_oxygen,
        "heat_estimated": [] if heat is None else list(heat.estimated),
        "base": f.base,
        "by_products": [
            {"species": b.species, "least": b.least, "most": b.most} for b in f.by_products
        ],
        "destinations": [
            {"name": d.name, "carbon": d.carbon, "electrons": d.electrons} for d in f.destinations
        ],
    }


def _staircase(s: Staircase) -> Record:
    return {
        "ceiling": s.ceiling,
        "reached": s.reached,
        "adds_up": s.adds_up,
        "steps": [
            {
                "step": step.kind.value,
                "words": step.words,
                "left": step.left,
                "exactly": _exactly(step.lost),
                "lost": step.lost,
                "lost_carbon": step.carbon,
                "lost_electrons": step.electrons,
            }
            for step in s.steps
        ],
    }


def _exactly(value: Fraction | None) -> str | None:
    return None if value is None else str(value)
