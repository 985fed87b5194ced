"""Values from one unit to another, exactly: grams, moles, C-mol, grams of carbon, electrons."""

from __future__ import annotations

from fractions import Fraction

from fluxnet.chemistry.elements import ATOMIC_WEIGHT
from fluxnet.chemistry.formula import degree_of_reduction
from fluxnet.chemistry.unit_words import Dimension
from fluxnet.chemistry.units import Unit, UnitError, UnitFault
from fluxnet.chemistry.weighed import FREE, Substance, weighed_mass

__all__ = ["conversion_factor"]


def conversion_factor(unit: Unit, to: Unit, substance: Substance) -> Fraction:
    """How many of the second unit one of the first is, for this species: an exact number.

    Raises
    ------
    UnitError
        WRONG where the units have other denominators, or the species does not have what one
        of them counts.

    Examples
    --------
    >>> from fluxnet.chemistry.reader import read_formula
    >>> from fluxnet.chemistry.units import parse_unit
    >>> glucose = Substance("glucose", read_formula("C6H12O6"))
    >>> round(float(conversion_factor(parse_unit("g/L/h"), parse_unit("mmol/L/h"), glucose)), 4)
    5.5507
    """
    if sorted(d.value for d in unit.per) != sorted(d.value for d in to.per):
        raise UnitError(
            UnitFault.WRONG, f"`{unit.text}` and `{to.text}` are not per the same things", unit.text
        )
    if (unit.amount is None) != (to.amount is None):
        raise UnitError(
            UnitFault.WRONG, f"`{unit.text}` cannot be told in `{to.text}`", unit.text
        )
    if unit.amount is None:
        return unit.scale / to.scale
    return (unit.scale * _moles(unit, substance)) / (to.scale * _moles(to, substance))


def _moles(unit: Unit, substance: Substance) -> Fraction:
    """Millimoles of the species in one base unit of what a unit counts."""
    name, formula = substance.name, substance.formula
    if unit.amount is Dimension.MOLES:
        return Fraction(1)
    if unit.amount is Dimension.MASS:
        mass = weighed_mass(substance, unit.form)
        if not mass:
            what = f"has no form `{unit.form.words}`" if unit.form != FREE else "cannot be weighed"
            raise UnitError(UnitFault.WRONG, f"{name} {what}", unit.text)
        return 1000 / mass
    if unit.amount is Dimension.ELECTRONS:
        gamma = degree_of_reduction(formula)
        if not gamma:
            raise UnitError(UnitFault.WRONG, f"{name} cannot be counted in electrons", unit.text)
        return 1 / abs(gamma)
    carbon = formula.count("C")
    if not carbon:
        raise UnitError(UnitFault.WRONG, f"{name} holds no carbon to count", unit.text)
    if unit.amount is Dimension.CARBON:
        return 1 / carbon
    return 1000 / (carbon * Fraction(repr(ATOMIC_WEIGHT["C"])))
