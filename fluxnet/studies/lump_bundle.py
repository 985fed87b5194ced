"""Reactions run together in fixed proportions, and the exact elimination of what they pass on.

The conversions of some reactions at which a species is neither left over nor missing are a cone.
Where one of the reactions runs both ways it takes up what the others leave: added to each of
them it makes them balanced, and goes. Else each reaction that makes the species is joined with
each that uses it; these pairs span the whole cone (one step of the double description method,
Motzkin et al. 1953; from memory). Both are exact, and hold for every value of the parameters as
long as no parameter stands where is divided or where a sign decides.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from fractions import Fraction
from math import gcd, lcm

from fluxnet.ground.record import record
from fluxnet.network.expression import ONE, ZERO, Expression
from fluxnet.network.model import Network, Reaction

__all__ = ["Bundle", "added", "bundles_of", "eliminated", "net_of", "pivot_of", "same_net"]

Net = Mapping[str, Expression]


@record
class Bundle:
    """Reactions in fixed proportions: what they make altogether (used: negative).

    ``weights`` are the proportions by reaction, below zero where one runs backwards.
    ``original`` is the reaction itself where it stands alone as the model has it.
    """

    compartment: str
    net: Net
    weights: Net
    reversible: bool
    original: Reaction | None = None

    def of(self, species: str) -> Expression:
        """How much of a species it makes."""
        return self.net.get(species, ZERO)


def bundles_of(network: Network) -> tuple[Bundle, ...]:
    r"""Each reaction of a network, its ``?`` solved, as a bundle of its own.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text(
    ...     "substrate glucose\nproduct ethanol, CO2\ncompartment c\n"
    ...     "    ferment : glucose -> 2 ethanol + 2 CO2\n").network
    >>> {name: str(amount) for name, amount in bundles_of(network)[0].net.items()}
    {'glucose': '0 - 1', 'ethanol': '2', 'CO2': '2'}
    """
    return tuple(
        Bundle(r.compartment, net_of(r), {r.name: ONE}, r.reversible, r)
        for r in network.reactions
    )


def net_of(reaction: Reaction) -> dict[str, Expression]:
    """What a reaction makes of each species; those of which nothing is left are not in it."""
    net: dict[str, Expression] = {}
    for sign, term in reaction.terms:
        if term.coefficient is None:
            raise ValueError(f"reaction {reaction.name} holds a ? that is not solved")
        amount = term.coefficient if sign > 0 else -term.coefficient
        net[term.species] = net.get(term.species, ZERO) + amount
    return {name: amount for name, amount in net.items() if not amount.is_zero}


def pivot_of(species: str, bundles: Sequence[Bundle]) -> int | None:
    """The place of the bundle, running both ways, that takes up what all others leave."""
    found = [
        (len(b.net), k) for k, b in enumerate(bundles)
        if b.reversible and b.of(species).constant_value is not None
    ]
    return min(found)[1] if found else None


def eliminated(species: str, bundles: Sequence[Bundle]) -> tuple[Bundle, ...] | None:
    """The bundles that span the conversions of these, all of which touch a species, without it.

    None where a parameter stands in the way.
    """
    at = pivot_of(species, bundles)
    if at is not None:
        pivot = bundles[at]
        taken = pivot.of(species)
        others = [b for k, b in enumerate(bundles) if k != at]
        return tuple(
            _scaled(added(((ONE, b), (-(b.of(species) / taken), pivot)), b.reversible))
            for b in others
        )
    sizes = [b.of(species).constant_value for b in bundles]
    if any(size is None for size in sizes) or any(b.reversible for b in bundles):
        return None
    known = [(size, b) for size, b in zip(sizes, bundles, strict=True) if size is not None]
    makers = [(size, b) for size, b in known if size > 0]
    users = [(-size, b) for size, b in known if size < 0]
    return tuple(
        _scaled(added(((_number(used), maker), (_number(made), user)), reversible=False))
        for made, maker in makers
        for used, user in users
    )


def added(parts: Iterable[tuple[Expression, Bundle]], reversible: bool) -> Bundle:
    """Bundles times numbers, as one."""
    net: dict[str, Expression] = {}
    weights: dict[str, Expression] = {}
    compartment = ""
    for factor, bundle in parts:
        compartment = compartment or bundle.compartment
        for total, amounts in ((net, bundle.net), (weights, bundle.weights)):
            for name, amount in amounts.items():
                total[name] = total.get(name, ZERO) + factor * amount
    return Bundle(
        compartment,
        {name: amount for name, amount in net.items() if not amount.is_zero},
        {name: amount for name, amount in weights.items() if not amount.is_zero},
        reversible,
    )


def same_net(one: Net, other: Net) -> bool:
    """Whether two conversions are the same, for every value of the parameters."""
    return one.keys() == other.keys() and all(one[name] == other[name] for name in one)


def _scaled(bundle: Bundle) -> Bundle:
    """The bundle with its proportions in smallest whole numbers, as far as they are numbers."""
    numbers = [n for w in bundle.weights.values() if (n := w.constant_value)]
    if not numbers:
        return bundle
    below = lcm(*(n.denominator for n in numbers))
    factor = Fraction(below, gcd(*(int(n * below) for n in numbers)))
    if factor == 1:
        return bundle
    return Bundle(
        bundle.compartment,
        {name: amount.scaled(factor) for name, amount in bundle.net.items()},
        {name: amount.scaled(factor) for name, amount in bundle.weights.items()},
        bundle.reversible,
    )


def _number(value: Fraction) -> Expression:
    return ONE.scaled(value)
