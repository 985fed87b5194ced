"""The changes of a set of variants, merged: descendants hide ancestors, others must agree."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field, replace

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.network.amounts import number_text
from fluxnet.network.model import Limit, Network, Parameter, Reaction, Variant
from fluxnet.network.variant_changes import (
    Change,
    ChangeKind,
    Key,
    Thing,
    ancestors_of,
    base_thing,
    changes_of,
    keys_of_quantity,
    plain,
)

__all__ = ["Merged", "merge_variants", "nearest"]


@record
class Merged:
    """What is set in the end: by key the thing, None where it is dropped."""

    things: Mapping[Key, Thing | None]
    diagnostics: tuple[Diagnostic, ...] = ()


@dataclass(slots=True, eq=False, repr=False)
class _Merging:
    """The work on one set of variants."""

    network: Network
    variants: Mapping[str, Variant]
    above: dict[str, frozenset[str]] = field(default_factory=dict)
    changes: dict[str, dict[Key, Change]] = field(default_factory=dict)
    found: list[Diagnostic] = field(default_factory=list)


def merge_variants(
    network: Network, variants: Mapping[str, Variant], members: Sequence[str]
) -> Merged:
    """Merge the changes of variants that are combined.

    Parameters
    ----------
    network
        The unchanged model.
    variants
        All its variants by name; without circles and unknown parents.
    members
        The variants that take part, those they build on included, in the order of the file.
    """
    work = _Merging(network, variants)
    known = {s.name for s in network.species}
    known.update(s.name for v in variants.values() for s in v.species)
    for name in members:
        work.above[name] = ancestors_of(name, variants)
        own: dict[Key, Change] = {}
        for change in changes_of(variants[name], frozenset(known)):
            _take(work, own, change)
        work.changes[name] = own
    for name in members:
        _check_targets(work, name)
    things: dict[Key, Thing | None] = {}
    for key in dict.fromkeys(k for name in members for k in work.changes[name]):
        if key.kind is ChangeKind.LIMIT and not _is_there(work, key, members):
            continue
        settled = _settle(work, key, members)
        things[key] = settled[0] if settled else None
    return Merged(things, tuple(work.found))


def _take(work: _Merging, own: dict[Key, Change], change: Change) -> None:
    """Note one change; a second one of the same thing inside one variant is a clash."""
    before = own.get(change.key)
    replaces = before is not None and before.value is None
    if before is not None and not replaces and plain(before.value) != plain(change.value):
        work.found.append(
            Diagnostic(
                Name.VARIANT_CLASH,
                f"variant {change.variant} sets {change.key} twice, differently",
                change.span,
                mend="keep one of the two",
                also=(before.span,),
            )
        )
    own[change.key] = change


def _is_there(work: _Merging, key: Key, members: Iterable[str]) -> bool:
    """Whether a limit's key has anything to drop, or is set."""
    return base_thing(key, work.network) is not None or any(
        change.value is not None
        for name in members
        if (change := work.changes[name].get(key)) is not None
    )


def _check_targets(work: _Merging, name: str) -> None:
    """Every drop and ``set`` must meet a thing of the model or of what the variant builds on."""
    parents = work.above[name]
    added = {k for p in parents for k, c in work.changes[p].items() if c.value is not None}
    gone = {d.name for p in (*parents, name) for d in work.variants[p].drops}
    for key, change in work.changes[name].items():
        if key.kind is ChangeKind.LIMIT:
            continue
        in_base = base_thing(key, work.network) is not None
        if change.value is not None and key.kind is not ChangeKind.PARAMETER:
            if in_base and key.name not in gone:
                work.found.append(_twice(work, key, change))
        elif not in_base and key not in added:
            work.found.append(_no_target(work, key, change))
    for drop in work.variants[name].drops:
        keys = keys_of_quantity(drop.quantity) if drop.quantity is not None else ()
        if keys and not any(k in added or base_thing(k, work.network) for k in keys):
            work.found.append(
                Diagnostic(
                    Name.VARIANT_TARGET,
                    f"variant {name} drops the limit on {drop.quantity}, but there is none",
                    drop.span,
                    mend="take the line away",
                )
            )


