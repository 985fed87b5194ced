"""The slow ways out, for programmes whose fast answer does not pass its check."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.solving.nonnegative import find_least_distance
from fluxnet.solving.small_programme import SmallProgramme, ask, polish

__all__ = ["approach", "is_unbounded", "nearest_to"]

Vector = NDArray[np.float64]


def is_unbounded(programme: SmallProgramme) -> bool:
    """Whether some direction lowers the objective for ever: a bounded programme decides."""
    count = len(programme.gradient)
    cone_low = np.where(np.isfinite(programme.low), 0.0, -np.inf)
    cone_high = np.where(np.isfinite(programme.high), 0.0, np.inf)
    parts, lows, highs = [programme.rows], [cone_low], [cone_high]
    if programme.hessian is not None:
        size = float(np.abs(programme.hessian).max(initial=0.0)) or 1.0
        parts.append(programme.hessian / size)
        lows.append(np.zeros(count))
        highs.append(np.zeros(count))
    parts.append(np.eye(count))
    lows.append(-np.ones(count))
    highs.append(np.ones(count))
    rows = np.vstack(parts)
    cone = SmallProgramme(
        None, programme.gradient, rows, np.concatenate(lows), np.concatenate(highs), np.abs(rows)
    )
    flag, x, _ = ask(cone, {})
    scale = float(np.abs(programme.gradient).max(initial=0.0))
    return flag > 0 and float(programme.gradient @ x) < -1e-9 * scale


def nearest_to(
    programme: SmallProgramme, centre: Vector, weight: float
) -> tuple[Vector | None, Vector]:
    """The optimum of the programme plus weight/2 ||x - centre||^2, by least distance."""
    count = len(centre)
    system = weight * np.eye(count)
    slope = -weight * centre
    if weight < 1.0:
        system = system + (0.0 if programme.hessian is None else programme.hessian)
        slope = slope + programme.gradient
    factor = np.linalg.cholesky(system)
    shift = np.linalg.solve(factor, slope)
    lower, upper = np.isfinite(programme.low), np.isfinite(programme.high)
    rows = np.vstack([programme.rows[lower], -programme.rows[upper]])
    bounds = np.r_[programme.low[lower], -programme.high[upper]]
    turned = np.linalg.solve(factor, rows.T).T
    limits = bounds + turned @ shift
    norms = np.maximum(np.linalg.norm(turned, axis=1), 1e-300)
    found = find_least_distance(turned / norms[:, None], limits / norms)
    weights = found.multipliers / norms
    prices = np.zeros(len(programme.low))
    prices[lower] -= weights[: int(lower.sum())]
    prices[upper] += weights[int(lower.sum()) :]
    if found.x is None:
        return None, prices
    return np.linalg.solve(factor.T, found.x - shift), prices


def approach(programme: SmallProgramme) -> tuple[Vector, Vector] | None:
    """Proximal steps with the slow solver until the check passes."""
    x = np.zeros(len(programme.gradient))
    for _ in range(60):
        point, prices = nearest_to(programme, x, 1e-3)
        if point is None:
            return None
        for trial in ((point, prices), polish(programme, point, prices)):
            if programme.residual(*trial) <= 1.0:
                return trial
        x = point
    return None
