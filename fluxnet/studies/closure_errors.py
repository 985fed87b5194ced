"""Errors of many runs at once, and the redundancy whitened by them."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record

__all__ = ["Errors", "Independent", "Joint", "NoVarianceError", "Reduced", "alike", "along",
           "errors_of", "reduce_relations", "sd_of_rows", "sds_left", "whiten"]  # fmt: skip

Array = NDArray[np.float64]
_NO_ERROR = 1e-13
_ROUNDING = 1e-13
"""A sum below this part of its terms is rounding."""
_SHARED = 1e3
_WITHOUT = "the errors leave a relation that they should test without any"


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

    def some(self, runs: NDArray[np.intp]) -> Independent:
        """The errors of some of the runs, by their places."""
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

    def some(self, runs: NDArray[np.intp]) -> Joint:
        """The errors of some of the runs, by their places."""
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


@record
class Reduced:
    """Relations solved for the values that are known least.

    ``rows`` (relations x values) say the same as R, each with a 1 at its ``solved`` value,
    which no other row holds. The other values are known best, and what is reconciled is told
    by them: a sum over all would lose what is small in rounding.
    """

    rows: Array
    solved: list[int]

    def by_others(self, rows: Array) -> Array:
        """Rows over values as rows that do not hold the solved ones."""
        return np.asarray(rows - rows[:, self.solved] @ self.rows)

    def settled(self, values: Array) -> Array:
        """Values of runs with the solved ones from the others: the relations then hold."""
        found = values.copy()
        found[:, self.solved] = 0.0
        solved = -along(self.rows, found)
        terms = along(np.abs(self.rows), np.abs(found))
        found[:, self.solved] = np.where(np.abs(solved) <= _ROUNDING * terms, 0.0, solved)
        return found


def reduce_relations(R: Array, sds: Array) -> Reduced:
    """Solve relations for the values with the largest sds, by elimination with full pivoting.

    Each pivot is the largest of all coefficients times the sd of its value. So what is known
    best never has to be found as the small difference of what is hardly known.

    Raises
    ------
    NoVarianceError
        Where a relation holds only values without an error.
    """
    rows = R.copy()
    solved: list[int] = []
    for i in range(len(R)):
        sizes = np.abs(rows[i:]) * sds
        place, column = divmod(int(sizes.argmax()), len(sds))
        if not sizes[place, column] > 0:
            raise NoVarianceError(_WITHOUT)
        rows[[i, i + place]] = rows[[i + place, i]]
        pivot = rows[i] / rows[i, column]
        taken = np.outer(rows[:, column], pivot)
        left = rows - taken
        left[np.abs(left) <= _ROUNDING * (np.abs(rows) + np.abs(taken))] = 0.0
        left[:, column] = 0.0
        left[i] = pivot
        rows = left
        solved.append(column)
    return Reduced(rows, solved)


def alike(errors: Errors) -> list[NDArray[np.intp]]:
    """The places of runs that may share a reduction, for their sds differ by a common factor.

    Not quite: their ratios lie within three decades.
    """
    sds = np.sqrt(errors.variances)
    left, found = np.arange(len(sds)), []
    while len(left):
        inexact = sds[left[0]] > 0
        ratios = sds[left][:, inexact] / sds[left[0], inexact]
        least, most = ratios.min(axis=1, initial=np.inf), ratios.max(axis=1, initial=0.0)
        same = most <= _SHARED * least
        found.append(left[same])
        left = left[~same]
    return found


def whiten(reduced: Reduced, y: Array, errors: Errors) -> tuple[Array, Array]:
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
    R = reduced.rows
    W = np.repeat(R[:, None, :], len(y), axis=1)
    Z = np.empty_like(W)
    f = along(R, y).T.copy()
    for i in range(len(R)):
        for k in range(i):
            factor = np.einsum("np,np->n", Z[k], W[i])
            W[i] -= factor[:, None] * W[k]
            f[i] -= factor * f[k]
        Z[i] = errors.times(W[i])
        pivot = np.einsum("np,np->n", Z[i], W[i])
        if not (pivot > _NO_ERROR * (errors.between(R[i : i + 1], R[i : i + 1])[:, 0])).all():
            raise NoVarianceError(_WITHOUT)
        root = np.sqrt(pivot)
        for rows in (W, Z):
            rows[i] /= root[:, None]
        f[i] /= root
    return Z, f


def sds_left(before: Array, taken_off: Array) -> Array:
    """Sds from variances less what reconciling takes off; where rounding is left it is 0."""
    left = before - taken_off
    return np.sqrt(np.where(left > _NO_ERROR * before, left, 0.0))


def sd_of_rows(rows: Array, reduced: Reduced, Z: Array, errors: Errors) -> Array:
    """The sd of rows over the reconciled values: runs x rows."""
    others = reduced.by_others(rows)
    return sds_left(errors.between(others, others), np.square(Z @ others.T).sum(axis=0))
