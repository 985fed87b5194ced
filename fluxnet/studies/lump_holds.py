"""What must stay as it is: reactions and intermediates that something else speaks of."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from fractions import Fraction

from fluxnet.ground.record import record
from fluxnet.network.model import Network, Parameter, Role
from fluxnet.network.variant import BASE, apply_variant
from fluxnet.studies.lump_result import Why

__all__ = ["Holds", "find_holds", "settings_of"]


@record
class Holds:
    """Why reactions and species stay, by name, in words that fit behind the name."""

    reactions: Mapping[str, tuple[Why, str]]
    species: Mapping[str, tuple[Why, str]]


def find_holds(network: Network, keep: Iterable[str]) -> Holds:
    """What a model itself, its variants and the user ask to be left.

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> holds = find_holds(read_model_text(MODEL).network, ["ethanol"])
    >>> holds.reactions["upkeep"][1], holds.species
    ('has a measured value', {})
    """
    reactions: dict[str, tuple[Why, str]] = {}
    species: dict[str, tuple[Why, str]] = {}
    known = {s.name: s for s in network.species}
    for name in keep:
        if network.find_reaction(name) is not None:
            reactions[name] = (Why.HELD, "is to be kept")
        elif known[name].role is Role.INSIDE:
            species[name] = (Why.ASKED, "named in --keep")
    for limit in network.limits:
        words = "has a measured value" if limit.is_measured else "has a limit"
        for name in limit.quantity.names:
            reactions.setdefault(name, (Why.LIMITED, words))
    for name, variant in _of_variants(network):
        why = (Why.VARIANT, f"is changed by the variant {variant}")
        if name in known:
            species.setdefault(name, (Why.VARIANT, f"named in the variant {variant}"))
        else:
            reactions.setdefault(name, why)
    for name in network.free:
        species.setdefault(name, (Why.FREE, "any reaction may use it unwritten"))
    return Holds(reactions, species)


def _of_variants(network: Network) -> Iterator[tuple[str, str]]:
    """Every species and reaction that a variant names, with the variant."""
    for variant in network.variants:
        for species in variant.species:
            yield species.name, variant.name
        for reaction in variant.reactions:
            yield reaction.name, variant.name
            yield from ((term.species, variant.name) for _, term in reaction.terms)
        quantities = [limit.quantity for limit in variant.limits]
        for drop in variant.drops:
            if drop.quantity is None:
                yield drop.name, variant.name
            else:
                quantities.append(drop.quantity)
        yield from ((name, variant.name) for q in quantities for name in q.names)


def settings_of(network: Network) -> dict[str, dict[str, Fraction]]:
    """The values of all parameters, as they are and in each variant."""
    found = {BASE: _values(network.parameters)}
    for variant in network.variants:
        changed, _ = apply_variant(network, variant.name)
        if changed is not None:
            found[variant.name] = _values(changed.parameters)
    return found


def _values(parameters: Iterable[Parameter]) -> dict[str, Fraction]:
    return {p.name: p.value for p in parameters}
