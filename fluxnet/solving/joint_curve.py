"""The ends of many functionals along moving numbers, all followed at once.

The same ends as those of :mod:`fluxnet.solving.curve`: at each, the pull on the functional is
balanced by the slope of h and the bounds that press. From the ends of the linear problem on,
steps are taken of the equations of that balance, with h as a sum of squares of residuals that
change in proportion, and every other bound is watched. What does not settle is not told.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.solving.chart import Point, points_at
from fluxnet.solving.functionals import Functionals
from fluxnet.solving.joint_flat import Ceilings, JointReach
from fluxnet.solving.joint_reach import solve_each
from fluxnet.solving.region import Region
from fluxnet.solving.task import Task

__all__ = ["Asked", "follow_all"]

Vector = NDArray[np.float64]
Places = NDArray[np.intp]
Marks = NDArray[np.bool_]

_ROUNDS = 10
_HELD = 1e-4
"""How strongly directions that nothing sees are held, beside what the measurements hold."""
_SLOW = 1e-8
_CLOSE = 1e-8
"""An end is taken where the next step would change it by less than this part of it."""
_BEYOND, _BALANCED = 1e-7, 1e-6
_DUST = 1e-9


@record
class Asked:
    """Ends that are asked for: which functional, which way, and from which start."""

    which: Places
    signs: Vector
    starts: Places

    def some(self, wanted: Places) -> Asked:
        """Those at some places among them."""
        return Asked(self.which[wanted], self.signs[wanted], self.starts[wanted])


@record
class _Setting:
    """What all rounds share; ``axes`` turns (u, t) into steps in the point's coordinates."""

    task: Task
    region: Region
    functionals: Functionals
    ceilings: Ceilings
    level: float
    axes: Vector
    limits: Vector
    turns: Vector
    norms: Vector
    sources: Places


