"""Names of lumped reactions: from what to what, and by which reaction where that is not enough."""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from fractions import Fraction

from fluxnet.network.model import Network, Role
from fluxnet.studies.lump_bundle import Bundle

__all__ = ["name_bundles"]

_NOT_IN_A_NAME = re.compile(r"[^\w-]+")


def name_bundles(
    bundles: Sequence[Bundle], network: Network, values: Mapping[str, Fraction]
) -> tuple[str, ...]:
    r"""A name for each bundle that is no reaction of the network, each once.

    What holds the most carbon on each side names it; of those with the same name each is told
    by a reaction that it alone holds.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text(
    ...     "substrate glucose\nproduct ethanol, CO2\ncompartment c\n"
    ...     "    ferment : glucose -> 2 ethanol + 2 CO2\n").network
    >>> from fluxnet.network.expression import ONE, constant
    >>> net = {"glucose": constant(-1), "ethanol": constant(2), "CO2": constant(2)}
    >>> ways = [Bundle("c", net, dict.fromkeys(names, ONE), False) for names in ("ab", "ac")]
    >>> name_bundles(ways, network, {})
    ('glucose-to-ethanol-by-b', 'glucose-to-ethanol-by-c')
    """
    plain = [_plain(b, network, values) for b in bundles]
    taken = _taken(network)
    found: list[str] = []
    for bundle, name in zip(bundles, plain, strict=True):
        alike = [b for b, other in zip(bundles, plain, strict=True) if other == name]
        if len(alike) > 1:
            elsewhere = {n for b in alike if b is not bundle for n in b.weights}
            own = [n for n in bundle.weights if n not in elsewhere]
            name = f"{name}-by-{_fit(own[0])}" if own else name
        unique, number = name, 2
        while unique in taken:
            unique, number = f"{name}-{number}", number + 1
        taken.add(unique)
        found.append(unique)
    return tuple(found)


def _plain(bundle: Bundle, network: Network, values: Mapping[str, Fraction]) -> str:
    """From what to what; what makes biomass is called by that alone."""
    for name, amount in bundle.net.items():
        species = network.find_species(name)
        if species is not None and species.role is Role.BIOMASS and amount.exact(values) > 0:
            return f"making-{_fit(name)}"
    sides: tuple[list[tuple[tuple[bool, bool, bool, Fraction], str]], ...] = ([], [])
    for name, amount in bundle.net.items():
        species, value = network.find_species(name), amount.exact(values)
        carbon = Fraction(0)
        role = Role.INSIDE
        if species is not None:
            role = species.role
            carbon = species.formula.count("C") if species.formula else Fraction(0)
            carbon = Fraction(1) if role is Role.INSIDE and not carbon else carbon
        own = bool(carbon) and role not in (Role.CARRIER, Role.EXCHANGE)
        rank = (own, bool(carbon), role is Role.CARRIER, carbon * abs(value))
        sides[value > 0].append((rank, name))
    ends = [_fit(max(side)[1]) if side else "nothing" for side in sides]
    return "-to-".join(ends)


def _fit(name: str) -> str:
    """A name without the signs that only stand in a species' own."""
    return _NOT_IN_A_NAME.sub("_", name).strip("_-")


def _taken(network: Network) -> set[str]:
    """Every name of a species, reaction or parameter, those of variants as well."""
    taken = {s.name for s in network.species} | {r.name for r in network.reactions}
    taken |= {p.name for p in network.parameters}
    for variant in network.variants:
        taken |= {s.name for s in variant.species} | {r.name for r in variant.reactions}
    return taken
