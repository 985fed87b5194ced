"""Errors of many runs at once, and the redundancy whitened by them."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record

__all__ = ["Errors", "Independent", "Joint", "NoVarianceError", "along", "errors_of", "sd_of_rows",
           "sds_left", "whiten"]  # fmt: skip

Array = NDArray[np.float64]
_NO_ERROR = 1e-13


class NoVarianceError(MisuseError):
    """A covariance gives a relation among rates no variance, though each rate has one."""


@record
class Independent:
    """Errors that know nothing of one another: sds, runs x values."""

    variances: Array

    def times(self, row: Array) -> Array:
        """One row of each run times its covariance: runs x values."""
        return np.asarray(row * self.variances)

    def between(self, left: Array, right: Array) -> Array:
        """The covariance of row i of one matrix with row i of another: runs x rows."""
        squares = left * right
        if not squares.any():
            return np.zeros((len(self.variances), len(left)))
        return along(squares, self.variances)

    def of_rows(self, rows: Array) -> Array:
        """The variance of rows that differ from run to run (runs x rows x values)."""
        return np.asarray(np.einsum("nkp,np->nk", np.square(rows), self.variances))

    def some(self, runs: NDArray[np.bool_]) -> Independent:
        """The errors of some of the runs."""
        return Independent(self.variances[runs])

    def scaled(self, sizes: Array) -> Independent:
        """The errors of values times ``sizes`` (runs x values)."""
        return Independent(self.variances * np.square(sizes))


@record
class Joint:
    """Errors with a covariance: runs x values x values."""

    matrix: Array

    @property
    def variances(self) -> Array:
        """The variances of the values: runs x values."""
        return np.asarray(np.einsum("nii->ni", self.matrix))

    def times(self, row: Array) -> Array:
        """One row of each run times its covariance: runs x values."""
        return np.asarray((row[:, None, :] @ self.matrix)[:, 0])

    def between(self, left: Array, right: Array) -> Array:
        """The covariance of row i of one matrix with row i of another: runs x rows."""
        return np.asarray(((left @ self.matrix) * right).sum(axis=2))

    def of_rows(self, rows: Array) -> Array:
        """The variance of rows that differ from run to run (runs x rows x values)."""
        return np.asarray(((rows @ self.matrix) * rows).sum(axis=2))

    def some(self, runs: NDArray[np.bool_]) -> Joint:
        """The errors of some of the runs."""
        return Joint(self.matrix[runs])

    def scaled(self, sizes: Array) -> Joint:
        """The errors of values times ``sizes`` (runs x values)."""
        return Joint(self.matrix * sizes[:, :, None] * sizes[:, None, :])


Errors = Independent | Joint


def errors_of(sds: Array | None, covariances: Array | None) -> Errors:
    """The errors of runs, given either as sds or as covariances."""
    if sds is not None and covariances is None:
        if not (np.asarray(sds) >= 0).all():
            raise MisuseError("a standard deviation is negative or no number")
        return Independent(np.square(np.asarray(sds, dtype=np.float64)))
    if covariances is not None and sds is None:
        return Joint(np.asarray(covariances, dtype=np.float64))
    raise MisuseError("give either sds or covariances")


def along(rows: Array, values: Array) -> Array:
    """Rows times the values of each run: runs x rows.

    Not ``values @ rows.T``: matrices this thin cost the library's threads more than they save.
    """
    return np.asarray(np.einsum("rp,np->nr", rows, values))


def whiten(R: Array, e: Array, errors: Errors) -> tuple[Array, Array]:
    """R V and R y divided by the Cholesky factor of P = R V R', for all runs at once.

    Z (dof x runs x values) and f (dof x runs): h is the sum of f^2, the correction that of
    f Z, the reduction of the variances that of Z^2, so neither can come out negative. Found by
    making the rows orthogonal in V one after another, each from what is left of it (P itself
    would square how far the sds differ).

    Raises
    ------
    NoVarianceError
        Where a row has no variance beside the others.
    """
    W = np.repeat(R[:, None, :], len(e), axis=1)
    Z = np.empty_like(W)
    f = e.T.copy()
    for i in range(len(R)):
        for k in range(i):
            factor = np.einsum("np,np->n", Z[k], W[i])
            W[i] -= factor[:, None] * W[k]
            f[i] -= factor * f[k]
        Z[i] = errors.times(W[i])
        pivot = np.einsum("np,np->n", Z[i], W[i])
        if not (pivot > _NO_ERROR * (errors.between(R[i : i + 1], R[i : i + 1])[:, 0])).all():
            raise NoVarianceError("the errors leave a relation that they should test without any")
        root = np.sqrt(pivot)
        for rows in (W, Z):
            rows[i] /= root[:, None]
        f[i] /= root
    return Z, f


def sds_left(before: Array, taken_off: Array) -> Array:
    """Sds from variances less what reconciling takes off; where rounding is left it is 0."""
    left = before - taken_off
    return np.sqrt(np.where(left > _NO_ERROR * before, left, 0.0))


def sd_of_rows(rows: Array, Z: Array, errors: Errors) -> Array:
    """The sd of rows over the reconciled values: runs x rows."""
    return sds_left(errors.between(rows, rows), np.square(Z @ rows.T).sum(axis=0))
