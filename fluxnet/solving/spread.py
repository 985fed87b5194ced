"""The errors of a fit by the linear formula, and where they come from."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.solving.bound_test import find_pressures
from fluxnet.solving.build import Built
from fluxnet.solving.chart import Point
from fluxnet.solving.flux_fit import ParameterMove
from fluxnet.solving.region import Region
from fluxnet.solving.task import Task

__all__ = ["Spread", "find_adjustments", "find_spread", "parameter_moves"]

Vector = NDArray[np.float64]

_SAME = 1e-9
"""Directions of norm 1 that differ by less than this are the same."""
_NONE = 1e-9
"""An adjustment whose variance is below this part of the measured one cannot be."""


@record
class Spread:
    """Errors around a fit.

    ``covariance`` is square over fluxes, then uncertain numbers; ``free`` (fluxes x
    directions) spans what no measurement sees; ``shares`` (fluxes x sources) says which part
    of a flux's variance each source brings.
    """

    covariance: Vector
    free: Vector
    sources: tuple[str, ...]
    shares: Vector


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
    whitening, factor = _errors(task)
    by_source = by_seen[:count] @ basis.T
    parts = (by_source @ whitening) * (by_source @ factor.T)
    variance = np.diag(covariance)[:count]
    known = np.array(determined, dtype=bool) & (variance > 0)
    shares = np.full((count, len(factor)), np.nan)
    shares[known] = parts[known] / variance[known, None]
    directions = np.linalg.qr(point.tangent @ region.unseen)[0]
    names = tuple(built.problem.rows[i].name for i in built.measured)
    return Spread(covariance, directions, (*names, *task.rows.names), shares)


def find_adjustments(task: Task, region: Region, pressing: bool) -> Vector:
    """The sd of measured less fitted, one a soft row, then one an uncertain number.

    In their own units; 0 where the fit cannot differ from the value. With W the whitening and
    Q an orthonormal basis of what the whitened design can reach the covariance of the
    adjustments is W^-1 (1 - Q Q') W^-1'. Bounds that press are held as equalities are: a value
    that a bound fixes is off by its whole error.

    Parameters
    ----------
    region
        That of the fit as it is shown.
    pressing
        Whether bounds press on it.
    """
    basis = region.point.design @ region.seen
    if pressing:
        held = [pressure.place for pressure in find_pressures(region)]
        free = _kernel(region.bounds.rows[held])[: region.dimension]
        basis = _span(basis @ free)
    factor = _errors(task)[1]
    hat = np.eye(len(factor)) - basis @ basis.T
    left = np.maximum(np.diag(factor @ hat @ factor.T), 0.0)
    given = np.diag(factor @ factor.T)
    return np.sqrt(np.where(left > _NONE * given, left, 0.0))


def _kernel(rows: Vector) -> Vector:
    """An orthonormal basis of the steps that leave all rows as they are, as columns."""
    _, sizes, right = np.linalg.svd(rows, full_matrices=True)
    return np.asarray(right[int((sizes > _SAME).sum()) :].T, dtype=np.float64)


def _span(columns: Vector) -> Vector:
    """An orthonormal basis of what some columns of size about 1 span."""
    left, sizes, _ = np.linalg.svd(columns, full_matrices=False)
    return np.asarray(left[:, sizes > _SAME], dtype=np.float64)


def parameter_moves(
    task: Task, point: Point, adjustments: Vector, covariance: Vector
) -> tuple[ParameterMove, ...]:
    """The uncertain numbers, given and fitted with the bounds kept."""
    soft, count = len(task.soft), task.rows.count
    sds = np.sqrt(np.diag(covariance)[count:])
    return tuple(
        ParameterMove(
            name=name,
            value=float(task.rows.start[k]),
            sd=float(task.sd[k]),
            moved=float(point.numbers[k]),
            moved_sd=float(sds[k]),
            z=_over(float(task.rows.start[k] - point.numbers[k]), float(adjustments[soft + k])),
        )
        for k, name in enumerate(task.rows.names)
    )


def _errors(task: Task) -> tuple[Vector, Vector]:
    """The whitening of measured rows and uncertain numbers together, and its inverse."""
    soft = len(task.soft)
    whole = np.zeros((soft + task.numbers, soft + task.numbers))
    whole[:soft, :soft] = task.whitening
    whole[soft:, soft:] = np.diag(1 / task.sd)
    return whole, np.asarray(np.linalg.inv(whole), dtype=np.float64)


def _over(difference: float, sd: float) -> float | None:
    return difference / sd if sd > 0 else None
