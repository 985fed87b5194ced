"""Smoothing splines as matrices: linear in the values once their stiffness is chosen.

The stiffness is that of least generalised cross-validation (Craven & Wahba 1979; from memory):
n |W^(1/2) (y - H y)|^2 / (n - tr H)^2. It is chosen at the measured values and then held, so
that the band of a spline is what the errors of the values make of it.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record

__all__ = ["FEWEST", "Smoother", "roughness", "smooth"]

Array = NDArray[np.float64]

FEWEST = 5
"""Samples that a smoothing spline needs."""

_GRID = np.linspace(-9.0, 3.0, 241)


@record
class Smoother:
    """Matrices from values to the spline at chosen times: its value and its slope."""

    value: Array
    slope: Array
    stiffness: float
    freedom: float
    """The trace of H: about how many numbers the curve is described by."""


def smooth(time: Array, values: Array, sd: Array, at: Array) -> Smoother:
    """The spline of least cross-validation through values with sds, as matrices at some times.

    Parameters
    ----------
    time
        At least five, increasing.
    at
        Where the spline is wanted.

    Examples
    --------
    >>> t = np.linspace(0.0, 4.0, 9)
    >>> found = smooth(t, 2 * t + 1, np.full(9, 0.1), np.array([1.5]))
    >>> (found.value @ (2 * t + 1)).round(6).tolist(), (found.slope @ (2 * t + 1)).round(6).tolist()
    ([4.0], [2.0])
    """
    from scipy.interpolate import make_smoothing_spline

    weights = 1.0 / np.maximum(sd, 1e-9 * max(float(np.abs(values).max()), 1e-300)) ** 2
    weights = weights / weights.mean()
    scale = float(np.ptp(time)) ** 3
    eye = np.eye(time.size)

    root = np.sqrt(weights)
    sizes, vectors = np.linalg.eigh(roughness(time) / np.outer(root, root))
    sizes = np.maximum(sizes, 0.0)
    parts = vectors.T @ (root * values)
    grid = scale * 10.0**_GRID
    lost = 1 - 1 / (1 + np.outer(grid, sizes))
    free = lost.sum(axis=1)
    score = (lost**2 @ parts**2) / np.maximum(free, 0.5) ** 2
    best = float(grid[int(np.argmin(np.where(free > 0.5, score, np.inf)))])
    spline = make_smoothing_spline(time, eye, weights, best)
    return Smoother(
        np.asarray(spline(at)), np.asarray(spline.derivative()(at)), best,
        float(np.sum(1 / (1 + best * sizes))),
    )  # fmt: skip


def roughness(time: Array) -> Array:
    """The matrix K with v' K v the integral of the squared second derivative.

    Of the natural cubic spline through values v: K = Q R^-1 Q' (Reinsch 1967; from memory).
    """
    steps, count = np.diff(time), time.size
    q, r = np.zeros((count, count - 2)), np.zeros((count - 2, count - 2))
    inner = np.arange(count - 2)
    q[inner, inner] = 1 / steps[:-1]
    q[inner + 1, inner] = -1 / steps[:-1] - 1 / steps[1:]
    q[inner + 2, inner] = 1 / steps[1:]
    r[inner, inner] = (steps[:-1] + steps[1:]) / 3
    r[inner[1:], inner[:-1]] = r[inner[:-1], inner[1:]] = steps[1:-1] / 6
    return np.asarray(q @ np.linalg.solve(r, q.T))
