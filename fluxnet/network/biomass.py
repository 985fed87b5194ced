"""Biomass: its mass with ash, and what its formation means for the growth rate."""

from __future__ import annotations

from fluxnet.chemistry.formula import molar_mass
from fluxnet.ground.errors import MisuseError
from fluxnet.network.model import Basis, Network, Role, Species

__all__ = ["biomass_mass", "biomass_mass_sd", "biomasses", "growth_factor"]


def biomasses(network: Network) -> tuple[Species, ...]:
    """The biomass species of a network; mu is the sum over them.

    Examples
    --------
    >>> from fluxnet.network.model import Basis, Network
    >>> species = (Species("X", Role.BIOMASS), Species("CO2", Role.EXCHANGE))
    >>> [s.name for s in biomasses(Network("", Basis.AMOUNT, species, (), (), ()))]
    ['X']
    """
    return tuple(s for s in network.species if s.role is Role.BIOMASS)


def biomass_mass(species: Species) -> float:
    """Dry weight of one mole of biomass as its formula is written, ash included [g/mol].

    M_X = (organic mass of the formula) / (1 - ash), ash being a fraction of dry weight.

    Raises
    ------
    MisuseError
        If the species has no formula.

    Examples
    --------
    >>> from fractions import Fraction
    >>> from fluxnet.chemistry.reader import read_formula
    >>> x = Species("X", Role.BIOMASS, read_formula("CH1.8O0.5N0.2"), ash=Fraction(8, 100))
    >>> round(biomass_mass(x), 3)
    26.768
    """
    if species.formula is None:
        raise MisuseError(f"{species.name} has no formula and so no mass")
    return molar_mass(species.formula) / (1.0 - float(species.ash))


def biomass_mass_sd(species: Species) -> float:
    """Standard deviation of that mass that comes from an uncertain ash [g/mol].

    To first order M_X sd(ash) / (1 - ash), from the derivative of organic mass / (1 - ash).

    Examples
    --------
    >>> from fractions import Fraction
    >>> from fluxnet.chemistry.reader import read_formula
    >>> x = Species("X", Role.BIOMASS, read_formula("CH1.8O0.5N0.2"), ash=Fraction(8, 100),
    ...             ash_sd=Fraction(1, 100))
    >>> round(biomass_mass_sd(x), 3)
    0.291
    """
    return biomass_mass(species) * float(species.ash_sd) / (1.0 - float(species.ash))


def growth_factor(species: Species, basis: Basis) -> float | None:
    """What one unit of a biomass species' rate adds to mu, or None where there is no mu.

    Per gram: mu [1/h] = q_X [mmol/g/h] M_X [g/mol] / 1000. Per C-mol of biomass: mu [1/h] is
    q_X [mol/C-mol/h] times the carbon in its formula. Volumetric rates and amounts have none.

    Raises
    ------
    MisuseError
        If the species has no formula.

    Examples
    --------
    >>> from fractions import Fraction
    >>> from fluxnet.chemistry.reader import read_formula
    >>> cell = Species("X", Role.BIOMASS, read_formula("CH1.8O0.5N0.2"), ash=Fraction(8, 100))
    >>> round(growth_factor(cell, Basis.SPECIFIC), 5)
    0.02677
    >>> growth_factor(cell, Basis.VOLUMETRIC) is None
    True
    """
    if basis is Basis.SPECIFIC:
        return biomass_mass(species) / 1000.0
    if basis is Basis.CARBON:
        if species.formula is None:
            raise MisuseError(f"{species.name} has no formula and so no carbon")
        return float(species.formula.count("C"))
    return None
