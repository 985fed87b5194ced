"""Gases of a cultivation: reference states of a flow, water vapour, and how much water holds.

A litre of gas is an amount only with a temperature and a pressure. "Normal" litres are stated
at 0 °C, "standard" litres at 20 °C in European practice and at 0 or 21.1 °C in American
practice: a flow taken for the other is off by 7.3 % (293.15 / 273.15).
"""

from __future__ import annotations

from math import exp

from fluxnet.chemistry.henry import Henry, find_henry

__all__ = [
    "AIR_CO2", "AIR_O2", "ATMOSPHERE", "ZERO_C", "find_solubility", "litres_to_moles",
    "saturated_oxygen", "vapour_pressure", "water_fraction",
]  # fmt: skip

ZERO_C = 273.15
ATMOSPHERE = 1.01325
"""bar"""

AIR_O2 = 0.2095
AIR_CO2 = 0.0004
"""Dry air [mol/mol]; CO2 as many fermentation papers set it. Outdoor air held 0.00042 in 2023."""

_GAS_CONSTANT = 0.0831446262
"""L bar / mol / K (CODATA 2018, exact by definition)"""

_SANDER = "Sander 2023, Atmos. Chem. Phys. 23, 10901"
_GASES = {
    one.name: one
    for one in (
        Henry("oxygen", 1.3e-5, 1500, _SANDER),
        Henry("N2", 6.4e-6, 1300, _SANDER),
        Henry("CO", 9.7e-6, 1300, _SANDER),
    )
}
"""Gases that hardly dissolve; what the gas strips from the broth stands in ``henry.py``."""


def litres_to_moles(litres: float, celsius: float, bar: float = ATMOSPHERE) -> float:
    """Moles of an ideal gas in litres stated at a temperature and a pressure.

    Examples
    --------
    >>> round(litres_to_moles(600.0, 0.0), 3), round(litres_to_moles(600.0, 20.0), 3)
    (26.769, 24.943)
    """
    return litres * bar / (_GAS_CONSTANT * (celsius + ZERO_C))


def vapour_pressure(celsius: float) -> float:
    """Saturated water vapour over water [bar], within 0.4 % from -40 to 50 °C.

    6.1094 hPa exp(17.625 t / (t + 243.04)): the Magnus form of Alduchov & Eskridge 1996,
    J. Appl. Meteorol. 35, 601 (coefficients from memory).

    Examples
    --------
    >>> round(vapour_pressure(30.0), 4)
    0.0424
    """
    return 6.1094e-3 * exp(17.625 * celsius / (celsius + 243.04))


def water_fraction(celsius: float, bar: float = ATMOSPHERE, humidity: float = 1.0) -> float:
    """Water in a gas [mol/mol wet gas] at a relative humidity.

    Examples
    --------
    >>> round(water_fraction(30.0), 4)
    0.0418
    """
    return humidity * vapour_pressure(celsius) / bar


def find_solubility(name: str) -> Henry | None:
    """The Henry constant of a gas of cultivations, by its catalogue name.

    Examples
    --------
    >>> find_solubility("oxygen").constant
    1.3e-05
    """
    return _GASES.get(name) or find_henry(name)


def saturated_oxygen(celsius: float, bar: float = ATMOSPHERE, fraction: float = AIR_O2) -> float:
    """Oxygen in water that stands with moist gas [mmol/L].

    H(T) times the partial pressure fraction (p - p_water). The constant is known to two digits.

    Examples
    --------
    >>> round(saturated_oxygen(30.0), 3)
    0.243
    """
    henry = find_solubility("oxygen")
    assert henry is not None
    partial = fraction * (bar - vapour_pressure(celsius)) * 1e5
    return henry.at(celsius + ZERO_C) * partial
