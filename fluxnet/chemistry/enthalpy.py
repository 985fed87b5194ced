"""Heats of combustion: measured where the catalogue has one, else from the electrons."""

from __future__ import annotations

from fluxnet.chemistry.catalogue import Compound
from fluxnet.chemistry.formula import Formula, NitrogenReference, degree_of_reduction
from fluxnet.ground.record import record

__all__ = ["HEAT_PER_ELECTRON", "HeatOfCombustion", "heat_of_combustion"]

HEAT_PER_ELECTRON = 115.0
"""Heat of combustion per electron with N2 as nitrogen reference [kJ/mol]: the mean over many
compounds, sd 6 to 8 (Roels 1983; from memory)."""


@record
class HeatOfCombustion:
    """The heat given off on combustion to CO2(g), H2O(l) and N2(g) [kJ/mol], positive.

    ``estimated`` where no measured value is known; ``source`` says from what.
    """

    value: float
    estimated: bool
    source: str


def heat_of_combustion(
    formula: Formula, compound: Compound | None = None
) -> HeatOfCombustion | None:
    """The heat of combustion of a species.

    The compound's measured value; else 115 kJ x (gamma + 3 N), gamma with ammonia as
    reference. None where the formula holds an element without a reference.

    Examples
    --------
    >>> from fluxnet.chemistry.catalogue import find_compound
    >>> ethanol = find_compound("ethanol")
    >>> heat_of_combustion(ethanol.formula, ethanol).value
    1366.9
    >>> heat_of_combustion(ethanol.formula).value
    1380.0
    """
    if compound is not None and compound.combustion_kJ is not None:
        return HeatOfCombustion(compound.combustion_kJ, False, compound.combustion_source or "")
    electrons = degree_of_reduction(formula, NitrogenReference.NITROGEN)
    if electrons is None:
        return None
    value = HEAT_PER_ELECTRON * float(electrons)
    return HeatOfCombustion(value, True, "estimated: 115 kJ per electron, N2 as reference")
