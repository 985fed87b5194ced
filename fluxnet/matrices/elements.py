"""The matrix of elements and electrons by boundary species, exact and in floats."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from fluxnet.chemistry.formula import Formula, NitrogenReference
from fluxnet.ground.record import record
from fluxnet.network.contents import ELECTRONS, content_of_formula, in_order_of_balances
from fluxnet.network.model import Network

__all__ = ["ElementMatrix", "element_matrix", "network_elements"]


@record
class ElementMatrix:
    """E: what one mole of each species holds, balances x species.

    ``balances`` are C, N, S, P, the other elements (without H and O, which water and protons
    leave free) and ``electrons``. ``exact`` holds the rows in the same order. ``reference`` is
    the nitrogen compound without electrons. ``without_reference`` are elements that forbid to
    count electrons; then there is no such row.
    """

    balances: tuple[str, ...]
    species: tuple[str, ...]
    exact: tuple[tuple[Fraction, ...], ...]
    reference: NitrogenReference = NitrogenReference.AMMONIA
    without_reference: tuple[str, ...] = ()

    @property
    def floats(self) -> NDArray[np.float64]:
        """The matrix in floats, balances x species; read-only."""
        rows = [[float(v) for v in row] for row in self.exact]
        matrix = np.array(rows, dtype=np.float64).reshape(len(self.balances), len(self.species))
        matrix.setflags(write=False)
        return matrix

    def gaps(self, releases: Mapping[str, Fraction]) -> dict[str, Fraction]:
        """By balance: what amounts of the species leave (made less used).

        Raises
        ------
        KeyError
            If an amount of a species is given that the matrix does not have.
        """
        place = {name: j for j, name in enumerate(self.species)}
        return {
            balance: sum((row[place[n]] * x for n, x in releases.items()), Fraction(0))
            for balance, row in zip(self.balances, self.exact, strict=True)
        }


def element_matrix(
    formulas: Mapping[str, Formula],
    nitrogen: NitrogenReference = NitrogenReference.AMMONIA,
) -> ElementMatrix:
    """The matrix of some species by their formulas.

    Examples
    --------
    >>> from fluxnet.chemistry.reader import read_formula
    >>> matrix = element_matrix({"ethanol": read_formula("C2H6O"), "CO2": read_formula("CO2")})
    >>> matrix.balances, matrix.floats.tolist()
    (('C', 'electrons'), [[2.0, 1.0], [12.0, 0.0]])
    """
    contents = [content_of_formula(formula) for formula in formulas.values()]
    unseen = tuple(dict.fromkeys(e for c in contents for e in c.without_reference))
    held = {a for c in contents for a in c.amounts} - {"H", "O", "charge"}
    held |= {ELECTRONS}
    balances = in_order_of_balances(held - {ELECTRONS} if unseen else held)
    zero = Fraction(0)
    rows: list[tuple[Fraction, ...]] = []
    for balance in balances:
        row = [c.amounts.get(balance, zero) for c in contents]
        if balance == ELECTRONS:
            shift = nitrogen.value
            row = [x + shift * c.amounts.get("N", zero) for x, c in zip(row, contents, strict=True)]
        rows.append(tuple(row))
    return ElementMatrix(tuple(balances), tuple(formulas), tuple(rows), nitrogen, unseen)


def network_elements(
    network: Network, nitrogen: NitrogenReference = NitrogenReference.AMMONIA
) -> ElementMatrix:
    """The matrix of a network's boundary species."""
    formulas = {s.name: s.formula for s in network.boundary if s.formula is not None}
    return element_matrix(formulas, nitrogen)
