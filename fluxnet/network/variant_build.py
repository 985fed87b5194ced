"""A network made of another and of what is set anew in it."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import replace
from typing import TypeVar

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.source import Span
from fluxnet.network.amounts import number_text
from fluxnet.network.limit_directions import against_directions
from fluxnet.network.model import (
    Direction,
    Limit,
    Network,
    Parameter,
    Quantity,
    QuantityKind,
    Reaction,
    Relation,
    Species,
)
from fluxnet.network.variant_changes import (
    ChangeKind,
    Doubt,
    Key,
    Thing,
    keys_of_limit,
    plain,
)
from fluxnet.network.variant_merge import Merged

__all__ = ["build_variant", "same_network"]

_Named = TypeVar("_Named", Species, Parameter, Reaction)


def build_variant(
    network: Network, merged: Merged, label: str, doubt: Doubt
) -> tuple[Network, tuple[Diagnostic, ...]]:
    """The network with things set anew or taken out, and what is wrong with it.

    What is replaced keeps its place; what is new stands at the end. Nothing is said of
    the things in ``doubt``.
    """
    things = merged.things
    species = _replaced(network.species, ChangeKind.SPECIES, things, Species)
    parameters = _replaced(network.parameters, ChangeKind.PARAMETER, things, Parameter)
    reactions = _replaced(network.reactions, ChangeKind.REACTION, things, Reaction)
    gone = _gone(network, species, reactions) - doubt.things
    limits = [
        limit
        for limit in _limits(network.limits, things)
        if limit.quantity.name not in gone or limit.quantity.kind is QuantityKind.RATIO
    ]
    changed = replace(
        network,
        species=species,
        parameters=parameters,
        reactions=reactions,
        limits=tuple(limits),
        variant=label,
    )
    known = set(network.limits) if reactions == network.reactions else set()
    faults = [
        *against_directions(
            (m for m in limits if m not in known), {r.name: r for r in reactions}
        ),
        *_outside_range(parameters),
        *_same_names(changed),
        *_still_used(changed, gone, merged.drops),
    ]
    return changed, tuple(faults)


def _replaced(
    before: Iterable[_Named],
    kind: ChangeKind,
    things: Mapping[Key, Thing | None],
    typed: type[_Named],
) -> tuple[_Named, ...]:
    after: dict[str, _Named] = {}
    for thing in before:
        new = things.get(Key(kind, thing.name), thing)
        if new is thing:
            after[thing.name] = thing
        elif isinstance(new, typed):
            after[thing.name] = thing if plain(new) == plain(thing) else new
    for key, new in things.items():
        if key.kind is kind and isinstance(new, typed) and key.name not in after:
            after[key.name] = new
    return tuple(after.values())


def _gone(
    network: Network, species: Iterable[Species], reactions: Iterable[Reaction]
) -> frozenset[str]:
    """The names that any variant may hold and that this one does not."""
    known = {s.name for s in network.species} | {r.name for r in network.reactions}
    for variant in network.variants:
        known.update(s.name for s in variant.species)
        known.update(r.name for r in variant.reactions)
    return frozenset(known - {s.name for s in species} - {r.name for r in reactions})


def _limits(before: Iterable[Limit], things: Mapping[Key, Thing | None]) -> Iterator[Limit]:
    """The limits in the end; of one over both directions only the part that is left."""
    by_key: dict[Key, tuple[Limit, ...]] = {}
    for limit in before:
        for key in keys_of_limit(limit):
            by_key[key] = (*by_key.get(key, ()), limit)
    for key, new in things.items():
        if key.kind is not ChangeKind.LIMIT:
            continue
        if isinstance(new, Limit):
            same = [plain(m) for m in by_key.get(key, ())] == [plain(new)]
            by_key[key] = by_key[key] if same else (new,)
        else:
            by_key.pop(key, None)
    told: set[int] = set()
    for key, limits in by_key.items():
        for limit in limits:
            if not all(limit in by_key.get(k, ()) for k in keys_of_limit(limit)):
                yield _part(limit, key.quantity)
            elif id(limit) not in told:
                told.add(id(limit))
                yield limit


def _part(limit: Limit, quantity: Quantity | None) -> Limit:
    """One direction of ``between in A and out B``."""
    if quantity is not None and quantity.direction is Direction.IN and limit.low is not None:
        return replace(
            limit, quantity=quantity, relation=Relation.AT_MOST, low=None, high=-limit.low
        )
    return replace(limit, relation=Relation.AT_MOST, low=None)


def _outside_range(parameters: Iterable[Parameter]) -> Iterator[Diagnostic]:
    for p in parameters:
        below = p.low is not None and p.value < p.low
        above = p.high is not None and p.value > p.high
        if below or above:
            low, high = (number_text(x) if x is not None else "" for x in (p.low, p.high))
            yield Diagnostic(
                Name.OUTSIDE_RANGE,
                f"{p.name} = {number_text(p.value)} lies outside its range [{low}, {high}]",
                p.span,
                mend=f"give the range as well: set {p.name} = {number_text(p.value)} in [..., ...]",
            )


def _same_names(network: Network) -> Iterator[Diagnostic]:
    """One name for two things, which two variants have brought in together."""
    places = {p.name: p.span for p in network.parameters}
    named: tuple[Species | Reaction, ...] = (*network.species, *network.reactions)
    for thing in named:
        if thing.name in places:
            yield Diagnostic(
                Name.VARIANT_CLASH,
                f"in {network.variant} the name {thing.name} stands for two things",
                thing.span,
                mend="rename one of them",
                also=(places[thing.name],),
            )
        places[thing.name] = thing.span


def _still_used(
    network: Network, gone: frozenset[str], drops: Mapping[str, tuple[Span, ...]]
) -> Iterator[Diagnostic]:
    """Reactions and ratios that name what is not there in this variant.

    Each is told at its first use, the other uses and the lines that drop it beside.
    """
    users: dict[str, list[str]] = {}
    places: dict[str, list[Span]] = {}
    for reaction in network.reactions:
        for _, term in reaction.terms:
            if term.species in gone:
                users.setdefault(term.species, []).append(reaction.name)
                places.setdefault(term.species, []).append(term.span)
    for limit in network.limits:
        for part in (limit.quantity.numerator, limit.quantity.denominator):
            if part is not None and part.name in gone:
                users.setdefault(part.name, []).append(f"the limit on {limit.quantity}")
                places.setdefault(part.name, []).append(limit.span)
    for name, names in users.items():
        verb = "use" if len(names) > 1 else "uses"
        yield Diagnostic(
            Name.STILL_USED,
            f"in {network.variant} there is no {name}, which {', '.join(names)} still {verb}",
            places[name][0],
            mend=f"drop {', '.join(names)} as well, or keep {name}",
            also=(*places[name][1:], *drops.get(name, ())),
        )


def same_network(one: Network, other: Network) -> bool:
    r"""Whether two networks hold the same, wherever it stands in the text.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> text = "substrate glucose\nproduct ethanol, CO2\n"
    >>> text += "compartment c\n    ferment : glucose -> 2 ethanol + 2 CO2\n"
    >>> one, other = (read_model_text(t).network for t in (text, "# moved\n" + text))
    >>> same_network(one, other), one == other
    (True, False)
    """
    first: tuple[Thing, ...] = (*one.species, *one.parameters, *one.reactions, *one.limits)
    second: tuple[Thing, ...] = (
        *other.species, *other.parameters, *other.reactions, *other.limits,
    )  # fmt: skip
    return len(first) == len(second) and all(
        a is b or plain(a) == plain(b) for a, b in zip(first, second, strict=True)
    )
