"""All variables of a linear problem as sums of those outside a basis, and pivots between bases.

The variables are the fluxes, then the value of each row. Every one of them is a linear function
of the fluxes, and as many of them as there are fluxes stand at a bound: the others follow.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from fluxnet.solving.problem import Problem

if TYPE_CHECKING:
    from fluxnet.exact.simplex import Place

__all__ = ["BasisTable"]

Vector = NDArray[np.float64]

_BASIC, _LOW, _HIGH, _FREE = 0, 1, 2, 3  # the numbers of exact.simplex.Place
_NEAR = 1e-9
_FRESH = 25
"""After so many pivots the table is made anew, so that rounding cannot pile up."""


class BasisTable:
    """A basis of the least ``cost`` in floats, while the value of one row is moved.

    ``outside`` are the variables at a bound, one a column of the table; ``table`` is what each
    variable changes by per unit of each of them; ``worth`` what the cost changes by. The moved
    row has its present value ``at`` as both of its bounds; ``column`` is its column, None while
    it is in the basis, and ``rates`` is what each variable changes by while it rises by one.
    """

    def __init__(
        self, problem: Problem, cost: Vector, moved: int, places: Sequence[Place], at: float
    ) -> None:
        count = len(problem.columns)
        self._all = np.vstack([np.eye(count), problem.matrix])
        self._cost = cost
        self.low = np.append(problem.column_low, problem.row_low)
        self.high = np.append(problem.column_high, problem.row_high)
        self.places = np.array([int(place) for place in places])
        self.moved = count + moved
        self.low[self.moved] = self.high[self.moved] = at
        self.outside = np.flatnonzero(self.places != _BASIC)
        self._pivots = 0
        found = np.flatnonzero(self.outside == self.moved)
        self.column = int(found[0]) if found.size else None
        self._make()

    def _make(self) -> None:
        """The table from the basis alone.

        Raises
        ------
        numpy.linalg.LinAlgError
            Where the places make no basis.
        """
        inverse = np.linalg.inv(self._all[self.outside])
        self.table = self._all @ inverse
        self.worth = self._cost @ inverse
        self.values = self.table @ self._held()
        self._turn()

    def _turn(self) -> None:
        """The rates at a new basis; traces are zero."""
        if self.column is not None:
            rates = self.table[:, self.column].copy()
            rates[np.abs(rates) <= _NEAR * np.abs(rates).max()] = 0.0
            rates[self.outside] = 0.0
            self._up, self._down = np.flatnonzero(rates > 0), np.flatnonzero(rates < 0)
            rates[self.moved] = 1.0
            self.rates = rates

    def _held(self) -> Vector:
        """The values of what stands at a bound."""
        places = self.places[self.outside]
        held = np.where(places == _HIGH, self.high[self.outside], self.low[self.outside])
        return np.where(places == _FREE, 0.0, held)

    @property
    def cost(self) -> float:
        """What the fluxes cost."""
        return float(self.worth @ self._held())

    def stopped(self) -> tuple[int, bool] | None:
        """The first variable of the basis at a bound that it is about to pass, and if upwards."""
        first: list[tuple[int, bool]] = []
        for upwards, moving in ((True, self._up), (False, self._down)):
            values = self.values[moving]
            left = self.high[moving] - values if upwards else values - self.low[moving]
            passed = moving[left <= _NEAR * np.maximum(1.0, np.abs(values))]
            if passed.size:
                first.append((int(passed[0]), upwards))
        return min(first) if first else None

    def room(self) -> float:
        """How far the moved row can rise until some variable meets a bound."""
        up, down = self._up, self._down
        steps = np.concatenate([
            (self.high[up] - self.values[up]) / self.rates[up],
            (self.low[down] - self.values[down]) / self.rates[down],
        ])  # fmt: skip
        return max(0.0, float(steps.min(initial=np.inf)))

    def rise(self, step: float) -> None:
        """Move the row up; all others follow."""
        self.values = self.values + step * self.rates
        self.low[self.moved] += step
        self.high[self.moved] += step

    def leave(self, leaving: int, *, upwards: bool) -> bool:
        """Take a variable out of the basis, at the bound that it is about to pass (dual step).

        What enters is what costs least for its effect, the first among equals (Bland 1977; from
        memory). False where nothing can keep the variable from passing its bound: then the
        moved row is at its end.
        """
        effects = self.table[leaving]
        places, wanted = self.places[self.outside], -1.0 if upwards else 1.0
        pushes = wanted * effects
        large = np.abs(effects) > _NEAR * np.abs(effects).max(initial=0.0)
        is_open = self.low[self.outside] < self.high[self.outside]
        may = large & is_open & (
            ((places == _LOW) & (pushes > 0)) | ((places == _HIGH) & (pushes < 0))
        )  # fmt: skip
        may |= large & (places == _FREE)
        columns = np.flatnonzero(may)
        if not columns.size:
            return False
        ratios = np.abs(self.worth[columns] / effects[columns])
        equal = columns[ratios <= ratios.min() + 1e-12 * (1.0 + ratios.min())]
        column = int(equal[np.argmin(self.outside[equal])])
        self._exchange(leaving, column, _HIGH if upwards else _LOW)
        return True

    def enter_moved(self) -> bool:
        """Take the moved row out of the basis, so that it can rise; False where it cannot."""
        return self.column is not None or self.leave(self.moved, upwards=False)

    def _exchange(self, leaving: int, column: int, place: int) -> None:
        entering = int(self.outside[column])
        self.places[entering], self.places[leaving] = _BASIC, place
        row = self.table[leaving].copy()
        pivot = row[column]
        row[column] = pivot - 1.0
        self.worth = self.worth - (self.worth[column] / pivot) * row
        self.table = self.table - np.outer(self.table[:, column] / pivot, row)
        self.outside[column] = leaving
        if leaving == self.moved:
            self.column = column
        self._pivots += 1
        if self._pivots % _FRESH == 0:
            self._make()
        else:
            self._turn()
