"""Notes on balances that could not be checked: one for each cause, not for each line."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.source import NOWHERE, Span
from fluxnet.network.balance_words import join
from fluxnet.network.line_balance import LineBalance
from fluxnet.network.model import Network

__all__ = ["notes_on"]

_NAMED = 4


def notes_on(lines: Sequence[LineBalance], network: Network) -> Iterator[Diagnostic]:
    """What was left unchecked in these lines, and why."""
    by_species: dict[str, list[str]] = {}
    by_element: dict[str, list[LineBalance]] = {}
    by_carriers: dict[tuple[str, ...], list[LineBalance]] = {}
    for line in lines:
        for name in line.unknown:
            by_species.setdefault(name, []).append(line.reaction.name)
        for element in line.without_reference:
            by_element.setdefault(element, []).append(line)
        if line.water_unchecked_for:
            by_carriers.setdefault(line.water_unchecked_for, []).append(line)
    for name, reactions in by_species.items():
        species = network.find_species(name)
        if species is None:
            continue
        yield Diagnostic(
            Name.BALANCE_NOT_CHECKED,
            f"{name} has no formula: the balances of {_some(reactions)} "
            "are not checked line by line",
            species.span,
            mend=f"write the formula behind {name}",
        )
    for element, held in by_element.items():
        names = [line.reaction.name for line in held]
        yield Diagnostic(
            Name.BALANCE_NOT_CHECKED,
            f"{element} has no reference state, so the electrons of {_some(names)} "
            "are not checked",
            _holder(element, held[0], network),
        )
    for carriers, held in by_carriers.items():
        names = [line.reaction.name for line in held]
        yield Diagnostic(
            Name.BALANCE_NOT_CHECKED,
            f"water and protons written in {_some(names)} are not checked: "
            f"{join(carriers)} {'carries' if len(carriers) == 1 else 'carry'} no known charge",
            held[0].reaction.span,
        )


def _some(names: Iterable[str]) -> str:
    """The first few names, and how many more."""
    known = list(dict.fromkeys(names))
    shown = ", ".join(known[:_NAMED])
    more = len(known) - _NAMED
    return f"{shown} and {more} more" if more > 0 else shown


def _holder(element: str, line: LineBalance, network: Network) -> Span:
    for name, content in line.contents.items():
        species = network.find_species(name)
        if element in content.without_reference and species is not None:
            return species.span
    return NOWHERE
