"""The changes of a set of variants, merged: descendants hide ancestors, others must agree."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.ground.source import Span
from fluxnet.network.amounts import number_text
from fluxnet.network.model import Limit, Parameter, Reaction
from fluxnet.network.variant_changes import ChangeKind, Key, Thing, plain
from fluxnet.network.variant_lineage import Lineage

__all__ = ["Merged", "merge_variants"]


@record
class Merged:
    """What is set in the end: by key the thing, None where it is dropped.

    ``drops`` are the places of the lines that drop a species or a reaction, by its name.
    """

    things: Mapping[Key, Thing | None]
    diagnostics: tuple[Diagnostic, ...]
    drops: Mapping[str, tuple[Span, ...]]


def merge_variants(lineage: Lineage, members: Sequence[str]) -> Merged:
    """Merge the changes of variants that are combined.

    Parameters
    ----------
    lineage
        What every variant changes itself. The parameters that it settles are kept there.
    members
        The variants that take part, those they build on included, parents first.
    """
    found: list[Diagnostic] = []
    setters: dict[Key, list[str]] = {}
    for name in members:
        for key in lineage.changes[name]:
            setters.setdefault(key, []).append(name)
    for key, names in setters.items():
        if key.kind is ChangeKind.PARAMETER:
            for name in names:
                if (name, key) not in lineage.settled:
                    _settle_parameter(lineage, key, name)
    for name in members:
        found.extend(lineage.faults[name])
    things: dict[Key, Thing | None] = {}
    for key, names in setters.items():
        if key.kind is ChangeKind.LIMIT and not _is_there(lineage, key, names):
            continue
        last = _last(lineage, names)
        values = [_value(lineage, key, name) for name in last]
        for name, value in zip(last[1:], values[1:], strict=True):
            if plain(value) != plain(values[0]):
                found.append(_clash(lineage, key, (last[0], name), (values[0], value)))
                break
        things[key] = values[0]
    drops = {
        key.name: tuple(lineage.changes[name][key].span for name in setters[key])
        for key, thing in things.items() if thing is None and key.name
    }  # fmt: skip
    return Merged(things, tuple(found), drops)


def _is_there(lineage: Lineage, key: Key, names: Sequence[str]) -> bool:
    """Whether a limit's key has anything to drop, or is set."""
    return key in lineage.base or any(
        lineage.changes[name][key].value is not None for name in names
    )


def _last(lineage: Lineage, setters: Sequence[str]) -> list[str]:
    """Those of some setters, parents first, that no other builds on; in the file's order."""
    hidden: set[str] = set()
    last: list[str] = []
    for name in reversed(setters):
        if name not in hidden:
            last.append(name)
            hidden |= lineage.above[name]
    if len(last) > 1:
        place = {name: i for i, name in enumerate(lineage.variants)}
        last.sort(key=place.__getitem__)
    return last


def _value(lineage: Lineage, key: Key, name: str) -> Thing | None:
    """What a variant sets."""
    return lineage.settled.get((name, key), lineage.changes[name][key].value)


def _settle_parameter(lineage: Lineage, key: Key, name: str) -> None:
    """Complete what a variant sets: sd and range are kept from before unless given."""
    value = lineage.changes[name][key].value
    if not isinstance(value, Parameter):
        return
    above = lineage.above[name]
    parents = _last(lineage, [n for n in lineage.above if n in above and key in lineage.changes[n]])
    kept = [_value(lineage, key, parent) for parent in parents] or [lineage.base.get(key)]
    before = [p for p in kept if isinstance(p, Parameter)]
    if not before:
        lineage.settled[name, key] = value
        return
    spread = value.sd is not None
    ranged = value.low is not None or value.high is not None
    for parent, other in zip(parents[1:], before[1:], strict=False):
        differ = (not spread and other.sd != before[0].sd) or (
            not ranged and (other.low, other.high) != (before[0].low, before[0].high)
        )
        if differ:
            lineage.faults[name].append(
                _clash(lineage, key, (parents[0], parent), (before[0], other))
            )
    lineage.settled[name, key] = replace(
        value,
        sd=value.sd if spread else before[0].sd,
        low=value.low if ranged else before[0].low,
        high=value.high if ranged else before[0].high,
    )


def _clash(
    lineage: Lineage,
    key: Key,
    names: tuple[str, str],
    values: tuple[Thing | None, Thing | None],
) -> Diagnostic:
    spans = [lineage.changes[n][key].span for n in names]
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
