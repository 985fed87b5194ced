"""The unit that a conflict's bill is told in: that of a carrier which the user knows."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction

from fluxnet.chemistry.formula import degree_of_reduction
from fluxnet.ground.record import record
from fluxnet.network.model import CargoKind, Network, Quantity, QuantityKind, Role, Species
from fluxnet.solving.build import Built
from fluxnet.solving.farkas import Contradiction
from fluxnet.solving.forms import as_fraction
from fluxnet.solving.problem import Problem, Row
from fluxnet.solving.quantities import default_direction, units_per_mole
from fluxnet.studies.units import rate_unit

__all__ = ["Coin", "choose_coin", "species_prices"]


@record
class Coin:
    """What the worths of a bill count.

    ``size`` is the worth of one of it in the contradiction's own scale, above 0. ``noun`` is
    its name ("ATP", "electrons"), empty where amounts of one quantity are compared.
    ``is_surplus``: what is short is not the coin itself but a way to be rid of it.
    """

    unit: str
    noun: str
    size: Fraction
    is_surplus: bool = False


def species_prices(contradiction: Contradiction, problem: Problem) -> dict[str, Fraction]:
    """The price of each balanced species and carrier of a contradiction, in its own scale."""
    return {
        problem.rows[w.row].name: -w.factor
        for w in contradiction.weights
        if w.row is not None and problem.rows[w.row].quantity is None
    }


def choose_coin(built: Built, contradiction: Contradiction, unit: str) -> Coin:
    """ATP where it has a price, else electrons, else carbon, else a rate's own unit.

    Parameters
    ----------
    unit
        That of the rates.
    """
    network, problem = built.network, built.problem
    prices = species_prices(contradiction, problem)
    found = _by_carrier(network, prices, unit)
    if found is not None:
        return found
    if not prices and _is_of_one(problem, contradiction):
        return _by_quantity(problem, contradiction, unit)
    crossing = _crossing_prices(built, contradiction)
    found = _by_content(network, {**prices, **crossing}, unit)
    if found is not None:
        return found
    is_ratio = any(w.row is not None and problem.rows[w.row].ratio for w in contradiction.weights)
    for name, price in crossing.items():
        if price and not is_ratio:  # a ratio asks for a share of what it is measured by
            return _coin(name, price, unit)
    return _by_quantity(problem, contradiction, unit)


def _coin(noun: str, price: Fraction, unit: str) -> Coin:
    return Coin(_unit_of(noun, unit), noun, abs(price), price < 0)


def _unit_of(noun: str, unit: str) -> str:
    """The unit of rates, of something: mmol ATP/g/h."""
    amount, slash, per = unit.partition("/")
    amount = "mol" if amount == "C-mol" else amount
    return f"{amount} {noun}{slash}{per}"


def _by_carrier(network: Network, prices: Mapping[str, Fraction], unit: str) -> Coin | None:
    carriers = [s for s in network.carriers if prices.get(s.name)]
    energy = [
        s for s in carriers
        if s.name == "ATP" or (s.cargo and s.cargo.kind is CargoKind.ENERGY)
    ]  # fmt: skip
    for species in sorted(energy, key=lambda s: s.name != "ATP"):
        return _coin(species.name, prices[species.name], unit)
    each = [
        (s.name, prices[s.name] / s.cargo.electrons)
        for s in carriers
        if s.cargo and s.cargo.kind is CargoKind.ELECTRONS and s.cargo.electrons
    ]
    if not each:
        return None
    if len({price for _, price in each}) == 1:
        return _coin("electrons", each[0][1], unit)
    name = each[0][0]
    return _coin(name, prices[name], unit)


def _by_content(network: Network, prices: Mapping[str, Fraction], unit: str) -> Coin | None:
    """Electrons or carbon, where all prices are those of what the species hold."""
    known = [s for s in network.species if s.name in prices and s.formula is not None]
    for noun, content in (("electrons", _electrons), ("carbon", _carbon)):
        each = {prices[s.name] / held if (held := content(s)) else None for s in known}
        if len(each) == 1 and (price := each.pop()):
            return _coin(noun, price, unit)
    return None


def _electrons(species: Species) -> Fraction | None:
    return degree_of_reduction(species.formula) if species.formula is not None else None


def _carbon(species: Species) -> Fraction | None:
    return species.formula.count("C") if species.formula is not None else None


def _crossing_prices(built: Built, contradiction: Contradiction) -> dict[str, Fraction]:
    """What a mole of each boundary species is worth inside; substrates first."""
    network, found = built.network, dict[str, Fraction]()
    for weight in contradiction.weights:
        row = built.problem.rows[weight.row] if weight.row is not None else None
        for quantity, part in _rates_of(row):
            species = network.find_species(quantity.name)
            if species is None:
                continue
            way = quantity.direction or default_direction(species.role)
            moles = row is not None and row.ratio is not None
            unit = 1 if moles else as_fraction(units_per_mole(species, built.basis))
            gain = -way.sign * unit * part * weight.factor
            found[species.name] = found.get(species.name, Fraction(0)) + gain
    roles = {s.name: s.role is not Role.SUBSTRATE for s in network.boundary}
    return {name: found[name] for name in sorted(found, key=roles.__getitem__)}


def _rates_of(row: Row | None) -> list[tuple[Quantity, Fraction]]:
    """The rates of which a row is made, with their shares."""
    quantity = row.quantity if row is not None else None
    if row is None or quantity is None:
        return []
    above, below = quantity.numerator, quantity.denominator
    parts = [(quantity, Fraction(1))]
    if above is not None and below is not None and row.ratio is not None:
        parts = [(above, Fraction(1)), (below, -as_fraction(row.ratio))]
    return [(q, share) for q, share in parts if q.kind is QuantityKind.RATE]


def _is_of_one(problem: Problem, contradiction: Contradiction) -> bool:
    """Whether all bounds are those of one quantity."""
    labels = [problem.rows[w.row].quantity for w in contradiction.weights if w.row is not None]
    return len({(q.kind, q.name) for q in labels if q is not None}) <= 1


def _by_quantity(problem: Problem, contradiction: Contradiction, unit: str) -> Coin:
    """The unit of the first quantity that has one."""
    for weight in contradiction.weights:
        quantity = problem.rows[weight.row].quantity if weight.row is not None else None
        if quantity is not None and quantity.kind is not QuantityKind.RATIO:
            return Coin(rate_unit(quantity, unit) or unit, "", abs(weight.factor))
    return Coin(unit, "", abs(contradiction.weights[0].factor))
