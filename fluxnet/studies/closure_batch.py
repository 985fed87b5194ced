"""Closure of many runs with the same measured species, as one batch of array operations.

With y the measured values, V their covariance and R y = 0 the redundancy:

    e = R y,  P = R V R',  h = e' P^-1 e,
    reconciled y^ = y - V R' P^-1 e,  its covariance V - V R' P^-1 R V

(Wang & Stephanopoulos 1983; van der Heijden et al. 1994; formulas from memory). h is
chi-squared with as many degrees of freedom as R has rows.
"""

from __future__ import annotations

from dataclasses import field, fields, replace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.solving.statistics import chi_squared_quantile, chi_squared_tails
from fluxnet.studies.closure_errors import (
    Errors,
    Joint,
    NoVarianceError,
    Reduced,
    alike,
    along,
    errors_of,
    reduce_relations,
    sd_of_rows,
    sds_left,
    whiten,
)

__all__ = [
    "ClosureArrays", "ClosureMatrices", "NoVarianceError", "balances_of", "close_many",
    "close_with",
]  # fmt: skip

Array = NDArray[np.float64]
SIGNIFICANCE = 0.05
_ROUNDING = 1e-12
"""What is left of a value below this part of it is rounding."""


@record
class ClosureMatrices:
    """The rows that a closure needs, over the measured values of a run.

    ``redundancy`` (dof x values) is R; ``calculated`` (unmeasured x values) gives unmeasured
    rates; ``contents`` (balances x values) holds what one unit of each value releases of each
    balance that is shown, negative for uptake. ``inward`` (values that are uptakes),
    ``balanceable`` and ``exact`` are one a value. ``over`` and ``below`` (ratios x values) are
    numerators and denominators of ratios to be told.
    """

    redundancy: Array
    calculated: Array
    contents: Array
    inward: NDArray[np.bool_]
    balanceable: NDArray[np.bool_]
    exact: NDArray[np.bool_]
    over: Array | None = None
    below: Array | None = None

    def __post_init__(self) -> None:
        width = len(self.exact)
        for name in ("redundancy", "calculated", "contents", "over", "below"):
            if getattr(self, name) is None:
                object.__setattr__(self, name, np.zeros((0, width)))
            array = getattr(self, name)
            if array.ndim != 2 or array.shape[1] != width or not np.isfinite(array).all():
                raise MisuseError(f"{name} must be finite, with {width} columns")
            array.setflags(write=False)


