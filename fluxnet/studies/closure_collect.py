"""The rows of a run that a closure can use: rates of species, the growth rate, ratios of both."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import field, replace
from fractions import Fraction

from fluxnet.ground.record import record
from fluxnet.network.biomass import biomass_mass, biomass_mass_sd, growth_factor
from fluxnet.network.model import (
    Basis,
    Direction,
    Network,
    Quantity,
    QuantityKind,
    Role,
    Species,
)
from fluxnet.rates.measured import MeasuredRate, RatesTable, Run
from fluxnet.solving.quantities import counts_moles
from fluxnet.studies.closure_rows import ClosureRow, ClosureRows, RatioRow, Weights
from fluxnet.studies.closure_world import identity

__all__ = ["collect_rows"]

Sum = tuple[tuple[ClosureRow, Fraction], ...]
_NOTHING = Weights((), ())


@record
class _Ratio:
    """A ratio whose rows have no places yet; ``row`` is t of A - r B = t."""

    told: RatioRow
    over: Sum
    below: Sum
    row: ClosureRow | None


@record
class _Draft:
    """What is collected of one run."""

    run: Run
    table: RatesTable
    network: Network | None
    rows: list[ClosureRow] = field(default_factory=list)
    species: dict[str, Species] = field(default_factory=dict)
    ties: list[Sum] = field(default_factory=list)
    ratios: list[_Ratio] = field(default_factory=list)

    def find(self, name: str) -> ClosureRow | None:
        """The first row of that species."""
        return next((r for r in self.rows if r.species == name), None)

    def known(self, name: str) -> Species | None:
        """The species of that name, the model's before the table's, if it has a formula."""
        own = self.network.find_species(name) if self.network is not None else None
        if own is None or not own.role.is_boundary:
            own = self.table.find_species(name)
        return own if own is not None and own.formula is not None else None


def collect_rows(
    run: Run, table: RatesTable, network: Network | None, aside: Sequence[str] = ()
) -> ClosureRows:
    """The rows of a run with the formulas of their species.

    A ratio needs its two rates: one that has no row gets one without a value, since the ratio
    says that it is exchanged. Fluxes need a network and are left out. ``aside`` are species
    whose rows were taken out of the run.
    """
    draft = _Draft(run, table, network)
    places = {id(rate): k for k, rate in enumerate(run.measured)}
    ratios: list[tuple[int, MeasuredRate]] = []
    growth: list[tuple[int, MeasuredRate]] = []
    left_out: list[str] = []
    for order, rate in enumerate(run.rates):
        kind = rate.quantity.kind
        if kind is QuantityKind.MU:
            growth.append((order, rate))
        elif kind is QuantityKind.RATIO:
            ratios.append((order, rate))
        elif kind is not QuantityKind.RATE or not _add_rate(
            draft, rate.quantity, places.get(id(rate)), order
        ):
            left_out.append(str(rate.quantity))
    for order, rate in growth:
        if not _add_growth(draft, places.get(id(rate)), order):
            left_out.append(str(rate.quantity))
    for order, rate in ratios:
        if not _add_ratio(draft, rate, places.get(id(rate)), order):
            left_out.append(str(rate.quantity))
    return _collected(draft, tuple(left_out), tuple(aside))


def _collected(draft: _Draft, left_out: tuple[str, ...], aside: tuple[str, ...]) -> ClosureRows:
    rows = sorted(draft.rows, key=lambda r: r.order)
    measured = tuple(r for r in rows if r.is_measured)
    unmeasured = tuple(r for r in rows if not r.is_measured)

    def weights(pairs: Sum) -> Weights:
        told = {id(row): weight for row, weight in pairs}
        return Weights(
            tuple(told.get(id(r), Fraction(0)) for r in measured),
            tuple(told.get(id(r), Fraction(0)) for r in unmeasured),
        )

    index = {id(row): k for k, row in enumerate(measured)}
    ratios = tuple(
        replace(
            ratio.told,
            over=weights(ratio.over),
            below=weights(ratio.below),
            row=None if ratio.row is None else index[id(ratio.row)],
        )
        for ratio in draft.ratios
    )
    ties = tuple(weights(pairs) for pairs in draft.ties)
    species = tuple(draft.species.values())
    return ClosureRows(measured, unmeasured, species, ties, ratios, left_out, aside)


def _add_rate(draft: _Draft, quantity: Quantity, place: int | None, order: int) -> bool:
    """Add the rate of a species; False where it has no formula."""
    species = draft.known(quantity.name)
    if species is None:
        return False
    draft.species[species.name] = species
    direction = quantity.direction or Direction.OUT
    draft.rows.append(ClosureRow(
        species.name, species.name, direction, draft.run.unit,
        direction.sign / _per_mole(species, draft.run), place, order,
        identity(species.name, species.entry),
    ))  # fmt: skip
    return True


def _per_mole(species: Species, run: Run) -> Fraction:
    """Units of the run in a mole of the species: its carbon where C-mol are counted."""
    if run.basis is not Basis.CARBON or species.formula is None:
        return Fraction(1)
    return species.formula.count("C") or Fraction(1)


def _add_growth(draft: _Draft, place: int | None, order: int) -> bool:
    """Add the growth rate: the release of the one biomass, else tied to the several.

    mu = sum q_X M_X / 1000 per gram, and the C-mol of biomass made per C-mol. False where mu
    cannot be told in the unit of the run, or no biomass is known.
    """
    run, network = draft.run, draft.network
    known = (network.boundary if network is not None else ()) or draft.table.species
    biomass = [s for s in known if s.role is Role.BIOMASS and s.formula is not None]
    factors = [growth_factor(s, run.basis) for s in biomass]
    if not biomass or None in factors:
        return False
    pairs = [(s, Fraction(f)) for s, f in zip(biomass, factors, strict=True) if f is not None]
    if len(pairs) == 1:
        _add_growth_of_one(draft, *pairs[0], place, order)
        return True
    growth = ClosureRow("mu", None, None, "1/h", Fraction(0), place, order)
    draft.rows.append(growth)
    parts: list[tuple[ClosureRow, Fraction]] = [(growth, Fraction(-1))]
    for one, factor in pairs:
        if draft.find(one.name) is None:
            _add_rate(draft, Quantity(QuantityKind.RATE, one.name, Direction.OUT), None,
                      len(run.rates))  # fmt: skip
        row = draft.find(one.name)
        if row is not None:
            draft.species[one.name] = one
            made = (row, row.released * factor)
            parts += [made, *((t, Fraction(1)) for t in _add_ash(draft, one, made, order))]
    draft.ties.append(tuple(parts))
    return True


def _add_growth_of_one(
    draft: _Draft, biomass: Species, factor: Fraction, place: int | None, order: int
) -> None:
    """Add mu as a row of the only biomass, tied to the biomass' own rate where that has a row."""
    own = draft.find(biomass.name)
    growth = ClosureRow(
        "mu", biomass.name if own is None else None, None, "1/h",
        1 / factor if own is None else Fraction(0), place, order,
        identity(biomass.name, biomass.entry),
    )  # fmt: skip
    draft.species[biomass.name] = biomass
    draft.rows.append(growth)
    whole = (growth, Fraction(1))
    ash = _add_ash(draft, biomass, whole, order, -growth.released)
    if own is not None:
        taken = ((t, Fraction(-1)) for t in ash)
        draft.ties.append((whole, (own, -own.released * factor), *taken))


