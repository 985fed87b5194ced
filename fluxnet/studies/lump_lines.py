"""Lumped reactions as lines of the language, and why one cannot hold a bundle."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from fractions import Fraction
from math import gcd, lcm

from fluxnet.network.amounts import coefficient_text, decimals_of
from fluxnet.network.expression import Expression
from fluxnet.network.line_balance import Contents, Verdict, balance_line
from fluxnet.network.model import Network, Reaction, Role, Term
from fluxnet.network.variant import BASE
from fluxnet.studies.lump_bundle import Bundle, Net
from fluxnet.studies.lump_result import Why

__all__ = ["line_of", "refusal_of", "side_terms", "size_of"]

_WIDEST = 10**9
_LARGEST = 24
_MOST_DECIMALS = 4
Values = Mapping[str, Fraction]


def refusal_of(
    bundle: Bundle, contents: Contents, settings: Mapping[str, Values]
) -> tuple[Why, str] | None:
    """Why no line can hold a bundle, or None.

    ``settings`` are the values of the parameters as the model has them and in each variant.
    """
    for name, amount in bundle.net.items():
        told = _sign_words(amount, settings)
        if told:
            return Why.SIGN, f"the coefficient of {name} would be {amount}, {told}"
    sizes = [abs(amount.exact(settings[BASE])) for amount in bundle.net.values()]
    if sizes and max(sizes) > _WIDEST * min(sizes):
        return Why.WIDE, "coefficients would lie too far apart"
    line = line_of(bundle, "lumped", contents.network, settings[BASE])
    if balance_line(line, contents).verdict is not Verdict.OPEN:
        return None
    rounded = [
        name for name in bundle.weights
        if (one := contents.network.find_reaction(name)) is not None
        and balance_line(one, contents).verdict is Verdict.ROUNDING
    ]  # fmt: skip
    if rounded:
        return Why.BALANCE, f"{rounded[0]} balances only within its rounding; ? would mend it"
    return Why.BALANCE, "the compositions of what is kept do not balance without it"


def _sign_words(amount: Expression, settings: Mapping[str, Values]) -> str:
    """Where a coefficient has no sign, or another one than at the parameters' values."""
    signs: set[bool] = set()
    for name, values in settings.items():
        where = "at the parameters' values" if name == BASE else f"in the variant {name}"
        try:
            value = amount.exact(values)
        except ZeroDivisionError:
            return f"which divides by zero {where}"
        if not value:
            return f"which is zero {where}"
        signs.add(value > 0)
        if len(signs) > 1:
            return f"which changes its sign {where}"
    return ""


def line_of(
    bundle: Bundle, name: str, network: Network, values: Values, factor: Fraction | None = None
) -> Reaction:
    r"""A bundle as a reaction, per an amount that makes its numbers easy to read.

    Per mole of biomass where it makes any, else in smallest whole numbers where these are
    small, else per mole of what it uses first.

    Examples
    --------
    >>> from fluxnet.network.expression import constant
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text("substrate glucose\nproduct ethanol, CO2\ncompartment c\n"
    ...     "    ferment : glucose -> 2 ethanol + 2 CO2\n").network
    >>> net = {"glucose": constant(-3), "ethanol": constant(6), "CO2": constant(6)}
    >>> line = line_of(Bundle("c", net, {}, False), "lump", network, {})
    >>> [(sign, t.species, str(t.coefficient)) for sign, t in line.terms]
    [(-1, 'glucose', '1'), (1, 'ethanol', '2'), (1, 'CO2', '2')]
    """
    factor = size_of(bundle, network, values) if factor is None else factor
    net = {species: amount.scaled(factor) for species, amount in bundle.net.items()}
    left, right = (
        tuple(replace(t, written=_written(t.coefficient)) for t in side)
        for side in side_terms(net, network, values)
    )
    return Reaction(name, bundle.compartment, left, right, bundle.reversible)


def side_terms(
    net: Net, network: Network, values: Values
) -> tuple[tuple[Term, ...], tuple[Term, ...]]:
    """What a conversion uses and what it makes, in the order in which it is read."""
    left: list[Term] = []
    right: list[Term] = []
    for species in sorted(net, key=_reading_order(network).__getitem__):
        if net[species].exact(values) < 0:
            left.append(Term(species, -net[species]))
        else:
            right.append(Term(species, net[species]))
    return tuple(left), tuple(right)


def _written(amount: Expression | None) -> str:
    return "" if amount is None or amount.number == 1 else coefficient_text(amount)


def _reading_order(network: Network) -> dict[str, tuple[int, int]]:
    """What is read first: organic species, then CO2 and the like, then carriers."""
    ranks = {Role.CARRIER: 2, Role.EXCHANGE: 1, Role.BIOMASS: -1}
    return {s.name: (ranks.get(s.role, 0), k) for k, s in enumerate(network.species)}


def size_of(bundle: Bundle, network: Network, values: Values) -> Fraction:
    """The factor by which a bundle is written; see :func:`line_of`."""
    names = sorted(bundle.net, key=_reading_order(network).__getitem__)
    for name in names:
        species, number = network.find_species(name), bundle.net[name].constant_value
        if species is not None and species.role is Role.BIOMASS and number:
            return 1 / abs(number)
    numbers = [n for name in names if (n := bundle.net[name].constant_value) is not None]
    if not numbers:
        return Fraction(1)
    below = lcm(*(n.denominator for n in numbers))
    whole = Fraction(below, gcd(*(int(n * below) for n in numbers)))
    if all(abs(n * whole) <= _LARGEST for n in numbers):
        return whole
    first = [bundle.net[n] for n in names if bundle.net[n].exact(values) < 0]
    lead = next((n for e in first if (n := e.constant_value)), numbers[0])
    small = 1 / abs(lead)
    decimals = [decimals_of(n * small) for n in numbers]
    short = all(d is not None and d <= _MOST_DECIMALS for d in decimals)
    return small if short else whole
