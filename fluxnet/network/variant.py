"""Variants applied: a named set of changes, or a product of several, makes another network."""

from __future__ import annotations

from bisect import bisect_right
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import replace

from fluxnet.ground.diagnostic import Diagnostic, has_errors, in_order
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.names import Name, Severity
from fluxnet.ground.source import NOWHERE, Span
from fluxnet.network.balance import check_balances
from fluxnet.network.coefficients import check_coefficients
from fluxnet.network.model import Network, Reaction, Variant
from fluxnet.network.unknown import solve_unknowns
from fluxnet.network.variant_build import build_variant, same_network
from fluxnet.network.variant_changes import NO_DOUBT, ChangeKind, Doubt, Key, Thing
from fluxnet.network.variant_lineage import Lineage, nearest, parents_first, read_lineage
from fluxnet.network.variant_merge import merge_variants

__all__ = ["BASE", "apply_variant", "check_variants"]

BASE = "base"


def apply_variant(
    network: Network, names: str
) -> tuple[Network | None, tuple[Diagnostic, ...]]:
    r"""The network with the changes of one variant or of a product of variants.

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
        The changed network, its ``variant`` the names in the order asked; None where there are
        errors.
    tuple of Diagnostic
        ``unknown-variant``, ``variant-circle``, ``variant-target``, ``variant-clash``,
        ``still-used``, ``variant-empty``, and what is found in added or changed reactions.

    Raises
    ------
    MisuseError
        If the network is a variant already.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text(
    ...     "substrate glucose\nproduct ethanol, CO2\ncompartment c\n"
    ...     "    ferment : glucose -> 2 ethanol + 2 CO2\nvariant slow\n    limit glucose <= 1\n"
    ... ).network
    >>> slow, told = apply_variant(network, "slow")
    >>> slow.variant, str(slow.limits[0].quantity), slow.limits[0].high, told
    ('slow', 'glucose in', Fraction(1, 1), ())
    >>> [d.message for d in apply_variant(network, "slwo")[1]]
    ['the model has no variant slwo']
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
    lineage = read_lineage(network, variants)
    changed, faults, touched = _changed(lineage, asked)
    changed, told = _look_again(changed, touched)
    told = in_order((*faults, *told))
    return (None if has_errors(told) else changed), told


def check_variants(
    network: Network, told: Iterable[Diagnostic] = (), doubt: Doubt = NO_DOUBT
) -> tuple[Diagnostic, ...]:
    """What is wrong with each variant of a model, applied by itself.

    Notes on balances that cannot be checked are left out: they are no matter of the variant.

    Parameters
    ----------
    told
        What is known to be wrong with the model: nothing more is said of those lines, and
        whether a variant is empty only where it has no faulty line.
    doubt
        Names of which faulty lines may have said something.
    """
    errors = [d for d in told if d.severity is Severity.ERROR]
    faulty = {(d.span.file, d.span.line) for d in errors}
    variants = {v.name: v for v in network.variants}
    found: list[Diagnostic] = []
    if not errors:
        found.extend(_faults_of_parents(dict.fromkeys(variants), variants))
    lineage = read_lineage(network, variants, doubt)
    hazy = _with_faults(network, errors)
    seen: dict[object, object] = {}
    own: dict[str, set[tuple[Name, Span]]] = {}
    for name in lineage.above:
        changed, faults, touched = _changed(lineage, (name,))
        above = lineage.above[name]
        causes = [(d, (d.name, d.span)) for d in faults]
        own[name] = {cause for _, cause in causes}
        inherited = set().union(*(own[parent] for parent in above if own[parent]))
        in_doubt = not hazy.isdisjoint({name, *above})
        found.extend(
            d for d, cause in causes
            if cause not in inherited and not (in_doubt and d.name is Name.VARIANT_EMPTY)
        )
        new = [r for r in touched if _is_new(r, changed, doubt, seen)]
        if new:
            found.extend(_look_again(changed, new)[1])
    return in_order(
        d for d in found
        if d.name is not Name.BALANCE_NOT_CHECKED
        and (d.name is Name.STILL_USED or (d.span.file, d.span.line) not in faulty)
        and not (errors and d.severity is Severity.NOTE)
    )  # fmt: skip


def _changed(
    lineage: Lineage, asked: Iterable[str]
) -> tuple[Network, list[Diagnostic], tuple[Reaction, ...]]:
    """The network with some variants applied, what is wrong with them, and what to look at."""
    network = lineage.network
    asked = tuple(asked)
    chosen = [n for n in lineage.variants if n in asked]
    members = lineage.family(chosen)
    merged = merge_variants(lineage, members)
    label = " * ".join(asked)
    changed, faults = build_variant(network, merged, label, lineage.doubt)
    own = tuple(a for n in members for a in lineage.variants[n].acceptances)
    changed = replace(changed, acceptances=(*network.acceptances, *own))
    found = [*merged.diagnostics, *faults]
    settled = not has_errors(found)
    if settled and same_network(network, changed):
        found.append(_empty(label, lineage.variants[chosen[0]], single=len(chosen) == 1))
    return changed, found, tuple(_touched(network, changed, merged.things, settled=settled))


def _look_again(
    changed: Network, touched: Iterable[Reaction]
) -> tuple[Network, tuple[Diagnostic, ...]]:
    """The network with the ``?`` of some reactions solved, and what is wrong with these."""
    names = {r.name for r in touched if all(changed.find_species(t.species) for _, t in r.terms)}
    changed, unsolved = solve_unknowns(changed, tuple(r for r in touched if r.name in names))
    again = tuple(r for r in changed.reactions if r.name in names)
    found = [*unsolved, *check_coefficients(changed, again)]
    if not has_errors(found):
        found.extend(check_balances(changed, again))
    return changed, tuple(found)


def _is_new(
    reaction: Reaction, changed: Network, doubt: Doubt, seen: dict[object, object]
) -> bool:
    """Whether a reaction with just these species and parameters has not been looked at yet.

    The things themselves are kept beside their identities, which would else be given anew.
    """
    names = dict.fromkeys(t.species for _, t in reaction.terms)
    if any(name in doubt.things for name in names):
        return False
    used = frozenset().union(
        *(t.coefficient.parameters for _, t in reaction.terms if t.coefficient is not None)
    )
    things = (
        reaction,
        *(changed.find_species(name) for name in names),
        *(p for p in changed.parameters if p.name in used),
    )
    key = tuple(map(id, things))
    if key in seen:
        return False
    seen[key] = things
    return True


def _with_faults(network: Network, errors: Iterable[Diagnostic]) -> set[str]:
    """The variants with an error between their head and the next one's."""
    heads = sorted((v.span.file, v.span.line, v.name) for v in network.variants)
    found: set[str] = set()
    for error in errors:
        behind = bisect_right(heads, (error.span.file, error.span.line, chr(0x10FFFF)))
        if behind and heads[behind - 1][0] == error.span.file:
            found.add(heads[behind - 1][2])
    return found


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
    sound = set(parents_first(variants))
    place = {name: i for i, name in enumerate(variants)}
    for name in variants:
        circle = _circle(name, variants) if name in seen and name not in sound else []
        if circle and name == min(circle, key=place.__getitem__):
            yield Diagnostic(
                Name.VARIANT_CIRCLE,
                f"variants build on one another in a circle: {' from '.join(circle)}",
                variants[name].span,
                mend=f"take `from {circle[1]}` away from {name}",
                also=tuple(variants[n].span for n in circle[1:-1]),
            )


