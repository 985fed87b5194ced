"""The lumped network, as text of the language."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from fractions import Fraction

from fluxnet.network.amounts import coefficient_text
from fluxnet.network.expression import ONE, Expression
from fluxnet.network.model import Network, Reaction
from fluxnet.reading.writer import write_model
from fluxnet.studies.lump_bundle import Bundle
from fluxnet.studies.lump_lines import line_of, size_of
from fluxnet.studies.lump_names import name_bundles
from fluxnet.studies.lump_result import Dropped, Event, Lump, Weights

__all__ = ["build_lumped", "in_order", "lumped_text", "weights_text"]


def build_lumped(
    network: Network,
    bundles: Sequence[Bundle],
    taken: Sequence[str],
    events: Sequence[Event],
    values: Mapping[str, Fraction],
) -> tuple[Network, tuple[Lump, ...]]:
    """The network of some bundles, and what each of its lumped reactions stands for.

    Reactions stand where the first of those that they stand for stood. Species that were taken
    out, and parameters and compartments that nothing is left of, are not in it.
    """
    place = {r.name: k for k, r in enumerate(network.reactions)}
    gone = frozenset(taken)
    ordered = sorted(bundles, key=lambda b: sorted(place[name] for name in b.weights))
    new = [b for b in ordered if b.original is None]
    names = dict(zip(map(id, new), name_bundles(new, network, values), strict=True))
    reactions: list[Reaction] = []
    lumps: list[Lump] = []
    for bundle in ordered:
        if bundle.original is not None:
            reactions.append(_cleared(bundle, bundle.original, gone, network, values))
            continue
        line = line_of(bundle, names[id(bundle)], network, values)
        reactions.append(line)
        factor = size_of(bundle, network, values)
        weights = in_order(bundle.weights, factor, place)
        others = tuple(
            in_order(e.bundle.weights, factor / e.parts[0][0], place)
            for e in events
            if isinstance(e, Dropped) and len(e.parts) == 1 and e.parts[0][1] is bundle
        )
        lumps.append(Lump(line, weights, others))
    return _tidied(network, reactions, gone), tuple(lumps)


def lumped_text(network: Network, lumps: Sequence[Lump], header: Sequence[str]) -> str:
    """The text of the lumped network: behind each lumped line what it stands for."""
    comments = {}
    for lump in lumps:
        ways = [weights_text(lump.weights), *map(weights_text, lump.others)]
        comments[lump.reaction.name] = f"= {' or '.join(ways)}"
    text = write_model(network, comments)
    return "".join(f"# {line}\n" for line in header) + ("\n" if header else "") + text


def weights_text(weights: Weights) -> str:
    """The reactions that a line stands for, as a sum.

    Examples
    --------
    >>> weights_text((("pfk", ONE), ("gap", ONE + ONE), ("pgi", -ONE)))
    'pfk + 2 gap - pgi'
    """
    parts: list[str] = []
    for name, weight in weights:
        number = weight.constant_value
        down = number is not None and number < 0
        size = -weight if down else weight
        amount = "" if size == ONE else f"{coefficient_text(size)} "
        sign = " - " if down else " + "
        parts.append(f"{sign if parts or down else ''}{amount}{name}")
    return "".join(parts).strip().removeprefix("+ ")


def in_order(
    weights: Mapping[str, Expression], factor: Fraction, place: Mapping[str, int]
) -> Weights:
    """Weights in the order of the file, forward ones first."""
    def rank(name: str) -> tuple[bool, int]:
        number = weights[name].constant_value
        return number is not None and number < 0, place[name]

    return tuple((name, weights[name].scaled(factor)) for name in sorted(weights, key=rank))


def _cleared(
    bundle: Bundle, reaction: Reaction, gone: frozenset[str], network: Network,
    values: Mapping[str, Fraction],
) -> Reaction:
    """A reaction as it was, or without a species that went and that it only lends."""
    if not any(term.species in gone for _, term in reaction.terms):
        return reaction
    line = line_of(bundle, reaction.name, network, values, Fraction(1))
    return replace(reaction, left=line.left, right=line.right)


def _tidied(network: Network, reactions: Sequence[Reaction], gone: frozenset[str]) -> Network:
    held = {r.compartment for v in network.variants for r in v.reactions}
    held |= {r.compartment for r in reactions}
    after = _used(reactions)
    for variant in network.variants:
        after |= _used(variant.reactions) | {p.name for p in variant.settings}
    lost = _used(network.reactions) - after
    return replace(
        network,
        species=tuple(s for s in network.species if s.name not in gone),
        parameters=tuple(p for p in network.parameters if p.name not in lost),
        compartments=tuple(c for c in network.compartments if c.name in held),
        reactions=tuple(reactions),
    )


def _used(reactions: Sequence[Reaction]) -> set[str]:
    """The parameters in the coefficients of some reactions."""
    return {
        name
        for r in reactions for _, t in r.terms if t.coefficient is not None
        for name in t.coefficient.parameters
    }  # fmt: skip
