"""What is told of compositions: those implied, and reactions that rule them out."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from fractions import Fraction

from fluxnet.checks.composition import CompositionResult, Contradiction, Implied, Reason
from fluxnet.checks.words import and_list, names_list
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.source import NOWHERE, Span
from fluxnet.network.amounts import number_text
from fluxnet.network.contents import ELECTRONS
from fluxnet.network.model import Network

__all__ = ["tell_compositions", "without_settled"]


def tell_compositions(
    network: Network, result: CompositionResult, told: Iterable[frozenset[str]] = ()
) -> tuple[Diagnostic, ...]:
    """A note for each implied composition, an error for each contradiction.

    ``told`` are sets of reactions of which something worse is said already, that they make
    something out of nothing: a contradiction inside one of them has the same cause and is
    not told once more.
    """
    spans = {s.name: s.span for s in network.species}
    known = tuple(told)
    found = [
        _contradiction(c)
        for c in result.contradictions
        if not any(t.issuperset(r.name for r in c.reactions) for t in known)
    ]
    found.extend(_implied(i, spans, at_values=result.at_values) for i in result.implied)
    found.extend(
        Diagnostic(
            Name.ROUNDING_GAP,
            f"reaction {r.name} balances only within the rounding of its numbers, at the "
            "compositions that the other reactions imply",
            r.span,
            mend="write ? for one coefficient, and the formulas of its species",
        )
        for r in result.rounded
    )
    return tuple(found)


def without_settled(
    diagnostics: Sequence[Diagnostic], network: Network, result: CompositionResult
) -> tuple[Diagnostic, ...]:
    """Leave out the notes that lines cannot be checked where compositions settle the matter."""
    places = {s.span for s in network.species if s.name in result.settled}
    return tuple(
        d
        for d in diagnostics
        if d.name is not Name.BALANCE_NOT_CHECKED or d.span == NOWHERE or d.span not in places
    )


def _amount(balance: str, value: Fraction) -> str:
    return f"{balance} {number_text(value)}"


def _implied(implied: Implied, spans: dict[str, Span], *, at_values: bool) -> Diagnostic:
    held = ", ".join(_amount(b, v) for b, v in implied.contents)
    free = and_list(implied.undetermined)
    if held:
        text = f"{implied.species} holds {held}, as its reactions imply"
        text += f"; they leave {free} open" if free else ""
    else:
        text = f"the reactions of {implied.species} leave its composition open ({free})"
    return Diagnostic(
        Name.IMPLIED_COMPOSITION,
        text,
        spans.get(implied.species, NOWHERE),
        because="coefficients with parameters are taken at the parameters' values"
        if at_values
        else None,
        mend=f"write the formula behind {implied.species}",
    )


def _contradiction(found: Contradiction) -> Diagnostic:
    names = [r.name for r in found.reactions]
    first = found.reactions[0]
    what = names_list(found.species)
    if found.reason is Reason.FAILS:
        text = f"no composition of {what} balances {names_list(names)}" + (
            " together" if len(names) > 1 else ""
        )
        because = _sum_words(found)
    elif found.reason is Reason.NEGATIVE:
        text = f"{names_list(names)} could only balance if {what} held less than no {found.balance}"
        because = None
    else:
        text = f"{what} could only hold nothing at all, if {names_list(names)} balance"
        because = "a species that is no carrier holds at least one element or electrons"
    return Diagnostic(
        Name.IMPOSSIBLE_COMPOSITION,
        text,
        first.span,
        because=because,
        mend=f"correct {'it' if len(names) == 1 else 'one of them'}, "
        f"or write the formula of {found.species[0]}",
        also=tuple(r.span for r in found.reactions[1:]),
    )


def _sum_words(found: Contradiction) -> str:
    """The sum of the reactions in which the unknown species cancel."""
    scale = next((w for w in found.weights if w), Fraction(1))
    parts: list[str] = []
    for weight, reaction in zip(found.weights, found.reactions, strict=True):
        size = weight / scale
        if not size:
            continue
        amount = "" if abs(size) == 1 else f"{number_text(abs(size))} times "
        sign = "less" if size < 0 else "and"
        parts.append(f"{sign} {amount}{reaction.name}" if parts else f"{amount}{reaction.name}")
    gap = found.gap / scale
    unit = "electron" if found.balance == ELECTRONS and abs(gap) == 1 else found.balance
    cancelled = ""
    if found.species:
        verb = "cancels" if len(found.species) == 1 else "cancel"
        cancelled = f", in which {names_list(found.species)} {verb},"
    end = "makes {} from nothing" if gap > 0 else "uses up {} and makes none of it"
    return f"{' '.join(parts)}{cancelled} " + end.format(f"{number_text(abs(gap))} {unit}")
