"""Compositions: elements with exact counts, charge, molar mass, electrons."""

from __future__ import annotations

from collections.abc import Mapping
from enum import Enum
from fractions import Fraction

from fluxnet.chemistry.elements import ATOMIC_WEIGHT, VALENCE
from fluxnet.ground.record import record

__all__ = ["EMPTY", "Formula", "NitrogenReference", "degree_of_reduction", "molar_mass"]


class NitrogenReference(Enum):
    """The nitrogen compound that counts as holding no electrons.

    The value is k in gamma = 4 C + H - 2 O - (3 - k) N + ...: each reference adds k N
    (Roels 1983; from memory).
    """

    AMMONIA = 0
    NITROGEN = 3
    NITRATE = 8


@record
class Formula:
    """What one mole of a species holds.

    ``counts`` are pairs (element symbol, moles), without zeros, elements in the order in
    which they were written; ``charge`` in elementary charges. ``half_units`` gives for an
    element half a unit of the last decimal written (1/20 for the 1.8 of CH1.8): whole
    numbers are exact and have no entry. ``written`` is the text as typed.
    """

    counts: tuple[tuple[str, Fraction], ...] = ()
    charge: Fraction = Fraction(0)
    half_units: tuple[tuple[str, Fraction], ...] = ()
    written: str = ""

    def count(self, element: str) -> Fraction:
        """Moles of an element per mole of the species."""
        return dict(self.counts).get(element, Fraction(0))

    def half_unit(self, element: str) -> Fraction:
        """Half a unit of the last written decimal of an element's count."""
        return dict(self.half_units).get(element, Fraction(0))

    @property
    def elements(self) -> tuple[str, ...]:
        """The elements that it holds, as written."""
        return tuple(element for element, _ in self.counts)


EMPTY = Formula()


def composition(counts: Mapping[str, Fraction | int], charge: Fraction | int = 0) -> Formula:
    """Make a formula from counts, leaving zeros out.

    Examples
    --------
    >>> composition({"O": Fraction(1), "C": Fraction(2), "H": Fraction(6)}).count("C")
    Fraction(2, 1)
    """
    return Formula(
        tuple((e, Fraction(n)) for e, n in counts.items() if n != 0), Fraction(charge)
    )


def degree_of_reduction(
    formula: Formula, nitrogen: NitrogenReference = NitrogenReference.AMMONIA
) -> Fraction | None:
    """Electrons per mole that leave on combustion to the reference compounds [mol/mol].

    gamma = 4 C + H - 2 O - (3 - k) N + 5 P + 6 S - charge, with the references CO2, H2O,
    H+, NH3 (k = 0), phosphate and sulfate (Roels 1983; definition from memory). Metals and
    halogens count at their usual ion. None where an element has no reference.

    Examples
    --------
    >>> from fluxnet.chemistry.reader import read_formula
    >>> degree_of_reduction(read_formula("C6H12O6"))
    Fraction(24, 1)
    >>> float(degree_of_reduction(read_formula("CH1.8O0.5N0.2"), NitrogenReference.NITROGEN))
    4.8
    """
    total = -formula.charge
    for element, count in formula.counts:
        if element not in VALENCE:
            return None
        total += VALENCE[element] * count
    return total + nitrogen.value * formula.count("N")


def molar_mass(formula: Formula) -> float:
    """Molar mass [g/mol]; the electrons of a charge are not weighed.

    Examples
    --------
    >>> round(molar_mass(composition({"C": Fraction(2), "H": Fraction(6), "O": Fraction(1)})), 3)
    46.069
    """
    return float(sum(float(n) * ATOMIC_WEIGHT[element] for element, n in formula.counts))
