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

    def each(self, points: Point, wanted: Places) -> tuple[Vector, Vector]:
        """Of many points, at each the value and slopes of one of them."""
        rows, every = self.places[wanted], np.arange(len(wanted))
        return points.values[every, rows], points.slopes[every, rows]

    def some(self, wanted: Places) -> Placed:
        """Those at some places among them, in rising order."""
        return Placed(self.places[wanted])

    @property
    def count(self) -> int:
        """How many there are."""
        return len(self.places)

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

    def each(self, points: Point, wanted: Places) -> tuple[Vector, Vector]:
        """Of many points, at each the value and slopes of one of them."""
        over, below = self.over[wanted], self.below[wanted]
        every = np.arange(len(wanted))
        size = points.values[every, below]
        size = np.where(size == 0, np.nan, size)
        values = points.values[every, over] / size
        top = points.slopes[every, over] - values[:, None] * points.slopes[every, below]
        return values, top / size[:, None]

    def some(self, wanted: Places) -> Ratios:
        """Those at some places among them, in rising order."""
        return Ratios(self.over[wanted], self.below[wanted])

    @property
    def count(self) -> int:
        """How many there are."""
        return len(self.over)

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

    def each(self, points: Point, wanted: Places) -> tuple[Vector, Vector]:
        """Of many points, at each the value and slopes of one of them."""
        rows = self.rows[wanted]
        if len(self.origin):
            moved = points.numbers - self.origin
            rows = rows + np.einsum("ek,kej->ej", moved, self.drift[:, wanted])
        values = np.einsum("ej,ej->e", rows, points.fluxes)
        slopes = (rows[:, None] @ points.tangent)[:, 0]
        if len(self.origin):
            own = np.einsum("kej,ej->ek", self.drift[:, wanted], points.fluxes)
            slopes[:, points.z.shape[1] :] += own
        return values, slopes

    def some(self, wanted: Places) -> Drifting:
        """Those at some places among them, in rising order."""
        return Drifting(self.rows[wanted], self.drift[:, wanted], self.origin)

    @property
    def count(self) -> int:
        """How many there are."""
        return len(self.rows)

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

    def each(self, points: Point, wanted: Places) -> tuple[Vector, Vector]:
        """Of many points, at each the value and slopes of one of them."""
        values, slopes = np.empty(len(wanted)), np.empty((len(wanted), points.slopes.shape[2]))
        start = 0
        for part in self.parts:
            stop = start + part.count
            inside = np.flatnonzero((wanted >= start) & (wanted < stop))
            if len(inside):
                found = part.each(points.some(inside), wanted[inside] - start)
                values[inside], slopes[inside] = found
            start = stop
        return values, slopes

    def some(self, wanted: Places) -> Joined:
        """Those at some places among them, in rising order."""
        parts, start = [], 0
        for part in self.parts:
            stop = start + part.count
            inside = wanted[(wanted >= start) & (wanted < stop)]
            if len(inside):
                parts.append(part.some(inside - start))
            start = stop
        return Joined(tuple(parts))

    @property
    def count(self) -> int:
        """How many there are."""
        return sum(part.count for part in self.parts)

    @property
    def curved(self) -> NDArray[np.bool_]:
        """Whether each bends where no uncertain number moves."""
        return np.concatenate([part.curved for part in self.parts])


Functionals = Placed | Ratios | Drifting | Joined
