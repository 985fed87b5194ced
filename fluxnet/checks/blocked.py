"""Reactions that can carry no flux, each with its cause.

Dead ends and parts that are cut off explain the most; they are told elsewhere. For the rest a
cause is what, if it were lifted, would let the reaction run: a limit at zero, the role of a
boundary species, a carrier's balance, the direction of a blocked reaction, the balance of a
species inside. All reactions that the same lift frees share the cause.
"""

from __future__ import annotations

from collections.abc import Sequence

from fluxnet.checks.cone import Cone
from fluxnet.checks.graph import DeadEnd, Part
from fluxnet.checks.interior import Interior
from fluxnet.checks.obstacles import BlockedBy, Lifting, Obstacle
from fluxnet.ground.record import record
from fluxnet.network.model import Network

__all__ = ["Blocked", "BlockedBy", "Obstacle", "find_blocked"]


@record
class Blocked:
    """Reactions without flux that share a cause; all obstacles would have to give way at once."""

    reactions: tuple[str, ...]
    obstacles: tuple[Obstacle, ...]


def find_blocked(
    network: Network,
    cone: Cone,
    interior: Interior,
    dead_ends: Sequence[DeadEnd] = (),
    parts: Sequence[Part] = (),
) -> tuple[Blocked, ...]:
    """All reactions that can carry no flux, grouped by what keeps them from it.

    Parameters
    ----------
    cone
        The network's, with every uptake open.
    interior
        That of the cone.

    Raises
    ------
    ArithmeticError
        Where the solver gives up.
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
    if not left:
        return tuple(groups)
    lifting = Lifting(network, cone, left)
    for first in cone.reactions:
        if first in left:
            lift = lifting.cheapest(first)
            freed = left & (lifting.freed(lift) | {first})
            mine = tuple(r for r in cone.reactions if r in freed)
            groups.append(Blocked(mine, lift.obstacles))
            left -= freed
    return tuple(groups)
