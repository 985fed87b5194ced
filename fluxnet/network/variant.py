"""Variants applied: a named set of changes, or a product of several, makes another network."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import replace

from fluxnet.ground.diagnostic import Diagnostic, has_errors, in_order
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.names import Name
from fluxnet.ground.source import NOWHERE
from fluxnet.network.balance import check_balances
from fluxnet.network.coefficients import check_coefficients
from fluxnet.network.model import Network, Reaction, Variant
from fluxnet.network.unknown import solve_unknowns
from fluxnet.network.variant_build import build_variant, same_network
from fluxnet.network.variant_changes import ChangeKind, Key, Thing, ancestors_of
from fluxnet.network.variant_merge import merge_variants, nearest

__all__ = ["BASE", "apply_variant", "check_variants"]

BASE = "base"


def apply_variant(
    network: Network, names: str
) -> tuple[Network | None, tuple[Diagnostic, ...]]:
    """The network with the changes of one variant or of a product of variants.

    ``limit`` replaces the limit on the same quantity and direction, ``set`` keeps sd and range
    unless they are given, ``drop`` takes away, and a dropped reaction takes its own limit
    along. A variant overrides those it builds on; in a product two different settings of one
    thing are a clash, and what both build on counts once. The ``?`` of added reactions are
    solved and their balances checked.

    Parameters
    ----------
    network
        The unchanged model.
    names
        ``"anaerobic"``, ``"anaerobic * lean"`` or ``"base"``.

    Returns
    -------
    Network or None
        The changed network, its ``variant`` the names in the order of the file; None where
        there are errors.
    tuple of Diagnostic
        ``unknown-variant``, ``variant-circle``, ``variant-target``, ``variant-clash``,
        ``still-used``, ``variant-empty``, and what is found in added or changed reactions.

    Raises
    ------
    MisuseError
        If the network is a variant already.
    """
    if network.variant != BASE:
        raise MisuseError(f"the network is the variant {network.variant}; apply to the base")
    variants = {v.name: v for v in network.variants}
    asked = dict.fromkeys(n for part in names.split("*") if (n := part.strip()) != BASE)
    found = [*_unknown(asked, variants), *_faults_of_parents(asked, variants)]
    if has_errors(found):
        return None, in_order(found)
    if not asked:
        return network, ()
    chosen = [n for n in variants if n in asked]
    taking_part = set(asked).union(*(ancestors_of(n, variants) for n in asked))
    merged = merge_variants(network, variants, [n for n in variants if n in taking_part])
    if has_errors(merged.diagnostics):
        return None, in_order(merged.diagnostics)
    label = " * ".join(chosen)
    changed, faults = build_variant(network, merged.things, label)
    if has_errors(faults):
        return None, in_order(faults)
    own = tuple(a for n in variants if n in taking_part for a in variants[n].acceptances)
    changed = replace(changed, acceptances=(*network.acceptances, *own))
    touched = tuple(_touched(network, changed, merged.things))
    changed, unsolved = solve_unknowns(changed, touched)
    found = [*faults, *unsolved]
    touched_names = {r.name for r in touched}
    again = tuple(r for r in changed.reactions if r.name in touched_names)
    found.extend(check_coefficients(changed, again))
    if not has_errors(found):
        found.extend(check_balances(changed, again))
    if same_network(network, changed):
        found.append(_empty(label, variants[chosen[0]], single=len(chosen) == 1))
    return (None if has_errors(found) else changed), in_order(found)


def check_variants(network: Network) -> tuple[Diagnostic, ...]:
    """What is wrong with each variant of a model, applied by itself.

    Notes on balances that cannot be checked are left out: they are no matter of the variant.
    """
    found: list[Diagnostic] = []
    for variant in network.variants:
        found.extend(apply_variant(network, variant.name)[1])
    return in_order(d for d in found if d.name is not Name.BALANCE_NOT_CHECKED)


def _unknown(asked: Mapping[str, None], variants: Mapping[str, Variant]) -> Iterator[Diagnostic]:
    for name in asked:
        if name not in variants:
            near = nearest(name, variants)
            known = ", ".join(variants) or "the model has none"
            yield Diagnostic(
                Name.UNKNOWN_VARIANT,
                f"the model has no variant {name}" if name else "a variant's name is missing",
                because=f"its variants: {known}",
                mend=f"write {' or '.join(near)}" if near else None,
            )


def _faults_of_parents(
    asked: Mapping[str, None], variants: Mapping[str, Variant]
) -> Iterator[Diagnostic]:
    """Parents that do not exist, and circles, among all that the asked variants build on."""
    seen: set[str] = set()
    waiting = [n for n in asked if n in variants]
    while waiting:
        name = waiting.pop()
        if name in seen:
            continue
        seen.add(name)
        variant = variants[name]
        for parent in variant.parents:
            if parent in variants:
                waiting.append(parent)
            elif parent != BASE:
                near = nearest(parent, variants)
                yield Diagnostic(
                    Name.UNKNOWN_VARIANT,
                    f"variant {name} builds on {parent}, which does not exist",
                    variant.span,
                    mend=f"write {' or '.join(near)}" if near else None,
                )
    for name in variants:
        if name in seen and name in ancestors_of(name, variants):
            circle = _circle(name, variants)
            if name == min(circle, key=list(variants).index):
                yield Diagnostic(
                    Name.VARIANT_CIRCLE,
                    f"variants build on one another in a circle: {' from '.join(circle)}",
                    variants[name].span,
                    mend=f"take `from {circle[1]}` away from {name}",
                    also=tuple(variants[n].span for n in circle[1:-1]),
                )


def _circle(name: str, variants: Mapping[str, Variant]) -> list[str]:
    """The shortest way from a variant back to itself."""
    ways = [[name]]
    for way in ways:
        for parent in variants[way[-1]].parents:
            if parent == name:
                return [*way, name]
            if parent in variants and parent not in way:
                ways.append([*way, parent])
    return [name]


def _touched(
    network: Network, changed: Network, things: Mapping[Key, Thing | None]
) -> Iterator[Reaction]:
    """The reactions to look at again: new ones, and those with a changed parameter."""
    set_anew = {k.name for k in things if k.kind is ChangeKind.PARAMETER}
    remade = {k.name for k in things if k.kind is ChangeKind.SPECIES}
    for reaction in changed.reactions:
        is_new = network.find_reaction(reaction.name) is not reaction
        unsolved = any(t.coefficient is None for _, t in reaction.terms)
        moved = any(
            t.species in remade or (t.coefficient and t.coefficient.parameters & set_anew)
            for _, t in reaction.terms
        )
        if is_new or unsolved or moved:
            yield reaction


def _empty(label: str, variant: Variant, *, single: bool) -> Diagnostic:
    return Diagnostic(
        Name.VARIANT_EMPTY,
        f"variant {label} changes nothing",
        variant.span if single else NOWHERE,
        mend="write its changes, or take it away" if single else None,
    )
