"""What is asked of a case: the product alone, with maintenance, with what is kept back."""

from __future__ import annotations

from collections.abc import Collection
from enum import Enum
from fractions import Fraction
from math import inf, isfinite

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.network.model import (
    Basis,
    CargoKind,
    Direction,
    Network,
    Quantity,
    QuantityKind,
    Reaction,
    Role,
    Species,
)
from fluxnet.solving.forms import as_fraction
from fluxnet.solving.problem import Row, RowKind
from fluxnet.solving.quantities import default_direction
from fluxnet.studies.compare_cases import Case
from fluxnet.studies.compare_family import Member
from fluxnet.studies.heat import is_oxygen

__all__ = [
    "DEMANDS", "Demand", "Demands", "Mode", "Question", "ask", "find_demands", "is_spender",
    "moles_of", "spenders",
]  # fmt: skip

Array = NDArray[np.float64]
Bounds = tuple[Fraction | None, Fraction | None]


class Mode(Enum):
    """Which demands on the substrate stand beside the product's."""

    ALONE = "alone"
    KEPT = "with maintenance"
    RESERVED = "with the reserve"


class Demand(Enum):
    """What a row of a case is there for.

    ``STRUCTURE``: balances, roles, limits at zero, ratios. ``SUBSTRATE``: the uptake that the
    yield is per. ``OXYGEN``: a limit on its uptake. ``LIMIT``: another limit in absolute units.
    ``MAINTENANCE``: a lower limit or measured value of a reaction that only spends carriers.
    ``GROWTH``, ``RESERVE``: what is kept back for growth, or for something else.
    ``MEASURED``: a measured value of one cultivation, which says nothing of what is possible.
    """

    STRUCTURE = "structure"
    SUBSTRATE = "substrate"
    OXYGEN = "oxygen"
    LIMIT = "limit"
    MAINTENANCE = "maintenance"
    GROWTH = "growth"
    RESERVE = "reserve"
    MEASURED = "measured"


_BASE = frozenset({Demand.STRUCTURE, Demand.SUBSTRATE, Demand.OXYGEN, Demand.LIMIT})
DEMANDS = {
    Mode.ALONE: _BASE,
    Mode.KEPT: _BASE | {Demand.MAINTENANCE},
    Mode.RESERVED: _BASE | {Demand.MAINTENANCE, Demand.GROWTH, Demand.RESERVE},
}
"""The demands in force in each mode."""


@record
class Demands:
    """What each row of a case is there for.

    ``modes`` are those that differ from the one before; ``left_out`` the limits that take no
    part because no uptake gives the substrate a size, or because they are measured values.
    ``absolute`` tells of each row whether its bounds are in absolute units and not zero.
    """

    kinds: tuple[Demand, ...]
    absolute: tuple[bool, ...]
    modes: tuple[Mode, ...]
    left_out: tuple[str, ...]


@record
class Question:
    """The bounds of a case's rows, and the uptake that they hold.

    ``exact`` are the bounds that no decimal may tell: the substrate's, by row.
    """

    low: Array
    high: Array
    uptake: Fraction
    exact: tuple[tuple[int, Bounds], ...]

    @property
    def bounds(self) -> tuple[Bounds, ...]:
        """All bounds in exact numbers, from the decimals as written."""
        ends = zip(self.low.tolist(), self.high.tolist(), strict=True)
        found = [(_exact(low), _exact(high)) for low, high in ends]
        for k, pair in self.exact:
            found[k] = pair
        return tuple(found)


def spenders(network: Network) -> tuple[Reaction, ...]:
    """The reactions that do nothing but spend carriers."""
    carriers = {s.name for s in network.carriers}
    return tuple(r for r in network.reactions if is_spender(r, carriers))


def is_spender(reaction: Reaction, carriers: Collection[str]) -> bool:
    """Whether a reaction does nothing but spend carriers."""
    return not reaction.right and all(t.species in carriers for t in reaction.left)


def is_energy(species: Species) -> bool:
    """Whether a species is a carrier of energy alone."""
    return species.cargo is not None and species.cargo.kind is CargoKind.ENERGY


def moles_of(network: Network, name: str) -> Fraction:
    """The units of the basis in one mole of a boundary species."""
    species = network.find_species(name)
    assert species is not None
    if network.basis is not Basis.CARBON or species.formula is None:
        return Fraction(1)
    return species.formula.count("C") or Fraction(1)


