"""What an optimum of a comparison takes, gives off and is held back by."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from math import isfinite

import numpy as np
from numpy.typing import NDArray

from fluxnet.chemistry.formula import degree_of_reduction
from fluxnet.ground.errors import MisuseError
from fluxnet.network.implied import find_implied
from fluxnet.network.model import Network, Role, Species
from fluxnet.solving.least_flux import least_total_flux
from fluxnet.solving.linear import Programme
from fluxnet.solving.prices import find_prices
from fluxnet.solving.problem import Problem, Row, RowKind
from fluxnet.solving.quantities import default_direction
from fluxnet.solving.ranges import find_ranges
from fluxnet.studies.aim_problem import hold_optimum
from fluxnet.studies.aims import Sense
from fluxnet.studies.compare_family import Member
from fluxnet.studies.compare_modes import (
    Demand,
    Demands,
    is_energy,
    moles_of,
    spenders,
)
from fluxnet.studies.compare_result import ByProduct, Destination, Facts, Holding, Limiting
from fluxnet.studies.compare_scan import Best
from fluxnet.studies.heat import Heat, heat_of, is_oxygen
from fluxnet.studies.solution import SpeciesPrice

__all__ = ["ceiling_of", "find_facts", "growth_row", "release_rows"]

Array = NDArray[np.float64]

_DUST = 1e-9

# What is kept back is a cost, which the staircase tells; it is not what holds the product back.
_DEMANDED = (Demand.MAINTENANCE, Demand.GROWTH, Demand.RESERVE)


def ceiling_of(network: Network, product: str, substrate: str) -> Fraction | None:
    """The electron-limited yield [mol/mol]: gamma of the substrate over that of the product.

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> ceiling_of(read_model_text(MODEL).network, "ethanol", "glucose")
    Fraction(2, 1)
    """
    held = [_electrons(network.find_species(name)) for name in (substrate, product)]
    return held[0] / held[1] if held[0] and held[1] and held[1] > 0 else None


def _electrons(species: Species | None) -> Fraction | None:
    if species is None or species.formula is None:
        return None
    return degree_of_reduction(species.formula)


def _carbon(species: Species | None) -> Fraction:
    return species.formula.count("C") if species is not None and species.formula else Fraction(0)


def release_rows(problem: Problem, network: Network) -> dict[str, Array]:
    """The release of each boundary species in moles, as a row over the fluxes."""
    rows: dict[str, Array] = {}
    for i, row in enumerate(problem.rows):
        if row.kind is RowKind.ROLE:
            species = network.find_species(row.name)
            assert species is not None
            sign = default_direction(species.role).sign
            rows[row.name] = sign * problem.matrix[i] / float(moles_of(network, row.name))
    return rows


def growth_row(problem: Problem, network: Network) -> Array | None:
    """The release of all biomass in moles; None where the model has none."""
    rows = release_rows(problem, network)
    own = [rows[s.name] for s in network.boundary if s.role is Role.BIOMASS]
    return np.sum(own, axis=0) if own else None


def find_facts(member: Member, demands: Demands, best: Best, product: str) -> Facts | None:
    """All that is told of an optimum; None where there is none, or it makes nothing."""
    if not best.amount:
        return None
    network, problem = member.case.network, best.problem
    amount = float(best.amount / moles_of(network, product))
    at_best = hold_optimum(problem, best.cost, best.best, Sense.MAXIMISE, 1.0)
    rows = release_rows(problem, network)
    names = list(rows)
    wasted = _surplus_rows(member, problem)
    needed = {name: _needed(row, problem, demands) / amount for name, row in wasted.items()}
    asked = np.array([*rows.values(), *wasted.values()])
    ranges = find_ranges(at_best, asked)
    low, high = ranges.low / amount, ranges.high / amount
    fluxes = _least_oxygen(at_best, rows, network)
    releases = _cleaned({name: float(row @ fluxes) / amount for name, row in rows.items()})
    oxygen = next((n for n in names if is_oxygen(network.find_species(n))), None)
    gas = next((n for n in names if _is_gas(network.find_species(n))), None)
    place = names.index(oxygen) if oxygen is not None else 0
    heat, base = _heat_and_base(releases, network)
    prices, holding = _prices(member, demands, best, product)
    return Facts(
        holding=holding,
        prices=prices,
        oxygen=None if oxygen is None else max(0.0, -releases[oxygen]) + 0.0,
        oxygen_most=None if oxygen is None else _tidy(-low[place]),
        carbon_dioxide=None if gas is None else releases[gas],
        heat=heat,
        base=base,
        by_products=tuple(
            ByProduct(name, _tidy(low[k]), _tidy(high[k]))
            for k, name in enumerate(names)
            if _is_by_product(network, name, product, gas) and high[k] > _DUST
        ),
        surplus=tuple(
            (name, _tidy(high[len(names) + k] - needed[name]))
            for k, name in enumerate(wasted)
        ),
        destinations=_destinations(releases, member, product),
        releases=tuple(releases.items()),
        fluxes=tuple(zip(problem.columns, (fluxes / amount).tolist(), strict=True)),
    )


def _is_by_product(network: Network, name: str, product: str, gas: str | None) -> bool:
    species = network.find_species(name)
    assert species is not None
    return name not in (product, gas) and species.role in (Role.PRODUCT, Role.EXCHANGE)


def _is_gas(species: Species | None) -> bool:
    """Whether a species is carbon dioxide."""
    counts = dict(species.formula.counts) if species is not None and species.formula else {}
    return counts == {"C": 1, "O": 2}


def _least_oxygen(at_best: Problem, rows: Mapping[str, Array], network: Network) -> Array:
    """Of all optima the one with least oxygen uptake, and of these the least total flux."""
    for name, row in rows.items():
        if is_oxygen(network.find_species(name)):
            found = Programme(at_best).minimise(-row)
            at_best = hold_optimum(at_best, -row, found, Sense.MINIMISE, 1.0)
    return least_total_flux(at_best)


def _needed(spent: Array, problem: Problem, demands: Demands) -> float:
    """What maintenance needs of an energy carrier, as far as it is in force."""
    total = 0.0
    for i, kind in enumerate(demands.kinds):
        if kind is Demand.MAINTENANCE and isfinite(problem.row_low[i]):
            total += problem.row_low[i] * float(spent @ (problem.matrix[i] != 0))
    return total


def _surplus_rows(member: Member, problem: Problem) -> dict[str, Array]:
    """What plain spenders take of each energy carrier, as rows over the fluxes."""
    energy = {s.name for s in member.case.network.carriers if is_energy(s)}
    spends = {r.name for r in spenders(member.case.network)}
    rows: dict[str, Array] = {}
    for i, row in enumerate(problem.rows):
        if row.kind is RowKind.BALANCE and row.name in energy:
            is_spent = np.array([name in spends for name in problem.columns])
            taken = np.where(is_spent, -problem.matrix[i], 0.0)
            if taken.any():
                rows[row.name] = taken
    return rows


def _heat_and_base(
    releases: Mapping[str, float], network: Network
) -> tuple[Heat | None, float | None]:
    try:
        return heat_of(releases, network), find_implied(network, releases).base
    except MisuseError:  # a boundary species without a formula
        return None, None


def _destinations(
    releases: Mapping[str, float], member: Member, product: str
) -> tuple[Destination, ...]:
    """The shares of the substrate's carbon and electrons in what leaves; oxygen takes four."""
    network, substrate = member.case.network, member.case.substrate
    source = network.find_species(substrate)
    used = -releases[substrate]
    carbon, electrons = float(_carbon(source)) * used, float(_electrons(source) or 0) * used
    found: list[Destination] = []
    for name, amount in releases.items():
        species = network.find_species(name)
        held = float(_electrons(species) or 0)
        if name == substrate or not amount:
            continue
        share = float(_carbon(species)) * amount
        found.append(
            Destination(
                name,
                share / carbon if carbon else None,
                held * amount / electrons if electrons else None,
            )
        )
    found = [d for d in found if any(abs(x or 0.0) > _DUST for x in (d.carbon, d.electrons))]
    return tuple(sorted(found, key=lambda d: (d.name != product, -abs(d.electrons or 0.0))))


