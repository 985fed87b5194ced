"""Growth and specific rates over a phase, over trials of the raw data.

ln(X V) is described by the plainest curve that the samples allow: a straight line, a parabola,
a cubic, else straight lines from sample to sample. Its integral is the biomass at work, against
which the amounts are regressed. The weights know that both the amounts and that integral are
uncertain, and that the errors of the integral run along the whole phase.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.cultivation.broth_state import State
from fluxnet.ground.record import record
from fluxnet.solving.statistics import chi_squared_tail

__all__ = [
    "CURVES", "GrowthCurve", "Regression", "choose_curve", "grown_mass", "integral", "inverse",
    "mean_growth", "slope",
]  # fmt: skip

Array = NDArray[np.float64]

CURVES = ("mean", "straight line", "parabola", "cubic", "points")
_STEPS = 8
_ALPHA = 0.05


@record
class GrowthCurve:
    """ln(X V / kept) as a linear function of its values at the samples of a phase.

    ``first`` and ``last`` are the nodes of the phase; ``samples`` the biomass samples in it,
    ``nodes_of`` the nodes at which they stand. ``fine`` (intervals x steps x samples) gives
    the curve between nodes. ``h`` with ``dof`` tests the curve that was chosen, and ``straight``
    is the p of a straight line.
    """

    first: int
    last: int
    samples: NDArray[np.intp]
    nodes_of: NDArray[np.intp]
    fine: Array
    widths: Array
    name: str
    h: float
    dof: int
    straight: float | None


def choose_curve(
    nodes: Array, first: int, last: int, time: Array, logs: Array, sd: Array
) -> GrowthCurve:
    """The plainest polynomial, up to a cubic, that the samples of a phase do not reject at 5 %.

    Parameters
    ----------
    time, logs, sd
        All biomass samples: time, ln(X V / kept), relative sd of their own errors.
    """
    slack = 1e-9
    inside = np.flatnonzero((time >= nodes[first] - slack) & (time <= nodes[last] + slack))
    t, y, s = time[inside], logs[inside], np.maximum(sd[inside], 1e-6)
    steps = np.linspace(0.0, 1.0, _STEPS + 1)
    start, end = nodes[first:last], nodes[first + 1 : last + 1]
    grid = start[:, None] + (end - start)[:, None] * steps
    middle, span = (t[0] + t[-1]) / 2, max(float(t[-1] - t[0]) / 2, 1e-9)
    straight: float | None = None
    chosen: tuple[Array, str, float, int] | None = None
    for degree in (1, 2, 3):
        if t.size < degree + 1 or (degree > 1 and t.size < degree + 3):
            break
        columns = np.vander((t - middle) / span, degree + 1)
        solve = np.linalg.pinv(columns / s[:, None]) / s
        rest = (y - columns @ (solve @ y)) / s
        h, dof = float(rest @ rest), t.size - degree - 1
        p = chi_squared_tail(h, dof) if dof else 1.0
        straight = p if degree == 1 and dof else straight
        if p >= _ALPHA:
            matrix = np.vander((grid.ravel() - middle) / span, degree + 1) @ solve
            chosen = (matrix, CURVES[degree], h, dof)
            break
    if chosen is None:
        eye = np.eye(t.size)
        matrix = np.stack([np.interp(grid.ravel(), t, row) for row in eye], axis=1)
        chosen = (matrix, "points", 0.0, 0)
    matrix, name, h, dof = chosen
    return GrowthCurve(
        first, last, inside, np.searchsorted(nodes, t - slack), matrix.reshape(*grid.shape, t.size),
        end - start, name, h, dof, straight,
    )  # fmt: skip


def _along(curve: GrowthCurve, biomass: Array, state: State) -> tuple[Array, Array]:
    """X V / kept and kept: trials x intervals x steps."""
    logs = np.log(
        biomass[:, curve.samples] * state.level[:, curve.nodes_of] / state.kept[:, curve.nodes_of]
    )
    grown = np.exp(np.einsum("isk,bk->bis", curve.fine, logs))
    steps = np.linspace(0.0, 1.0, curve.fine.shape[1])
    after = state.after[:, curve.first : curve.last, None]
    later = state.kept[:, curve.first + 1 : curve.last + 1, None]
    return grown, after + (later - after) * steps


def integral(curve: GrowthCurve, biomass: Array, state: State) -> Array:
    """The biomass at work since the phase began, at its nodes [g h]: trials x nodes."""
    grown, kept = _along(curve, biomass, state)
    weights = np.ones(_STEPS + 1)
    weights[1:-1:2], weights[2:-1:2] = 4.0, 2.0
    parts = (grown * kept) @ (weights / (3 * _STEPS)) * curve.widths
    total = np.zeros((len(biomass), curve.widths.size + 1))
    total[:, 1:] = np.cumsum(parts, axis=1)
    return total


def grown_mass(curve: GrowthCurve, biomass: Array, state: State) -> Array:
    """Biomass made in the phase [g]: one a trial."""
    grown, kept = _along(curve, biomass, state)
    middle = (kept[:, :, 1:] + kept[:, :, :-1]) / 2
    return np.asarray((np.diff(grown, axis=2) * middle).sum(axis=(1, 2)))


def mean_growth(curve: GrowthCurve, biomass: Array, state: State) -> Array:
    """Mu of the phase [1/h]: biomass made over biomass at work. Of a straight line, its slope."""
    return np.asarray(
        grown_mass(curve, biomass, state) / integral(curve, biomass, state)[:, -1]
    )


@record
class Regression:
    """How the amounts of one species are regressed: its samples in the phase and their weights.

    ``weights`` is the inverse of the covariance of the samples about one rate.
    """

    name: str
    samples: NDArray[np.intp]
    nodes_of: NDArray[np.intp]
    weights: Array


def slope(regression: Regression, made: Array, work: Array) -> tuple[Array, Array]:
    """The rate [mmol/g/h] and the amount at the start of the phase, of every trial.

    Generalised least squares of ``made`` (trials x samples) on a constant and ``work``
    (trials x nodes of the phase).
    """
    y, x = made[:, regression.samples], work[:, regression.nodes_of]
    k = regression.weights
    one = k.sum(axis=0)
    xk = x @ k
    s11, s1x, sxx = float(one.sum()), x @ one, (xk * x).sum(axis=1)
    s1y, sxy = y @ one, (xk * y).sum(axis=1)
    below = s11 * sxx - s1x**2
    rate = (s11 * sxy - s1x * s1y) / below
    return rate, (s1y - rate * s1x) / s11


def inverse(covariance: Array) -> Array:
    """The inverse of a covariance that may be almost singular."""
    scale = np.sqrt(np.maximum(np.diag(covariance), 1e-300))
    inner = covariance / np.outer(scale, scale) + 1e-9 * np.eye(scale.size)
    return np.asarray(np.linalg.inv(inner) / np.outer(scale, scale))


