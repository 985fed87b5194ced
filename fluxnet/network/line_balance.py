"""The balance of one reaction: what its sides hold, the gap, and what rounding can explain."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from enum import Enum
from fractions import Fraction

from fluxnet.ground.record import record
from fluxnet.network.contents import (
    CHARGE,
    ELECTRONS,
    PHOSPHATE,
    Content,
    Functional,
    content_of,
    content_of_formula,
    in_order_of_balances,
    without_free,
)  # fmt: skip
from fluxnet.network.expression import ZERO, Expression, constant
from fluxnet.network.model import Network, Reaction, Species, Term
from fluxnet.network.rounding import explains, reach_of
from fluxnet.network.water import Water, at_ph_seven, water_of

__all__ = [
    "Contents", "ElementBalance", "LineBalance", "Verdict", "balance_line", "contents_of_network",
    "held_by", "line_functionals",
]  # fmt: skip

_ZERO = Fraction(0)


class Verdict(Enum):
    """Whether a balance closes. ``ROUNDING``: only if its numbers were rounded."""

    CLOSES = "closes"
    ROUNDING = "closes within rounding"
    OPEN = "does not close"
    UNCHECKED = "cannot be checked"


@record
class ElementBalance:
    """One balance of one reaction [moles per mole of reaction].

    ``gap`` is right less left. ``rounding`` is the largest gap of its sign that the rounding
    of the written numbers can explain (the part without parameters).
    """

    functional: Functional
    left: Expression
    right: Expression
    gap: Expression
    rounding: Fraction
    verdict: Verdict

    @property
    def name(self) -> str:
        """The element's symbol, ``electrons`` or ``charge``."""
        return self.functional.name


@record
class LineBalance:
    """All balances of one reaction.

    ``unknown`` are its species without a composition: then nothing is checked.
    ``without_reference`` are elements that leave its electrons unchecked.
    ``water_unchecked_for`` are the carriers that forbid to check the water and protons that it
    writes. ``contents`` are those that were balanced, by species.
    """

    reaction: Reaction
    balances: tuple[ElementBalance, ...]
    verdict: Verdict
    contents: Mapping[str, Content]
    unknown: tuple[str, ...] = ()
    without_reference: tuple[str, ...] = ()
    water_unchecked_for: tuple[str, ...] = ()

    @property
    def open(self) -> tuple[ElementBalance, ...]:
        """The balances with a gap."""
        return tuple(b for b in self.balances if not b.gap.is_zero)


@record
class Contents:
    """What the species of a network hold (None: no composition), and the free ones."""

    network: Network
    by_species: Mapping[str, Content | None]
    free: tuple[Content, ...]


def contents_of_network(
    network: Network, reactions: Iterable[Reaction] | None = None
) -> Contents:
    """Work out what each species of a network, or of some reactions, holds, and which are free."""
    if reactions is None:
        by_species = {s.name: content_of(s) for s in network.species}
    else:
        names = dict.fromkeys(t.species for r in reactions for _, t in r.terms)
        found = (network.find_species(n) for n in names)
        by_species = {s.name: content_of(s) for s in found if s is not None}
    free = [] if network.balance_phosphate else [PHOSPHATE]
    for name in network.free:
        species = network.find_species(name)
        content = _catalogue_content(name) if species is None else content_of(species)
        if content is not None:
            free.append(content)
    return Contents(network, by_species, tuple(free))


def held_by(species: Species, contents: Contents) -> Content | None:
    """What a species of the network holds, also one that stands in none of the reactions."""
    if species.name in contents.by_species:
        return contents.by_species[species.name]
    return content_of(species)


def _catalogue_content(name: str) -> Content | None:
    from fluxnet.chemistry.catalogue import load_catalogue

    compound = load_catalogue().find(name)
    return None if compound is None else content_of_formula(compound.formula)


def line_functionals(
    present: Mapping[str, Content], free: Sequence[Content], water: Iterable[str] = ()
) -> tuple[Functional, ...]:
    """The balances that a line with these contents must keep.

    A free species counts with all that it holds: free phosphate brings no oxygen into a line
    without phosphorus.
    ``water`` holds ``"O"`` where water is checked, ``"charge"`` where protons are.
    """
    unseen = {"H", "O", CHARGE}.difference(water)
    if any(content.without_reference for content in present.values()):
        unseen.add(ELECTRONS)
    held = {a for content in present.values() for a in content.amounts}
    held |= {a for content in free for a in content.amounts}
    functionals = without_free(in_order_of_balances(held - unseen), free)
    return tuple(f for f in functionals if any(map(f.of, present.values())))


