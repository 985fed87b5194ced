"""Heats of combustion: measured where one is known, else by Hess, else from the electrons."""

from __future__ import annotations

from fluxnet.chemistry.catalogue import Compound, find_compound
from fluxnet.chemistry.formation import combustion_by_hess, find_formation
from fluxnet.chemistry.formula import Formula, NitrogenReference, degree_of_reduction
from fluxnet.ground.record import record

__all__ = [
    "HEAT_PER_ELECTRON", "HeatOfCombustion", "heat_in_water", "heat_of_biomass",
    "heat_of_combustion",
]  # fmt: skip

HEAT_PER_ELECTRON = 115.0
"""Heat of combustion per electron with N2 as nitrogen reference [kJ/mol]: the mean over many
compounds, sd 6 to 8 (Roels 1983; from memory)."""


@record
class HeatOfCombustion:
    """The heat given off on combustion to CO2(g), H2O(l) and N2(g) [kJ/mol], positive.

    Sulfur ends as sulfate, phosphorus as phosphate, both in water. ``estimated`` where no
    measured value is known; ``source`` says from what.
    """

    value: float
    estimated: bool
    source: str


def heat_of_combustion(
    formula: Formula, compound: Compound | None = None
) -> HeatOfCombustion | None:
    """The heat of combustion of a species as a pure compound.

    The compound's measured value; else that of the form dissolved in water, by Hess; else
    115 kJ x (gamma + 3 N), gamma with ammonia as reference, and nothing where a compound has
    no electrons to give (what it takes from oxygen is small beside 115 kJ). None where the
    formula holds an element without a reference.

    Examples
    --------
    >>> from fluxnet.chemistry.catalogue import find_compound
    >>> ethanol = find_compound("ethanol")
    >>> heat_of_combustion(ethanol.formula, ethanol).value
    1366.9
    >>> heat_of_combustion(ethanol.formula).value
    1380.0
    """
    if compound is not None:
        if compound.combustion_kJ is not None:
            source = compound.combustion_source or ""
            return HeatOfCombustion(compound.combustion_kJ, False, source)
        dissolved = heat_in_water(compound, compound.charge)
        if dissolved is not None:
            return dissolved
    electrons = degree_of_reduction(formula, NitrogenReference.NITROGEN)
    if electrons is None:
        return None
    if electrons <= 0:
        burnt = not electrons or set(formula.elements) == {"O"}
        return HeatOfCombustion(0.0, not burnt, "no electrons to give")
    value = HEAT_PER_ELECTRON * float(electrons)
    return HeatOfCombustion(value, True, "estimated: 115 kJ per electron, N2 as reference")


def heat_in_water(compound: Compound, charge: int) -> HeatOfCombustion | None:
    """The heat of combustion of a compound as it stands in a culture, gases as gas, by Hess.

    None where the enthalpy of formation of the form with that charge is not known.

    Examples
    --------
    >>> from fluxnet.chemistry.catalogue import find_compound
    >>> round(heat_in_water(find_compound("lactate"), -1).value, 1)
    1351.5
    """
    formation = find_formation(compound.name, charge)
    if formation is None:
        return None
    form = compound.formula if charge == compound.formula.charge else compound.formula_ph7
    value = combustion_by_hess(form, formation)
    if value is None:
        return None
    state = formation.state.value
    return HeatOfCombustion(value, False, f"by Hess, state {state}: {formation.source}")


def heat_of_biomass(formula: Formula) -> HeatOfCombustion | None:
    """The heat of combustion of dry biomass: measured per C-mol of CH1.8O0.5N0.2.

    Another composition is estimated from its electrons.

    Examples
    --------
    >>> from fluxnet.chemistry.reader import read_formula
    >>> heat_of_biomass(read_formula("C6H10.8O3N1.2")).value
    3360.0
    >>> round(heat_of_biomass(read_formula("CH1.83O0.56N0.17")).value, 1)
    541.6
    """
    measured, carbon = find_compound("biomass"), formula.count("C")
    if measured is not None and measured.combustion_kJ is not None and carbon:
        shares = {element: count / carbon for element, count in formula.counts}
        if shares == dict(measured.formula.counts):
            value = measured.combustion_kJ * float(carbon)
            return HeatOfCombustion(value, False, measured.combustion_source or "")
    return heat_of_combustion(formula)