def find_demands(member: Member) -> Demands:
    """What each row of a case is there for, and which modes differ.

    Raises
    ------
    MisuseError
        Where a reserve in absolute units is asked for and nothing gives the uptake.
    """
    case = member.case
    spends = {r.name for r in spenders(case.network)}
    kinds: list[Demand] = []
    absolute: list[bool] = []
    left_out: list[str] = []
    modes = {Mode.ALONE: None}
    for row, low, high in zip(member.labels, member.low, member.high, strict=True):
        if row.quantity is None:
            kinds.append(Demand.STRUCTURE)
            absolute.append(False)
            continue
        kind = _kind(case, row, low, high, spends)
        size = row.ratio is None and any(isfinite(end) and end for end in (low, high))
        kinds.append(kind)
        absolute.append(size)
        if kind is Demand.MEASURED:
            left_out.append(row.name)
        elif case.uptake is None and size and kind is not Demand.SUBSTRATE:
            if kind in (Demand.GROWTH, Demand.RESERVE) and row.quantity in case.reserved:
                raise MisuseError(
                    f"a reserve of {row.quantity} needs the uptake of {case.substrate}: give "
                    f"--uptake, or reserve a ratio such as `X / {case.substrate} = 0.1`"
                )
            left_out.append(row.name)
        elif kind is Demand.MAINTENANCE:
            modes[Mode.KEPT] = None
        elif kind in (Demand.GROWTH, Demand.RESERVE):
            modes[Mode.RESERVED] = None
    ordered = tuple(mode for mode in Mode if mode in modes)
    return Demands(tuple(kinds), tuple(absolute), ordered, tuple(dict.fromkeys(left_out)))


def _kind(case: Case, row: Row, low: float, high: float, spends: Collection[str]) -> Demand:
    quantity = row.quantity
    if quantity is None:
        return Demand.STRUCTURE
    if quantity.kind is QuantityKind.RATE and quantity.name == case.substrate:
        is_uptake = quantity.direction is Direction.IN or row.kind is RowKind.ROLE
        return Demand.SUBSTRATE if is_uptake else Demand.STRUCTURE
    if row.kind is RowKind.ROLE:
        return Demand.STRUCTURE
    asks = isfinite(low) and (low > 0 or (row.ratio is not None and row.ratio > 0 and low == 0))
    over = quantity.numerator or quantity
    if asks and over.kind is QuantityKind.FLUX and over.name in spends and row.ratio is None:
        return Demand.MAINTENANCE
    if asks and _is_growth(case.network, over):
        return Demand.GROWTH
    if quantity in case.reserved:
        return Demand.RESERVE
    if row.kind is RowKind.MEASURED_LIMIT:
        return Demand.MEASURED
    if row.ratio is not None:
        return Demand.STRUCTURE
    species = case.network.find_species(over.name)
    if over.direction is Direction.IN and is_oxygen(species):
        return Demand.OXYGEN
    return Demand.LIMIT if any(isfinite(e) and e for e in (low, high)) else Demand.STRUCTURE


def _is_growth(network: Network, quantity: Quantity) -> bool:
    if quantity.kind is QuantityKind.MU:
        return True
    species = network.find_species(quantity.name)
    return species is not None and species.role is Role.BIOMASS


def ask(
    member: Member,
    demands: Demands,
    held: Collection[Demand],
    uptake: tuple[Fraction, Fraction] | None = None,
    moved: dict[int, float] | None = None,
) -> Question:
    """The bounds of a case's rows where some demands are in force.

    Parameters
    ----------
    uptake
        Least and most of the substrate's; by default exactly that of the case, or one mole.
    moved
        Other values of some rows' lower bounds (a maintenance that is uncertain).
    """
    case = member.case
    if uptake is None:
        amount = case.uptake
        if amount is None:
            amount = moles_of(case.network, case.substrate)
        uptake = (amount, amount)
    species = case.network.find_species(case.substrate)
    assert species is not None
    turned = default_direction(species.role) is Direction.OUT
    lows, highs = list(member.low), list(member.high)
    exact: list[tuple[int, Bounds]] = []
    loose = case.uptake is None
    for k, kind in enumerate(demands.kinds):
        if kind is Demand.STRUCTURE and not (loose and demands.absolute[k]):
            continue
        if kind is Demand.SUBSTRATE and member.labels[k].kind is RowKind.ROLE:
            ends = (-uptake[1], -uptake[0]) if turned else uptake
            exact.append((k, ends))
            lows[k], highs[k] = float(ends[0]), float(ends[1])
        elif kind is Demand.SUBSTRATE or kind not in held or (loose and demands.absolute[k]):
            lows[k], highs[k] = -inf, inf
        elif kind is Demand.MAINTENANCE:
            lows[k] = member.low[k] if moved is None else moved.get(k, member.low[k])
            highs[k] = inf if highs[k] == member.low[k] else highs[k]
    return Question(np.array(lows), np.array(highs), uptake[1], tuple(exact))


def _exact(value: float) -> Fraction | None:
    if not isfinite(value):
        return None
    return Fraction(int(value)) if value.is_integer() else as_fraction(value)