def balance_line(reaction: Reaction, contents: Contents) -> LineBalance:
    r"""Balance one reaction whose ``?`` coefficients are solved, exactly.

    C, N, S and every other element but H and O, and electrons; P only where the model
    balances phosphate; O and charge only where water and protons are written and can be
    checked, acids then counting as their formulas stand or all as their ions at pH 7, in
    whichever form the line closes. Carriers count their cargo.
    A solved ``?`` follows the other numbers, so it does not excuse a gap and is not to blame
    for one: rounding is judged by the balances in which no solved species counts.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text(
    ...     "substrate glucose\nproduct ethanol, CO2\ncompartment c\n"
    ...     "    ferment : glucose -> 2 ethanol + 2 CO2\n"
    ... ).network
    >>> from dataclasses import replace
    >>> from fluxnet.network.expression import constant
    >>> good = network.reactions[0]
    >>> bad = replace(good, right=(good.right[0], replace(good.right[1], coefficient=constant(3))))
    >>> line = balance_line(bad, contents_of_network(network, (bad,)))
    >>> line.verdict, [(b.name, str(b.gap)) for b in line.balances]
    (<Verdict.OPEN: 'does not close'>, [('C', '1'), ('electrons', '0')])
    """
    names = dict.fromkeys(term.species for _, term in reaction.terms)
    unknown = tuple(n for n in names if contents.by_species.get(n) is None)
    if unknown or any(term.coefficient is None for _, term in reaction.terms):
        return LineBalance(reaction, (), Verdict.UNCHECKED, {}, unknown)
    present = {n: c for n in names if (c := contents.by_species[n]) is not None}
    species = [s for n in names if (s := contents.network.find_species(n)) is not None]
    water = water_of(species)
    line = _balance(reaction, present, contents.free, water)
    if water.checked and line.verdict is not Verdict.CLOSES:
        ionised, free = at_ph_seven(species, present, contents.free)
        other = _balance(reaction, ionised, free, water)
        if len(other.open) < len(line.open):
            return other
    return line


def _balance(
    reaction: Reaction, present: Mapping[str, Content], free: tuple[Content, ...], water: Water
) -> LineBalance:
    functionals = line_functionals(present, free, water.checked)
    net = _net_coefficients(reaction)
    balances = tuple(_one_balance(reaction, f, present, net) for f in functionals)
    verdict = _worst(balances)
    solved = {t.species for _, t in reaction.terms if t.solved}
    if solved and verdict is not Verdict.CLOSES:
        reduced = line_functionals(
            present, (*free, *(present[n] for n in solved)), water.checked
        )
        judged = _worst(tuple(_one_balance(reaction, f, present, net) for f in reduced))
        verdict = Verdict.OPEN if judged is Verdict.OPEN else Verdict.ROUNDING
    lost = {e for content in present.values() for e in content.without_reference}
    return LineBalance(
        reaction, balances, verdict, present,
        without_reference=tuple(sorted(lost)),
        water_unchecked_for=water.unchecked_for,
    )  # fmt: skip


def _worst(balances: Iterable[ElementBalance]) -> Verdict:
    found = {b.verdict for b in balances}
    return next((v for v in (Verdict.OPEN, Verdict.ROUNDING) if v in found), Verdict.CLOSES)


def _net_coefficients(reaction: Reaction) -> dict[str, tuple[Expression, Fraction]]:
    """By species: what the reaction makes of it, and the half unit of that."""
    net: dict[str, tuple[Expression, Fraction]] = {}
    for sign, term in reaction.terms:
        if term.coefficient is None:
            continue
        signed = term.coefficient if sign > 0 else -term.coefficient
        half = _ZERO if term.solved else term.half_unit
        if term.species in net:
            before, half_before = net[term.species]
            signed, half = before + signed, half_before + half
        net[term.species] = (signed, half)
    return net


def _one_balance(
    reaction: Reaction,
    functional: Functional,
    present: Mapping[str, Content],
    net: Mapping[str, tuple[Expression, Fraction]],
) -> ElementBalance:
    value = {name: functional.of(content) for name, content in present.items()}
    left, right = _side(reaction.left, value), _side(reaction.right, value)
    gap = right - left
    if gap.is_zero:
        return ElementBalance(functional, left, right, gap, _ZERO, Verdict.CLOSES)
    reach = reach_of(
        (coefficient, half, value[name], functional.half_unit(present[name]))
        for name, (coefficient, half) in net.items()
    )
    verdict = Verdict.ROUNDING if explains(reach, gap) else Verdict.OPEN
    rounding = -reach.down if (gap.number or _ZERO) > 0 else reach.up
    return ElementBalance(functional, left, right, gap, rounding, verdict)


def _side(terms: Iterable[Term], value: Mapping[str, Fraction]) -> Expression:
    """What one side holds: numbers are added as numbers, since most lines have no others."""
    number, rest = _ZERO, ZERO
    for term in terms:
        amount = value[term.species]
        if amount and term.coefficient is not None:
            factor = term.coefficient.number
            if factor is None:
                rest = rest + term.coefficient.scaled(amount)
            else:
                number += factor * amount
    return rest + constant(number)
