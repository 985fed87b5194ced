"""What the bounds add to h, which of them press, and how often they would by chance."""

from __future__ import annotations

from dataclasses import replace
from hashlib import sha256

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.solving.quadratic import solve_scaled
from fluxnet.solving.region import Region, nearest

__all__ = ["Pressure", "chance_of_bounds", "find_pressures"]

Vector = NDArray[np.float64]

SAMPLES = 200
SEED = int.from_bytes(sha256(b"what bounds add by chance").digest()[:8], "big")
"""The same samples on every machine: the first eight bytes of a hash of what they are for."""


@record
class Pressure:
    """A bound that presses on the best fit.

    ``place`` is that among the region's bounds, ``source`` that in the task: see
    :class:`fluxnet.solving.region.Bounds`. ``shift`` is how far it moves the fit, in the
    coordinates u.
    """

    place: int
    source: int
    shift: Vector


def find_pressures(region: Region) -> tuple[Pressure, ...]:
    """The bounds that press on the best fit, and what each of them does.

    At the fit with bounds u = centre - sum of price x row: so the shift by each bound is minus
    its price times its row.
    """
    found = nearest(region)
    if found.x is None:
        return ()
    sources, rows = region.bounds.sources, region.bounds.rows[:, : region.dimension]
    return tuple(
        Pressure(i, int(sources[i]), -found.prices[i] * rows[i]) for i in found.active
    )


def chance_of_bounds(region: Region, added: float) -> float:
    """How often bounds add at least as much to h where the fit with bounds is the truth.

    A parametric bootstrap: data are drawn around the fit with bounds, and fitted with and
    without them. In the coordinates u the fit without bounds is then normal around the
    truth with sd 1, and the bounds add its squared distance from the region. Uncertain
    numbers take part by their slopes at the fit.

    Parameters
    ----------
    added
        What the bounds add to h in the fit.

    Returns
    -------
    float
        (1 + how many of the samples) / (1 + samples).
    """
    seen = region.dimension
    samples = np.random.default_rng(SEED).standard_normal((SAMPLES, seen))
    bounds = region.bounds
    # The truth itself is inside; rounding must not put it outside.
    low, high = np.minimum(bounds.low, 0.0), np.maximum(bounds.high, 0.0)
    reach = samples @ bounds.rows[:, :seen].T
    inside = ((reach >= low) & (reach <= high)).all(axis=1)
    outside = samples[~inside]
    ends = np.array([_end(region, sample, low, high) for sample in outside])
    if not len(ends):
        return 1 / (1 + SAMPLES)
    distances = ((ends[:, :seen] - outside) ** 2).sum(axis=1)
    return (1 + int((distances >= added).sum())) / (1 + SAMPLES)


def _end(region: Region, sample: Vector, low: Vector, high: Vector) -> Vector:
    """The place within the bounds that is nearest to a sample."""
    gradient = np.concatenate([-sample, np.zeros(region.unseen.shape[1])])
    programme = replace(region.programme(gradient), low=low, high=high)
    found = solve_scaled(programme, enough=1.0)
    # Without an answer the sample counts as one that the bounds do not move: p comes out low.
    return gradient * -1.0 if found.x is None else found.x