def _prices(
    member: Member, demands: Demands, best: Best, product: str
) -> tuple[tuple[SpeciesPrice, ...], tuple[Holding, ...]]:
    """The prices of carriers, and what the first bit more of anything would give."""
    network, problem = member.case.network, best.problem
    if not best.proven.proof.verified:
        return (), ()
    per_mole = float(moles_of(network, product))
    carriers = {s.name for s in network.carriers}
    asked = [
        i
        for i, row in enumerate(problem.rows)
        if (row.kind is RowKind.BALANCE and row.name in carriers)
        or (row.kind not in (RowKind.BALANCE, RowKind.ROLE)
            and demands.kinds[i] is not Demand.SUBSTRATE)
        or (row.kind is RowKind.ROLE and _is_gas(network.find_species(row.name)))
    ]  # fmt: skip
    found = find_prices(problem, -best.cost, best.proven, asked)
    prices: list[SpeciesPrice] = []
    holding: list[Holding] = []
    for i, price in zip(asked, found, strict=True):
        row = problem.rows[i]
        ends = tuple(x / per_mole + 0.0 for x in (price.value, price.low, price.high))
        if row.kind is RowKind.BALANCE:
            prices.append(SpeciesPrice(row.name, *ends))
            gain = ends[1]
        elif problem.row_low[i] == problem.row_high[i]:
            gain = max(-ends[2], ends[1])
        else:
            # A high bound that is raised, or a low one that is lowered.
            gain = -ends[2] if isfinite(problem.row_high[i]) else ends[1]
        kind = _kind(network, row, demands.kinds[i])
        if gain <= _DUST or kind is None or demands.kinds[i] in _DEMANDED:
            continue
        if row.quantity is None or row.quantity.name not in member.case.closed:
            holding.append(Holding(kind, _name(network, row, kind), gain))
    return tuple(prices), _with_ceilings(network, best, member, product, holding)