@record
class ClosureArrays:
    """The closure of many runs: arrays of runs x what they tell, all in the unit of the run.

    ``h``, ``p``, ``closes``, ``residual`` are one a run; ``reconciled``, ``reconciled_sd`` and
    ``z`` (measured less reconciled, over its sd) runs x values; ``calculated`` and its sd runs
    x unmeasured; ``ratio``, its sd and ``denominator`` runs x ratios; ``taken``, ``released``,
    ``gap``, ``gap_sd``, ``recovery`` (a fraction) and ``recovery_sd`` runs x balances. NaN
    stands where a number is not defined: h without redundancy, z of a value that no balance
    tests, a ratio to nothing, recovery where nothing is taken up.
    ``residual`` is the largest |R y^| over the sum of its terms' magnitudes; ``errors`` are
    those that it was closed with.
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
    ratio: Array
    ratio_sd: Array
    denominator: Array
    taken: Array
    released: Array
    gap: Array
    gap_sd: Array
    recovery: Array
    recovery_sd: Array
    residual: Array = field(repr=False)
    errors: Errors = field(repr=False)


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
    return close_with(matrices, values, errors_of(sds, covariances))


def close_with(matrices: ClosureMatrices, values: Array, errors: Errors) -> ClosureArrays:
    """Close many runs with errors of either kind; as :func:`close_many`."""
    y = np.asarray(values, dtype=np.float64)
    _check(matrices, y, errors)
    groups = alike(errors)
    if len(groups) < 2:
        return _close(matrices, y, errors)
    parts = [_close(matrices, y[places], errors.some(places)) for places in groups]
    order = np.argsort(np.concatenate(groups), kind="stable")
    joined: dict[str, Any] = {
        f.name: np.concatenate([getattr(part, f.name) for part in parts])[order]
        for f in fields(ClosureArrays)
        if isinstance(getattr(parts[0], f.name), np.ndarray)
    }
    return replace(parts[0], errors=errors, **joined)


def _close(matrices: ClosureMatrices, y: Array, errors: Errors) -> ClosureArrays:
    """Close runs whose sds are much alike, or differ by a common factor."""
    R, W = matrices.redundancy, matrices.calculated
    sds = np.sqrt(errors.variances[0]) if len(y) else (~matrices.exact).astype(np.float64)
    reduced = reduce_relations(R, sds)
    Z, f = whiten(reduced, y, errors)
    h = np.square(f).sum(axis=0)
    correction = np.einsum("rn,rnp->np", f, Z)
    reduction = np.einsum("rnp,rnp->np", Z, Z)
    reconciled = _settled(y, reduced, y - correction)
    tested = matrices.balanceable & ~matrices.exact
    with np.errstate(divide="ignore", invalid="ignore"):
        z = np.where(tested, correction / np.sqrt(reduction), np.nan)
    terms = along(np.abs(R), np.abs(reconciled))
    off = np.abs(along(R, reconciled)) / np.where(terms > 0, terms, 1.0)
    calculated = along(W, reconciled)
    if len(W):
        calculated[np.abs(calculated) <= _ROUNDING * along(np.abs(W), np.abs(y))] = 0.0
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
        reconciled_sd=np.where(
            matrices.exact, 0.0, sd_of_rows(np.eye(y.shape[1]), reduced, Z, errors)
        ),
        z=z,
        calculated=calculated,
        calculated_sd=sd_of_rows(W, reduced, Z, errors),
        residual=off.max(axis=1) if dof else np.zeros(len(y)),
        errors=errors,
        **_ratios(matrices, reconciled, Z, errors),
        **balances_of(matrices, y, errors),
    )


def _settled(y: Array, reduced: Reduced, reconciled: Array) -> Array:
    """Reconciled values that keep the relations; one of which rounding is left is nothing."""
    reconciled[np.abs(reconciled) <= _ROUNDING * np.abs(y)] = 0.0
    return reduced.settled(reconciled)


def _ratios(
    matrices: ClosureMatrices, reconciled: Array, Z: Array, errors: Errors
) -> dict[str, Array]:
    """Ratios A / B of reconciled values, their sds those of (A - ratio B) / B, and B."""
    if matrices.over is None or matrices.below is None or not len(matrices.over):
        none = np.zeros((len(reconciled), 0))
        return {"ratio": none, "ratio_sd": none, "denominator": none}
    below = along(matrices.below, reconciled)
    with np.errstate(divide="ignore", invalid="ignore"):
        ratio = np.where(below != 0, along(matrices.over, reconciled) / below, np.nan)
    rows = matrices.over - ratio[:, :, None] * matrices.below
    taken_off = np.square(np.einsum("rnp,nkp->rnk", Z, rows)).sum(axis=0)
    with np.errstate(divide="ignore", invalid="ignore"):
        sd = sds_left(errors.of_rows(rows), taken_off) / np.abs(below)
    return {"ratio": ratio, "ratio_sd": sd, "denominator": below}


def _check(matrices: ClosureMatrices, y: Array, errors: Errors) -> None:
    width = len(matrices.exact)
    if y.ndim != 2 or y.shape[1] != width:
        raise MisuseError(f"values must be runs x {width}, not {y.shape}")
    if isinstance(errors, Joint) and errors.matrix.shape != (*y.shape, width):
        raise MisuseError(f"the covariances must have the shape {(*y.shape, width)}")
    variances = errors.variances
    if variances.shape != y.shape:
        raise MisuseError(f"the errors of {y.shape} values have the shape {variances.shape}")
    given = errors.matrix if isinstance(errors, Joint) else variances
    if not (np.isfinite(y).all() and np.isfinite(given).all()):
        raise MisuseError("values and errors must be finite numbers")
    if not ((variances == 0) == matrices.exact).all():
        raise MisuseError("an sd is zero exactly where the balances take the value as exact")


def balances_of(matrices: ClosureMatrices, y: Array, errors: Errors) -> dict[str, Array]:
    """What is taken up and released of each balance, the gap, the recovery, and their sds.

    Taken is what substrates bring; acceptors (which are taken up but hold less than nothing)
    stand with the products, as oxygen does in the electrons.
    """
    contents = matrices.contents
    up = np.where(matrices.inward, np.minimum(contents, 0.0), 0.0)
    out = contents - up
    taken, released = along(np.abs(up), y), along(out, y)
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