def _add_ash(
    draft: _Draft,
    biomass: Species,
    growth: tuple[ClosureRow, Fraction],
    order: int,
    released: Fraction = Fraction(0),
) -> tuple[ClosureRow, ...]:
    """What an uncertain ash content takes from a growth rate, if it is uncertain.

    The rate counts dry weight; that of the organic part is mu - t, with t = 0 ± s mu.
    """
    if draft.run.basis is not Basis.SPECIFIC or not biomass.ash_sd:
        return ()
    spread = biomass_mass_sd(biomass) / biomass_mass(biomass)
    name = f"ash of {biomass.name}"
    row = ClosureRow(
        name, biomass.name if released else None, None, "1/h", released, None, order,
        identity(biomass.name, biomass.entry), spread,
    )  # fmt: skip
    draft.rows.append(row)
    told = RatioRow(name, "", order, _NOTHING, _NOTHING, Fraction(0), is_told=False)
    draft.ratios.append(_Ratio(told, ((row, Fraction(1)),), (growth,), row))
    return (row,)


def _add_ratio(draft: _Draft, rate: MeasuredRate, place: int | None, order: int) -> bool:
    """Add a ratio and the relation that it stands for; False where a part is not known."""
    quantity = rate.quantity
    over = _part(draft, quantity, quantity.numerator, order)
    below = _part(draft, quantity, quantity.denominator, order)
    if not over or not below:
        return False
    unit = "mol/mol"
    if not counts_moles(quantity):
        unit = f"({over[0][0].unit})/({below[0][0].unit})"
    if place is None or rate.value is None:
        told = RatioRow(str(quantity), unit, order, _NOTHING, _NOTHING)
        draft.ratios.append(_Ratio(told, over, below, None))
        return True
    # as written: 1.05 and not its nearest binary fraction, so that ranks are those of decimals
    value = Fraction(repr(float(rate.value)))
    row = ClosureRow(str(quantity), None, None, unit, Fraction(0), place, order)
    draft.rows.append(row)
    weights: dict[int, Fraction] = {}
    rows = {id(r): r for r, _ in (*over, *below)}
    for factor, part in ((Fraction(1), over), (-value, below)):
        for one, weight in part:
            weights[id(one)] = weights.get(id(one), Fraction(0)) + factor * weight
    tie = tuple((rows[k], w) for k, w in weights.items())
    draft.ties.append((*tie, (row, Fraction(-1))))
    told = RatioRow(str(quantity), unit, order, _NOTHING, _NOTHING, value)
    draft.ratios.append(_Ratio(told, over, below, row))
    return True


def _part(draft: _Draft, ratio: Quantity, part: Quantity | None, order: int) -> Sum:
    """A part of a ratio by the rows that make it: in moles, or with mu in the run's units.

    Nothing where it is not known.
    """
    if part is None or part.kind not in (QuantityKind.MU, QuantityKind.RATE):
        return ()
    if part.kind is QuantityKind.MU:
        if not any(r.name == "mu" for r in draft.rows):
            _add_growth(draft, None, order)
        return tuple((r, Fraction(1)) for r in draft.rows if r.name == "mu")
    species = draft.known(part.name)
    if species is None:
        return ()
    if draft.find(species.name) is None:
        _add_rate(draft, part, None, order)
    direction = part.direction or Direction.OUT
    per_mole = Fraction(1) if counts_moles(ratio) else _per_mole(species, draft.run)
    return tuple(
        (r, r.released * direction.sign * per_mole)
        for r in draft.rows
        if r.species == species.name
    )
