"""Blocked reactions in words, each cause once."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from fluxnet.checks.blocked import Blocked, BlockedBy, Obstacle
from fluxnet.checks.words import and_list, names_list
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.source import NOWHERE, Span
from fluxnet.network.model import Network, Quantity, QuantityKind, Role
from fluxnet.solving.words import limit_words

__all__ = ["tell_blocked"]


def tell_blocked(
    network: Network, groups: Sequence[Blocked], *, proven: bool = True
) -> tuple[Diagnostic, ...]:
    """A warning for each cause that is told nowhere else.

    Dead ends and parts cut off have diagnostics of their own. A limit at zero is meant to
    close the reactions that touch what it limits: only what else it closes is told, and of a
    variant's limit nothing, for its effects are what one looks at in a variant. What was not
    ``proven`` in exact arithmetic says so.
    """
    told: list[Diagnostic] = []
    for group in groups:
        kinds = {o.by for o in group.obstacles}
        if kinds & {BlockedBy.DEAD_END, BlockedBy.CUT_OFF}:
            continue
        if kinds == {BlockedBy.LIMIT} and _is_meant(network, group):
            continue
        one = _tell(network, group)
        if not proven:
            doubt = "found in floating-point numbers, and not proven exactly"
            one = replace(one, because=f"{one.because}; {doubt}" if one.because else doubt)
        told.append(one)
    return tuple(told)


def _tell(network: Network, group: Blocked) -> Diagnostic:
    first = network.find_reaction(group.reactions[0])
    place = first.span if first is not None else NOWHERE
    reactions = names_list(group.reactions)
    plural = len(group.reactions) > 1
    if len(group.obstacles) == 1:
        obstacle = group.obstacles[0]
        return Diagnostic(
            Name.BLOCKED_REACTION,
            f"{reactions} can carry no flux: {_reason(network, obstacle, plural)}",
            place,
            mend=_mend(network, obstacle),
            also=_also(network, obstacle),
        )
    reasons = [_reason(network, o, plural) for o in group.obstacles]
    return Diagnostic(
        Name.BLOCKED_REACTION,
        f"{reactions} can carry no flux",
        place,
        because=and_list(reasons) or None,
        mend="; and ".join(_mend(network, o) for o in group.obstacles) or None,
        also=tuple(span for o in group.obstacles for span in _also(network, o)),
    )


def _reason(network: Network, obstacle: Obstacle, plural: bool) -> str:
    name = obstacle.name
    if obstacle.by is BlockedBy.LIMIT:
        return f"`{name}` forbids it"
    if obstacle.by is BlockedBy.ROLE:
        species = network.find_species(name)
        way = "taken up" if species is not None and species.role is Role.SUBSTRATE else "released"
        return f"{name} can only be {way}"
    if obstacle.by is BlockedBy.DIRECTION:
        subject = "they would" if plural else "it would"
        return f"{subject} if {name} ran the other way"
    if obstacle.piles_up:
        return f"the {name} that would be made has nowhere to go"
    return f"no {name} can be spared for {'them' if plural else 'it'}"


def _mend(network: Network, obstacle: Obstacle) -> str:
    if obstacle.by is BlockedBy.LIMIT:
        return f"open `{obstacle.name}`, if that is not meant"
    if obstacle.by is BlockedBy.ROLE:
        return f"declare {obstacle.name} as exchange, or turn the reaction"
    if obstacle.by is BlockedBy.DIRECTION:
        return f"turn {obstacle.name}, or write <-> in it, if that is meant"
    verb = "uses" if obstacle.piles_up else "makes"
    return f"add a reaction that {verb} {obstacle.name}, or let one run both ways"


def _also(network: Network, obstacle: Obstacle) -> tuple[Span, ...]:
    if obstacle.by is BlockedBy.LIMIT:
        return tuple(
            limit.span for limit in network.limits if limit_words(limit, network) == obstacle.name
        )
    place = network.find_species(obstacle.name) or network.find_reaction(obstacle.name)
    return (place.span,) if place is not None else ()


def _is_meant(network: Network, group: Blocked) -> bool:
    """Whether a variant set the limits, or every reaction touches what they are set on."""
    names = {o.name for o in group.obstacles}
    limits = [limit for limit in network.limits if limit_words(limit, network) in names]
    of_variants = {limit.span for variant in network.variants for limit in variant.limits}
    if any(limit.high is not None and limit.high < 0 for limit in limits):
        return False  # it asks for a flux backwards: that there is none is not meant
    if all(limit.span in of_variants for limit in limits):
        return True
    touched = {name for limit in limits for name in _names(network, limit.quantity)}
    for name in group.reactions:
        reaction = network.find_reaction(name)
        if reaction is None:
            continue
        if name not in touched and not any(t.species in touched for _, t in reaction.terms):
            return False
    return True


def _names(network: Network, quantity: Quantity) -> tuple[str, ...]:
    """The reactions or species that a quantity is about."""
    if quantity.kind is QuantityKind.MU:
        return tuple(s.name for s in network.boundary if s.role is Role.BIOMASS)
    if quantity.numerator is not None:
        return _names(network, quantity.numerator)
    return (quantity.name,)
