"""A network written as text of the language, in the canonical layout."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from fractions import Fraction
from itertools import groupby

from fluxnet.chemistry.catalogue import load_catalogue
from fluxnet.chemistry.formula import Formula
from fluxnet.ground.diagnostic import Acceptance
from fluxnet.ground.source import NOWHERE, Span
from fluxnet.network.model import (
    CargoKind,
    Compartment,
    Drop,
    Limit,
    Network,
    Parameter,
    Quantity,
    QuantityKind,
    Reaction,
    Relation,
    Role,
    Species,
    Term,
    Variant,
)
from fluxnet.reading.tidy import tidy_text

__all__ = ["write_model", "write_reaction"]


def write_model(network: Network, comments: Mapping[str, str] | None = None) -> str:
    r"""The text of a network: reading it gives the network again, up to places.

    Solved ``?`` are written as ``?``. A number without an exact decimal, which only a network
    that was made by hand can hold, is written as a fraction in brackets. ``comments``, by the
    name of a reaction, stand behind its line.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> text = "product CO2\nsubstrate formate, oxygen\ncompartment c\n a:formate+0.5 oxygen->CO2"
    >>> print(write_model(read_model_text(text).network), end="")
    basis      mmol/g/h
    <BLANKLINE>
    product    CO2
    substrate  formate, oxygen
    <BLANKLINE>
    compartment c
        a : formate + 0.5 oxygen -> CO2
    """
    return tidy_text("\n".join(_lines(network, comments or {})))


def _lines(network: Network, comments: Mapping[str, str]) -> Iterator[str]:
    accepts = _Accepts(
        [*network.acceptances, *(a for v in network.variants for a in v.acceptances)]
    )
    roles = {s.name: s.role for s in network.species}
    for variant in network.variants:
        roles.update((s.name, s.role) for s in variant.species)
    if network.title:
        yield f"model {network.title}"
    yield f"basis {network.basis.value}"
    yield ""
    yield from _species(network.species, accepts, network)
    if network.balance_phosphate:
        yield "balance phosphate"
    if network.free:
        yield f"free {', '.join(network.free)}"
    yield ""
    for parameter in network.parameters:
        yield f"parameter {_assignment(parameter)}{accepts.at(parameter.span)}"
    yield from _compartments(network.compartments, network.reactions, accepts, comments)
    yield ""
    for limit in network.limits:
        yield f"limit {_limit(limit, roles)}{accepts.at(limit.span)}"
    yield ""
    for variant in network.variants:
        yield from _variant(variant, accepts, roles, network)


class _Accepts:
    """Acceptances, each written once, at the first thing that stands on its line."""

    def __init__(self, acceptances: Iterable[Acceptance]) -> None:
        self._waiting = list(acceptances)

    def at(self, span: Span) -> str:
        """The acceptances of a line, as text."""
        mine = [
            a for a in self._waiting
            if a.span.file == span.file
            and (a.first_line or a.span.line) <= span.line <= a.span.line
        ]
        self._waiting = [a for a in self._waiting if a not in mine]
        return "".join(f" accept {a.name.value}: {a.reason}" for a in mine)


def _species(
    species: Sequence[Species], accepts: _Accepts, network: Network, lead: str = ""
) -> Iterator[str]:
    """Declarations; species of one line of the file stay on one line."""
    numbered = enumerate(species)
    for _, group in groupby(
        numbered, lambda n: (n[1].role, n[1].span) if n[1].span == NOWHERE
        else (n[1].role, n[1].span.file, n[1].span.line)
    ):
        members = [one for _, one in group]
        parts = [members] if members[0].span != NOWHERE else [[m] for m in members]
        for part in parts:
            entries = ", ".join(_entry(one, network) for one in part)
            accepted = accepts.at(part[0].span)
            yield f"{lead}{part[0].role.value} {entries}{accepted}"


def _entry(species: Species, network: Network) -> str:
    compound = load_catalogue().find(species.name)
    if species.role is Role.CARRIER:
        return f"{species.name}{_cargo(species, network)}"
    parts = [species.name]
    known = compound.formula if compound is not None and species.entry is not None else None
    if species.formula is not None and species.formula != known:
        parts.append(_formula(species.formula))
    if species.role is Role.BIOMASS and (species.ash or species.ash_sd):
        error = f" ± {_number(100 * species.ash_sd)}" if species.ash_sd else ""
        parts.append(f"ash {_number(100 * species.ash)}{error} %")
    return " ".join(parts)


def _cargo(species: Species, network: Network) -> str:
    cargo = species.cargo
    if cargo is None:
        return ""
    if cargo.kind is CargoKind.ENERGY:
        return "" if network.balance_phosphate else " carries energy"
    if cargo.kind is CargoKind.ELECTRONS:
        return f" carries {_number(cargo.electrons)} electrons"
    compound = load_catalogue().find(species.name)
    if species.entry is not None and compound is not None and compound.formula == cargo.formula:
        return ""
    return f" carries {_formula(cargo.formula)}"


def _formula(formula: Formula) -> str:
    if formula.written:
        return formula.written
    counts = "".join(f"{e}{'' if n == 1 else _number(n)}" for e, n in formula.counts)
    charge = f" charge {formula.charge}" if formula.charge else ""
    return f"{counts}{charge}"


def _number(value: Fraction) -> str:
    """The exact decimal, or the nearest one where there is none."""
    sign = "-" if value < 0 else ""
    rest = abs(value)
    for decimals in range(121):
        scaled = rest * 10**decimals
        if scaled.denominator == 1:
            digits = str(scaled.numerator).rjust(decimals + 1, "0")
            whole, part = digits[: len(digits) - decimals], digits[len(digits) - decimals :]
            return f"{sign}{whole}.{part}" if part else f"{sign}{whole}"
    return f"{float(value):.17g}"


def _assignment(parameter: Parameter) -> str:
    text = f"{parameter.name} = {_number(parameter.value)}"
    if parameter.sd is not None:
        text += f" ± {_number(parameter.sd)}"
    if parameter.low is not None and parameter.high is not None:
        text += f" in [{_number(parameter.low)}, {_number(parameter.high)}]"
    return text


def _compartments(
    compartments: Sequence[Compartment],
    reactions: Sequence[Reaction],
    accepts: _Accepts,
    comments: Mapping[str, str],
) -> Iterator[str]:
    """The compartments in their order, with the reactions in theirs."""
    waiting = {c.name: c for c in compartments}
    current = ""
    for reaction in reactions:
        if reaction.compartment != current:
            while reaction.compartment in waiting:
                name, compartment = next(iter(waiting.items()))
                del waiting[name]
                current = name
                yield ""
                yield f"compartment {name}{accepts.at(compartment.span)}"
            if reaction.compartment != current:
                current = reaction.compartment
                yield ""
                yield f"compartment {current}"
        comment = f"  # {comments[reaction.name]}" if reaction.name in comments else ""
        yield f"    {write_reaction(reaction)}{accepts.at(reaction.span)}{comment}"
    for name, compartment in waiting.items():
        yield ""
        yield f"compartment {name}{accepts.at(compartment.span)}"


def write_reaction(reaction: Reaction) -> str:
    """A reaction as a line of the language, without its block's indentation."""
    sign = "<->" if reaction.reversible else "->"
    return f"{reaction.name} : {_side(reaction.left)} {sign} {_side(reaction.right)}"


