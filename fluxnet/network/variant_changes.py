"""What variants change, key by key; overriding and clashes decided without any order.

A change is keyed by the thing that it sets: a species, a parameter, a reaction, the limit on
one quantity in one direction. Of the variants that take part (those named and all they build
on, each once) a descendant's change hides its ancestors'. Where two variants remain, of which
neither builds on the other, their changes must be equal.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from enum import Enum

from fluxnet.ground.record import record
from fluxnet.ground.source import NOWHERE, Span
from fluxnet.network.model import (
    Direction,
    Limit,
    Parameter,
    Quantity,
    QuantityKind,
    Reaction,
    Species,
    Variant,
)

__all__ = [
    "NO_DOUBT", "Change", "ChangeKind", "Doubt", "Key", "Thing", "changes_of",
    "keys_of_limit", "keys_of_quantity", "plain",
]  # fmt: skip

Thing = Species | Parameter | Reaction | Limit


class ChangeKind(Enum):
    """What kind of thing a change sets; the value is the word for it."""

    SPECIES = "species"
    PARAMETER = "parameter"
    REACTION = "reaction"
    LIMIT = "limit"


@record
class Key:
    """The thing that a change sets."""

    kind: ChangeKind
    name: str = ""
    quantity: Quantity | None = None

    def __str__(self) -> str:
        if self.kind is ChangeKind.LIMIT:
            return f"limit {self.quantity}"
        return self.name


@record
class Change:
    """One change of one variant; ``value`` None is a drop.

    A parameter's value holds only what its ``set`` line gives.
    """

    key: Key
    variant: str
    value: Thing | None
    span: Span = NOWHERE


@record
class Doubt:
    """Names of which faulty lines may have said something, so that nothing is told of them.

    ``things`` may be declared by such a line, or have a fault in their declaration; ``dropped``
    may be dropped, and ``limited`` limited, by one.
    """

    things: frozenset[str] = frozenset()
    dropped: frozenset[str] = frozenset()
    limited: frozenset[str] = frozenset()


NO_DOUBT = Doubt()


def keys_of_quantity(quantity: Quantity) -> tuple[Key, ...]:
    """The keys that a quantity stands for: a rate without a direction stands for both.

    Examples
    --------
    >>> [str(k) for k in keys_of_quantity(Quantity(QuantityKind.RATE, "CO2"))]
    ['limit CO2 in', 'limit CO2 out']
    """
    if quantity.kind is QuantityKind.RATE and quantity.direction is None:
        return tuple(
            Key(ChangeKind.LIMIT, quantity=replace(quantity, direction=d)) for d in Direction
        )
    return (Key(ChangeKind.LIMIT, quantity=quantity),)


def keys_of_limit(limit: Limit) -> tuple[Key, ...]:
    """The keys that a limit sets: ``between in 1 and out 5`` sets both directions.

    Examples
    --------
    >>> from fractions import Fraction
    >>> from fluxnet.network.model import Relation
    >>> gas = Quantity(QuantityKind.RATE, "CO2", Direction.OUT)
    >>> span = Limit(gas, Relation.BETWEEN, Fraction(-1), Fraction(5))
    >>> [str(key) for key in keys_of_limit(span)]
    ['limit CO2 in', 'limit CO2 out']
    """
    quantity = limit.quantity
    if quantity.kind is QuantityKind.RATE and limit.low is not None and limit.low < 0:
        return keys_of_quantity(replace(quantity, direction=None))
    return keys_of_quantity(quantity)


def changes_of(variant: Variant, context: frozenset[str]) -> Iterator[Change]:
    """The changes that a variant makes itself.

    ``context`` are the names of species that are there before it: a dropped name among them is
    a species, any other a reaction.

    Parameters
    ----------
    context
        The species that are there before it, by name.

    Examples
    --------
    >>> from fluxnet.network.model import Drop
    >>> lean = Variant("lean", drops=(Drop("oxphos"), Drop("formate")))
    >>> [(str(c.key), c.key.kind.value) for c in changes_of(lean, frozenset({"formate"}))]
    [('oxphos', 'reaction'), ('formate', 'species')]
    """
    for drop in variant.drops:
        if drop.quantity is not None:
            for key in keys_of_quantity(drop.quantity):
                yield Change(key, variant.name, None, drop.span)
        else:
            kind = ChangeKind.SPECIES if drop.name in context else ChangeKind.REACTION
            yield Change(Key(kind, drop.name), variant.name, None, drop.span)
    for species in variant.species:
        yield Change(Key(ChangeKind.SPECIES, species.name), variant.name, species, species.span)
    for setting in variant.settings:
        yield Change(Key(ChangeKind.PARAMETER, setting.name), variant.name, setting, setting.span)
    for reaction in variant.reactions:
        yield Change(Key(ChangeKind.REACTION, reaction.name), variant.name, reaction, reaction.span)
    for limit in variant.limits:
        for key in keys_of_limit(limit):
            yield Change(key, variant.name, limit, limit.span)


def plain(thing: Thing | None) -> object:
    """What two equal things have in common: all but where they stand in the text.

    Examples
    --------
    >>> from fractions import Fraction
    >>> one = Parameter("a", Fraction(1), span=Span("core.flux", 3))
    >>> plain(one) == plain(Parameter("a", Fraction(1)))
    True
    """
    if isinstance(thing, Reaction):
        terms = tuple(
            (sign, t.species, None if t.solved else t.coefficient, t.half_unit)
            for sign, t in thing.terms
        )
        return (thing.name, thing.compartment, thing.reversible, terms)
    return None if thing is None else replace(thing, span=NOWHERE)
