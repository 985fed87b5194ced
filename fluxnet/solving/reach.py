"""How far a functional can go within the bounds while h stays below a level.

max c x over x = (u, t) with ||u - centre|| <= radius and the bounds. For a weight w the
quadratic programme min ||u - centre||^2 / 2 - w c x has its optimum on the way; as w grows,
its distance from the centre does. The w at which that is the radius is found with the exact
slope of the piece (the same bounds pressing), so a few programmes suffice. Every answer is
an upper bound by duality: what the search leaves open makes a range wider, never narrower.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.solving.quadratic import QuadraticSolution, solve_scaled
from fluxnet.solving.region import Region, nearest
from fluxnet.solving.small_programme import SmallProgramme

__all__ = ["Reach", "reach_far", "reach_flat"]

Vector = NDArray[np.float64]

_CLOSE = 1e-6
"""How near the radius is near enough: what is left is added, right to first order."""
_TRIES = 60
_DOUBT = 4


@record
class Reach:
    """The largest value of a functional (less its value at the point), and where it is taken.

    ``place`` is None where nothing bounds the functional, or no solver could tell: then
    ``value`` is infinite, which claims nothing; and where no place within the bounds is within
    the radius: then it is minus infinity. ``weight`` is the pull that led there, 0 where none
    had to be found, and ``prices`` are those of the region's bounds, None where none presses.
    """

    value: float
    place: Vector | None
    weight: float = 0.0
    prices: Vector | None = None


def reach_far(
    region: Region, gradient: Vector, radius: float, start: Vector, guess: float = 0.0
) -> Reach:
    """Maximise c x while the u of x stays within a radius of the centre, bounds kept.

    Parameters
    ----------
    gradient
        c over (u, t): see :meth:`Region.gradients`.
    radius
        The largest distance of u from the centre, above 0.
    start
        A place near the bounds and the radius.
    guess
        The weight that led to the end of a similar search, or 0.

    Returns
    -------
    Reach
    """
    seen = region.dimension
    size = float(np.linalg.norm(gradient))
    if size == 0:
        return Reach(0.0, start)
    unit = gradient / size
    along = float(np.linalg.norm(unit[:seen]))
    first = radius / along if along > 1e-9 else radius
    straight = _straight(region, gradient, radius, start)
    if straight is not None:
        return Reach(float(gradient @ straight), straight, first)
    weight = guess or first
    low, high = 0.0, np.inf
    bound: Reach | None = None
    before = np.inf
    for attempt in range(_TRIES):
        if attempt == _DOUBT and bound is None and _is_empty(region, radius):
            return Reach(-np.inf, None)
        found = _pull(region, weight * unit)
        if found.x is None:
            if bound is None:
                return Reach(np.inf, None)
            high, weight = weight, (low + weight) / 2
            continue
        away = found.x[:seen] - region.centre
        left = radius**2 - float(away @ away)
        # By duality no place within the radius goes beyond this.
        gap = left / (2 * weight)
        here = Reach(size * (float(unit @ found.x) + gap), found.x, weight, found.prices)
        if abs(left) <= _CLOSE * radius**2:
            return here
        if left > 0:
            bound, low = here, max(low, weight)
            if gap <= _CLOSE * max(abs(float(unit @ found.x)), 0.01):
                return here
        else:
            high = min(high, weight)
        following = _next_weight(region, found, unit, weight, radius)
        if following == np.inf and np.isinf(high):
            # The place stays where it is under any greater pull: a corner of the bounds.
            return Reach(size * float(unit @ found.x), found.x, weight, found.prices)
        # Where bounds are degenerate the slope misleads: then the bracket is halved.
        slow = np.isfinite(high) and abs(left) > 0.25 * before
        before = abs(left)
        if following is None or slow or not low < following < high:
            following = 4 * weight if np.isinf(high) else (low + high) / 2
        weight = following
    return Reach(np.inf, None) if bound is None else bound


def _is_empty(region: Region, radius: float) -> bool:
    """Whether no place within the bounds is within the radius."""
    found = nearest(region)
    if found.x is None:
        return True
    away = found.x[: region.dimension] - region.centre
    return float(away @ away) > radius**2 * (1 + 1e-9)


def _straight(
    region: Region, gradient: Vector, radius: float, start: Vector
) -> Vector | None:
    """The answer where no bound presses on the way, by the linear formula."""
    seen = region.dimension
    if np.abs(gradient[seen:]).max(initial=0.0) > 1e-11 * np.linalg.norm(gradient):
        return None
    place = start.copy()
    norm = float(np.linalg.norm(gradient[:seen]))
    if norm == 0:
        return place
    place[:seen] = region.centre + radius / norm * gradient[:seen]
    reach = region.bounds.rows @ place
    inside = (reach >= region.bounds.low) & (reach <= region.bounds.high)
    return place if inside.all() else None


def _pull(region: Region, pull: Vector) -> QuadraticSolution:
    """The place where a pull and the distance from the centre balance, bounds kept."""
    gradient = -pull
    gradient[: region.dimension] -= region.centre
    return solve_scaled(region.programme(gradient), enough=0.5)


def _next_weight(
    region: Region, found: QuadraticSolution, unit: Vector, weight: float, radius: float
) -> float | None:
    """The weight at which the place reaches the radius if the same bounds go on pressing.

    Where the place does not move with the weight, the one at which a bound stops pressing;
    infinite where none ever does. None where the equations tell nothing.
    """
    seen, count = region.dimension, len(unit)
    on = list(found.active)
    active = region.bounds.rows[on]
    system = np.zeros((count + len(active), count + len(active)))
    system[:count, :count] = region.hessian
    system[count:, :count] = active
    system[:count, count:] = active.T
    moved = _solved(system, np.concatenate([unit, np.zeros(len(active))]))
    if moved is None or found.x is None:
        return None
    slope = moved[:seen]
    if float(slope @ slope) < 1e-18:
        prices, rises = found.prices[on], moved[count:]
        falling = (prices * rises < 0) & (np.abs(rises) > 1e-7)
        if not falling.any():
            return np.inf
        return weight + 1.001 * float((-prices[falling] / rises[falling]).min())
    away = found.x[:seen] - region.centre
    a, b = float(slope @ slope), float(slope @ away)
    c = float(away @ away) - radius**2
    root = b * b - a * c
    if root < 0:
        return None
    ahead = (-b + np.sqrt(root)) / a
    return weight + ahead if weight + ahead > 0 else None


def _solved(system: Vector, right: Vector) -> Vector | None:
    """The solution of equations that may be singular, or None where they have none."""
    try:
        moved = np.asarray(np.linalg.solve(system, right), dtype=np.float64)
        if np.linalg.norm(system @ moved - right) < 1e-9:
            return moved
    except np.linalg.LinAlgError:
        pass
    moved = np.asarray(np.linalg.lstsq(system, right, rcond=1e-11)[0], dtype=np.float64)
    return moved if np.linalg.norm(system @ moved - right) < 1e-7 else None


def reach_flat(region: Region, gradient: Vector, place: Vector) -> Reach:
    """Maximise c x over the places with the same u, bounds kept: the range at h_min.

    Parameters
    ----------
    place
        A place within the bounds; its u is kept.
    """
    seen = region.dimension
    hidden = gradient[seen:]
    if np.abs(hidden).max(initial=0.0) <= 1e-11 * float(np.linalg.norm(gradient)):
        return Reach(float(gradient @ place), place)
    bounds = region.bounds
    shift = bounds.rows[:, :seen] @ place[:seen]
    rows = bounds.rows[:, seen:]
    moving = np.abs(rows).max(axis=1, initial=0.0) > 1e-11
    rows, low, high = rows[moving], (bounds.low - shift)[moving], (bounds.high - shift)[moving]
    reach = rows @ place[seen:]
    # The place is inside up to rounding: a bound may not cut it off.
    low, high = np.minimum(low, reach), np.maximum(high, reach)
    norms = np.sqrt(np.einsum("ij,ij->i", rows, rows))
    rows = rows / norms[:, None]
    programme = SmallProgramme(None, -hidden, rows, low / norms, high / norms, np.abs(rows))
    found = solve_scaled(programme)
    if found.x is None:
        return Reach(np.inf, None)
    there = np.concatenate([place[:seen], found.x])
    return Reach(float(gradient @ there), there)
