"""A basis of an exact programme, and one step from it to another."""

from __future__ import annotations

from collections.abc import Sequence
from enum import IntEnum
from typing import Any

from flint import fmpq

from fluxnet.exact.factors import Factors, factorise
from fluxnet.exact.programme import ExactProgramme

__all__ = ["Pivoting", "Place"]

_ZERO, _ONE = fmpq(0), fmpq(1)


class Place(IntEnum):
    """Where a variable stands: in the basis, at a bound, or (without bounds) at zero."""

    BASIC = 0
    LOW = 1
    HIGH = 2
    FREE = 3


class Pivoting:
    """Where every variable stands: the columns, then the rows (each row's value).

    ``values`` are those of the basis, ``prices`` those of the rows, ``worth`` what the costs
    change by per unit of each variable outside the basis.
    """

    def __init__(self, programme: ExactProgramme, places: Sequence[Place]) -> None:
        self.programme = programme
        self.places = [self._held(k, place) for k, place in enumerate(places)]
        self.values: list[Any] = []
        self.prices: list[Any] = []
        self.worth: list[Any] = []
        self.factors = self._factorised()

    # --- the basis -------------------------------------------------------------------

    def _held(self, k: int, place: Place) -> Place:
        """A place that the bounds allow."""
        if place is Place.BASIC:
            return place
        low, high = self.programme.low[k], self.programme.high[k]
        if low is None and high is None:
            return Place.FREE
        if place is Place.HIGH and high is not None:
            return place
        return Place.HIGH if low is None else Place.LOW

    def _split(self) -> tuple[list[int], list[int]]:
        """The columns in the basis, and the rows outside of it."""
        count, places = self.programme.columns, self.places
        columns = [j for j in range(count) if places[j] is Place.BASIC]
        rows = [i for i in range(len(self.programme.rows)) if places[count + i] is not Place.BASIC]
        return columns, rows

    def _factorised(self) -> Factors:
        columns, rows = self._split()
        factors = factorise([(i, self.programme.rows[i]) for i in rows], columns)
        if factors.is_regular:
            return factors
        # Columns without a pivot leave the basis, and rows without one enter it.
        for j in factors.columns:
            self.places[j] = self._held(j, Place.LOW)
        for i in factors.rows:
            self.places[self.programme.columns + i] = Place.BASIC
        return self._factorised()

    def refresh(self, costs: dict[int, Any]) -> None:
        """Values, prices and what a step of each variable changes, from the basis alone."""
        programme, count = self.programme, self.programme.columns
        values = [_ZERO] * (count + len(programme.rows))
        for k, place in enumerate(self.places):
            if place is Place.LOW:
                values[k] = programme.low[k]
            elif place is Place.HIGH:
                values[k] = programme.high[k]
        _, rows = self._split()
        right: dict[int, Any] = {}
        for i in rows:
            left = values[count + i] - programme.value_of(i, values)
            if left:
                right[i] = left
        for j, value in self.factors.solve(right).items():
            values[j] = value
        for i in range(len(programme.rows)):
            if self.places[count + i] is Place.BASIC:
                values[count + i] = programme.value_of(i, values)
        self.values = values
        self.reprice(costs)

    def reprice(self, costs: dict[int, Any]) -> None:
        """Prices alone."""
        programme, count = self.programme, self.programme.columns
        basic = {j: c for j, c in costs.items() if self.places[j] is Place.BASIC}
        prices = [_ZERO] * len(programme.rows)
        worth = [_ZERO] * (count + len(prices))
        for j, c in costs.items():
            worth[j] = c
        for i, price in self.factors.solve_turned(basic).items():
            prices[i] = worth[count + i] = price
            for j, a in programme.rows[i].items():
                worth[j] -= price * a
        self.prices, self.worth = prices, worth

    # --- what is not right -----------------------------------------------------------

    def first_outside(self) -> int | None:
        """The first variable of the basis that breaks a bound."""
        for k, place in enumerate(self.places):
            if place is Place.BASIC and self._break(k):
                return k
        return None

    def _break(self, k: int) -> Any:
        """By how much a variable has to rise (or, negative, fall) to meet its bounds."""
        low, high, value = self.programme.low[k], self.programme.high[k], self.values[k]
        if low is not None and value < low:
            return low - value
        if high is not None and value > high:
            return high - value
        return _ZERO

    def first_gain(self) -> int | None:
        """The first variable outside the basis whose step would lower the costs."""
        for k, worth in enumerate(self.worth):
            if worth and self.may_go(k, -1 if worth > 0 else 1):
                return k
        return None

    def may_go(self, k: int, way: int) -> bool:
        """Whether a variable outside the basis has room to rise (1) or to fall (-1)."""
        place, low, high = self.places[k], self.programme.low[k], self.programme.high[k]
        if place is Place.BASIC or (low is not None and low == high):
            return False
        return place is Place.FREE or (place is Place.LOW) is (way > 0)

    # --- pivots ----------------------------------------------------------------------

    def follow(self, entering: int, costs: dict[int, Any]) -> list[Any] | None:
        """Let a variable enter (primal step); where nothing stops it, the direction."""
        way = _ONE if self.worth[entering] < 0 else -_ONE
        steps = self.steps_of(entering, way)
        low, high = self.programme.low[entering], self.programme.high[entering]
        best: tuple[Any, int, Place] | None = None
        if low is not None and high is not None:
            best = (high - low, entering, Place.HIGH if way > 0 else Place.LOW)
        for k, step in enumerate(steps):
            if not step or self.places[k] is not Place.BASIC:
                continue
            bound = self.programme.high[k] if step > 0 else self.programme.low[k]
            if bound is None:
                continue
            room = (bound - self.values[k]) / step
            if best is None or room < best[0] or (room == best[0] and k < best[1]):
                best = (room, k, Place.HIGH if step > 0 else Place.LOW)
        if best is None:
            return steps[: self.programme.columns]
        self._exchange(entering, best[1], best[2], costs)
        return None

    def steps_of(self, entering: int, way: Any) -> list[Any]:
        """By variable: what it changes by when one outside the basis moves by ``way``."""
        programme, count = self.programme, self.programme.columns
        steps = [_ZERO] * len(self.places)
        steps[entering] = way
        _, rows = self._split()
        right: dict[int, Any] = {}
        if entering < count:
            for i in rows:
                a = programme.rows[i].get(entering)
                if a is not None:
                    right[i] = -a * way
        else:
            right[entering - count] = way
        for j, step in self.factors.solve(right).items():
            steps[j] = step
        for i in range(len(programme.rows)):
            if self.places[count + i] is Place.BASIC:
                steps[count + i] = programme.value_of(i, steps)
        return steps

    def pull_inside(self, leaving: int, costs: dict[int, Any]) -> list[Any] | None:
        """Bring a variable to the bound it breaks (dual step); if none can help, Farkas weights."""
        programme, count = self.programme, self.programme.columns
        self.reprice(costs)
        is_row = leaving >= count
        own = programme.rows[leaving - count] if is_row else {leaving: _ONE}
        basic = {j: a for j, a in own.items() if self.places[j] is Place.BASIC}
        weights = self.factors.solve_turned(basic)
        effect = [_ZERO] * len(self.places)  # of a step of each outside variable on this one
        for j, a in own.items():
            effect[j] = a
        for i, weight in weights.items():
            effect[count + i] = weight
            for j, a in programme.rows[i].items():
                effect[j] -= weight * a
        rises = self._break(leaving) > 0
        best: tuple[Any, int] | None = None
        for k, change in enumerate(effect):
            if not change or not self.may_go(k, 1 if (change > 0) is rises else -1):
                continue
            ratio = abs(self.worth[k] / change)
            if best is None or ratio < best[0]:
                best = (ratio, k)
        if best is None:
            proof = [_ZERO] * len(programme.rows)
            for i, weight in weights.items():
                proof[i] = -weight
            if is_row:
                proof[leaving - count] += _ONE
            return proof
        self._exchange(best[1], leaving, Place.LOW if rises else Place.HIGH, costs)
        return None

    def _exchange(self, entering: int, leaving: int, place: Place, costs: dict[int, Any]) -> None:
        self.places[entering] = Place.BASIC
        self.places[leaving] = self._held(leaving, place)
        if entering != leaving:
            self.factors = self._factorised()
        self.refresh(costs)
