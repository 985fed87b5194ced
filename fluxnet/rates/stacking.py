"""The errors of many runs that measured the same quantities, as arrays."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.rates.measured import Run

__all__ = ["StackedErrors", "correlations", "covariances_at", "sds_at", "stack_errors"]

Array = NDArray[np.float64]
_ROUNDING = 1e-14


@record
class StackedErrors:
    """Errors of runs, over their measured rates: arrays of runs x rates.

    ``own`` are sds without the part of a shared error, ``relative`` the fractions of those given
    in % (NaN elsewhere), ``shared`` the run's shared error where a rate has a part in it, else 0.
    ``covariances`` (runs x rates x rates) is None where all errors are independent.
    """

    values: Array
    own: Array
    relative: Array
    shared: Array
    covariances: Array | None

    @property
    def is_relative(self) -> bool:
        """Whether any error depends on the value that it is the error of."""
        return bool(self.shared.any()) or not np.isnan(self.relative).all()


def stack_errors(runs: Sequence[Run]) -> StackedErrors:
    """The errors of runs with as many measured rates as one another."""
    rates = [[r for r in run.rates if r.value is not None] for run in runs]
    shares = [run.shared_error or 0.0 for run in runs]

    def array(numbers: list[list[float]]) -> Array:
        return np.array(numbers, dtype=np.float64).reshape(len(runs), -1)

    sds = array([[r.sd or 0.0 for r in of_run] for of_run in rates])
    covariances = None
    if any(run.covariance is not None for run in runs):
        covariances = np.array([
            np.diag(np.square(own)) if run.covariance is None else run.covariance
            for run, own in zip(runs, sds, strict=True)
        ])  # fmt: skip
    return StackedErrors(
        values=array([[r.value or 0.0 for r in of_run] for of_run in rates]),
        own=array([
            [(r.sd if r.own_sd is None else r.own_sd) or 0.0 for r in of_run] for of_run in rates
        ]),
        relative=array([
            [np.nan if r.relative is None else r.relative for r in of_run] for of_run in rates
        ]),
        shared=array([
            [0.0 if r.own_sd is None else share for r in of_run]
            for share, of_run in zip(shares, rates, strict=True)
        ]),
        covariances=covariances,
    )  # fmt: skip


def sds_at(errors: StackedErrors, values: Array) -> Array:
    """The sds of own errors, relative ones taken of other values: runs x rates."""
    return np.where(np.isnan(errors.relative), errors.own, errors.relative * np.abs(values))


def correlations(errors: StackedErrors) -> Array:
    """The correlations of own errors, without what a shared error adds: runs x rates x rates."""
    count = errors.values.shape[1]
    if errors.covariances is None:
        return np.broadcast_to(np.eye(count), (len(errors.values), count, count)).copy()
    together = _outer(errors.shared * errors.values)
    own = errors.covariances - together
    own[np.abs(own) <= _ROUNDING * np.abs(together)] = 0.0  # what subtraction leaves of nothing
    found = own / _outer(np.where(errors.own > 0, errors.own, 1.0))
    found[:, range(count), range(count)] = 1.0
    return np.asarray(found)


def covariances_at(errors: StackedErrors, values: Array) -> Array:
    """The covariances with every relative error taken of other values: runs x rates x rates.

    Absolute sds and the correlations of own errors stay; a shared error is always relative.
    """
    own = _outer(sds_at(errors, values)) * correlations(errors)
    return np.asarray(own + _outer(errors.shared * values))


def _outer(vectors: Array) -> Array:
    return np.asarray(vectors[:, :, None] * vectors[:, None, :])
