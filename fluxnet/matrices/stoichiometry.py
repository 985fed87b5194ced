"""The stoichiometric matrix of a network with its labels, exact and in floats."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.network.expression import Expression
from fluxnet.network.model import Network

__all__ = ["Stoichiometry", "parameter_values", "stoichiometry"]


@record
class Stoichiometry:
    """All coefficients of a network as expressions, by row (species) and column (reaction).

    Row ``i`` is ``species[i]``, in the order of declaration; column ``j`` is
    ``reactions[j]``. A coefficient is positive where the reaction makes the species.
    Species that a reaction both uses and makes stand with the difference.
    """

    species: tuple[str, ...]
    reactions: tuple[str, ...]
    entries: tuple[tuple[int, int, Expression], ...]
    balanced: tuple[int, ...]
    boundary: tuple[int, ...]

    def row(self, name: str) -> int:
        """The row of a species.

        Raises
        ------
        KeyError
            Where there is none of that name.
        """
        try:
            return self.species.index(name)
        except ValueError:
            raise KeyError(name) from None

    def column(self, name: str) -> int:
        """The column of a reaction.

        Raises
        ------
        KeyError
            Where there is none of that name.
        """
        try:
            return self.reactions.index(name)
        except ValueError:
            raise KeyError(name) from None

    def floats(self, values: Mapping[str, float]) -> NDArray[np.float64]:
        """The matrix, species x reactions, at values of the parameters."""
        matrix = np.zeros((len(self.species), len(self.reactions)))
        for i, j, coefficient in self.entries:
            matrix[i, j] = coefficient.at(values)
        return matrix

    def derivative(self, name: str, values: Mapping[str, float]) -> NDArray[np.float64]:
        """The matrix of derivatives by one parameter, species x reactions."""
        matrix = np.zeros((len(self.species), len(self.reactions)))
        for i, j, coefficient in self.entries:
            if name in coefficient.parameters:
                matrix[i, j] = coefficient.derivative(name).at(values)
        return matrix

    def exact_rows(
        self, values: Mapping[str, Fraction], rows: tuple[int, ...]
    ) -> list[list[Fraction]]:
        """Some rows of the matrix as exact numbers, each of one entry a reaction."""
        place = {row: k for k, row in enumerate(rows)}
        matrix = [[Fraction(0)] * len(self.reactions) for _ in rows]
        for i, j, coefficient in self.entries:
            if i in place:
                matrix[place[i]][j] = coefficient.exact(values)
        return matrix


def stoichiometry(network: Network) -> Stoichiometry:
    """The matrix of a network whose ``?`` coefficients are solved.

    Raises
    ------
    ValueError
        Where a ``?`` is left: a network with errors in its lines has no matrix.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> network = read_model_text('''
    ... substrate glucose
    ... product   lactate
    ... carrier   ATP  carries energy
    ... compartment a
    ...     lump   : glucose -> 2 lactate + 2 ATP
    ... compartment b
    ...     upkeep : ATP -> nothing
    ... limit glucose <= 10
    ... ''').network
    >>> matrix = stoichiometry(network)
    >>> matrix.species, matrix.floats({}).tolist()
    (('glucose', 'lactate', 'ATP'), [[-1.0, 0.0], [2.0, 0.0], [2.0, -1.0]])
    """
    rows = {s.name: i for i, s in enumerate(network.species)}
    entries: list[tuple[int, int, Expression]] = []
    for j, reaction in enumerate(network.reactions):
        column: dict[int, Expression] = {}
        for sign, term in reaction.terms:
            if term.species not in rows:
                continue
            if term.coefficient is None:
                raise ValueError(f"reaction {reaction.name} holds a ? that is not solved")
            signed = term.coefficient if sign > 0 else -term.coefficient
            i = rows[term.species]
            column[i] = column[i] + signed if i in column else signed
        entries.extend((i, j, e) for i, e in column.items() if not e.is_zero)
    return Stoichiometry(
        species=tuple(rows),
        reactions=tuple(r.name for r in network.reactions),
        entries=tuple(entries),
        balanced=tuple(rows[s.name] for s in network.balanced),
        boundary=tuple(rows[s.name] for s in network.boundary),
    )


def parameter_values(network: Network) -> dict[str, Fraction]:
    """The parameters at their values."""
    return {p.name: p.value for p in network.parameters}
