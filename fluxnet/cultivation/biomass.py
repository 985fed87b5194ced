"""Optical density to dry weight, by calibration samples; and what the dry weight is of."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from fluxnet.chemistry.formula import Formula, molar_mass
from fluxnet.cultivation.errors import Mode
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.rates.cultivation import CalibrationPoint

__all__ = [
    "DENSITY_SD", "DensityCurve", "carbon_mole_mass", "dry_weight_modes", "fit_calibration",
    "free_of_ash",
]  # fmt: skip

Array = NDArray[np.float64]

DENSITY_SD = 0.04
"""Relative sd of a single dry weight (common practice; 0.02 of four together)."""

_CURVED = 0.01
"""Below this p the curvature is taken in."""


@record
class DensityCurve:
    """Dry weight = slope OD + curvature OD^2 [g/L]; no dry weight without optical density.

    ``covariance`` (2 x 2) is that of slope and curvature; all zero for a curvature left out.
    ``curvature_tested`` is the curvature and its sd where it was tried, taken in or not.
    ``scatter`` is the sum of squares over its sds and degrees of freedom: above 1 the points
    scatter more than their sds say, and the covariance has been widened by it.
    """

    slope: float
    curvature: float
    covariance: Array
    lowest: float
    highest: float
    points: int
    scatter: float
    curvature_tested: tuple[float, float] | None

    def interval(self, index: int = 0) -> tuple[float, float]:
        """The 95 % interval of slope (0) or curvature (1)."""
        value = (self.slope, self.curvature)[index]
        half = 1.959964 * float(np.sqrt(self.covariance[index, index]))
        return value - half, value + half

    def dry_weight(self, optical_density: Array) -> Array:
        """Dry weight at an optical density [g/L]."""
        return np.asarray(self.slope * optical_density + self.curvature * optical_density**2)

    def slope_at(self, optical_density: Array) -> Array:
        """The shift of dry weight per unit of optical density."""
        return np.asarray(self.slope + 2 * self.curvature * optical_density)

    def beyond(self, optical_density: Array) -> NDArray[np.bool_]:
        """Which readings lie outside the calibrated range."""
        return (optical_density > self.highest * (1 + 1e-9)) | (optical_density < 0)


def fit_calibration(points: Sequence[CalibrationPoint]) -> DensityCurve:
    """Weighted least squares through the origin; a curvature only where it is told apart.

    Sds that were not given are 4 % of the dry weight. Where the points scatter more than their
    sds say, the covariance is widened by as much.

    Raises
    ------
    MisuseError
        With fewer than two points, or none above zero.

    Examples
    --------
    >>> curve = fit_calibration([CalibrationPoint(d, 0.4 * d) for d in (1.0, 2.0, 4.0)])
    >>> round(curve.slope, 6), curve.curvature, curve.highest
    (0.4, 0.0, 4.0)
    """
    density = np.array([p.optical_density for p in points], dtype=np.float64)
    weight = np.array([p.dry_weight for p in points], dtype=np.float64)
    if density.size < 2 or not ((density > 0) & (weight > 0)).all():
        raise MisuseError("a calibration needs two samples at least, all above zero")
    given = np.array([np.nan if p.sd is None else p.sd for p in points])
    line = float(np.sum(weight * density / density**2) / density.size)
    sd = np.where(np.isnan(given), DENSITY_SD * line * density, given)
    sd = np.maximum(sd, 1e-9 * weight)
    straight, straight_cov, straight_rest = _solve(density[:, None], weight, sd)
    tested = None
    if density.size >= 4:
        columns = np.stack([density, density**2], axis=1)
        both, both_cov, rest = _solve(columns, weight, sd)
        wide = max(rest / (density.size - 2), 1.0)
        tested = (float(both[1]), float(np.sqrt(both_cov[1, 1] * wide)))
        if _is_curved(both[1] ** 2 / (both_cov[1, 1] * wide)):
            return DensityCurve(
                float(both[0]), float(both[1]), both_cov * wide, float(density.min()),
                float(density.max()), density.size, rest / (density.size - 2), tested,
            )  # fmt: skip
    free = density.size - 1
    covariance = np.zeros((2, 2))
    covariance[0, 0] = straight_cov[0, 0] * max(straight_rest / free, 1.0)
    return DensityCurve(
        float(straight[0]), 0.0, covariance, float(density.min()), float(density.max()),
        density.size, straight_rest / free, tested,
    )  # fmt: skip


def _is_curved(square: float) -> bool:
    from fluxnet.solving.statistics import chi_squared_tail

    return chi_squared_tail(float(square), 1) < _CURVED


def _solve(columns: Array, values: Array, sd: Array) -> tuple[Array, Array, float]:
    """Coefficients, covariance and the weighted sum of squares."""
    scaled = columns / sd[:, None]
    covariance = np.linalg.inv(scaled.T @ scaled)
    found = covariance @ scaled.T @ (values / sd)
    rest = float(np.sum(((values - columns @ found) / sd) ** 2))
    return found, np.asarray(covariance, dtype=np.float64), rest


def dry_weight_modes(curve: DensityCurve, optical_density: Array) -> tuple[Mode, ...]:
    """The shared errors of dry weights that a calibration gives: slope, and curvature.

    The first is the relative error of all of them alike (the slope alone, or the part of slope
    and curvature that stretches the curve), the second what bends it.
    """
    values, vectors = np.linalg.eigh(curve.covariance)
    shifts = [
        Mode(
            f"calibration of optical density ({word})",
            float(np.sqrt(max(size, 0.0)))
            * (vector[0] * optical_density + vector[1] * optical_density**2),
        )
        for word, size, vector in zip(("bend", "slope"), values, vectors.T, strict=True)
    ]
    return tuple(mode for mode in reversed(shifts) if mode.shift.any())


def carbon_mole_mass(formula: Formula, ash: float = 0.0, moisture: float = 0.0) -> float:
    """Grams of dry weight that hold one mole of carbon [g/C-mol].

    M / (1 - ash - moisture) per carbon: ash and moisture are weighed and hold no carbon.

    Raises
    ------
    MisuseError
        Where the formula holds no carbon, or ash and moisture leave nothing.

    Examples
    --------
    >>> from fluxnet.chemistry.reader import read_formula
    >>> round(carbon_mole_mass(read_formula("CH1.8O0.5N0.2"), ash=0.08), 2)
    26.77
    """
    carbon = float(formula.count("C"))
    if not carbon:
        raise MisuseError("biomass without carbon has no C-mol")
    return molar_mass(formula) / carbon / free_of_ash(ash, moisture)


def free_of_ash(ash: float, moisture: float) -> float:
    """The part of a dry weight that the formula describes."""
    left = 1.0 - ash - moisture
    if ash < 0 or moisture < 0 or left <= 0:
        raise MisuseError(f"ash {ash:g} and moisture {moisture:g} are no parts of a dry weight")
    return left
