"""A rates table in the names of a model, whatever names it was read with."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import field, replace

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.network.model import Direction, Network, Quantity, QuantityKind, Role, Species
from fluxnet.rates.measured import MeasuredRate, RatesTable, Run
from fluxnet.rates.weighable import weigh_faults

__all__ = ["Alignment", "align_table"]


@record
class Alignment:
    """The table in the model's names; None where the model lacks what it measures."""

    table: RatesTable | None
    diagnostics: tuple[Diagnostic, ...] = field(default=())


def align_table(table: RatesTable, network: Network) -> Alignment:
    """Match every quantity of a table to the model's, by name, then by catalogue entry.

    Biomass of the table means the model's where that has one biomass species. What the model
    does not have, or has with the other direction, is an error: no flux can make it. So are
    rates that cannot be weighed against one another (:mod:`fluxnet.rates.weighable`).
    """
    entries = {s.name: s.entry or s.name for s in table.species}
    biomass = [s.name for s in network.boundary if s.role is Role.BIOMASS]
    grown = {s.name for s in table.species if s.role is Role.BIOMASS}
    names: dict[str, str] = {s.name: s.name for s in network.boundary}
    for name, entry in entries.items():
        own = [s.name for s in network.boundary if s.entry is not None and s.entry == entry]
        if name not in names and own:
            names[name] = own[0]
        elif name not in names and name in grown and len(biomass) == 1:
            names[name] = biomass[0]
    faults: list[Diagnostic] = []
    runs = tuple(_aligned(run, names, network, faults) for run in table.runs)
    if faults:
        return Alignment(None, tuple(dict.fromkeys(faults)))
    told = {names.get(s.name, s.name): s for s in table.species}
    species = tuple(network.find_species(name) or old for name, old in told.items())
    return Alignment(replace(table, runs=runs, species=species))


def _aligned(run: Run, names: dict[str, str], network: Network, faults: list[Diagnostic]) -> Run:
    rates: list[MeasuredRate] = []
    seen: dict[object, Quantity] = {}
    for rate in run.rates:
        words = [w for q in _parts(rate.quantity) for w in _lacks(q, names, network)]
        if words:
            mend = "declare it in the model, or take the row out"
            faults.append(Diagnostic(*words[0], rate.span, mend=mend))
            continue
        quantity = _renamed(rate.quantity, names)
        key: object = quantity.name if quantity.kind is QuantityKind.RATE else quantity
        before = seen.setdefault(key, rate.quantity)
        if before is not rate.quantity:
            message = f"run {run.name}: {before} and {rate.quantity} are one rate of the model"
            faults.append(Diagnostic(Name.ROW_REPEATED, message, rate.span))
        rates.append(replace(rate, quantity=quantity))
    faults.extend(weigh_faults(run))
    return replace(run, rates=tuple(rates))


def _parts(quantity: Quantity) -> Iterable[Quantity]:
    if quantity.numerator is None or quantity.denominator is None:
        return (quantity,)
    return (quantity.numerator, quantity.denominator)


def _lacks(quantity: Quantity, names: dict[str, str], network: Network) -> list[tuple[Name, str]]:
    """Why the model has no such quantity; empty where it has."""
    if quantity.kind is QuantityKind.FLUX:
        if network.find_reaction(quantity.name) is None:
            return [(Name.UNKNOWN_QUANTITY, f"the model has no reaction {quantity.name}")]
        return []
    if quantity.kind is QuantityKind.MU:
        if not any(s.role is Role.BIOMASS for s in network.boundary):
            return [(Name.UNKNOWN_QUANTITY, "the model has no biomass, so it has no mu")]
        return []
    species = network.find_species(names.get(quantity.name, ""))
    if species is None:
        message = f"{quantity.name} is measured, and the model does not exchange it"
        return [(Name.UNKNOWN_QUANTITY, message)]
    allowed = _allowed(species)
    if quantity.direction not in (None, allowed) and allowed is not None:
        told = quantity.direction.value if quantity.direction is not None else ""
        message = f"{species.name} is a {species.role.value}, and is measured going {told}"
        return [(Name.RATE_AGAINST_ROLE, message)]
    return []


def _allowed(species: Species) -> Direction | None:
    if species.role is Role.SUBSTRATE:
        return Direction.IN
    return Direction.OUT if species.role in (Role.PRODUCT, Role.BIOMASS) else None


def _renamed(quantity: Quantity, names: dict[str, str]) -> Quantity:
    if quantity.numerator is not None and quantity.denominator is not None:
        return replace(
            quantity,
            numerator=_renamed(quantity.numerator, names),
            denominator=_renamed(quantity.denominator, names),
        )
    if quantity.kind is QuantityKind.RATE:
        return replace(quantity, name=names[quantity.name])
    return quantity