def _kind(network: Network, row: Row, demand: Demand) -> Limiting | None:
    if row.kind is RowKind.ROLE:
        return Limiting.CARBON
    if row.kind is not RowKind.BALANCE:
        return Limiting.OXYGEN if demand is Demand.OXYGEN else Limiting.LIMIT
    species = network.find_species(row.name)
    cargo = species.cargo if species is not None else None
    if species is None or cargo is None:
        return None
    if is_energy(species):
        return Limiting.ENERGY
    return Limiting.ELECTRONS if cargo.electrons and not cargo.formula.count("C") else None


def _name(network: Network, row: Row, kind: Limiting) -> str:
    return f"{row.name} taken up" if kind is Limiting.CARBON else row.name


def _with_ceilings(
    network: Network, best: Best, member: Member, product: str, holding: list[Holding]
) -> tuple[Holding, ...]:
    """The ceilings that are reached; carbon where nothing else holds the yield back."""
    case = member.case
    assert best.amount is not None
    moles = best.amount / moles_of(network, product)
    used = best.question.uptake / moles_of(network, case.substrate)
    reached = moles / used
    found = list(holding)
    if reached == ceiling_of(network, product, case.substrate):
        found.append(Holding(Limiting.ELECTRONS, "electrons of the substrate", None))
    carbon = [_carbon(network.find_species(n)) for n in (case.substrate, product)]
    at_carbon = bool(carbon[1]) and reached == carbon[0] / carbon[1]
    if at_carbon or not found:
        found.append(Holding(Limiting.CARBON, "carbon of the substrate", None))
    return tuple(sorted(found, key=lambda h: -(h.gain or 0.0)))


def _cleaned(releases: dict[str, float]) -> dict[str, float]:
    size = max(map(abs, releases.values()), default=0.0)
    return {n: 0.0 if abs(x) <= _DUST * size else x for n, x in releases.items()}


def _tidy(value: float) -> float:
    return 0.0 if abs(value) <= _DUST else float(value)
