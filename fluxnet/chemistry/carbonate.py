"""Carbon dioxide in water: bicarbonate and carbonate beside it, at a pH and a temperature.

pK1(T) and pK2(T) by Plummer & Busenberg 1982 (Geochim. Cosmochim. Acta 46, 1011; coefficients
from memory: at 25 °C they give 6.35 and 10.33). A pH electrode shows the activity of protons,
ions are counted by amount: the activity of the ions by the Davies equation (from memory).
"""

from __future__ import annotations

from math import log10, sqrt

from fluxnet.chemistry.henry import find_henry

__all__ = ["carbon_over_dissolved", "carbonate_constants", "held_carbon"]

_ZERO_C = 273.15
_DAVIES = 0.51  # of water at 25 °C; at 37 °C 0.52, which moves pK1 by 0.002


def carbonate_constants(celsius: float, ionic_strength: float = 0.0) -> tuple[float, float]:
    """pK1 and pK2 of carbonic acid; ``ionic_strength`` in mol/L, up to 0.5.

    pK1' = pK1 + log g1, pK2' = pK2 + log g2 - log g1, with log g_z = -0.51 z^2 (sqrt(I) /
    (1 + sqrt(I)) - 0.3 I).

    Examples
    --------
    >>> [round(pk, 2) for pk in carbonate_constants(25.0)]
    [6.35, 10.33]
    >>> round(carbonate_constants(37.0, 0.15)[0], 2)
    6.19
    """
    t = celsius + _ZERO_C
    pk1 = (356.3094 + 0.06091964 * t - 21834.37 / t - 126.8339 * log10(t) + 1684915 / t**2)
    pk2 = (107.8871 + 0.03252849 * t - 5151.79 / t - 38.92561 * log10(t) + 563713.9 / t**2)
    root = sqrt(ionic_strength)
    fall = _DAVIES * (root / (1 + root) - 0.3 * ionic_strength)
    return pk1 - fall, pk2 - 3 * fall


def carbon_over_dissolved(ph: float, celsius: float, ionic_strength: float = 0.0) -> float:
    """All inorganic carbon over dissolved CO2: 1 + 10^(pH - pK1) (1 + 10^(pH - pK2)).

    Examples
    --------
    >>> round(carbon_over_dissolved(7.0, 25.0), 2)
    5.45
    """
    pk1, pk2 = carbonate_constants(celsius, ionic_strength)
    return float(1 + 10 ** (ph - pk1) * (1 + 10 ** (ph - pk2)))


def held_carbon(
    pressure_pa: float, ph: float, celsius: float, ionic_strength: float = 0.0
) -> float:
    """Inorganic carbon in water that stands with a partial pressure of CO2 [mmol/L].

    Examples
    --------
    >>> round(held_carbon(4000.0, 7.0, 37.0), 2)
    5.77
    """
    henry = find_henry("CO2")
    assert henry is not None
    dissolved = henry.at(celsius + _ZERO_C) * pressure_pa
    return dissolved * carbon_over_dissolved(ph, celsius, ionic_strength)