def _twice(work: _Merging, key: Key, change: Change) -> Diagnostic:
    before = base_thing(key, work.network)
    return Diagnostic(
        Name.DECLARED_TWICE,
        f"variant {change.variant} adds {key.name}, which the model has already",
        change.span,
        mend=f"`drop {key.name}` in the variant first, or choose another name",
        also=() if before is None else (before.span,),
    )


def _no_target(work: _Merging, key: Key, change: Change) -> Diagnostic:
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


def _settle(
    work: _Merging, key: Key, members: Iterable[str]
) -> tuple[Thing | None] | None:
    """What the members set in the end, in a tuple of one; None where they do not set it."""
    last = _last_setters(work, key, members)
    if not last:
        return None
    values = [_value(work, key, name) for name in last]
    for name, value in zip(last[1:], values[1:], strict=True):
        if plain(value) != plain(values[0]):
            work.found.append(_clash(work, key, (last[0], name), (values[0], value)))
            break
    return (values[0],)


def _last_setters(work: _Merging, key: Key, members: Iterable[str]) -> list[str]:
    """The members that set a key and that no other setter builds on."""
    setters = [name for name in members if key in work.changes[name]]
    hidden = {parent for name in setters for parent in work.above[name]}
    return [name for name in setters if name not in hidden]


def _value(work: _Merging, key: Key, name: str) -> Thing | None:
    """What a variant sets; a parameter's sd and range are kept unless given."""
    value = work.changes[name][key].value
    if not isinstance(value, Parameter):
        return value
    parents = _last_setters(work, key, [n for n in work.changes if n in work.above[name]])
    kept = [_value(work, key, parent) for parent in parents] or [base_thing(key, work.network)]
    before = [p for p in kept if isinstance(p, Parameter)]
    if not before:
        return value
    spread = value.sd is not None
    ranged = value.low is not None or value.high is not None
    for parent, other in zip(parents[1:], before[1:], strict=False):
        differ = (not spread and other.sd != before[0].sd) or (
            not ranged and (other.low, other.high) != (before[0].low, before[0].high)
        )
        if differ:
            work.found.append(_clash(work, key, (parents[0], parent), (before[0], other)))
    return replace(
        value,
        sd=value.sd if spread else before[0].sd,
        low=value.low if ranged else before[0].low,
        high=value.high if ranged else before[0].high,
    )


def _clash(
    work: _Merging, key: Key, names: tuple[str, str], values: tuple[Thing | None, Thing | None]
) -> Diagnostic:
    spans = [work.changes[n][key].span for n in names]
    return Diagnostic(
        Name.VARIANT_CLASH,
        f"variants {names[0]} and {names[1]} set {key} differently: "
        f"{_words(values[0])} and {_words(values[1])}",
        spans[1],
        because="in a combination order has no meaning",
        mend=f"make a variant `from {names[0]}, {names[1]}` that says which holds",
        also=(spans[0],),
    )


def _words(value: Thing | None) -> str:
    if value is None:
        return "dropped"
    if isinstance(value, Parameter):
        spread = f" ± {number_text(value.sd)}" if value.sd is not None else ""
        return f"{number_text(value.value)}{spread}"
    if isinstance(value, Limit):
        ends = [number_text(x) for x in dict.fromkeys((value.low, value.high)) if x is not None]
        return f"{value.relation.value} {' and '.join(ends)}"
    return f"a reaction of {value.compartment}" if isinstance(value, Reaction) else "added"


def nearest(name: str, names: Iterable[str]) -> list[str]:
    """Names spelt nearly so, at most three."""
    from difflib import get_close_matches

    return get_close_matches(name, list(dict.fromkeys(names)), n=3, cutoff=0.6)
