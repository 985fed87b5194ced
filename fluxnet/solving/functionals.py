"""Functionals of a fit: rows of its task, ratios of two of them, and any other rows."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.solving.chart import Point

__all__ = ["Drifting", "Functionals", "Joined", "Placed", "Ratios"]

Vector = NDArray[np.float64]
Places = NDArray[np.intp]


@record
class Placed:
    """The values of rows of the task, by their places."""

    places: Places

    def values(self, point: Point) -> Vector:
        """One value a row."""
        return point.values[self.places]

    def slopes(self, point: Point) -> Vector:
        """Their derivatives by the point's coordinates."""
        return point.slopes[self.places]

    def only(self, i: int) -> Placed:
        """The one at a place alone."""
        return Placed(self.places[i : i + 1])

    @property
    def curved(self) -> NDArray[np.bool_]:
        """Whether each bends where no uncertain number moves."""
        return np.zeros(len(self.places), dtype=bool)


@record
class Ratios:
    """Quotients of rows of the task."""

    over: Places
    below: Places

    def values(self, point: Point) -> Vector:
        """One quotient a pair; NaN where the lower one is zero."""
        below = point.values[self.below]
        quotients: Vector = point.values[self.over] / np.where(below == 0, np.nan, below)
        return quotients

    def slopes(self, point: Point) -> Vector:
        """Their derivatives by the point's coordinates."""
        values, below = self.values(point), point.values[self.below]
        top = point.slopes[self.over] - values[:, None] * point.slopes[self.below]
        slopes: Vector = top / np.where(below == 0, np.nan, below)[:, None]
        return slopes

    def only(self, i: int) -> Ratios:
        """The one at a place alone."""
        return Ratios(self.over[i : i + 1], self.below[i : i + 1])

    @property
    def curved(self) -> NDArray[np.bool_]:
        """Whether each bends where no uncertain number moves."""
        return np.ones(len(self.over), dtype=bool)


@record
class Drifting:
    """Rows over the fluxes that change in proportion to the uncertain numbers.

    ``rows`` (functionals x fluxes) are those at ``origin``, ``drift`` (numbers x functionals
    x fluxes) their derivatives.
    """

    rows: Vector
    drift: Vector
    origin: Vector

    def _rows(self, point: Point) -> Vector:
        moved = point.numbers - self.origin
        rows: Vector = self.rows + np.einsum("k,kij->ij", moved, self.drift)
        return rows

    def values(self, point: Point) -> Vector:
        """One value a row."""
        values: Vector = self._rows(point) @ point.fluxes
        return values

    def slopes(self, point: Point) -> Vector:
        """Their derivatives by the point's coordinates."""
        slopes: Vector = self._rows(point) @ point.tangent
        if len(self.origin):
            slopes[:, len(point.z) :] += (self.drift @ point.fluxes).T
        return slopes

    def only(self, i: int) -> Drifting:
        """The one at a place alone."""
        return Drifting(self.rows[i : i + 1], self.drift[:, i : i + 1], self.origin)

    @property
    def curved(self) -> NDArray[np.bool_]:
        """Whether each bends where no uncertain number moves."""
        return np.zeros(len(self.rows), dtype=bool)


@record
class Joined:
    """Several functionals, one behind the other."""

    parts: tuple[Placed | Ratios | Drifting, ...]

    def values(self, point: Point) -> Vector:
        """One value a functional."""
        return np.concatenate([part.values(point) for part in self.parts])

    def slopes(self, point: Point) -> Vector:
        """Their derivatives by the point's coordinates."""
        return np.vstack([part.slopes(point) for part in self.parts])

    def only(self, i: int) -> Placed | Ratios | Drifting:
        """The one at a place alone."""
        for part in self.parts:
            if i < len(part.curved):
                return part.only(i)
            i -= len(part.curved)
        raise IndexError(i)

    @property
    def curved(self) -> NDArray[np.bool_]:
        """Whether each bends where no uncertain number moves."""
        return np.concatenate([part.curved for part in self.parts])


Functionals = Placed | Ratios | Drifting | Joined
