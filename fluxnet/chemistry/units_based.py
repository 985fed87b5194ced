"""Measured values to the base units of the raw data and back, for a species where it takes one."""

from __future__ import annotations

from fractions import Fraction

from fluxnet.chemistry.conversion import conversion_factor
from fluxnet.chemistry.unit_words import Dimension
from fluxnet.chemistry.units import UnitError, UnitFault, parse_unit
from fluxnet.chemistry.units_measured import Measure, MeasuredUnit
from fluxnet.chemistry.weighed import Substance
from fluxnet.ground.record import record

__all__ = ["MOLES_PER_LITRE_AT", "Conversion", "conversion_of", "moles_per_litre"]

MOLES_PER_LITRE_AT = Fraction("1.01325")
"""bar: litres of gas are stated at one atmosphere."""

_GAS_CONSTANT = Fraction("0.0831446261815324")
"""L bar / mol / K (CODATA 2018, exact by definition)."""


@record
class Conversion:
    """``base = factor * value + offset`` in the unit ``base``, from the decimals as written.

    Examples
    --------
    >>> from fluxnet.chemistry.units_measured import read_measured_unit
    >>> kelvin = conversion_of(read_measured_unit("K"))
    >>> kelvin.forth(303.15), kelvin.base
    (30.0, '°C')
    """

    base: str
    factor: Fraction
    offset: Fraction = Fraction(0)

    def forth(self, value: float) -> float:
        """A value in the base unit, rounded once."""
        return float(Fraction(repr(float(value))) * self.factor + self.offset)

    def back(self, value: float) -> float:
        """A value of the base unit in the unit that was read, rounded once."""
        return float((Fraction(repr(float(value))) - self.offset) / self.factor)


def moles_per_litre(celsius: Fraction | float) -> Fraction:
    """Moles in a litre of ideal gas at a temperature and one atmosphere: p / (R T).

    Examples
    --------
    >>> round(float(1 / moles_per_litre(0)), 4), round(float(1 / moles_per_litre(20)), 4)
    (22.414, 24.0551)
    """
    return MOLES_PER_LITRE_AT / (_GAS_CONSTANT * (Fraction(celsius) + Fraction("273.15")))


def conversion_of(
    unit: MeasuredUnit,
    substance: Substance | None = None,
    *,
    gas_reference: float | Fraction | None = None,
    broth: float | None = None,
    grams: bool = False,
) -> Conversion:
    """How a unit becomes its base.

    Parameters
    ----------
    substance
        What is counted per litre or kilogram. Without one grams stay grams and moles moles.
    gas_reference
        °C that litres of gas are stated at, where the unit does not say: litres become moles.
    broth
        Litres of broth, for gas per broth (vvm).
    grams
        Amounts become grams, not millimoles (dry weight).

    Raises
    ------
    UnitError
        Where the species does not have what the unit counts.

    Examples
    --------
    >>> from fluxnet.chemistry.units_measured import read_measured_unit
    >>> flow = conversion_of(read_measured_unit("NL/h"))
    >>> round(flow.forth(600), 3), flow.base
    (26.769, 'mol/h')
    """
    measure = unit.measure
    if unit.amount is not None:
        per = "L" if measure is Measure.PER_VOLUME else "kg"
        plain_grams = substance is None and unit.amount.amount is Dimension.MASS
        base = f"{'g' if grams or plain_grams else 'mmol'}/{per}"
        if substance is None and unit.amount.amount not in (Dimension.MASS, Dimension.MOLES):
            words = f"`{unit.text}` needs the formula of what it counts"
            raise UnitError(UnitFault.WRONG, words, unit.text)
        if substance is None and grams and not plain_grams:
            words = f"`{unit.text}` does not weigh anything without a formula"
            raise UnitError(UnitFault.WRONG, words, unit.text)
        to = parse_unit(base)
        if substance is None:
            return Conversion(base, unit.amount.scale / to.scale)
        return Conversion(base, conversion_factor(unit.amount, to, substance))
    reference = unit.reference if unit.reference is not None else gas_reference
    factor = unit.factor
    if measure is Measure.GAS_PER_BROTH and broth is not None:
        factor, measure = factor * Fraction(broth), Measure.VOLUME_FLOW
    if measure is Measure.VOLUME_FLOW and reference is not None:
        return Conversion("mol/h", factor * moles_per_litre(reference))
    return Conversion(measure.value, factor, unit.offset)
