"""Closure of many runs with the same measured species, as one batch of array operations.

With y the measured values, V their covariance and R y = 0 the redundancy:

    e = R y,  P = R V R',  h = e' P^-1 e,
    reconciled y^ = y - V R' P^-1 e,  its covariance V - V R' P^-1 R V

(Wang & Stephanopoulos 1983; van der Heijden et al. 1994; formulas from memory). h is
chi-squared with as many degrees of freedom as R has rows.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.solving.statistics import chi_squared_quantile, chi_squared_tails

__all__ = ["ClosureArrays", "ClosureMatrices", "NoVarianceError", "close_many"]

Array = NDArray[np.float64]
SIGNIFICANCE = 0.05
_NO_ERROR = 1e-13


class NoVarianceError(MisuseError):
    """A covariance gives a relation among rates no variance, though each rate has one."""


@dataclass(frozen=True, slots=True)
class ClosureMatrices:
    """The rows that a closure needs, over the measured values of a run.

    ``redundancy`` (dof x values) is R; ``calculated`` (unmeasured x values) gives unmeasured
    rates; ``contents`` (balances x values) holds what one unit of each value releases of each
    balance that is shown, negative for uptake. ``inward`` (values that are uptakes),
    ``balanceable`` and ``exact`` are one a value.
    """

    redundancy: Array
    calculated: Array
    contents: Array
    inward: NDArray[np.bool_]
    balanceable: NDArray[np.bool_]
    exact: NDArray[np.bool_]

    def __post_init__(self) -> None:
        width = len(self.exact)
        for name in ("redundancy", "calculated", "contents"):
            array = getattr(self, name)
            if array.ndim != 2 or array.shape[1] != width or not np.isfinite(array).all():
                raise MisuseError(f"{name} must be finite, with {width} columns")
            array.setflags(write=False)


@dataclass(frozen=True, slots=True)
class ClosureArrays:
    """The closure of many runs: arrays of runs x what they tell, all in the unit of the run.

    ``h``, ``p``, ``closes``, ``residual`` are one a run; ``reconciled``, ``reconciled_sd`` and
    ``z`` (measured less reconciled, over its sd) runs x values; ``calculated`` and its sd runs
    x unmeasured; ``taken``, ``released``, ``gap``, ``gap_sd``, ``recovery`` (a fraction) and
    ``recovery_sd`` runs x balances. NaN stands where a number is not defined: h without
    redundancy, z of a value that no balance tests, recovery where nothing is taken up.
    ``residual`` is the largest |R y^| over the sum of its terms' magnitudes.
    """

    dof: int
    limit: float
    h: Array
    p: Array
    closes: NDArray[np.bool_]
    reconciled: Array
    reconciled_sd: Array
    z: Array
    calculated: Array
    calculated_sd: Array
    taken: Array
    released: Array
    gap: Array
    gap_sd: Array
    recovery: Array
    recovery_sd: Array
    residual: Array = field(repr=False)


def close_many(
    matrices: ClosureMatrices,
    values: Array,
    sds: Array | None = None,
    covariances: Array | None = None,
) -> ClosureArrays:
    """Close many runs at once.

    Parameters
    ----------
    matrices
        The balances; see :func:`fluxnet.studies.closure_plan.plan_closure`.
    values
        Runs x values: magnitudes in their directions, in one unit.
    sds
        Runs x values, where the errors are independent; 0 where ``matrices.exact``.
    covariances
        Runs x values x values, instead of ``sds``.

    Raises
    ------
    MisuseError
        For NaN, wrong shapes, negative sds, zero sds of values that are not exact.
    NoVarianceError
        Where a covariance is singular in a direction that is tested.

    Examples
    --------
    >>> rows = np.array([[-2.0, 1, 0], [-2, 0, 1]])
    >>> matrices = ClosureMatrices(
    ...     rows, np.zeros((0, 3)), np.zeros((0, 3)), np.array([True, False, False]),
    ...     np.full(3, True), np.full(3, False))
    >>> runs = close_many(matrices, np.array([[10.0, 18.6, 19.6]]), np.array([[0.2, 0.4, 0.4]]))
    >>> runs.h.round(6).tolist(), runs.reconciled.round(6).tolist()
    ([6.5], [[9.7, 19.4, 19.4]])
    """
    y = np.asarray(values, dtype=np.float64)
    errors = _errors(sds, covariances)
    _check(matrices, y, errors)
    R, W = matrices.redundancy, matrices.calculated
    Z, f = _whiten(R, _along(R, y), errors)
    h = np.square(f).sum(axis=0)
    correction = np.einsum("rn,rnp->np", f, Z)
    reduction = np.einsum("rnp,rnp->np", Z, Z)
    reconciled = y - correction
    left = np.where(matrices.exact, 0.0, np.maximum(errors.variances - reduction, 0.0))
    tested = matrices.balanceable & ~matrices.exact
    with np.errstate(divide="ignore", invalid="ignore"):
        z = np.where(tested, correction / np.sqrt(reduction), np.nan)
    terms = _along(np.abs(R), np.abs(reconciled))
    off = np.abs(_along(R, reconciled)) / np.where(terms > 0, terms, 1.0)
    dof = len(R)
    limit = chi_squared_quantile(1 - SIGNIFICANCE, dof) if dof else np.nan
    undefined = np.full(len(y), np.nan)
    return ClosureArrays(
        dof=dof,
        limit=limit,
        h=h if dof else undefined,
        p=chi_squared_tails(h, dof) if dof else undefined,
        closes=h <= limit if dof else np.full(len(y), False),
        reconciled=reconciled,
        reconciled_sd=np.sqrt(left),
        z=z,
        calculated=_along(W, reconciled),
        calculated_sd=_sd_of_rows(W, Z, errors),
        residual=off.max(axis=1) if dof else np.zeros(len(y)),
        **_balances(matrices, y, errors),
    )


@dataclass(frozen=True, slots=True)
class _Independent:
    """Errors that know nothing of one another: sds, runs x values."""

    variances: Array

    def times(self, rows: Array) -> Array:
        """Rows times the covariance: rows x runs x values."""
        return np.asarray(rows[:, None, :] * self.variances)

    def between(self, left: Array, right: Array) -> Array:
        """The covariance of row i of one matrix with row i of another: runs x rows."""
        squares = left * right
        if not squares.any():
            return np.zeros((len(self.variances), len(left)))
        return _along(squares, self.variances)


@dataclass(frozen=True, slots=True)
class _Joint:
    """Errors with a covariance: runs x values x values."""

    matrix: Array

    @property
    def variances(self) -> Array:
        return np.asarray(np.einsum("nii->ni", self.matrix))

    def times(self, rows: Array) -> Array:
        """Rows times the covariance: rows x runs x values."""
        return np.asarray(np.moveaxis(rows @ self.matrix, 1, 0))

    def between(self, left: Array, right: Array) -> Array:
        """The covariance of row i of one matrix with row i of another: runs x rows."""
        return np.asarray((self.times(left) * right[:, None, :]).sum(axis=2).T)


_Errors = _Independent | _Joint


def _errors(sds: Array | None, covariances: Array | None) -> _Errors:
    if sds is not None and covariances is None:
        if not (np.asarray(sds) >= 0).all():
            raise MisuseError("a standard deviation is negative or no number")
        return _Independent(np.square(np.asarray(sds, dtype=np.float64)))
    if covariances is not None and sds is None:
        return _Joint(np.asarray(covariances, dtype=np.float64))
    raise MisuseError("give either sds or covariances")


def _check(matrices: ClosureMatrices, y: Array, errors: _Errors) -> None:
    width = len(matrices.exact)
    if y.ndim != 2 or y.shape[1] != width:
        raise MisuseError(f"values must be runs x {width}, not {y.shape}")
    if isinstance(errors, _Joint) and errors.matrix.shape != (*y.shape, width):
        raise MisuseError(f"the covariances must have the shape {(*y.shape, width)}")
    variances = errors.variances
    if variances.shape != y.shape:
        raise MisuseError(f"the errors of {y.shape} values have the shape {variances.shape}")
    given = errors.matrix if isinstance(errors, _Joint) else variances
    if not (np.isfinite(y).all() and np.isfinite(given).all()):
        raise MisuseError("values and errors must be finite numbers")
    if not ((variances == 0) == matrices.exact).all():
        raise MisuseError("an sd is zero exactly where the balances take the value as exact")


def _along(rows: Array, values: Array) -> Array:
    """Rows times the values of each run: runs x rows.

    Not ``values @ rows.T``: matrices this thin cost the library's threads more than they save.
    """
    return np.asarray(np.einsum("rp,np->nr", rows, values))


def _whiten(R: Array, e: Array, errors: _Errors) -> tuple[Array, Array]:
    """R V and R y divided by the Cholesky factor of P = R V R', for all runs at once.

    Z (dof x runs x values) and f (dof x runs): h is the sum of f^2, the correction that of
    f Z, the reduction of the variances that of Z^2, so neither can come out negative.
    """
    Z = errors.times(R)
    f = np.ascontiguousarray(e.T)
    for i in range(len(R)):
        for k in range(i):
            # Z[k] R[i] is the entry i, k of the factor: P_ik less what earlier rows took
            factor = np.einsum("np,p->n", Z[k], R[i])
            Z[i] -= factor[:, None] * Z[k]
            f[i] -= factor * f[k]
        pivot = np.einsum("np,p->n", Z[i], R[i])
        if not (pivot > _NO_ERROR * (errors.between(R[i : i + 1], R[i : i + 1])[:, 0])).all():
            raise NoVarianceError("the errors leave a relation that they should test without any")
        root = np.sqrt(pivot)
        Z[i] /= root[:, None]
        f[i] /= root
    return Z, f


def _sd_of_rows(rows: Array, Z: Array, errors: _Errors) -> Array:
    """The sd of rows over the reconciled values: runs x rows."""
    taken_off = np.square(Z @ rows.T).sum(axis=0)
    return np.asarray(np.sqrt(np.maximum(errors.between(rows, rows) - taken_off, 0.0)))


def _balances(matrices: ClosureMatrices, y: Array, errors: _Errors) -> dict[str, Array]:
    """What is taken up and released of each balance, the gap, the recovery, and their sds.

    Taken is what substrates bring; acceptors (which are taken up but hold less than nothing)
    stand with the products, as oxygen does in the electrons.
    """
    contents = matrices.contents
    up = np.where(matrices.inward, np.minimum(contents, 0.0), 0.0)
    out = contents - up
    taken, released = _along(np.abs(up), y), _along(out, y)
    above, below = errors.between(out, out), errors.between(up, up)
    across = errors.between(out, up)
    with np.errstate(divide="ignore", invalid="ignore"):
        recovery = np.where(taken > 0, released / taken, np.nan)
        spread = above + 2 * recovery * across + np.square(recovery) * below
        recovery_sd = np.sqrt(np.maximum(spread, 0.0)) / np.where(taken > 0, taken, np.nan)
    return {
        "taken": taken, "released": released, "gap": released - taken,
        "gap_sd": np.sqrt(np.maximum(above + 2 * across + below, 0.0)),
        "recovery": recovery, "recovery_sd": recovery_sd,
    }  # fmt: skip
