"""Every step of a lumping reckoned again, apart from how it was found.

The proof is by the double description method: that all pairs of what makes and what uses a
species span the conversions without it is its theorem; that all pairs were made, that each one
left out is a sum of others with numbers not below zero, and that each line of the file is the
sum of the reactions it stands for, is looked at here in exact numbers. So both inclusions hold:
whatever the lumped lines can do the reactions can, and the other way round.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from fractions import Fraction

from fluxnet.network.expression import ONE, ZERO, Expression
from fluxnet.network.model import Network
from fluxnet.studies.lump_bundle import Bundle, Net, bundles_of, net_of, pivot_of, same_net
from fluxnet.studies.lump_result import Dropped, Eliminated, Event, Lump, LumpProof

__all__ = ["prove"]


class _FaultError(Exception):
    """What does not agree."""


def prove(
    original: Network,
    lumped: Network,
    events: Sequence[Event],
    lumps: Sequence[Lump],
    held: frozenset[str],
) -> LumpProof:
    """Follow the steps from the reactions of a network to those of the lumped one.

    Parameters
    ----------
    lumped
        What was read back from the file.
    held
        Reactions that nothing may be replaced by, or lumped with.
    """
    steps = sum(isinstance(event, Eliminated) for event in events)
    sums = len(events) - steps
    try:
        state = {id(b): b for b in _as_given(original, events)}
        for event in events:
            _follow(event, state, held)
        _compare(original, lumped, list(state.values()), lumps)
    except _FaultError as fault:
        return LumpProof(steps, sums, len(lumped.reactions), str(fault))
    return LumpProof(steps, sums, len(lumped.reactions))


def _as_given(original: Network, events: Sequence[Event]) -> list[Bundle]:
    """The bundles that the steps start from, each compared with its reaction."""
    seen: dict[str, Bundle] = {}
    for event in events:
        for bundle in event.before if isinstance(event, Eliminated) else (event.bundle,):
            if bundle.original is not None:
                seen.setdefault(bundle.original.name, bundle)
        if isinstance(event, Dropped):
            for _, bundle in event.parts:
                if bundle.original is not None:
                    seen.setdefault(bundle.original.name, bundle)
    start: list[Bundle] = []
    for fresh in bundles_of(original):
        (name,) = fresh.weights
        bundle = seen.get(name, fresh)
        if not same_net(bundle.net, fresh.net) or bundle.reversible != fresh.reversible:
            raise _FaultError(f"{name} is not taken as the model has it")
        start.append(bundle)
    return start


def _follow(event: Event, state: dict[int, Bundle], held: frozenset[str]) -> None:
    """One step: what it takes away and puts in its place must be all that the theorem asks."""
    if isinstance(event, Eliminated):
        touched = [b for b in state.values() if event.species in b.net]
        if {id(b) for b in touched} != {id(b) for b in event.before}:
            raise _FaultError(f"{event.species} stands in other reactions as well")
        if len({b.compartment for b in touched}) > 1:
            raise _FaultError(f"{event.species} is passed between compartments")
        if any(name in held for b in touched for name in b.weights):
            raise _FaultError(f"a reaction that is to stay passes on {event.species}")
        left = list(event.after)
        for net, reversible in _joined(event.species, event.before):
            match = next((b for b in left if _multiple(b, net, reversible)), None)
            if match is None or event.species in match.net:
                raise _FaultError(f"not all ways of {event.species} were joined")
            left = [b for b in left if b is not match]
        if left:
            raise _FaultError(f"without {event.species} there is more than there was with it")
        for bundle in touched:
            del state[id(bundle)]
        state.update((id(b), b) for b in event.after)
        return
    bundle = event.bundle
    if state.pop(id(bundle), None) is None:
        raise _FaultError("what was not there was left out")
    total: dict[str, Expression] = {}
    for number, part in event.parts:
        one_way = not part.reversible
        if id(part) not in state or any(name in held for name in part.weights):
            raise _FaultError("what is spared is a sum of what does not stay free")
        if part.compartment != bundle.compartment or (one_way and number < 0):
            raise _FaultError("what is spared is no sum of its compartment's reactions")
        if bundle.reversible and one_way:
            raise _FaultError("what runs both ways is replaced by what does not")
        for name, amount in part.net.items():
            total[name] = total.get(name, ZERO) + amount.scaled(number)
    if not same_net({n: a for n, a in total.items() if not a.is_zero}, bundle.net):
        raise _FaultError("what is spared is not the sum that it is said to be")


def _joined(species: str, before: Sequence[Bundle]) -> Iterator[tuple[Net, bool]]:
    """All that the theorem asks for in place of what passes on a species."""
    at = pivot_of(species, before)
    if at is not None:
        pivot = before[at]
        for k, bundle in enumerate(before):
            if k != at:
                share = -(bundle.of(species) / pivot.of(species))
                net = _sum({"a": bundle.net, "b": pivot.net}, {"a": ONE, "b": share})
                yield net, bundle.reversible
        return
    sizes = [(b.of(species).constant_value, b) for b in before]
    for made, maker in sizes:
        for used, user in sizes:
            if made is None or used is None or maker.reversible or user.reversible:
                raise _FaultError(f"{species} cannot be taken out")
            if made > 0 > used:
                shares = {"a": ONE.scaled(-used), "b": ONE.scaled(made)}
                yield _sum({"a": maker.net, "b": user.net}, shares), False


def _compare(
    original: Network, lumped: Network, final: Sequence[Bundle], lumps: Sequence[Lump]
) -> None:
    """The lines of the file against the steps' end, and against the reactions themselves."""
    stands_for = {lump.reaction.name: dict(lump.weights) for lump in lumps}
    columns = {r.name: net_of(r) for r in original.reactions}
    one_way = {r.name for r in original.reactions if not r.reversible}
    left = list(final)
    for line in lumped.reactions:
        net = net_of(line)
        weights = stands_for.get(line.name, {line.name: ONE})
        if not weights.keys() <= columns.keys():
            raise _FaultError(f"it is not said what {line.name} stands for")
        if not same_net(_sum(columns, weights), net):
            raise _FaultError(f"{line.name} is not what it stands for")
        for name in one_way & weights.keys():
            number = weights[name].constant_value
            if number is None or number <= 0:
                raise _FaultError(f"{line.name} would run {name} backwards")
        here = (b for b in left if b.compartment == line.compartment)
        match = next((b for b in here if _multiple(b, net, line.reversible)), None)
        if match is None:
            raise _FaultError(f"{line.name} came of no step")
        left = [b for b in left if b is not match]
    if left:
        raise _FaultError(f"no line stands for {' + '.join(left[0].weights)}")


def _sum(columns: Mapping[str, Net], weights: Mapping[str, Expression]) -> Net:
    total: dict[str, Expression] = {}
    for reaction, weight in weights.items():
        for name, amount in columns[reaction].items():
            total[name] = total.get(name, ZERO) + weight * amount
    return {name: amount for name, amount in total.items() if not amount.is_zero}


def _multiple(bundle: Bundle, net: Net, reversible: bool) -> bool:
    """Whether a line is a bundle times a number above zero."""
    if not net:
        return not bundle.net
    if bundle.net.keys() != net.keys() or bundle.reversible != reversible:
        return False
    factor: Fraction | None = None
    for name, amount in net.items():
        one, other = amount.constant_value, bundle.net[name].constant_value
        if one is not None and other:
            factor = one / other
            break
    if factor is None:
        factor = Fraction(1)
    if factor <= 0:
        return False
    return all(bundle.net[name].scaled(factor) == amount for name, amount in net.items())