def follow_all(
    task: Task,
    region: Region,
    functionals: Functionals,
    ceilings: Ceilings,
    level: float,
    asked: Asked,
    reached: JointReach,
) -> tuple[Vector, Marks]:
    """How far each functional goes, and whether that is known.

    Parameters
    ----------
    reached
        The ends of the linear problem around the region's point, which ``asked.starts`` count.
    """
    setting = _setting(task, region, functionals, ceilings, level)
    gains, known = np.zeros(len(asked.which)), np.zeros(len(asked.which), dtype=bool)
    width = region.seen.shape[0]
    portion = max(8, 4_000_000 // max(1, len(task.rows.base) * width))
    sound = np.flatnonzero(reached.found[asked.starts])
    for start in range(0, len(sound), portion):
        some = sound[start : start + portion]
        try:
            gains[some], known[some] = _follow(setting, asked.some(some), reached)
        except (ZeroDivisionError, np.linalg.LinAlgError):
            continue
    return gains, known


def _setting(
    task: Task, region: Region, functionals: Functionals, ceilings: Ceilings, level: float
) -> _Setting:
    bounds = region.bounds
    high = np.concatenate([task.high, task.range_high])[bounds.sources]
    low = np.concatenate([task.low, task.range_low])[bounds.sources]
    above = ceilings.above
    limits = np.where(above, high[ceilings.sources], -low[ceilings.sources])
    norms = bounds.norms[ceilings.sources]
    return _Setting(
        task, region, functionals, ceilings, level,
        axes=np.hstack([region.seen, region.unseen]),
        limits=limits / norms,
        turns=np.where(above, 1.0, -1.0) / norms,
        norms=norms,
        sources=bounds.sources[ceilings.sources],
    )  # fmt: skip


def _follow(setting: _Setting, asked: Asked, reached: JointReach) -> tuple[Vector, Marks]:
    """The rounds for some of the ends."""
    region, task = setting.region, setting.task
    here = region.point
    radius = float(np.sqrt(max(setting.level - region.floor, 1e-12)))
    count = len(asked.which)
    gains, known = np.zeros(count), np.zeros(count, dtype=bool)
    origins = setting.functionals.values(here)[asked.which]
    gradients = region.gradients(setting.functionals.slopes(here))[asked.which]
    places = reached.places[asked.starts]
    before = asked.signs * np.einsum("ej,ej->e", gradients, places)
    strides = np.sqrt((places * places).sum(axis=1))
    starts, own = np.unique(asked.starts, return_inverse=True)
    points = _moved(task, here.z, here.numbers, reached.places[starts] @ setting.axes.T, here)
    points = points.some(own)
    on = reached.pressing[asked.starts]
    left = np.arange(count)
    for _ in range(_ROUNDS):
        values, slopes = setting.functionals.each(points, asked.which[left])
        signs = asked.signs[left]
        pulls = signs[:, None] * slopes @ setting.axes
        step = _step(setting, points, pulls, on, radius)
        gain = signs * (values - origins[left]) + np.einsum("ej,ej->e", pulls, step.moves)
        size = np.sqrt((step.moves * step.moves).sum(axis=1))
        settles = np.minimum(size / np.maximum(strides, 1e-300), 1.0)
        dust = _DUST * np.sqrt((pulls * pulls).sum(axis=1))
        with np.errstate(invalid="ignore"):  # nothing is known of what it was before
            close = np.abs(gain - before) * settles <= _CLOSE * np.abs(gain) + dust
        done = step.sound & ~step.changes.any(axis=1) & close
        gains[left[done]], known[left[done]] = gain[done], True
        going = np.flatnonzero(step.sound & ~done)
        if not len(going):
            break
        changed = step.changes[going]
        left, on = left[going], on[going] ^ changed
        before = np.where(changed.any(axis=1), np.inf, gain[going])
        strides = size[going]
        points = points.some(going)
        points = _moved(
            task, points.z, points.numbers, step.moves[going] @ setting.axes.T, here
        )
    return gains, known


def _moved(task: Task, z: Vector, numbers: Vector, steps: Vector, here: Point) -> Point:
    """The points a step away, their numbers kept within their ranges."""
    free = len(here.z)
    numbers = np.clip(numbers + steps[:, free:], task.range_low, task.range_high)
    return points_at(task, here.chart, z + steps[:, :free], numbers)


@record
class _Step:
    """Steps in (u, t), and which bounds must begin or cease to press."""

    moves: Vector
    changes: Marks
    sound: Marks


def _step(
    setting: _Setting, points: Point, pulls: Vector, on: Marks, radius: float
) -> _Step:
    """From each point to where the forces balance, by the slopes at the point."""
    region, axes = setting.region, setting.axes
    seen, width = region.dimension, axes.shape[1]
    count, every = len(pulls), np.arange(len(pulls))[:, None]
    sizes = np.maximum(np.sqrt((pulls * pulls).sum(axis=1)), 1e-300)
    rows, room = _bounds(setting, points)
    most = int(on.sum(axis=1).max(initial=0))
    order = np.argsort(~on, axis=1, kind="stable")[:, :most]
    used = on[every, order]
    design = points.design @ axes
    turned = design.transpose(0, 2, 1)
    system = np.zeros((count, width + most, width + most))
    system[:, :width, :width] = turned @ design
    hidden = np.arange(seen, width)
    system[:, hidden, hidden] += _HELD
    active = np.where(used[:, :, None], rows[every, order], 0.0)
    system[:, width:, :width] = active
    system[:, :width, width:] = active.transpose(0, 2, 1)
    extra = np.arange(width, width + most)
    system[:, extra, extra] -= ~used
    right = np.zeros((count, width + most, 2))
    right[:, :width, 0] = (turned @ points.residuals[:, :, None])[:, :, 0]
    right[:, :width, 1] = pulls / sizes[:, None]
    right[:, width:, 0] = np.where(used, room[every, order], 0.0)
    found, sound = solve_each(system, right)
    start, way = found[:, :width, 0], found[:, :width, 1]
    away = points.residuals - (design @ start[:, :, None])[:, :, 0]
    pace = -(design @ way[:, :, None])[:, :, 0]
    a = (pace * pace).sum(axis=1)
    b = (away * pace).sum(axis=1)
    c = (away * away).sum(axis=1) - setting.level
    root = b * b - a * c
    moves = a > _SLOW**2
    sound = sound & np.where(moves, root >= 0, c <= 1e-9 * (1 + setting.level))
    pull = (-b + np.sqrt(np.maximum(root, 0.0))) / np.where(moves, a, 1.0)
    pull = np.where(moves, pull, 0.0)
    sound &= ~moves | (pull > 0)
    step = start + pull[:, None] * way
    step[~sound] = 0.0
    forces = np.where(
        moves[:, None], found[:, width:, 0] + pull[:, None] * found[:, width:, 1],
        found[:, width:, 1],
    )  # fmt: skip
    changes = (rows @ step[:, :, None])[:, :, 0] - room > _BEYOND * radius
    changes &= ~on
    least = -_BALANCED * np.where(moves, pull, 1.0)
    changes[every, order] |= used & (forces < least[:, None])
    return _Step(step, changes, sound)


def _bounds(setting: _Setting, points: Point) -> tuple[Vector, Vector]:
    """The slopes of all ceilings over (u, t), and how far each point is below them."""
    task, sources = setting.task, setting.sources
    count, free = len(task.bounded), points.z.shape[1]
    values = np.empty((len(points.z), len(sources)))
    slopes = np.zeros((len(points.z), len(sources), points.slopes.shape[2]))
    rows = np.flatnonzero(sources < count)
    places = task.bounded[sources[rows]]
    values[:, rows], slopes[:, rows] = points.values[:, places], points.slopes[:, places]
    own = np.flatnonzero(sources >= count)
    values[:, own] = points.numbers[:, sources[own] - count]
    slopes[:, own, free + sources[own] - count] = 1.0
    turns = setting.turns
    return (slopes * turns[:, None]) @ setting.axes, setting.limits - values * turns
