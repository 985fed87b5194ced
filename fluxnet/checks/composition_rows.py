"""Equations for the contents of species without a formula: one for each line and balance."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction

from fluxnet.ground.record import record
from fluxnet.network.contents import ELECTRONS, Content, Functional
from fluxnet.network.expression import Expression, constant
from fluxnet.network.line_balance import Contents, line_functionals
from fluxnet.network.model import Reaction
from fluxnet.network.rounding import explains, reach_of

__all__ = ["Equation", "equations_of", "global_functionals", "within_rounding"]


_ANYTHING = Content({"C": Fraction(1), ELECTRONS: Fraction(4)}, {})


@record
class Equation:
    """One line in one balance: sum of ``factors`` times the unknown contents = -``gap``.

    ``gap`` is what the species with a composition leave, right less left, at the parameters'
    values. ``exact`` is false where a number of the line, or a formula in it, is rounded.
    """

    reaction: Reaction
    factors: Mapping[str, Fraction]
    gap: Fraction
    exact: bool


def global_functionals(contents: Contents) -> tuple[Functional, ...]:
    """The balances over everything that the network's species hold, at least C and electrons."""
    known = {n: c for n, c in contents.by_species.items() if c is not None}
    known[""] = _ANYTHING
    counted = {
        n: Content({a: v for a, v in c.amounts.items() if a != ELECTRONS}, c.half_units)
        if c.without_reference
        else c
        for n, c in known.items()
    }
    return line_functionals(counted, contents.free)


def equations_of(contents: Contents, functional: Functional) -> tuple[Equation, ...]:
    """The equations of one balance, of all lines with a species without a composition.

    Lines with a ``?`` that is not solved are left out, and from the balance of electrons those
    that hold an element without a reference.
    """
    values = {p.name: p.value for p in contents.network.parameters}
    return tuple(
        equation
        for reaction in contents.network.reactions
        if (equation := _equation(reaction, contents, functional, values)) is not None
    )


def _equation(
    reaction: Reaction,
    contents: Contents,
    functional: Functional,
    values: Mapping[str, Fraction],
) -> Equation | None:
    factors: dict[str, Fraction] = {}
    gap = Fraction(0)
    exact = True
    unknown = False
    for sign, term in reaction.terms:
        if term.coefficient is None or term.species not in contents.by_species:
            return None
        try:
            number = sign * term.coefficient.exact(values)
        except ZeroDivisionError:
            return None
        content = contents.by_species[term.species]
        exact = exact and not (term.half_unit and not term.solved)
        if content is None:
            unknown = True
            factors[term.species] = factors.get(term.species, Fraction(0)) + number
        else:
            if content.without_reference and functional.name == ELECTRONS:
                return None
            exact = exact and not functional.half_unit(content)
            gap += number * functional.of(content)
    if not unknown:
        return None
    return Equation(reaction, {n: f for n, f in factors.items() if f}, gap, exact)


def within_rounding(
    equation: Equation,
    contents: Contents,
    functional: Functional,
    found: Mapping[str, Fraction],
    gap: Fraction,
) -> bool:
    """Whether the rounding of a line's numbers explains its gap at contents that were found."""
    products: list[tuple[Expression, Fraction, Fraction, Fraction]] = []
    for sign, term in equation.reaction.terms:
        if term.coefficient is None:
            continue
        content = contents.by_species[term.species]
        amount = found.get(term.species, Fraction(0))
        half = Fraction(0)
        if content is not None:
            amount, half = functional.of(content), functional.half_unit(content)
        signed = term.coefficient if sign > 0 else -term.coefficient
        products.append((signed, Fraction(0) if term.solved else term.half_unit, amount, half))
    return explains(reach_of(products), constant(gap))
