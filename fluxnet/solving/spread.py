"""The errors of a fit by the linear formula, and where they come from."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fluxnet.solving.build import Built
from fluxnet.solving.flux_fit import ParameterMove
from fluxnet.solving.region import Region
from fluxnet.solving.task import Task

__all__ = ["Spread", "find_spread"]

Vector = NDArray[np.float64]

_NONE = 1e-9
"""An adjustment whose variance is below this part of the measured one cannot be."""


@dataclass(frozen=True, slots=True)
class Spread:
    """Errors around a fit.

    ``covariance`` is square over fluxes, then uncertain numbers; ``free`` (fluxes x
    directions) spans what no measurement sees; ``shares`` (fluxes x sources) says which part
    of a flux's variance each source brings. ``adjustment_sd`` has one entry a soft measured
    row: the sd of measured less fitted, in the row's unit.
    """

    covariance: Vector
    free: Vector
    sources: tuple[str, ...]
    shares: Vector
    adjustment_sd: Vector
    moves: tuple[ParameterMove, ...]


def find_spread(
    built: Built, task: Task, region: Region, determined: tuple[bool, ...]
) -> Spread:
    """The errors around a fit, by the slopes there and without bounds.

    With G the whitened design and P the inverse of its seen part, the fitted coordinates have
    the covariance P P'; a functional's variance is split by source as x_i (V x)_i, where x is
    its slope by the measured values and V their covariance.
    """
    point, free = region.point, len(region.point.z)
    count, moved = task.rows.count, task.numbers
    whole = np.vstack([point.tangent, np.zeros((moved, point.tangent.shape[1]))])
    whole[count:, free:] = np.eye(moved)
    by_seen = whole @ region.seen
    basis = point.design @ region.seen
    covariance = by_seen @ by_seen.T
    soft = len(task.soft)
    inverse = np.zeros((soft + moved, soft + moved))
    inverse[:soft, :soft] = task.whitening
    inverse[soft:, soft:] = np.diag(1 / task.sd)
    factor = np.linalg.inv(inverse) if len(inverse) else inverse
    by_source = by_seen[:count] @ basis.T
    parts = (by_source @ inverse) * (by_source @ factor.T)
    variance = np.diag(covariance)[:count]
    known = np.array(determined, dtype=bool) & (variance > 0)
    shares = np.full((count, soft + moved), np.nan)
    shares[known] = parts[known] / variance[known, None]
    hat = np.eye(soft + moved) - basis @ basis.T
    left = np.maximum(np.diag(factor @ hat @ factor.T), 0.0)
    given = np.diag(factor @ factor.T)
    adjustment = np.sqrt(np.where(left > _NONE * given, left, 0.0))
    numbers_sd = np.sqrt(np.diag(covariance)[count:])
    moves = tuple(
        ParameterMove(
            name=name,
            value=float(task.rows.start[k]),
            sd=float(task.sd[k]),
            moved=float(point.numbers[k]),
            moved_sd=float(numbers_sd[k]),
            z=_over(float(task.rows.start[k] - point.numbers[k]), float(adjustment[soft + k])),
        )
        for k, name in enumerate(task.rows.names)
    )
    directions = np.linalg.qr(point.tangent @ region.unseen)[0]
    names = tuple(built.problem.rows[i].name for i in built.measured)
    return Spread(
        covariance, directions, (*names, *task.rows.names), shares, adjustment[:soft], moves
    )


def _over(difference: float, sd: float) -> float | None:
    return difference / sd if sd > 0 else None
