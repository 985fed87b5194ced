"""The value of a quantity as a row over the fluxes, and its derivatives by uncertain numbers."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.matrices.stoichiometry import Stoichiometry
from fluxnet.network.biomass import biomass_mass, biomasses
from fluxnet.network.model import Basis, Direction, Network, Quantity, QuantityKind, Role, Species

__all__ = [
    "Frame", "ash_key", "counts_moles", "default_direction", "derivative_frame", "frame_at",
    "has_mu", "number_values", "quantity_row", "units_per_mole",
]

Vector = NDArray[np.float64]


@record
class Frame:
    """What the rows of quantities are cut from, at given numbers (or their derivative).

    ``matrix`` is species x reactions, ``growth`` the row of mu [1/h per unit of flux] (None
    where the basis has no mu), ``per_mole`` the units of the basis in one mole, by species
    row, ``flux`` 1 (0 in a derivative: a flux depends on no number).
    """

    stoichiometry: Stoichiometry
    matrix: Vector
    growth: Vector | None
    per_mole: Vector
    flux: float
    roles: tuple[Role, ...]
    basis: Basis

    def balance(self, species: str) -> Vector:
        """The net production of a species [moles]."""
        row: Vector = self.matrix[self.stoichiometry.row(species)]
        return row

    def row(self, quantity: Quantity, ratio: float | None = None) -> Vector:
        """The row whose product with the fluxes is the quantity's value.

        A ratio A / B gives the row A - ratio B, told in moles (:func:`counts_moles`).

        Raises
        ------
        MisuseError
            Where the network has no such quantity, or no mu in this basis.
        """
        match quantity.kind:
            case QuantityKind.RATE | QuantityKind.SURPLUS:
                return self._rate(quantity)
            case QuantityKind.MU:
                if self.growth is None:
                    raise MisuseError("there is no mu without biomass, or without time")
                return self.growth
            case QuantityKind.FLUX:
                vector = np.zeros(self.matrix.shape[1])
                vector[self._column(quantity.name)] = self.flux
                return vector
            case QuantityKind.RATIO:
                if ratio is None or quantity.numerator is None or quantity.denominator is None:
                    raise MisuseError("a ratio is a row only at a given value")
                parts = (quantity.numerator, quantity.denominator)
                frame = self
                if counts_moles(quantity):
                    frame = replace(self, per_mole=np.ones_like(self.per_mole))
                return frame.row(parts[0]) - ratio * frame.row(parts[1])

    def _rate(self, quantity: Quantity) -> Vector:
        try:
            i = self.stoichiometry.row(quantity.name)
        except KeyError:
            raise MisuseError(f"the model has no species {quantity.name}") from None
        direction = quantity.direction or default_direction(self.roles[i])
        scaled: Vector = direction.sign * self.per_mole[i] * self.matrix[i]
        return scaled

    def _column(self, name: str) -> int:
        try:
            return self.stoichiometry.column(name)
        except KeyError:
            raise MisuseError(f"the model has no reaction {name}") from None


def default_direction(role: Role) -> Direction:
    """The direction of a rate that is named without one: in for substrates, else out."""
    return Direction.IN if role is Role.SUBSTRATE else Direction.OUT


def ash_key(species: str) -> str:
    """The key under which the values of uncertain numbers hold a biomass species' ash."""
    return f"ash {species}"


def number_values(network: Network, values: Mapping[str, float] | None = None) -> dict[str, float]:
    """All numbers that rows depend on: parameters and ash, at their values or as given.

    Raises
    ------
    MisuseError
        Where ``values`` names something else.
    """
    numbers = {p.name: float(p.value) for p in network.parameters}
    numbers |= {ash_key(s.name): float(s.ash) for s in biomasses(network)}
    for name in values or {}:
        if name not in numbers:
            raise MisuseError(f"the model has no parameter {name}")
    return numbers | dict(values or {})


