"""Reactions that can carry no flux, each with its cause.

Dead ends and parts that are cut off explain the most; they are told elsewhere. For the rest a
cause is what, if it were lifted, would let the reaction run: a limit at zero, the role of a
boundary species, a carrier's balance, the balance of a species inside. The cheapest lift of one
reaction is found by a linear programme; all reactions that the same lift frees share the cause.
"""

from __future__ import annotations

from collections.abc import Collection, Sequence
from dataclasses import dataclass
from enum import Enum

import numpy as np
from numpy.typing import NDArray

from fluxnet.checks.cone import Cone, Form, FormKind, without
from fluxnet.checks.graph import DeadEnd, Part
from fluxnet.checks.interior import Interior, cone_rows, find_interior
from fluxnet.matrices.stoichiometry import Stoichiometry
from fluxnet.network.model import Network, Role
from fluxnet.solving.linear import Outcome, Programme
from fluxnet.solving.problem import Problem

__all__ = ["Blocked", "BlockedBy", "Obstacle", "find_blocked"]


class BlockedBy(Enum):
    """What keeps a reaction from running."""

    DEAD_END = "dead end"
    CUT_OFF = "cut off"
    LIMIT = "limit"
    ROLE = "role"
    CARRIER = "carrier"
    SPECIES = "species"

    @property
    def price(self) -> float:
        """The price of lifting it: a limit is suspected before a role, a role before a balance."""
        return 10.0 ** list(BlockedBy).index(self)


@dataclass(frozen=True, slots=True)
class Obstacle:
    """One thing that would have to give way.

    ``piles_up`` tells of a balance whether the species would pile up (nothing uses it) rather
    than run short; of the rest it is None.
    """

    by: BlockedBy
    name: str
    piles_up: bool | None = None


@dataclass(frozen=True, slots=True)
class Blocked:
    """Reactions without flux that share a cause; all obstacles would have to give way at once."""

    reactions: tuple[str, ...]
    obstacles: tuple[Obstacle, ...]


def find_blocked(
    network: Network,
    stoich: Stoichiometry,
    cone: Cone,
    interior: Interior,
    dead_ends: Sequence[DeadEnd] = (),
    parts: Sequence[Part] = (),
) -> tuple[Blocked, ...]:
    """All reactions that can carry no flux, grouped by what keeps them from it.

    Parameters
    ----------
    cone
        With every uptake open.
    interior
        That of the cone.
    """
    left = set(interior.blocked)
    groups: list[Blocked] = []
    known = [(BlockedBy.DEAD_END, end.species, end.blocked) for end in dead_ends]
    known += [(BlockedBy.CUT_OFF, part.species[0], part.reactions) for part in parts]
    for by, name, reactions in known:
        mine = tuple(r for r in reactions if r in left)
        left.difference_update(mine)
        if mine:
            groups.append(Blocked(mine, (Obstacle(by, name),)))
    while left:
        first = next(r for r in stoich.reactions if r in left)
        lifted, obstacles = _cheapest_lift(network, cone, first, left)
        freed = left - set(find_interior(without(cone, *lifted)).blocked) | {first}
        groups.append(
            Blocked(tuple(r for r in stoich.reactions if r in freed), obstacles)
        )
        left -= freed
    return tuple(groups)


def _cheapest_lift(
    network: Network, cone: Cone, reaction: str, blocked: Collection[str]
) -> tuple[tuple[Form, ...], tuple[Obstacle, ...]]:
    """The forms whose lifting lets a reaction run, at the least price."""
    place = cone.reactions.index(reaction)
    forms = [*cone.equal, *(s for s in cone.sides if s.kind is not FormKind.DIRECTION)]
    prices = [_price(network, cone, form, blocked) for form in forms]
    rows = cone_rows(cone)
    count, slack = len(cone.reactions), np.eye(len(forms))
    costs = np.concatenate([np.zeros(count), prices, prices])
    ends = [(1.0, 1.0)] + ([(-1.0, -1.0)] if rows.low[place] < 0 else [])
    best: tuple[float, NDArray[np.float64]] | None = None
    for end in ends:
        low = np.concatenate([rows.low, np.zeros(2 * len(forms))])
        high = np.full(len(low), np.inf)
        low[place], high[place] = end
        problem = Problem(
            (*cone.reactions, *(f"{side} {f.name}" for side in "-+" for f in forms)),
            rows.labels,
            np.hstack([rows.matrix, slack, -slack]),
            np.zeros(len(forms)),
            rows.high,
            low,
            high,
        )
        solution = Programme(problem).minimise(costs)
        if solution.outcome is not Outcome.OPTIMAL:
            raise ArithmeticError(f"the solver could not tell what blocks {reaction}")
        if best is None or solution.objective < best[0]:
            best = solution.objective, solution.fluxes[count:]
    assert best is not None
    short, over = best[1][: len(forms)], best[1][len(forms) :]
    lifted = [k for k in range(len(forms)) if max(short[k], over[k]) > 1e-7]
    return (
        tuple(forms[k] for k in lifted),
        tuple(_obstacle(network, forms[k], piles_up=over[k] > short[k]) for k in lifted),
    )


def _obstacle(network: Network, form: Form, *, piles_up: bool) -> Obstacle:
    by = _by(network, form)
    is_balance = by in (BlockedBy.CARRIER, BlockedBy.SPECIES)
    return Obstacle(by, form.name, piles_up if is_balance else None)


def _by(network: Network, form: Form) -> BlockedBy:
    if form.kind is FormKind.LIMIT:
        return BlockedBy.LIMIT
    if form.kind is FormKind.ROLE:
        return BlockedBy.ROLE
    species = network.find_species(form.name)
    is_carrier = species is not None and species.role is Role.CARRIER
    return BlockedBy.CARRIER if is_carrier else BlockedBy.SPECIES


def _price(network: Network, cone: Cone, form: Form, blocked: Collection[str]) -> float:
    """What lifting a form costs.

    A role is suspected only where a blocked reaction works against it; otherwise every
    by-product would do as a sink or source for a carrier that nothing balances.
    """
    by = _by(network, form)
    against = any(
        cone.reactions[j] in blocked and a < 0 for j, a in form.row.items()
    )
    if by is BlockedBy.ROLE and not against:
        return 10 * BlockedBy.SPECIES.price
    return by.price
