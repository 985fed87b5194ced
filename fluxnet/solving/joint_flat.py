"""How far many functionals go at the best fit of a region, by the simplex method all at once.

The same question as that of :func:`fluxnet.solving.reach.reach_flat`. What is found is taken
only where the conditions of an optimum hold; where they do not (nothing bounds a functional,
bounds that depend on one another), nothing is told, and that function is to be asked.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.solving.region import Region

__all__ = ["Ceilings", "JointReach", "are_within", "ceilings_of", "reach_all_flat"]

Vector = NDArray[np.float64]
Marks = NDArray[np.bool_]

_PIVOTS = 40
_PIVOT = 1e-9
"""A row that a step changes by less, for its size, does not stand in the way."""
_LARGEST = 1e9
"""A basis with a larger entry in its inverse is taken as dependent."""
_FEASIBLE, _BALANCED = 1e-8, 1e-8
"""The largest violation of a bound, and the largest force left, of the size of the terms."""


@record
class Ceilings:
    """The bounds of a region from one side: rows (u, t) <= limits.

    ``sources`` are their places among the region's bounds, ``above`` marks upper ones; ``gram``
    holds the products of their seen parts.
    """

    seen: Vector
    hidden: Vector
    limits: Vector
    sources: NDArray[np.intp]
    above: Marks
    gram: Vector

    @property
    def rows(self) -> Vector:
        """Over (u, t)."""
        return np.hstack([self.seen, self.hidden])


def ceilings_of(region: Region) -> Ceilings:
    """All finite bounds of a region, each as a row with an upper limit."""
    bounds, seen = region.bounds, region.dimension
    above, below = np.isfinite(bounds.high), np.isfinite(bounds.low)
    rows = np.vstack([bounds.rows[above], -bounds.rows[below]])
    limits = np.concatenate([bounds.high[above], -bounds.low[below]])
    sources = np.concatenate([np.flatnonzero(above), np.flatnonzero(below)])
    parts = rows[:, :seen], rows[:, seen:]
    upper = np.arange(len(limits)) < above.sum()
    return Ceilings(*parts, limits, sources, upper, parts[0] @ parts[0].T)


@record
class JointReach:
    """Where functionals end: one row each.

    ``found`` marks those that are known; ``places`` are those (u, t) where they end,
    ``pressing`` marks the ceilings that hold them there.
    """

    found: Marks
    places: Vector
    pressing: Marks

    def some(self, wanted: NDArray[np.intp]) -> JointReach:
        """Those at some places among them."""
        return JointReach(self.found[wanted], self.places[wanted], self.pressing[wanted])


def reach_all_flat(ceilings: Ceilings, gradients: Vector) -> JointReach:
    """Maximise each c x while u stays 0: by the simplex method, all at once.

    Parameters
    ----------
    gradients
        Functionals x (u, t), of size 1; x = 0 is within the ceilings.
    """
    seen, hidden = ceilings.seen.shape[1], ceilings.hidden.shape[1]
    rows, limits = ceilings.hidden, np.maximum(ceilings.limits, 0.0)
    pulls = gradients[:, seen:]
    count = len(pulls)
    t = np.zeros((count, hidden))
    basis = np.zeros((count, hidden), dtype=np.intp)
    known = np.ones(count, dtype=bool)
    axes = np.zeros((count, hidden, hidden))  # orthonormal, over the rows met so far
    every = np.arange(count)
    for k in range(hidden):
        # Along what no row met so far holds: the pull, or any direction where it is held.
        along = pulls - _held(axes[:, :k], pulls)
        sizes = np.sqrt((along * along).sum(axis=1))
        idle = sizes <= 1e-7 * np.sqrt((pulls * pulls).sum(axis=1))
        if idle.any():
            along[idle], sizes[idle] = _idle_directions(axes[idle, :k])
        along /= sizes[:, None]
        steps, met = _first_met(rows, limits, t, along)
        back = idle & ~np.isfinite(steps)
        if back.any():
            along[back] *= -1
            steps[back], met[back] = _first_met(rows, limits, t[back], along[back])
        known &= np.isfinite(steps)
        steps[~known] = 0.0
        t += steps[:, None] * along
        basis[:, k] = met
        own = rows[met]
        for _ in range(2):
            own = own - _held(axes[:, :k], own)
        axes[:, k] = own / np.maximum(np.sqrt((own * own).sum(axis=1)), 1e-300)[:, None]
    left = np.flatnonzero(known)
    for _ in range(_PIVOTS):
        inverse, _ = _inverses(rows[basis[left]])
        prices = np.einsum("eij,ei->ej", inverse, pulls[left])
        worst = prices.argmin(axis=1)
        going = prices[np.arange(len(left)), worst] < -_BALANCED
        left, inverse, worst = left[going], inverse[going], worst[going]
        if not len(left):
            break
        along = -inverse[np.arange(len(left)), :, worst]
        along /= np.sqrt((along * along).sum(axis=1))[:, None]
        steps, met = _first_met(rows, limits, t[left], along)
        ends = np.isfinite(steps)
        known[left[~ends]] = False
        left, worst = left[ends], worst[ends]
        t[left] += steps[ends, None] * along[ends]
        basis[left, worst] = met[ends]
    known[left] = False
    # Anew from the rows that hold it, so that no error of the steps is left.
    inverse, sound = _inverses(rows[basis])
    t = np.einsum("eij,ej->ei", inverse, limits[basis])
    prices = np.einsum("eij,ei->ej", inverse, pulls)
    known &= sound & (prices >= -_BALANCED).all(axis=1) & are_within(rows, limits, t)
    pressing = np.zeros((count, len(limits)), dtype=bool)
    pressing[every[:, None], basis] = True
    places = np.zeros(gradients.shape)
    places[:, seen:] = t
    return JointReach(known, places, pressing)


def _held(axes: Vector, vectors: Vector) -> Vector:
    """The part of each vector within its own axes (orthonormal rows)."""
    held: Vector = ((axes @ vectors[:, :, None]).transpose(0, 2, 1) @ axes)[:, 0]
    return held


def _idle_directions(axes: Vector) -> tuple[Vector, Vector]:
    """A direction outside of the axes of each, and its size."""
    outside = np.eye(axes.shape[2]) - axes.transpose(0, 2, 1) @ axes
    sizes = np.sqrt((outside * outside).sum(axis=2))
    best = sizes.argmax(axis=1)
    every = np.arange(len(axes))
    return outside[every, best], sizes[every, best]


def _first_met(
    rows: Vector, limits: Vector, places: Vector, along: Vector
) -> tuple[Vector, NDArray[np.intp]]:
    """How far each place can go along its direction, and the row that it then meets."""
    rates = along @ rows.T
    room = np.maximum(limits - places @ rows.T, 0.0)
    steps = np.where(rates > _PIVOT, room / np.maximum(rates, _PIVOT), np.inf)
    if not steps.shape[1]:
        return np.full(len(places), np.inf), np.zeros(len(places), dtype=np.intp)
    # Of rows that are met at once the one most across, for a basis that is well conditioned.
    nearest = steps.min(axis=1)
    tied = steps <= (nearest + 1e-9 * (1 + nearest))[:, None]
    met = np.where(tied, rates, -1.0).argmax(axis=1)
    return nearest, met


def _inverses(matrices: Vector) -> tuple[Vector, Marks]:
    """The inverse of each, zeros where there is none, and where there is one."""
    try:
        found = np.asarray(np.linalg.inv(matrices), dtype=np.float64)
    except np.linalg.LinAlgError:
        found = np.full_like(matrices, np.inf)
        there = np.linalg.slogdet(matrices)[0] != 0
        found[there] = np.linalg.inv(matrices[there])
    sound: Marks = np.abs(found).max(axis=(1, 2), initial=0.0) < _LARGEST
    found[~sound] = 0.0
    return found, sound


def are_within(rows: Vector, limits: Vector, places: Vector) -> Marks:
    """Which places meet rows x place <= limits, up to rounding."""
    sizes = np.maximum(np.abs(places) @ np.abs(rows).T, 1.0)
    inside: Marks = (places @ rows.T - limits <= _FEASIBLE * sizes).all(axis=1)
    return inside
