"""The rows of a problem as exact numbers, from the decimals as written."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction

import numpy as np

from fluxnet.exact.sparse import SparseRow
from fluxnet.network.biomass import biomasses, growth_factor
from fluxnet.network.model import Basis, Quantity, QuantityKind
from fluxnet.solving.build import Built
from fluxnet.solving.problem import Problem
from fluxnet.solving.quantities import ash_key, counts_moles, default_direction, units_per_mole

__all__ = ["as_written", "problem_rows", "rational_rows"]


def as_written(value: float) -> Fraction:
    """The shortest decimal that a float stands for, as a fraction.

    Examples
    --------
    >>> as_written(0.1), as_written(5.0)
    (Fraction(1, 10), Fraction(5, 1))
    """
    return Fraction(repr(float(value)))


def problem_rows(problem: Problem) -> tuple[SparseRow, ...]:
    """The rows of a problem of which nothing but its floats is known."""
    return tuple(
        {int(j): as_written(row[j]) for j in np.flatnonzero(row)} for row in problem.matrix
    )


def rational_rows(built: Built) -> tuple[SparseRow, ...]:
    """The rows of a network's problem, exactly, in the problem's order.

    Coefficients are exact in the parameters; a growth rate's row takes the molar mass (a float)
    at its shortest decimal. The floats of the problem are these numbers, rounded.
    """
    maker = _Maker(built)
    return tuple(
        maker.balance(row.name) if row.quantity is None else maker.row(row.quantity, row.ratio)
        for row in built.problem.rows
    )


class _Maker:
    """Makes exact rows of quantities."""

    def __init__(self, built: Built) -> None:
        self.built = built
        values = _parameters(built)
        rows: list[dict[int, Fraction]] = [{} for _ in built.stoichiometry.species]
        for i, j, coefficient in built.stoichiometry.entries:
            value = coefficient.exact(values)
            if value:
                rows[i][j] = value
        self.rows = dict(zip(built.stoichiometry.species, rows, strict=True))

    def balance(self, species: str) -> SparseRow:
        """The net production of a species [moles]."""
        return self.rows[species]

    def row(self, quantity: Quantity, ratio: float | None, moles: bool = False) -> SparseRow:
        """The row of a quantity; ``moles``: a rate in moles, whatever the basis."""
        match quantity.kind:
            case QuantityKind.FLUX:
                return {self.built.stoichiometry.column(quantity.name): Fraction(1)}
            case QuantityKind.MU:
                return self._growth()
            case QuantityKind.RATIO:
                assert ratio is not None
                assert quantity.numerator is not None
                assert quantity.denominator is not None
                moles = counts_moles(quantity)
                above = self.row(quantity.numerator, None, moles)
                below = self.row(quantity.denominator, None, moles)
                return _sum((above, Fraction(1)), (below, -as_written(ratio)))
            case _:
                species = self.built.network.find_species(quantity.name)
                assert species is not None
                way = quantity.direction or default_direction(species.role)
                unit = Fraction(1) if moles else self._per_mole(quantity.name)
                return _sum((self.rows[quantity.name], way.sign * unit))

    def _per_mole(self, name: str) -> Fraction:
        species = self.built.network.find_species(name)
        assert species is not None
        return as_written(units_per_mole(species, self.built.basis))

    def _growth(self) -> SparseRow:
        parts = []
        for species in biomasses(self.built.network):
            ash = self.built.values[ash_key(species.name)]
            given = growth_factor(species, self.built.basis)
            assert given is not None
            factor = as_written(given)
            if self.built.basis is Basis.SPECIFIC and ash != float(species.ash):
                factor *= (1 - species.ash) / (1 - as_written(ash))
            parts.append((self.rows[species.name], factor))
        return _sum(*parts)


def _parameters(built: Built) -> Mapping[str, Fraction]:
    """The parameters' values: as written where they stand there, else of the float."""
    return {
        p.name: p.value
        if float(p.value) == built.values[p.name]
        else as_written(built.values[p.name])
        for p in built.network.parameters
    }


def _sum(*parts: tuple[SparseRow, Fraction]) -> SparseRow:
    total: dict[int, Fraction] = {}
    for row, factor in parts:
        for j, value in row.items():
            total[j] = total.get(j, Fraction(0)) + factor * value
    return {j: value for j, value in total.items() if value}