def _side(terms: Sequence[Term]) -> str:
    return " + ".join(_term(term) for term in terms) or "nothing"


def _term(term: Term) -> str:
    if term.solved or term.coefficient is None:
        return f"? {term.species}"
    if term.written:
        return f"{term.written} {term.species}"
    number = term.coefficient.number
    if number == 1:
        return term.species
    if number is None or _is_endless(number):
        return f"({term.coefficient}) {term.species}"
    return f"{_number(number)} {term.species}"


def _is_endless(number: Fraction) -> bool:
    rest = number.denominator
    for prime in (2, 5):
        while rest % prime == 0:
            rest //= prime
    return rest != 1


def _quantity(quantity: Quantity, roles: dict[str, Role]) -> str:
    if quantity.kind is QuantityKind.MU:
        return "mu"
    if quantity.kind is QuantityKind.RATIO and quantity.numerator and quantity.denominator:
        return f"{_quantity(quantity.numerator, roles)} / {_quantity(quantity.denominator, roles)}"
    if quantity.direction is not None and roles.get(quantity.name) is Role.EXCHANGE:
        return f"{quantity.name} {quantity.direction.value}"
    return quantity.name


def _limit(limit: Limit, roles: dict[str, Role]) -> str:
    quantity = limit.quantity
    shown = _quantity(quantity, roles)
    if limit.relation is Relation.AT_MOST and limit.high is not None:
        return f"{shown} <= {_number(limit.high)}"
    if limit.relation is Relation.AT_LEAST and limit.low is not None:
        return f"{shown} >= {_number(limit.low)}"
    low, high = limit.low or Fraction(0), limit.high or Fraction(0)
    if limit.relation is Relation.EQUAL:
        return f"{shown} = {_number(low)}{f' ± {_number(limit.sd)}' if limit.sd else ''}"
    if low < 0 and quantity.direction is not None:
        return f"{quantity.name} between in {_number(-low)} and out {_number(high)}"
    return f"{shown} between {_number(low)} and {_number(high)}"


def _variant(
    variant: Variant, accepts: _Accepts, roles: dict[str, Role], network: Network
) -> Iterator[str]:
    words = f' "{variant.words}"' if variant.words else ""
    parents = f" from {', '.join(variant.parents)}" if variant.parents else ""
    yield f"variant {variant.name}{words}{parents}{accepts.at(variant.span)}"
    yield from _species(variant.species, accepts, network, "    ")
    for setting in variant.settings:
        yield f"    set {_assignment(setting)}{accepts.at(setting.span)}"
    for compartment, group in groupby(variant.reactions, lambda r: r.compartment):
        yield f"    add to {compartment}"
        for reaction in group:
            yield f"        {write_reaction(reaction)}{accepts.at(reaction.span)}"
    for limit in variant.limits:
        yield f"    limit {_limit(limit, roles)}{accepts.at(limit.span)}"
    for drop in variant.drops:
        yield f"    drop {_drop(drop, roles)}{accepts.at(drop.span)}"


def _drop(drop: Drop, roles: dict[str, Role]) -> str:
    return drop.name if drop.quantity is None else f"limit {_quantity(drop.quantity, roles)}"
