"""Least squares with non-negative unknowns, and the least-distance problem that rests on it.

Slow, short and without tolerances that depend on a scale of the user's: the judge that is
asked when the fast solver's answer does not pass its check.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record

__all__ = ["LeastDistance", "find_least_distance", "solve_nonnegative"]

Vector = NDArray[np.float64]
_EPS = 2.0**-52


def solve_nonnegative(matrix: Vector, right: Vector) -> tuple[Vector, Vector]:
    """Minimise ||A x - b|| subject to x >= 0 by the active-set method of Lawson and Hanson.

    Lawson & Hanson 1974, Solving Least Squares Problems, chapter 23 (from memory).

    Parameters
    ----------
    matrix
        A, rows x unknowns.
    right
        b, one number a row.

    Returns
    -------
    x, residual
        The unknowns, and b - A x.

    Examples
    --------
    >>> x, residual = solve_nonnegative(np.eye(2), np.array([1.0, -1.0]))
    >>> x.tolist(), residual.tolist()
    ([1.0, 0.0], [0.0, -1.0])
    """
    count = matrix.shape[1]
    x = np.zeros(count)
    passive = np.zeros(count, dtype=bool)
    residual = right.copy()
    tolerance = 10 * _EPS * (np.linalg.norm(matrix, axis=0) * np.linalg.norm(right) + _EPS)
    barred = np.zeros(count, dtype=bool)
    for _ in range(10 * count + 30):
        gradient = matrix.T @ residual
        gradient[passive | barred] = -np.inf
        if count == 0 or not (gradient > tolerance).any():
            break
        entering = int(np.argmax(gradient))
        passive[entering] = True
        trial = _restricted(matrix, right, passive)
        if trial[entering] <= 0:
            # Rounding made it look worth entering: it is not, until something else moves.
            passive[entering] = False
            barred[entering] = True
            continue
        while (trial[passive] <= 0).any():
            shrink = passive & (trial <= 0)
            step = np.min(x[shrink] / (x[shrink] - trial[shrink]))
            x = x + step * (trial - x)
            passive &= x > _EPS * max(1.0, float(np.abs(x).max()))
            x[~passive] = 0.0
            trial = _restricted(matrix, right, passive)
        x = trial
        barred[:] = False
        residual = right - matrix @ x
    return x, residual


def _restricted(matrix: Vector, right: Vector, passive: NDArray[np.bool_]) -> Vector:
    """The unconstrained least-squares answer with the other unknowns at zero."""
    out = np.zeros(matrix.shape[1])
    if passive.any():
        out[passive] = np.linalg.lstsq(matrix[:, passive], right, rcond=None)[0]
    return out


@record
class LeastDistance:
    """The point of G x >= g nearest to the origin, or a proof that there is none.

    ``multipliers`` are those of the rows at the point; where ``x`` is None they are weights
    w >= 0 with G' w = 0 and g w = 1, which no x can satisfy.
    """

    x: Vector | None
    multipliers: Vector


def find_least_distance(rows: Vector, bounds: Vector) -> LeastDistance:
    """Minimise ||x|| subject to G x >= g.

    By :func:`solve_nonnegative` of [G'; g'] w = (0, ..., 0, 1): a residual of zero proves
    that no x exists; otherwise the residual's direction is the point (Lawson & Hanson 1974,
    chapter 23; from memory).

    Parameters
    ----------
    rows
        G, rows x unknowns, each of norm about 1.
    bounds
        g, one number a row.

    Examples
    --------
    >>> find_least_distance(np.array([[1.0, 1.0]]), np.array([2.0])).x.round(12).tolist()
    [1.0, 1.0]
    >>> find_least_distance(np.array([[1.0], [-1.0]]), np.array([2.0, -1.0])).x is None
    True
    """
    count = rows.shape[1]
    size = max(1.0, float(np.abs(bounds).max(initial=0.0)))
    stacked = np.vstack([rows.T, bounds[None, :] / size])
    weights, residual = solve_nonnegative(stacked, np.r_[np.zeros(count), 1.0])
    if np.linalg.norm(residual) < 1e-9:
        return LeastDistance(None, weights)
    # The residual is (-G' w, 1 - g w), and the point is G' w over 1 - g w. That is the square
    # of the residual's norm (it stands upright on what was fitted), which cancels nothing.
    left = float(residual @ residual)
    return LeastDistance(-size * residual[:count] / left, weights * size / left)
