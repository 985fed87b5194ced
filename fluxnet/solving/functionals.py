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

    def some(self, wanted: Places) -> Placed:
        """Those at some places among them, in rising order."""
        return Placed(self.places[wanted])

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

    def some(self, wanted: Places) -> Ratios:
        """Those at some places among them, in rising order."""
        return Ratios(self.over[wanted], self.below[wanted])

    @property
    def curved(self) -> NDArray[np.bool_]:
        """Whether each bends where no uncertain number moves."""
        return np.ones(len(self.over), dtype=bool)


@record
class Drifting:
    """Rows over the fluxes that change in proportion to the uncertain numbers.

    ``rows`` (functionals x fluxes) are those at ``origin``, ``drift`` (numbers x functionals
    x fluxes) their derivatives; both are without entries where the rows stay as they are.
    """

    rows: Vector
    drift: Vector
    origin: Vector

    def _rows(self, point: Point) -> Vector:
        if not len(self.origin):
            return self.rows
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

    def some(self, wanted: Places) -> Drifting:
        """Those at some places among them, in rising order."""
        return Drifting(self.rows[wanted], self.drift[:, wanted], self.origin)

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

    def some(self, wanted: Places) -> Joined:
        """Those at some places among them, in rising order."""
        parts, start = [], 0
        for part in self.parts:
            stop = start + len(part.curved)
            inside = wanted[(wanted >= start) & (wanted < stop)]
            if len(inside):
                parts.append(part.some(inside - start))
            start = stop
        return Joined(tuple(parts))

    @property
    def curved(self) -> NDArray[np.bool_]:
        """Whether each bends where no uncertain number moves."""
        return np.concatenate([part.curved for part in self.parts])


Functionals = Placed | Ratios | Drifting | Joined
