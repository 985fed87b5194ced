"""Oxygen uptake and carbon dioxide release from a gas line, by the balance of the inert gases.

What neither enters nor leaves the broth leaves with the gas as it came: nitrogen and argon
give the outlet flow, F_out = F_in (1 - sum y_in) / (1 - sum y_out), sums over all gases that
react. Taking F_out = F_in in its place costs about one per cent of OUR, and more of RQ.
"""

from __future__ import annotations

from collections.abc import Mapping
from math import inf, sqrt

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record

__all__ = [
    "CAUTION", "GasRates", "RatioInterval", "at_pressure", "dry_fraction", "inert_balance",
    "ratio_interval",
]  # fmt: skip

Array = NDArray[np.float64]

CAUTION = (
    "Enriched or pure oxygen feeds fires, and gas that leaves a fermenter may hold no oxygen or "
    "much carbon dioxide: ventilate, and keep to the rules of your site."
)
"""Said once where oxygen or off-gas numbers are shown."""


@record
class GasRates:
    """What the broth took up and gave off [mol/h, or the unit of the inlet flow].

    ``released`` by species: positive out of the broth; ``uptake`` of oxygen is its opposite.
    """

    flow_out: Array
    released: Mapping[str, Array]

    @property
    def uptake(self) -> Array:
        """Oxygen taken up."""
        return -self.released["oxygen"]

    @property
    def respiratory_quotient(self) -> Array:
        """CO2 given off over oxygen taken up."""
        return np.asarray(self.released["CO2"] / self.uptake)


def inert_balance(
    flow_in: Array | float,
    inlet: Mapping[str, Array | float],
    outlet: Mapping[str, Array | float],
    flow_out: Array | float | None = None,
) -> GasRates:
    """Rates from the dry inlet flow and the dry fractions of all gases that react.

    Parameters
    ----------
    flow_in
        Dry gas into the broth [mol/h].
    inlet, outlet
        Fractions of dry gas [mol/mol] by species, oxygen and CO2 at least. Every gas that the
        broth makes or takes up belongs here, at the inlet with 0 where there is none: hydrogen
        or methane made and not listed would count as inert, and spoil every rate.
    flow_out
        The dry outlet flow where it was measured: then nothing is taken as inert. It is needed
        where N2 is taken up or another gas is made that nobody measured.

    Raises
    ------
    MisuseError
        Where inlet and outlet do not list the same gases, or oxygen or CO2 is not among them.

    Examples
    --------
    >>> rates = inert_balance(26.769, {"oxygen": 0.2095, "CO2": 0.0004},
    ...                       {"oxygen": 0.182, "CO2": 0.026})
    >>> round(float(rates.flow_out), 3), round(float(rates.uptake) * 200, 2)
    (26.705, 149.57)
    """
    if set(inlet) != set(outlet) or not {"oxygen", "CO2"} <= set(inlet):
        raise MisuseError(
            f"inlet gas lists {', '.join(inlet)}, outlet gas {', '.join(outlet)}: both need the "
            "same gases, oxygen and CO2 among them"
        )
    into = np.asarray(flow_in, dtype=np.float64)
    if flow_out is None:
        inert_in = 1.0 - sum(np.asarray(y) for y in inlet.values())
        inert_out = 1.0 - sum(np.asarray(y) for y in outlet.values())
        out = np.asarray(into * inert_in / inert_out)
    else:
        out = np.asarray(flow_out, dtype=np.float64)
    released = {
        name: np.asarray(out * np.asarray(outlet[name]) - into * np.asarray(y))
        for name, y in inlet.items()
    }
    return GasRates(out, released)


def dry_fraction(wet: Array | float, water: Array | float) -> Array:
    """The fraction in dry gas of what was read in moist gas: y / (1 - y_water)."""
    return np.asarray(np.asarray(wet) / (1.0 - np.asarray(water)))


def at_pressure(reading: Array | float, bar: Array | float, calibrated_at: float) -> Array:
    """The fraction behind a reading that follows the pressure in the analyser.

    An analyser that measures partial pressure (paramagnetic, infrared) shows y p / p_cal: 10 mbar
    of weather are 1 % of the reading, or 0.2 % points of oxygen.
    """
    return np.asarray(np.asarray(reading) * calibrated_at / np.asarray(bar))


@record
class RatioInterval:
    """A ratio with its interval; ``low`` or ``high`` infinite where nothing bounds it."""

    value: float
    low: float
    high: float
    usable: bool


def ratio_interval(
    above: float, below: float, covariance: Array, z: float = 1.959964, sds: float = 3.0
) -> RatioInterval:
    """A ratio of two correlated values with its interval by Fieller's theorem.

    All r with (a - r b)^2 <= z^2 var(a - r b). Unusable where the denominator is below ``sds``
    of its sd.

    Parameters
    ----------
    covariance
        2 x 2, of the value above and the value below.

    Examples
    --------
    >>> found = ratio_interval(9.5, 10.0, np.array([[0.01, 0.0], [0.0, 0.04]]))
    >>> round(found.value, 3), round(found.low, 3), round(found.high, 3), found.usable
    (0.95, 0.909, 0.994, True)
    >>> ratio_interval(9.5, 10.0, np.array([[0.01, 0.0], [0.0, 16.0]])).usable
    False
    """
    vaa, vab, vbb = float(covariance[0, 0]), float(covariance[0, 1]), float(covariance[1, 1])
    usable = below * below > sds * sds * vbb and below != 0
    value = above / below if below else inf
    first = below * below - z * z * vbb
    middle = above * below - z * z * vab
    last = above * above - z * z * vaa
    root = middle * middle - first * last
    if first <= 0 or root < 0:
        return RatioInterval(value, -inf, inf, usable)
    half = sqrt(root)
    return RatioInterval(value, (middle - half) / first, (middle + half) / first, usable)