def _circle(name: str, variants: Mapping[str, Variant]) -> list[str]:
    """The shortest way from a variant back to itself; empty where there is none."""
    ways, seen = [[name]], {name}
    for way in ways:
        for parent in variants[way[-1]].parents:
            if parent == name:
                return [*way, name]
            if parent in variants and parent not in seen:
                seen.add(parent)
                ways.append([*way, parent])
    return []


def _touched(
    network: Network, changed: Network, things: Mapping[Key, Thing | None], *, settled: bool
) -> Iterator[Reaction]:
    """The reactions to look at again: new ones, and those with a changed parameter or species.

    Where the changes themselves are faulty (not ``settled``) only new ones without any such.
    """
    set_anew = {k.name for k in things if k.kind is ChangeKind.PARAMETER}
    remade = {k.name for k in things if k.kind is ChangeKind.SPECIES}
    for reaction in changed.reactions:
        is_new = network.find_reaction(reaction.name) is not reaction
        unsolved = any(t.coefficient is None for _, t in reaction.terms)
        moved = any(
            t.species in remade or (t.coefficient and t.coefficient.parameters & set_anew)
            for _, t in reaction.terms
        )
        if (is_new and not moved) or (settled and (unsolved or moved)):
            yield reaction


def _empty(label: str, variant: Variant, *, single: bool) -> Diagnostic:
    return Diagnostic(
        Name.VARIANT_EMPTY,
        f"variant {label} changes nothing",
        variant.span if single else NOWHERE,
        mend="write its changes, or take it away" if single else None,
    )
