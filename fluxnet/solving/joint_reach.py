"""How far many functionals go within the bounds of a region, all followed at once.

The same question as that of :func:`fluxnet.solving.reach.reach_far`. As the pull w on a
functional grows, the place where pull and distance from the centre balance moves along
straight pieces, each with its own bounds pressing. From piece to piece all functionals are
followed in the same array operations, until the distance is the radius. What is found is
taken only where the conditions of an optimum hold; else nothing is told.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.solving.joint_flat import Ceilings, JointReach, are_within

__all__ = ["reach_all_far", "solve_each"]

Vector = NDArray[np.float64]
Marks = NDArray[np.bool_]

_PIECES = 40
_MENDS = 3
_HELD = 1e-4
"""How strongly t is held where it is, beside what holds u: else it may be anywhere."""
_STILL = 1e-10
"""What changes by less with a pull of size 1 stands still."""
_SLOW, _FIRM = 1e-8, 1e7
"""A place that moves so slowly up to so great a pull goes no further: it would gain
_SLOW^2 _FIRM of the radius."""
_BALANCED = 1e-8
"""The largest force left, of the size of the terms."""
_LARGEST = 1e9
"""A system with a larger solution is taken as singular."""


def reach_all_far(
    ceilings: Ceilings, centre: Vector, gradients: Vector, radius: float, flat: JointReach
) -> JointReach:
    """Maximise each c x while u stays within a radius of the centre.

    Parameters
    ----------
    gradients
        Functionals x (u, t), of size 1.
    flat
        Where each goes at the best fit.
    """
    seen = len(centre)
    rows, limits = ceilings.rows, ceilings.limits
    count = len(gradients)
    known = np.zeros(count, dtype=bool)
    places, middle = np.zeros(gradients.shape), flat.places[:, seen:].copy()
    on = flat.pressing.copy()
    weights, left = np.zeros(count), np.arange(count)
    for _ in range(_PIECES):
        piece = _pieces(ceilings, centre, gradients[left], on[left], middle[left])
        if not piece.sound.all():
            left, piece = left[piece.sound], piece.some(piece.sound)
        if not len(left):
            break
        room, falls = limits - piece.start @ rows.T, piece.way @ rows.T
        held, weight = on[left], weights[left]
        meets = _events(room, falls, ~held, weight)
        leaves = _events(piece.prices, -piece.rises, held, weight)
        first = np.minimum(meets, leaves)
        nearest = first.min(axis=1, initial=np.inf)
        which = first.argmin(axis=1) if first.shape[1] else np.zeros(len(left), dtype=np.intp)
        full, moves = piece.at_radius(centre, radius)
        ends = moves & (full <= nearest) & (full >= weight)
        # Where no pull moves it any further the bounds alone hold it.
        corner = ~moves & (nearest > _FIRM * radius)
        known[left[ends | corner]] = True
        going = np.isfinite(nearest) & ~ends & ~corner
        left, which = left[going], which[going]
        on[left, which] = ~on[left, which]
        weights[left] = nearest[going]
    left = np.flatnonzero(known)
    for _ in range(_MENDS):
        piece = _pieces(ceilings, centre, gradients[left], on[left], middle[left])
        full, moves = piece.at_radius(centre, radius)
        ends = np.isfinite(full) | ~moves
        full = np.where(np.isfinite(full), full, 0.0)[:, None]
        places[left] = piece.start + full * piece.way
        shift = np.abs(places[left, seen:] - middle[left]).max(axis=1, initial=0.0)
        middle[left] = places[left, seen:]
    if len(left):
        prices = np.where(moves[:, None], piece.prices + full * piece.rises, piece.rises)
        least = -_BALANCED * np.maximum(1.0, full[:, 0])
        known[left] = ends & piece.sound & (prices >= least[:, None]).all(axis=1)
        known[left] &= _HELD * shift <= _BALANCED * np.maximum(1e-3, full[:, 0])
        known[left] &= are_within(rows, limits, places[left])
    return JointReach(known, places, on)


@record
class _Piece:
    """Places and prices of functionals as they depend on their pull w, the same rows pressing.

    Places are start + w way, prices (of all ceilings) prices + w rises. Not ``sound`` are
    those whose equations are singular.
    """

    start: Vector
    way: Vector
    prices: Vector
    rises: Vector
    sound: Marks

    def some(self, wanted: Marks) -> _Piece:
        """Those that are marked."""
        return _Piece(
            self.start[wanted], self.way[wanted], self.prices[wanted], self.rises[wanted],
            self.sound[wanted],
        )  # fmt: skip

    def at_radius(self, centre: Vector, radius: float) -> tuple[Vector, Marks]:
        """The pull at which u comes to the radius from below, and whether u moves to it at all.

        Infinite where u moves and the radius is out of reach.
        """
        away, pace = self.start[:, : len(centre)] - centre, self.way[:, : len(centre)]
        a = (pace * pace).sum(axis=1)
        b = (away * pace).sum(axis=1)
        c = (away * away).sum(axis=1) - radius**2
        root = b * b - a * c
        moves = a > _SLOW**2
        full = (-b + np.sqrt(np.maximum(root, 0.0))) / np.where(moves, a, 1.0)
        return np.where(moves & (root >= 0), full, np.inf), moves


def _pieces(
    ceilings: Ceilings, centre: Vector, gradients: Vector, on: Marks, middle: Vector
) -> _Piece:
    seen, hidden = len(centre), gradients.shape[1] - len(centre)
    count = len(on)
    most = int(on.sum(axis=1).max(initial=0))
    order = np.argsort(~on, axis=1, kind="stable")[:, :most]
    every = np.arange(count)[:, None]
    used = on[every, order]
    system = np.zeros((count, most + hidden, most + hidden))
    right = np.zeros((count, most + hidden, 2))
    both = used[:, :, None] & used[:, None, :]
    system[:, :most, :most] = np.where(both, -ceilings.gram[order[:, :, None], order[:, None]], 0)
    diagonal = np.arange(most)
    system[:, diagonal, diagonal] -= ~used
    across = np.where(used[:, :, None], ceilings.hidden[order], 0.0)
    system[:, :most, most:] = across
    system[:, most:, :most] = across.transpose(0, 2, 1)
    by_seen = np.where(used[:, :, None], ceilings.seen[order], 0.0)
    right[:, :most, 0] = np.where(used, ceilings.limits[order], 0.0) - by_seen @ centre
    right[:, :most, 1] = -(by_seen @ gradients[:, :seen, None])[:, :, 0]
    system[:, np.arange(most, most + hidden), np.arange(most, most + hidden)] = _HELD
    right[:, most:, 0] = _HELD * middle
    right[:, most:, 1] = gradients[:, seen:]
    found, sound = solve_each(system, right)
    forces = found[:, :most].transpose(0, 2, 1)
    moved = -(forces @ by_seen)
    start, way = np.zeros((2, count, seen + hidden))
    start[:, :seen], way[:, :seen] = centre + moved[:, 0], gradients[:, :seen] + moved[:, 1]
    start[:, seen:], way[:, seen:] = found[:, most:, 0], found[:, most:, 1]
    prices, rises = np.zeros((2, *on.shape))
    prices[every, order] = np.where(used, forces[:, 0], 0.0)
    rises[every, order] = np.where(used, forces[:, 1], 0.0)
    return _Piece(start, way, prices, rises, sound)


def solve_each(systems: Vector, right: Vector) -> tuple[Vector, Marks]:
    """The solutions of many systems, zeros where there is none, and which of them are sound."""
    try:
        found = np.asarray(np.linalg.solve(systems, right), dtype=np.float64)
    except np.linalg.LinAlgError:
        there = np.linalg.slogdet(systems)[0] != 0
        found = np.full(right.shape, np.inf)
        if there.any():
            found[there] = np.linalg.solve(systems[there], right[there])
    sound: Marks = np.abs(found).max(axis=(1, 2), initial=0.0) < _LARGEST
    found[~sound] = 0.0
    missed = np.abs(systems @ found - right).max(axis=(1, 2), initial=0.0)
    sound &= missed <= 1e-9 * (1 + np.abs(right).max(axis=(1, 2), initial=0.0))
    return found, sound


def _events(values: Vector, falls: Vector, among: Marks, weight: Vector) -> Vector:
    """The pull at which each value, falling as the pull grows, comes to zero."""
    falling = among & (falls > _STILL)
    at = np.where(falling, values / np.where(falling, falls, 1.0), np.inf)
    return np.maximum(at, weight[:, None])

