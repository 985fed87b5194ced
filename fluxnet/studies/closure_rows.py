"""The rows of a run that a closure can use, as releases of species in moles."""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import dataclass
from fractions import Fraction

from fluxnet.network.biomass import biomass_mass, biomass_mass_sd, growth_factor
from fluxnet.network.model import Basis, Direction, Network, QuantityKind, Role, Species
from fluxnet.rates.measured import MeasuredRate, RatesTable, Run
from fluxnet.studies.closure_world import identity

__all__ = ["ClosureRow", "ClosureRows", "Tie", "balance_unit", "collect_rows"]


@dataclass(frozen=True, slots=True)
class ClosureRow:
    """One row of a run.

    ``name`` is the species, or ``mu``; ``species`` is None for a growth rate that is the sum
    over several biomass species. ``released`` is the moles of the species that one unit of
    the row's value releases, negative for uptake. ``place`` is its index among the run's
    measured rates, None where it has no value; ``order`` that among all rows. ``spread`` is a
    relative error that the value gets from elsewhere (an uncertain ash content).
    """

    name: str
    species: str | None
    direction: Direction | None
    unit: str
    released: Fraction
    place: int | None = None
    order: int = 0
    entry: str | None = None
    spread: float = 0.0


@dataclass(frozen=True, slots=True)
class Tie:
    """A relation among rows that is no balance: mu is the growth of the biomass species."""

    measured: tuple[Fraction, ...]
    unmeasured: tuple[Fraction, ...]


@dataclass(frozen=True, slots=True)
class ClosureRows:
    """All rows of a run that closure uses, and the names of those it cannot use."""

    measured: tuple[ClosureRow, ...]
    unmeasured: tuple[ClosureRow, ...]
    species: tuple[Species, ...]
    ties: tuple[Tie, ...]
    left_out: tuple[str, ...]


def collect_rows(
    run: Run, table: RatesTable, network: Network | None, without: Collection[str]
) -> ClosureRows:
    """The rows of a run with the formulas of their species.

    ``without`` names rows (species or ``mu``) whose values are taken as not measured. Ratios
    and fluxes need a network and are left out.
    """
    rows: list[ClosureRow] = []
    species: dict[str, Species] = {}
    left_out: list[str] = []
    places = {id(rate): k for k, rate in enumerate(run.measured)}
    growth: tuple[int, MeasuredRate] | None = None
    for order, rate in enumerate(run.rates):
        if rate.quantity.kind is QuantityKind.MU:
            growth = order, rate
            continue
        found = _find(rate.quantity.name, table, network)
        if rate.quantity.kind is not QuantityKind.RATE or found is None or found.formula is None:
            left_out.append(str(rate.quantity))
            continue
        species[found.name] = found
        carbon = found.formula.count("C") if run.basis is Basis.CARBON else Fraction(0)
        direction = rate.quantity.direction or Direction.OUT
        place = None if _is_without(found, without) else places.get(id(rate))
        rows.append(ClosureRow(
            found.name, found.name, direction, run.unit,
            Fraction(direction.sign) / (carbon or 1), place, order,
            identity(found.name, found.entry),
        ))  # fmt: skip
    ties: list[list[tuple[ClosureRow, Fraction]]] = []
    if growth is not None:
        place = None if "mu" in without else places.get(id(growth[1]))
        added = _add_growth(run, table, network, rows, species, (place, growth[0]))
        if added is None:
            left_out.append("mu")
        else:
            ties.extend(added)
    rows.sort(key=lambda r: r.order)
    measured = tuple(r for r in rows if r.place is not None)
    unmeasured = tuple(r for r in rows if r.place is None)
    return ClosureRows(
        measured, unmeasured, tuple(species.values()),
        tuple(_tie(pairs, measured, unmeasured) for pairs in ties), tuple(left_out),
    )  # fmt: skip


def balance_unit(unit: str, name: str) -> str:
    """The unit of a balance, from that of the rates.

    Examples
    --------
    >>> balance_unit("mmol/g/h", "carbon"), balance_unit("C-mol/C-mol/h", "electrons")
    ('C-mmol/g/h', 'e-mol/C-mol/h')
    """
    amount, slash, per = unit.partition("/")
    prefix = {"carbon": "C-", "electrons": "e-"}.get(name, "")
    return prefix + amount.strip().removeprefix("C-") + slash + per


def _find(name: str, table: RatesTable, network: Network | None) -> Species | None:
    own = network.find_species(name) if network is not None else None
    return own if own is not None and own.role.is_boundary else table.find_species(name)


def _is_without(species: Species, without: Collection[str]) -> bool:
    told = identity(species.name, species.entry)
    return any(species.name == name or told == identity(name) for name in without)


def _add_growth(
    run: Run,
    table: RatesTable,
    network: Network | None,
    rows: list[ClosureRow],
    species: dict[str, Species],
    where: tuple[int | None, int],
) -> list[list[tuple[ClosureRow, Fraction]]] | None:
    """Add the growth rate: the release of the one biomass, else tied to the several.

    mu = sum q_X M_X / 1000 per gram, and the C-mol of biomass made per C-mol. None where mu
    cannot be told in the unit of the run, or no biomass is known.
    """
    known = (network.boundary if network is not None else ()) or table.species
    biomass = [s for s in known if s.role is Role.BIOMASS and s.formula is not None]
    factors = [growth_factor(s, run.basis) for s in biomass]
    if not biomass or None in factors:
        return None
    by_name = {r.name: r for r in rows}
    pairs = [(s, Fraction(f)) for s, f in zip(biomass, factors, strict=True) if f is not None]
    if len(pairs) == 1:
        one, factor = pairs[0]
        spread = biomass_mass_sd(one) / biomass_mass(one) if run.basis is Basis.SPECIFIC else 0.0
        growth = ClosureRow(
            "mu", one.name, None, "1/h", 1 / factor, *where, identity(one.name, one.entry), spread
        )
        rows.append(growth)
        species[one.name] = one
        if one.name not in by_name:
            return []
        own = by_name[one.name]
        return [[(growth, Fraction(1)), (own, -own.released * factor)]]
    growth = ClosureRow("mu", None, None, "1/h", Fraction(0), *where)
    tie = [(growth, Fraction(-1))]
    for one, factor in pairs:
        species[one.name] = one
        row = by_name.get(one.name)
        if row is None:
            carbon = one.formula.count("C") if one.formula and run.basis is Basis.CARBON else 0
            row = ClosureRow(one.name, one.name, Direction.OUT, run.unit,
                             Fraction(1) / (carbon or 1), None, len(run.rates))  # fmt: skip
            rows.append(row)
        tie.append((row, row.released * factor))
    rows.append(growth)
    return [tie]


def _tie(
    pairs: list[tuple[ClosureRow, Fraction]],
    measured: tuple[ClosureRow, ...],
    unmeasured: tuple[ClosureRow, ...],
) -> Tie:
    weights = {id(row): w for row, w in pairs}
    return Tie(
        tuple(weights.get(id(r), Fraction(0)) for r in measured),
        tuple(weights.get(id(r), Fraction(0)) for r in unmeasured),
    )
