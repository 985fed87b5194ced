"""Whether two formulas are the same compound up to water and protons."""

from __future__ import annotations

from enum import Enum
from fractions import Fraction

from fluxnet.chemistry.catalogue import Compound
from fluxnet.chemistry.formula import Formula, composition

__all__ = [
    "Likeness", "compare_formulas", "compare_with_compound", "differing_elements", "free_form",
]  # fmt: skip


class Likeness(Enum):
    """How two formulas compare.

    ``SAME``: all counts and charges are equal. ``WATER_AND_PROTONS``: they differ by whole or
    broken numbers of H2O and H+ only. ``CHARGE_MISSING``: the counts are those of the ion at
    pH 7, but the charge was not written (C2H3O2 for acetate).
    """

    SAME = "same"
    WATER_AND_PROTONS = "water and protons"
    CHARGE_MISSING = "charge missing"
    DIFFERENT = "different"


def compare_formulas(given: Formula, known: Formula) -> Likeness:
    """Compare a formula that a user gives with a known one.

    Water and protons carry no electrons: two formulas agree up to them when every element but
    H and O and the degree of reduction are equal, H - 2 O - charge.

    Examples
    --------
    >>> from fluxnet.chemistry.reader import read_formula
    >>> compare_formulas(read_formula("C2H3O2(-)"), read_formula("C2H4O2")).value
    'water and protons'
    """
    if dict(given.counts) == dict(known.counts) and given.charge == known.charge:
        return Likeness.SAME
    if differing_elements(given, known):
        return Likeness.DIFFERENT
    if _hydrogen_electrons(given) == _hydrogen_electrons(known):
        return Likeness.WATER_AND_PROTONS
    return Likeness.DIFFERENT


def compare_with_compound(given: Formula, compound: Compound) -> Likeness:
    """Compare a formula with a compound's, in its neutral form and its form at pH 7.

    Examples
    --------
    >>> from fluxnet.chemistry.catalogue import find_compound
    >>> from fluxnet.chemistry.reader import read_formula
    >>> compare_with_compound(read_formula("C2H3O2"), find_compound("acetate")).value
    'charge missing'
    """
    ion = compound.formula_ph7
    if dict(given.counts) == dict(ion.counts) and given.charge == ion.charge:
        return Likeness.SAME
    likeness = compare_formulas(given, compound.formula)
    if not given.charge and ion.charge and dict(given.counts) == dict(ion.counts):
        return Likeness.CHARGE_MISSING
    return likeness


def differing_elements(given: Formula, known: Formula) -> tuple[str, ...]:
    """The elements other than H and O whose counts differ."""
    elements = dict.fromkeys(given.elements + known.elements)
    return tuple(e for e in elements if e not in ("H", "O") and given.count(e) != known.count(e))


def free_form(formula: Formula) -> Formula:
    """The neutral form: protons added to an anion, taken from a cation.

    Examples
    --------
    >>> from fluxnet.chemistry.reader import read_formula
    >>> free_form(read_formula("C4H4O4(2-)")).count("H")
    Fraction(6, 1)
    """
    if formula.charge == 0:
        return formula
    counts = dict(formula.counts)
    hydrogen = counts.get("H", Fraction(0)) - formula.charge
    if hydrogen < 0:
        return formula
    counts["H"] = hydrogen
    return composition(counts)


def _hydrogen_electrons(formula: Formula) -> Fraction:
    """The part of the degree of reduction that water and protons share."""
    return formula.count("H") - 2 * formula.count("O") - formula.charge
