"""How a solve of a programme ended, and what it gave."""

from __future__ import annotations

from enum import Enum

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record

__all__ = ["LinearSolution", "Outcome"]

Vector = NDArray[np.float64]


class Outcome(Enum):
    """How a solve ended. ``FAILED``: the solver gave up; nothing may be concluded."""

    OPTIMAL = "optimal"
    INFEASIBLE = "infeasible"
    UNBOUNDED = "unbounded"
    FAILED = "failed"


@record
class LinearSolution:
    """The end of one solve.

    ``objective`` is NaN-free: the optimum, or ±inf where there is none. ``fluxes``,
    ``row_prices`` and ``column_prices`` are zero unless the outcome is OPTIMAL. A price is the
    change of the objective per unit by which the bound that holds the row (or column) is
    raised, whether one minimises or maximises: cost = A' row_prices + column_prices.
    ``residual`` is the worst violation of a bound or balance, as recomputed by
    :func:`fluxnet.solving.residuals.worst_violation`.
    """

    outcome: Outcome
    objective: float
    fluxes: Vector
    row_prices: Vector
    column_prices: Vector
    residual: float
