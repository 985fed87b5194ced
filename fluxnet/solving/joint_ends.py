"""The ends of the intervals of many functionals, all at once where that can be proven."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.solving.functionals import Functionals
from fluxnet.solving.joint_curve import Asked, follow_all
from fluxnet.solving.joint_flat import Ceilings, JointReach, ceilings_of, reach_all_flat
from fluxnet.solving.joint_reach import reach_all_far
from fluxnet.solving.region import Region, nearest
from fluxnet.solving.task import Task

__all__ = ["Groups", "JointEnds", "joint_ends"]

Vector = NDArray[np.float64]
Marks = NDArray[np.bool_]
Groups = list[list[tuple[int, float]]]

_WIDEST = 150
"""With more coordinates than this, one by one is faster."""


@record
class JointEnds:
    """How far functionals go, down and up: at 95 % (``far``) and at the best fit (``best``).

    Functionals x 2, not negative; ``known`` marks what was found.
    """

    far: Vector
    best: Vector
    known: Marks


def joint_ends(
    task: Task,
    region: Region,
    functionals: Functionals,
    gradients: Vector,
    hidden: Marks,
    level: float,
    groups: Groups,
) -> JointEnds:
    """The ends of groups of functionals of which each goes up and down together.

    Parameters
    ----------
    gradients
        Functionals x (u, t).
    hidden
        Which are not determined.
    groups
        Pairs (functional, factor); the factors within a group tell how their gradients compare.
    """
    count, width = gradients.shape
    ends = JointEnds(np.zeros((count, 2)), np.zeros((count, 2)), np.zeros((count, 2), dtype=bool))
    bent = functionals.curved
    groups = [group for group in groups if not bent[group[0][0]]]
    if region.broken or not groups or width > _WIDEST:
        return ends
    leads = np.array([group[0][0] for group in groups])
    pulls = gradients[leads]
    pulls = pulls / np.sqrt((pulls * pulls).sum(axis=1))[:, None]
    pulls = np.vstack([-pulls, pulls])
    ceilings = ceilings_of(region)
    flat = _flat(ceilings, pulls, np.tile(hidden[leads], 2))
    pressing = _pressing(region, ceilings)
    if pressing is None:
        return ends
    start = JointReach(flat.found, flat.places, flat.pressing | pressing)
    radius = float(np.sqrt(max(level - region.floor, 1e-12)))
    reached = reach_all_far(ceilings, region.centre, pulls, radius, start)
    reached = JointReach(reached.found & flat.found, reached.places, reached.pressing)
    which = np.array([i for group in groups for i, _ in group])
    lead = np.repeat(np.arange(len(groups)), [len(group) for group in groups])
    turned = np.array([factor * group[0][1] < 0 for group in groups for _, factor in group])
    # Both ends of each: down, then up.
    starts = np.concatenate([lead + len(groups) * turned, lead + len(groups) * ~turned])
    signs = np.repeat([-1.0, 1.0], len(which))
    side, which = np.repeat([0, 1], len(which)), np.tile(which, 2)
    own = signs[:, None] * gradients[which]
    ends.best[which, side] = np.einsum("ej,ej->e", own, flat.places[starts])
    far, known = np.einsum("ej,ej->e", own, reached.places[starts]), reached.found[starts]
    if task.numbers:
        asked = Asked(which, signs, starts)
        far, known = follow_all(task, region, functionals, ceilings, level, asked, reached)
    ends.far[which, side], ends.known[which, side] = far, known
    return ends


def _flat(ceilings: Ceilings, pulls: Vector, hidden: Marks) -> JointReach:
    """Where functionals go at the best fit; those that are determined stay."""
    found = ~hidden
    places, pressing = np.zeros(pulls.shape), np.zeros((len(pulls), len(ceilings.limits)), bool)
    some = np.flatnonzero(hidden)
    if len(some):
        flat = reach_all_flat(ceilings, pulls[some])
        found[some], places[some], pressing[some] = flat.found, flat.places, flat.pressing
    return JointReach(found, places, pressing)


def _pressing(region: Region, ceilings: Ceilings) -> Marks | None:
    """The ceilings that press on the best fit, None where they cannot be told."""
    if float(np.abs(region.centre).max(initial=0.0)) <= 1e-9:
        return np.zeros(len(ceilings.limits), dtype=bool)
    try:
        found = nearest(region)
    except ArithmeticError:
        return None
    if found.x is None:
        return None
    prices = found.prices[ceilings.sources]
    return np.where(ceilings.above, prices > 0, prices < 0)