def units_per_mole(species: Species, basis: Basis) -> float:
    """Units of the basis in a mole: the carbon of a boundary species where C-mol are counted."""
    carbon = species.formula.count("C") if species.formula else Fraction(0)
    counted = basis is Basis.CARBON and species.role.is_boundary and carbon > 0
    return float(carbon) if counted else 1.0


def counts_moles(quantity: Quantity) -> bool:
    """Whether a ratio is one of moles in every basis: it is, unless one of its parts is mu."""
    parts = (quantity.numerator, quantity.denominator)
    return all(part is not None and part.kind is not QuantityKind.MU for part in parts)


def has_mu(network: Network, basis: Basis) -> bool:
    """Whether a specific growth rate has a meaning: biomass with formulas, rates per biomass."""
    known = [species.formula is not None for species in biomasses(network)]
    return bool(known) and all(known) and basis in (Basis.SPECIFIC, Basis.CARBON)


def frame_at(
    network: Network, stoich: Stoichiometry, values: Mapping[str, float], basis: Basis
) -> Frame:
    """The rows' material at given values of the parameters and ash."""
    return _frame(network, stoich, stoich.floats(values), values, basis, 1.0)


def derivative_frame(
    network: Network, stoich: Stoichiometry, values: Mapping[str, float], basis: Basis, name: str
) -> Frame:
    """The derivative of every row by one parameter, or by one ash (:func:`ash_key`)."""
    for species in biomasses(network):
        if name == ash_key(species.name):
            frame = frame_at(network, stoich, values, basis)
            growth = None
            if frame.growth is not None:
                slope = _mass(species, values) / (1 - values[name]) / 1000
                slope = 0.0 if basis is Basis.CARBON else slope
                growth = slope * frame.balance(species.name)
            return replace(frame, matrix=np.zeros_like(frame.matrix), growth=growth, flux=0.0)
    return _frame(network, stoich, stoich.derivative(name, values), values, basis, 0.0)


def quantity_row(
    network: Network,
    stoich: Stoichiometry,
    quantity: Quantity,
    values: Mapping[str, float],
    *,
    basis: Basis | None = None,
    ratio: float | None = None,
) -> Vector:
    """The row over the fluxes that gives the value of a quantity, in its own direction.

    Rates in the unit of the basis (C-mol where the basis counts C-mol and the species holds
    carbon), mu in 1/h: mu = sum over biomass of q_X [mmol/g/h] M_X [g/mol] / 1000 with
    M_X = (organic mass of the formula) / (1 - ash). A carrier's surplus is what is made of it
    less what is spent. A ratio A / B gives A - ``ratio`` B in moles.

    Parameters
    ----------
    values
        The parameters' and ash values: see :func:`number_values`.
    basis
        The network's own unless given.

    Returns
    -------
    numpy.ndarray
        One number a reaction.

    Raises
    ------
    MisuseError
        Where the network has no such quantity, or no mu in this basis.
    """
    numbers = number_values(network, values)
    return frame_at(network, stoich, numbers, basis or network.basis).row(quantity, ratio)


def _frame(
    network: Network,
    stoich: Stoichiometry,
    matrix: Vector,
    values: Mapping[str, float],
    basis: Basis,
    flux: float,
) -> Frame:
    per_mole = np.array([units_per_mole(species, basis) for species in network.species])
    growth = None
    if has_mu(network, basis):
        growth = np.zeros(matrix.shape[1])
        for species in biomasses(network):
            i = stoich.row(species.name)
            weight = per_mole[i] if basis is Basis.CARBON else _mass(species, values) / 1000
            growth += weight * matrix[i]
    roles = tuple(s.role for s in network.species)
    return Frame(stoich, matrix, growth, per_mole, flux, roles, basis)


def _mass(species: Species, values: Mapping[str, float]) -> float:
    """Dry weight of one mole [g/mol], at the ash that the values give."""
    return biomass_mass(replace(species, ash=Fraction(0))) / (1 - values[ash_key(species.name)])
