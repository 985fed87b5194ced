"""Why a variant makes nothing of a product: the dead end, carrier, limit or direction."""

from __future__ import annotations

from fluxnet.checks.blocked import Blocked, BlockedBy, Obstacle, find_blocked
from fluxnet.checks.cone import flux_cone
from fluxnet.checks.graph import find_dead_ends, find_parts
from fluxnet.checks.interior import find_interior
from fluxnet.matrices.stoichiometry import stoichiometry
from fluxnet.network.model import Network

__all__ = ["tell_obstacle"]


def tell_obstacle(network: Network, product: str) -> str:
    """What keeps a product from being made, in one sentence.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text('''
    ... substrate glucose
    ... product   ethanol, CO2
    ... carrier   NADH  carries 2 electrons
    ... inside    pyruvate
    ... compartment c
    ...     glycolysis : glucose -> 2 pyruvate + 2 NADH
    ...     keep       : pyruvate + NADH -> ethanol + CO2
    ... limit ethanol <= 0
    ... ''').network
    >>> tell_obstacle(network, "ethanol")
    'keep, which makes it, cannot run: `limit ethanol <= 0` forbids it'
    """
    makers = [
        r.name
        for r in network.reactions
        if any(t.species == product for t in (*r.right, *(r.left if r.reversible else ())))
    ]
    if not makers:
        return f"no reaction makes {product}"
    stoich = stoichiometry(network)
    ends = find_dead_ends(network, stoich)
    closed = {name for end in ends for name in end.blocked}
    parts = tuple(p for p in find_parts(network, stoich) if closed.isdisjoint(p.reactions))
    cone = flux_cone(network, stoich)
    groups = find_blocked(network, cone, find_interior(cone), ends, parts)
    told = [
        f"{name}, which makes it, cannot run: {_reasons(network, group)}"
        for name in makers
        for group in groups
        if name in group.reactions
    ]
    if len(told) < len(makers):
        return "the limits and demands in absolute units leave nothing for it"
    return "; ".join(dict.fromkeys(told))


def _reasons(network: Network, group: Blocked) -> str:
    return " and ".join(_reason(network, obstacle) for obstacle in group.obstacles)


def _reason(network: Network, obstacle: Obstacle) -> str:
    name = obstacle.name
    match obstacle.by:
        case BlockedBy.DEAD_END:
            return f"{name} is a dead end"
        case BlockedBy.CUT_OFF:
            return f"it hangs together with nothing that can be taken up ({name})"
        case BlockedBy.LIMIT:
            return f"`{name}` forbids it"
        case BlockedBy.ROLE:
            species = network.find_species(name)
            what = species.role.value if species is not None else "declared so"
            return f"{name} is a {what} and cannot go the other way"
        case BlockedBy.DIRECTION:
            return f"{name} would have to run backwards"
        case _:
            if obstacle.piles_up:
                return f"the {name} that it makes has nowhere to go"
            return f"nothing can spare the {name} that it needs"
