"""How much of a volatile compound water holds: Henry constants, and bicarbonate beside CO2."""

from __future__ import annotations

from math import exp

from fluxnet.ground.record import record

__all__ = ["Henry", "carbonate_factor", "find_henry"]

STANDARD_K = 298.15
_PKA1 = 6.35  # CO2 and bicarbonate at 25 °C and no ionic strength; from memory


@record
class Henry:
    """Dissolved over partial pressure at 25 °C [mol/m3/Pa], and d ln H / d(1/T) [K]."""

    name: str
    constant: float
    slope: float
    source: str

    def at(self, kelvin: float) -> float:
        """The constant at another temperature [mol/m3/Pa].

        H(T) = H(298.15 K) exp(slope (1/T - 1/298.15)).

        Examples
        --------
        >>> round(find_henry("ethanol").at(303.15), 3)
        1.334
        """
        return self.constant * exp(self.slope * (1 / kelvin - 1 / STANDARD_K))


_SANDER = "Sander 2023, Atmos. Chem. Phys. 23, 10901"
_MEMORY = "from memory"
_KNOWN = {
    one.name: one
    for one in (
        Henry("ethanol", 1.9, 6400, _SANDER),
        Henry("CO2", 3.3e-4, 2400, _MEMORY),
        Henry("acetaldehyde", 0.13, 5900, _MEMORY),
        Henry("acetone", 0.27, 5300, _MEMORY),
        Henry("diacetyl", 0.73, 5700, _MEMORY),
        Henry("methanol", 2.0, 5600, _MEMORY),
        Henry("1-propanol", 1.4, 7500, _MEMORY),
        Henry("2-propanol", 1.3, 7500, _MEMORY),
        Henry("1-butanol", 1.2, 7200, _MEMORY),
        Henry("isobutanol", 1.0, 7200, _MEMORY),
        Henry("ethyl-acetate", 0.059, 5700, _MEMORY),
    )
}


def find_henry(name: str) -> Henry | None:
    """The constant of a compound by its name in the catalogue; None where none is known here."""
    return _KNOWN.get(name)


def carbonate_factor(ph: float) -> float:
    """Dissolved inorganic carbon over dissolved CO2: 1 + 10^(pH - pKa1), pKa1 6.35.

    The second dissociation counts below pH 8.3 for less than a hundredth.

    Examples
    --------
    >>> round(carbonate_factor(6.35), 3), round(carbonate_factor(7.0), 2)
    (2.0, 5.47)
    """
    held: float = 10.0 ** (ph - _PKA1)
    return 1.0 + held
