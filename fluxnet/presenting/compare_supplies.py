"""What a reactor has to supply to the best of a comparison, in sentences."""

from __future__ import annotations

from fluxnet.network.model import Basis
from fluxnet.presenting.numbers import format_number
from fluxnet.presenting.screen import Sentence
from fluxnet.studies.compare_result import Ability, Comparison, Facts, Supply
from fluxnet.studies.compare_supply import per_litre, units_of

__all__ = ["supply_an_hour", "supply_sentences"]


def supply_sentences(comparison: Comparison) -> list[Sentence]:
    """Rates an hour where the uptake is known, else amounts per mole; and what comes with it."""
    best = comparison.abilities[0]
    if best.facts is None:
        return []
    told = (
        _per_mole(comparison, best, best.facts)
        if best.supply is None
        else supply_an_hour(comparison, best, best.supply)
    )
    beside = _beside(comparison.product, best)
    return [Sentence(f"{told}{beside}.")] if told else []


def supply_an_hour(comparison: Comparison, best: Ability, supply: Supply) -> str:
    """The rates at the uptake, and per litre where the biomass is known."""
    basis = comparison.network.basis
    units = units_of(basis)
    whose = f" ({best.name})" if best.tied else ""
    head = (
        f"At {best.substrate} in {_n(supply.uptake)} {units.moles}{whose}: "
        f"{_listed(supply, units.moles, units.heat)}"
    )
    if comparison.biomass is not None:
        litre = _listed(per_litre(supply, comparison.biomass), "mmol/L/h", "W/L")
        return f"{head}; with {_n(comparison.biomass)} g/L of biomass {litre}"
    return f'{head} (--biomass "20 g/L": per litre)' if basis is Basis.SPECIFIC else head


def _listed(supply: Supply, unit: str, heat_unit: str) -> str:
    """The rates of a supply; the unit stands with the first."""
    parts = [f"{_n(supply.product)} {unit} product"]
    for name, amount in (
        ("oxygen", supply.oxygen), ("CO2", supply.carbon_dioxide), ("base", supply.base),
    ):  # fmt: skip
        if amount is not None:
            parts.append(f"{name} {_n(amount)}" if amount else f"no {name}")
    if supply.heat is not None:
        parts.append(f"heat {_n(supply.heat)} {heat_unit}")
    return ", ".join(parts)


def _per_mole(comparison: Comparison, best: Ability, facts: Facts) -> str:
    parts: list[str] = []
    if facts.oxygen is not None:
        parts.append("takes no oxygen" if not facts.oxygen else f"takes {_n(facts.oxygen)} mol O2")
    if facts.carbon_dioxide:
        verb = "releases" if facts.carbon_dioxide > 0 else "binds"
        parts.append(f"{verb} {_n(abs(facts.carbon_dioxide))} mol CO2")
    if facts.heat is not None and facts.heat.value is not None:
        parts.append(f"gives off {_n(facts.heat.value)} kJ of heat")
    if facts.base is not None:
        parts.append(f"needs {_n(facts.base)} mol of base" if facts.base else "needs no base")
    if not parts:
        return ""
    told = ", ".join(parts[:-1]) + (" and " if parts[1:] else "") + parts[-1]
    return f"Per mol of {comparison.product} the best ({best.name}) {told}"


def _beside(product: str, best: Ability) -> str:
    """The by-products that no optimum goes without, and growth where it matters."""
    facts = best.facts
    forced = [b for b in facts.by_products if b.least > 0] if facts is not None else []
    parts = [f"{b.least:.3g} {b.species}" for b in forced]
    listed = ", ".join(parts[:-1]) + (" and " if parts[1:] else "") + parts[-1] if parts else ""
    words = f"; beside each mol {product} at least {listed}" if parts else ""
    if best.without_growth is None:
        return words
    if not best.without_growth:
        return f"{words}; it makes none without growth"
    if best.forced:
        return f"{words}; growth at its most brings at least {best.forced:.3g} mol/mol with it"
    return words


def _n(value: float) -> str:
    return format_number(value, 3)
