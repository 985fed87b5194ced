"""The covariance of one run's measured rates: own errors, correlations, one shared error.

All specific rates of a run were divided by the same biomass value. Its relative error s moves
them together: V = V_own + s^2 q q', a matrix of rank one added, with zeros in q for what was
not divided by biomass (mu, ratios).
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.rates.measured import Run
from fluxnet.rates.stacking import correlations, covariances_at, stack_errors

__all__ = [
    "GROSS", "covariance_at", "is_possible", "join_errors", "own_correlations", "run_covariance",
    "within_reach",
]  # fmt: skip

Vector = NDArray[np.float64]
_SLACK = 1e-10
_REACH = 2.0

GROSS = 1e-3
"""Where the first pass leaves the rates a smaller p than this, there is no second.

A relative sd is taken of the reconciled value because that is the better estimate of the rate.
Of rates that contradict one another grossly it is none: it only tells which way the wrong one
pulls, and a sound rate that is pulled to a tenth would get a tenth of its sd. So these keep
their sds as typed. At this level one sound run in a thousand is kept from its second pass, and
both passes reject it.
"""


def within_reach(measured: Vector, reconciled: Vector) -> Vector:
    """The values that relative errors are taken of: the reconciled, near the measured ones.

    Between half and twice the measured value: a rate with a large error may be reconciled to
    nothing, where its sd would vanish (and only a typed 0 is exact), or against its direction.
    Before that a straight line through the errors has ceased to describe them.

    Examples
    --------
    >>> within_reach(np.array([2.0, 2.0, 2.0, 0.0]), np.array([2.2, 0.1, -9.0, 1.0])).tolist()
    [2.2, 1.0, 1.0, 0.0]
    """
    return np.asarray(np.clip(
        reconciled,
        np.minimum(measured / _REACH, measured * _REACH),
        np.maximum(measured / _REACH, measured * _REACH),
    ))  # fmt: skip


def join_errors(
    own_sds: Sequence[float] | Vector,
    shared: Sequence[float] | Vector | None = None,
    correlations: Vector | None = None,
) -> Vector:
    """The covariance of rates with own errors and one shared error.

    Parameters
    ----------
    own_sds
        One a rate, in the unit of the run.
    shared
        The shift of each rate per one sd of the shared error: s times its value, 0 where it
        has no part in it. None: no shared error.
    correlations
        Square, of the own errors; None: they are independent.

    Returns
    -------
    numpy.ndarray
        Square over the rates, read-only, in the unit of the run squared.

    Examples
    --------
    >>> join_errors([0.3, 0.1], [0.4, 0.0]).round(4).tolist()
    [[0.25, 0.0], [0.0, 0.01]]
    """
    own = np.asarray(own_sds, dtype=np.float64)
    matrix = np.diag(own**2) if correlations is None else np.outer(own, own) * correlations
    if shared is not None:
        matrix = matrix + np.outer(shared, shared)
    matrix.setflags(write=False)
    return matrix


def is_possible(covariance: Vector) -> bool:
    """Whether a symmetric matrix has no negative variance in any direction.

    Judged on the correlations, so that units do not matter; rounding of printed correlations
    may leave an eigenvalue of -1e-10 of the largest.
    """
    if not np.allclose(covariance, covariance.T, rtol=1e-9, atol=0):
        return False
    variances = np.diag(covariance)
    if (variances < 0).any():
        return False
    scale = np.sqrt(np.where(variances > 0, variances, 1.0))
    values = np.linalg.eigvalsh(covariance / np.outer(scale, scale))
    return bool(values.size == 0 or values[0] >= -_SLACK * max(values[-1], 1.0))


def run_covariance(run: Run) -> Vector:
    """The covariance of a run's measured rates, diagonal where it holds none."""
    if run.covariance is not None:
        return run.covariance
    return join_errors([rate.sd or 0.0 for rate in run.measured])


def covariance_at(run: Run, values: Sequence[float] | Vector) -> Vector:
    """The covariance with every relative error taken at other values of the rates.

    Relative sds are those of rates that were given in %; the shared error is always relative.
    Absolute sds and the correlations of the own errors stay.

    Parameters
    ----------
    run
        Its measured rates.
    values
        One a measured rate: the reconciled values.

    Raises
    ------
    MisuseError
        Where there are not as many values as measured rates.
    """
    count = len(run.measured)
    if len(values) != count:
        raise MisuseError(f"run {run.name} has {count} measured rates, not {len(values)}")
    (matrix,) = covariances_at(stack_errors((run,)), np.array([values], dtype=np.float64))
    matrix.setflags(write=False)
    return np.asarray(matrix)


def own_correlations(run: Run) -> Vector:
    """The correlations of a run's measured rates without what the shared error adds."""
    (matrix,) = correlations(stack_errors((run,)))
    return np.asarray(matrix)
