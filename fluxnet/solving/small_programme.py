"""One small convex programme in scaled form: asked of daqp, polished, and checked."""

from __future__ import annotations

import daqp
import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record

__all__ = ["FEASIBLE", "NO_BOUND", "OPTIMAL", "SmallProgramme", "ask", "polish"]

Vector = NDArray[np.float64]

FEASIBLE = 1e-9
"""Largest accepted violation of a bound, relative to the sizes of the row's terms."""
OPTIMAL = 1e-8
"""Largest accepted gradient left, relative to the sizes of its terms."""
NO_BOUND = 1e30


@record
class SmallProgramme:
    """One programme, its rows of norm 1: minimise x'Hx/2 + f'x, low <= A x <= high.

    ``sizes`` are the absolute values of ``rows``: given where many programmes share them.
    ``unit`` is the size of a usual gradient, beside which rounding is judged where all terms
    happen to cancel.
    """

    hessian: Vector | None
    gradient: Vector
    rows: Vector
    low: Vector
    high: Vector
    sizes: Vector
    unit: float = 0.0

    def slope(self, x: Vector) -> Vector:
        """The gradient of the objective at x."""
        return self.gradient if self.hessian is None else self.hessian @ x + self.gradient

    def residual(self, x: Vector, prices: Vector) -> float:
        """The worst violation of a bound or gradient left; up to 1 is accepted."""
        reach = self.rows @ x
        size = np.maximum(self.sizes @ np.abs(x), 1.0)
        gap = np.maximum(self.low - reach, reach - self.high) / size
        violation = float(gap.max(initial=0.0))
        on = np.flatnonzero(prices)
        left = self.slope(x)
        terms = np.abs(self.gradient)
        if self.hessian is not None:
            terms = np.maximum(terms, np.abs(left - self.gradient))
        if len(on):
            weights = prices[on]
            bound = np.where(weights > 0, self.high[on], self.low[on])
            if not np.isfinite(bound).all():
                return np.inf  # what has no bound has no price
            off = np.abs(reach[on] - bound) / np.maximum(size[on], np.abs(bound))
            violation = max(violation, float(off.max()))
            left = left + weights @ self.rows[on]
            terms = terms + np.abs(weights) @ self.sizes[on]
        scale = max(float(terms.max(initial=0.0)), self.unit) or 1.0
        return max(violation / FEASIBLE, float(np.abs(left).max(initial=0.0)) / scale / OPTIMAL)


def ask(programme: SmallProgramme, settings: dict[str, float]) -> tuple[int, Vector, Vector]:
    """One call of the fast solver: its flag, its point, its prices."""
    low = np.maximum(programme.low, -NO_BOUND)
    high = np.minimum(programme.high, NO_BOUND)
    sense = np.where(low == high, 5, 0).astype(np.int32)
    x, _, flag, info = daqp.solve(
        programme.hessian, programme.gradient, programme.rows, high, low, sense, **settings
    )
    prices = np.asarray(info["lam"], dtype=np.float64)
    return int(flag), np.asarray(x, dtype=np.float64), prices


def polish(programme: SmallProgramme, x: Vector, prices: Vector) -> tuple[Vector, Vector]:
    """The optimum with the same bounds pressing, solved as linear equations."""
    count = len(x)
    bounds = np.where(prices > 0, programme.high, programme.low)
    prices = np.where(np.isfinite(bounds), prices, 0.0)
    on = np.flatnonzero(prices)
    target = bounds[on]
    system = np.zeros((count + len(on), count + len(on)))
    if programme.hessian is not None:
        system[:count, :count] = programme.hessian
    system[count:, :count] = programme.rows[on]
    system[:count, count:] = programme.rows[on].T
    right = np.r_[
        -programme.slope(x) - programme.rows[on].T @ prices[on], target - programme.rows[on] @ x
    ]
    step = np.linalg.lstsq(system, right, rcond=1e-13)[0]
    sharper = prices.copy()
    sharper[on] += step[count:]
    turned = sharper * prices < 0
    turned &= programme.low != programme.high
    sharper[turned] = 0.0
    return x + step[:count], sharper
