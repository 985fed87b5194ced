"""Whether the basis of a solved linear programme is the best, reckoned exactly.

A solver takes a price for zero when it is below its tolerance. Where coefficients lie many
decades apart such a price can be worth a lot: the prices are then worked out from the basis in
rational arithmetic, and their signs looked at.
"""

from __future__ import annotations

from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record

__all__ = ["Basis", "is_best", "is_spread"]

Vector = NDArray[np.float64]
Flags = NDArray[np.bool_]

_SPREAD = 1e3
_MOST = 100
_ROUNDING = 1e-9
"""A part of what is added up that the rounding of the coefficients can explain."""


@record
class Basis:
    """Where every variable of a minimum stands: the fluxes first, then the rows.

    ``may_rise`` and ``may_fall`` tell which of those outside the basis have room to; in the
    basis both are False.
    """

    inside: Flags
    may_rise: Flags
    may_fall: Flags


def is_spread(sizes: Vector) -> bool:
    """Whether coefficients (absolute values) lie so far apart that prices may be lost."""
    used = sizes[sizes > 0]
    return bool(used.size) and float(used.max()) > _SPREAD * float(used.min())


def is_best(matrix: Vector, costs: Vector, basis: Basis) -> bool:
    """Whether no move away from a basis makes the costs smaller; True where it is too large.

    A scan of ranges asks this at each of its ends, so that large bases are passed over; the
    optimum of an aim is proven whatever its size (:mod:`fluxnet.solving.proof`).

    Parameters
    ----------
    matrix
        Rows x fluxes.
    costs
        One a flux, to be minimised.
    basis
        That of the solution.
    """
    from fluxnet.exact.factors import solve_turned

    count = matrix.shape[1]
    columns = np.flatnonzero(basis.inside[:count])
    rows = np.flatnonzero(~basis.inside[count:])
    if len(rows) > _MOST:
        return True
    lines: list[dict[int, Fraction]] = [
        {int(j): Fraction(float(matrix[i, j])) for j in columns if matrix[i, j]} for i in rows
    ]
    found = None
    if len(rows) == len(columns) == len({j for line in lines for j in line}):
        found = solve_turned(lines, {int(j): Fraction(float(costs[j])) for j in columns})
    if found is None:
        return False
    prices = np.array([float(p) for p in found])
    prices = _that_count(prices, matrix[rows], costs)
    gains = costs - prices @ matrix[rows]
    sizes = np.abs(costs) + np.abs(prices) @ np.abs(matrix[rows])
    gains[np.abs(gains) <= _ROUNDING * sizes] = 0.0
    gains[columns] = 0.0
    worth = np.zeros(len(basis.inside))
    worth[:count] = gains
    worth[count + rows] = prices
    return not ((worth < 0) & basis.may_rise).any() and not ((worth > 0) & basis.may_fall).any()


def _that_count(prices: Vector, matrix: Vector, costs: Vector) -> Vector:
    """The prices, zero where rounding can explain all that they add to any flux."""
    parts = np.abs(prices)[:, None] * np.abs(matrix)
    whole = np.abs(costs) + parts.sum(axis=0)
    share = np.divide(parts, whole, out=np.zeros_like(parts), where=whole > 0)
    return np.where(share.max(axis=1, initial=0.0) > _ROUNDING, prices, 0.0)
