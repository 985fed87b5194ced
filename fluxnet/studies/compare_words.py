"""A comparison in sentences: the best, and why the second best is second."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

from fluxnet.studies.compare_cause import Cause, tell_cause
from fluxnet.studies.compare_result import Ability, Comparison, Facts, Holding, Limiting

__all__ = ["best_and_second", "holding_words", "tell_comparison", "tell_second"]

_LEAST = 0.005


def tell_comparison(comparison: Comparison) -> str:
    """The verdict: which is best, how good it is, and what holds it back."""
    if not comparison.abilities or not comparison.abilities[0].final.moles:
        first = comparison.abilities[0] if comparison.abilities else None
        why = f": {first.name}: {first.reason}" if first is not None and first.reason else ""
        return f"No variant compared can make {comparison.product}{why}."
    best = comparison.abilities[0]
    final = best.final
    assert final.moles is not None
    parts = [f"{_number(final.moles)} mol/mol"]
    if final.carbon is not None:
        parts.append(f"{_number(final.carbon)} C-mol/C-mol")
    if final.mass is not None:
        parts.append(f"{final.mass:.3g} g/g")
    share = ""
    if final.share is not None:
        share = f", {_percent(float(final.share))} of what electrons allow"
    names = _listed([best.name, *best.tied])
    tie = f" (exactly the same: {final.moles})" if best.tied else ""
    several = len({a.substrate for a in comparison.abilities}) > 1
    source = "" if several else f" of {best.substrate}"
    held = f"; held back by {holding_words(best.facts.holding)}" if best.facts else ""
    most = f"With {' * '.join(comparison.common)}, most" if comparison.common else "Most"
    return (
        f"{most} {comparison.product}{source} {final.mode.value}: {names}{tie}, "
        f"{parts[0]} ({', '.join(parts[1:])}){share}{held}."
    ).replace(" ()", "")


def best_and_second(abilities: Sequence[Ability]) -> tuple[Ability, Ability] | None:
    """The best, and the first below it that makes product."""
    able = [a for a in abilities if a.final.moles]
    below = [a for a in able if a.rank > 1]
    return (able[0], below[0]) if below else None


def tell_second(comparison: Comparison, cause: Cause | None = None) -> str:
    """Why the second best is second; empty where there is none that makes product."""
    pair = best_and_second(comparison.abilities)
    if pair is None:
        return ""
    best, second = pair
    moles, others = best.final.moles, second.final.moles
    assert moles is not None
    assert others is not None
    if best.substrate == second.substrate or best.final.carbon is None:
        gap = f"{float(moles - others):.3g} mol/mol less"
    else:
        assert second.final.carbon is not None
        gap = f"{float(best.final.carbon - second.final.carbon):.3g} C-mol/C-mol less"
    shared = [second.name, *second.tied]
    one = "it" if len(shared) == 1 else "the first of them"
    reasons = [] if cause is None else tell_cause(cause, one)
    if best.facts is not None and second.facts is not None:
        reasons += _destinations(best.facts, second.facts, second.substrate)
        reasons += _shortage(best, second, second.facts)
    why = f": {'; '.join(reasons)}" if reasons else ""
    place = "second" if second.rank == 2 else "next"
    verb = "is" if len(shared) == 1 else "are"
    return f"{_listed(shared)} {verb} {place}, {gap} than {best.name}{why}."


def _listed(names: list[str]) -> str:
    """Some names; of many the first two."""
    if len(names) > 3:
        return f"{', '.join(names[:2])} and {len(names) - 2} more"
    return " and ".join([*([", ".join(names[:-1])] if names[1:] else []), names[-1]])


def _destinations(best: Facts, second: Facts, substrate: str) -> list[str]:
    """Where more of the second's electrons go, the largest two."""
    before = {d.name: d.electrons or 0.0 for d in best.destinations}
    product = second.destinations[0].name if second.destinations else ""
    more = [
        (d.electrons - before.get(d.name, 0.0), d)
        for d in second.destinations
        if d.electrons is not None and d.name != product
    ]
    ranked = sorted((m for m in more if m[0] >= _LEAST), key=lambda m: -m[0])[:2]
    found: list[str] = []
    for gain, place in ranked:
        verb = "are burnt with oxygen" if _is_oxygen(place.name, second) else f"end in {place.name}"
        what = "" if found else f" more of the electrons of {substrate}"
        found.append(f"{_percent(gain)}{what} {verb}")
    return [" and ".join(found)] if found else []


def _is_oxygen(name: str, facts: Facts) -> bool:
    return dict(facts.releases).get(name, 0.0) < 0


def _shortage(best: Ability, second: Ability, facts: Facts) -> list[str]:
    """How much more of what holds it back would make the second as good as the best."""
    scarce = [h for h in facts.holding if h.gain]
    if not scarce or best.final.moles is None or second.final.moles is None:
        return [f"held back by {holding_words(facts.holding)}"] if facts.holding else []
    first = scarce[0]
    assert first.gain is not None
    if first.kind is Limiting.OXYGEN:
        return [f"held back by oxygen, one mol more of which gives {first.gain:.3g} mol"]
    if first.kind is Limiting.LIMIT:
        return [f"held back by `{first.name}`, one more of which gives {first.gain:.3g} mol"]
    gap = float(best.final.moles - second.final.moles) / first.gain
    if best.substrate != second.substrate or gap <= 0:
        return [f"held back by {first.name}, one more of which gives {first.gain:.3g} mol"]
    return [
        f"about {gap:.2g} {first.name} more per mol {second.substrate}, as a gift, would make up "
        "for it"
    ]


def holding_words(holding: tuple[Holding, ...], *, short: bool = False) -> str:
    """What holds a yield back, each thing once; electrons with the carriers that lack them.

    ``short`` leaves the carriers out.

    Examples
    --------
    >>> holding_words((Holding(Limiting.ENERGY, "ATP", 0.1),
    ...                Holding(Limiting.ELECTRONS, "NADH", 0.2)))
    'ATP and electrons (NADH)'
    """
    at_ceiling = any(h.kind is Limiting.ELECTRONS and h.gain is None for h in holding)
    lacking = [h.name for h in holding if h.kind is Limiting.ELECTRONS and h.gain is not None]
    bare = short or at_ceiling
    electrons = "electrons" if bare else f"electrons ({', '.join(lacking)})"
    names = [
        electrons if h.kind is Limiting.ELECTRONS
        else h.name if h.kind in (Limiting.ENERGY, Limiting.LIMIT)
        else h.kind.value
        for h in holding
    ]  # fmt: skip
    told = list(dict.fromkeys(names))
    return ", ".join(told) if short else _listed(told) if told else "nothing"


def _number(value: Fraction) -> str:
    return f"{float(value):.4g}"


def _percent(share: float) -> str:
    return f"{100 * share:.0f} %" if share >= 0.095 else f"{100 * share:.1f} %"
