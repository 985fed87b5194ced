"""What each variant changes itself and what it builds on, read off once for all of them."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass, field
from heapq import heappop, heappush

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.network.model import Network, Parameter, Variant
from fluxnet.network.variant_changes import (
    NO_DOUBT,
    Change,
    ChangeKind,
    Doubt,
    Key,
    Thing,
    changes_of,
    keys_of_limit,
    keys_of_quantity,
    plain,
)

__all__ = ["Lineage", "nearest", "parents_first", "read_lineage"]


@dataclass(slots=True, eq=False, repr=False)
class Lineage:
    """The variants of a model that can be applied.

    ``above`` are all that a variant builds on; its order is parents first. ``changes`` are its
    own, ``faults`` what is wrong with them. ``base`` is what the unchanged model has under each
    key. ``settled`` holds the parameters as each variant leaves them. ``doubt`` are names
    of which faulty lines may have said something.
    """

    network: Network
    variants: Mapping[str, Variant]
    doubt: Doubt = NO_DOUBT
    above: dict[str, frozenset[str]] = field(default_factory=dict)
    changes: dict[str, dict[Key, Change]] = field(default_factory=dict)
    faults: dict[str, list[Diagnostic]] = field(default_factory=dict)
    base: dict[Key, Thing] = field(default_factory=dict)
    settled: dict[tuple[str, Key], Parameter] = field(default_factory=dict)

    def family(self, names: Iterable[str]) -> tuple[str, ...]:
        """Some variants and all that they build on, parents first."""
        wanted = set(names)
        wanted.update(*(self.above[name] for name in tuple(wanted)))
        return tuple(name for name in self.above if name in wanted)


def parents_first(variants: Mapping[str, Variant]) -> tuple[str, ...]:
    """The variants in the order of the file, but each behind all that it builds on.

    Those that build on an unknown one or, in a circle, on themselves are left out.

    Examples
    --------
    >>> lines = {"a": ("b",), "b": (), "c": ("nobody",), "d": ("a", "b")}
    >>> parents_first({name: Variant(name, parents=parents) for name, parents in lines.items()})
    ('b', 'a', 'd')
    """
    place = {name: i for i, name in enumerate(variants)}
    left = {name: {p for p in v.parents if p != "base"} for name, v in variants.items()}
    children: dict[str, list[str]] = {}
    for name, parents in left.items():
        for parent in parents:
            children.setdefault(parent, []).append(name)
    ready = [(place[name], name) for name, parents in left.items() if not parents]
    order: list[str] = []
    while ready:
        _, name = heappop(ready)
        order.append(name)
        for child in children.get(name, ()):
            left[child].discard(name)
            if not left[child]:
                heappush(ready, (place[child], child))
    return tuple(order)


def read_lineage(
    network: Network, variants: Mapping[str, Variant], doubt: Doubt = NO_DOUBT
) -> Lineage:
    """The lineage of some variants; those in a circle, or on an unknown one, are left out."""
    work = Lineage(network, variants, doubt)
    for limit in network.limits:
        for key in keys_of_limit(limit):
            work.base.setdefault(key, limit)
    for kind, things in (
        (ChangeKind.SPECIES, network.species),
        (ChangeKind.REACTION, network.reactions),
        (ChangeKind.PARAMETER, network.parameters),
    ):
        work.base.update({Key(kind, thing.name): thing for thing in things})
    known = {s.name for s in network.species}
    known.update(s.name for v in network.variants for s in v.species)
    for name in parents_first(variants):
        parents = [p for p in variants[name].parents if p in work.above]
        work.above[name] = frozenset(parents).union(*(work.above[p] for p in parents))
        work.faults[name] = []
        own: dict[Key, Change] = {}
        work.changes[name] = own
        for change in changes_of(variants[name], frozenset(known)):
            _take(work, own, change)
        work.faults[name].extend(_target_faults(work, name))
    return work


def _take(work: Lineage, own: dict[Key, Change], change: Change) -> None:
    """Note one change; a second one of the same thing inside one variant is a clash."""
    before = own.get(change.key)
    replaces = before is not None and before.value is None
    if before is not None and not replaces and plain(before.value) != plain(change.value):
        work.faults[change.variant].append(
            Diagnostic(
                Name.VARIANT_CLASH,
                f"variant {change.variant} sets {change.key} twice, differently",
                change.span,
                mend="keep one of the two",
                also=(before.span,),
            )
        )
    own[change.key] = change


def _target_faults(work: Lineage, name: str) -> Iterator[Diagnostic]:
    """Every drop and ``set`` must meet a thing of the model or of what the variant builds on."""
    parents = work.above[name]

    def added(key: Key) -> bool:
        changes = (work.changes[p].get(key) for p in parents)
        return any(change is not None and change.value is not None for change in changes)

    for key, change in work.changes[name].items():
        if key.kind is ChangeKind.LIMIT or key.name in work.doubt.things:
            continue
        if change.value is not None and key.kind is not ChangeKind.PARAMETER:
            family = (*parents, name)
            if key in work.base and key.name not in work.doubt.dropped and not any(
                d.name == key.name for p in family for d in work.variants[p].drops
            ):
                yield _twice(work, key, change)
        elif key not in work.base and not added(key):
            yield _no_target(work, key, change)
    for drop in work.variants[name].drops:
        if drop.quantity is None or not drop.quantity.names.isdisjoint(work.doubt.limited):
            continue
        if not any(k in work.base or added(k) for k in keys_of_quantity(drop.quantity)):
            yield Diagnostic(
                Name.VARIANT_TARGET,
                f"variant {name} drops the limit on {drop.quantity}, but there is none",
                drop.span,
                mend="take the line away",
            )


def _twice(work: Lineage, key: Key, change: Change) -> Diagnostic:
    return Diagnostic(
        Name.DECLARED_TWICE,
        f"variant {change.variant} adds {key.name}, which the model has already",
        change.span,
        mend=f"`drop {key.name}` in the variant first, or choose another name",
        also=(work.base[key].span,),
    )


def _no_target(work: Lineage, key: Key, change: Change) -> Diagnostic:
    if key.kind is ChangeKind.PARAMETER:
        verb, names = "sets", [p.name for p in work.network.parameters]
    else:
        verb = "drops"
        names = [r.name for r in work.network.reactions]
        names += [s.name for s in work.network.species]
    near = nearest(key.name, names)
    return Diagnostic(
        Name.VARIANT_TARGET,
        f"variant {change.variant} {verb} {key.name}, which the model does not have",
        change.span,
        mend=f"write {' or '.join(near)}" if near else None,
    )


def nearest(name: str, names: Iterable[str]) -> list[str]:
    """Names spelt nearly so, at most three.

    Examples
    --------
    >>> nearest("anerobic", ["aerobic", "anaerobic", "lean"])
    ['anaerobic', 'aerobic']
    """
    from difflib import get_close_matches

    return get_close_matches(name, list(dict.fromkeys(names)), n=3, cutoff=0.6)
