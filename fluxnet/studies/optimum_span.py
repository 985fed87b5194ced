"""How far an optimum moves with the errors of the parameters: a search over their box."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from itertools import combinations, product
from math import inf

from fluxnet.solving.build import Built, Uncertain, rebuild
from fluxnet.solving.linear import Outcome, Programme
from fluxnet.studies.aim_problem import aim_cost, open_carriers
from fluxnet.studies.aims import Aim, Sense
from fluxnet.studies.solution import OptimumSpan

__all__ = ["span_optimum"]

Point = tuple[float, ...]

# So many parameters have 2**5 corners; with more, each is moved by itself and then all together
# to the ends that were the worst and the best.
_ALL_CORNERS = 5
# Points a side of the grid that is laid where corners and edges do not tell it all.
_GRID = {1: 9, 2: 5, 3: 3}
_SMALLEST_STEP = 2.0**-12
_MOST_POINTS = 100
"""Of one climb towards an end."""
_SAME = 1e-9


def span_optimum(built: Built, aim: Aim, optimum: float) -> OptimumSpan | None:
    """The optimum over ± 2 sd of every uncertain parameter, within the parameters' ranges.

    The corners of that box are solved, and the middles of the edges that meet at the best and
    the worst of them. Where everything is feasible, no middle lies outside its edge's ends and
    every parameter moves the optimum one way only, the corners are the ends. Else a grid is
    laid, and from its best and its worst point a search goes on in ever smaller steps, which
    also leads to the edge of what is feasible. What is found is reached; that nothing lies
    beyond it is not proven.

    Returns
    -------
    OptimumSpan or None
        None where no number of the model is uncertain. An end is infinite where the aim has no
        best value at a point; the ends are those of the points where something is feasible.
    """
    uncertain = [u for u in built.uncertain if u.sd > 0]
    if not uncertain:
        return None
    box = _Box(built, aim, uncertain)
    box.found[box.centre] = optimum
    box.visit_corners()
    if not box.is_plain():
        box.visit_grid()
        for sign in (-1, 1):
            box.climb(sign)
    known = [value for value in box.found.values() if value is not None]
    names = tuple(u.name for u in uncertain)
    return OptimumSpan(
        min(known), max(known), names, len(box.found), len(box.found) - len(known)
    )


class _Box:
    """The optima found so far, by the place of each parameter between its ends (0 to 1)."""

    def __init__(self, built: Built, aim: Aim, uncertain: Iterable[Uncertain]) -> None:
        self.found: dict[Point, float | None] = {}
        self._built, self._aim = built, aim
        self._ends = {u.name: _ends(u) for u in uncertain}
        self.centre: Point = tuple(
            (built.values[name] - low) / (high - low) if high > low else 0.0
            for name, (low, high) in self._ends.items()
        )
        # A parameter that its own range leaves one value stays there.
        self._free = [k for k, (low, high) in enumerate(self._ends.values()) if high > low]

    def at(self, point: Point) -> float | None:
        """The optimum at a point; None where nothing is feasible."""
        if point not in self.found:
            places = zip(self._ends.items(), point, strict=True)
            values = {name: low + x * (high - low) for (name, (low, high)), x in places}
            self.found[point] = _optimum_at(self._built, self._aim, values)
        return self.found[point]

    def end(self, sign: int) -> Point:
        """The point at which the optimum is largest (sign 1) or least (-1)."""
        known = ((sign * v, point) for point, v in self.found.items() if v is not None)
        return max(known)[1]

    def visit_corners(self) -> None:
        """All corners, or with many parameters those that lie the farthest apart."""
        if len(self._free) <= _ALL_CORNERS:
            for ends in product((0.0, 1.0), repeat=len(self._free)):
                self.at(self._with(self.centre, dict(zip(self._free, ends, strict=True))))
            return
        for sign in (-1, 1):
            together: dict[int, float] = {}
            for k in self._free:
                both = [(self.at(self._with(self.centre, {k: end})), end) for end in (0.0, 1.0)]
                known = [(sign * v, end) for v, end in both if v is not None]
                together[k] = max(known)[1] if known else self.centre[k]
            self.at(self._with(self.centre, together))

    def is_plain(self) -> bool:
        """Whether all is feasible, and each parameter moves the optimum one way only.

        Middles are looked at on the edges that meet at the best and at the worst corner, and on
        the ways from these to the centre.
        """
        if None in self.found.values():
            return False
        for corner in (self.end(-1), self.end(1)):
            others = [self._with(corner, {k: 1.0 - corner[k]}) for k in self._free]
            for other in (*others, self.centre):
                middle = tuple((a + b) / 2 for a, b in zip(corner, other, strict=True))
                ends = self.at(corner), self.at(middle), self.at(other)
                if None in ends or not _lies_between(*ends):  # type: ignore[arg-type]
                    return False
        return all(len(self._effects(k)) < 2 for k in self._free)

    def _effects(self, k: int) -> set[bool]:
        """Whether a parameter raises the optimum, whether it lowers it, along the edges known."""
        effects: set[bool] = set()
        for point, low in self.found.items():
            high = self.found.get(self._with(point, {k: 1.0})) if point[k] == 0.0 else None
            if low is None or high is None or _lies_between(low, high, low):
                continue  # unknown, or the same
            effects.add(high > low)
        return effects

    def visit_grid(self) -> None:
        """A grid; with many parameters the middles of the lines from the centre to the points."""
        side = _GRID.get(len(self._free))
        if side is None:
            for point in list(self.found):
                self.at(tuple((a + b) / 2 for a, b in zip(point, self.centre, strict=True)))
            return
        places = [k / (side - 1) for k in range(side)]
        for ends in product(places, repeat=len(self._free)):
            self.at(self._with(self.centre, dict(zip(self._free, ends, strict=True))))

    def climb(self, sign: int) -> None:
        """From the best point (or the worst) on, along axes and diagonals, in ever smaller steps.

        A step that helps is taken again; a step into the infeasible does not help.
        """
        step, budget = 0.25, len(self.found) + _MOST_POINTS
        while step >= _SMALLEST_STEP and len(self.found) < budget:
            here = self.end(sign)
            best = self.found[here]
            if best is None or best in (inf, -inf):
                return
            for way in self._ways():
                there = tuple(
                    min(max(x + step * w, 0.0), 1.0) for x, w in zip(here, way, strict=True)
                )
                value = self.at(there)
                if value is not None and sign * (value - best) > _SAME * max(1.0, abs(best)):
                    break
            else:
                step /= 2

    def _ways(self) -> Iterator[Point]:
        """Along each axis, then along the diagonals of each two."""
        for number in (1, 2):
            for axes in combinations(self._free, number):
                for signs in product((1.0, -1.0), repeat=number):
                    ahead = dict(zip(axes, signs, strict=True))
                    yield self._with((0.0,) * len(self.centre), ahead)

    @staticmethod
    def _with(point: Point, places: Mapping[int, float]) -> Point:
        return tuple(places.get(k, x) for k, x in enumerate(point))


def _lies_between(low: float, middle: float, high: float) -> bool:
    if low == high == middle:
        return True
    low, high = min(low, high), max(low, high)
    room = _SAME * max(1.0, *(abs(v) for v in (low, high) if abs(v) < inf))
    return low - room <= middle <= high + room


def _ends(number: Uncertain) -> tuple[float, float]:
    low = max(number.low, number.value - 2 * number.sd)
    return low, min(number.high, number.value + 2 * number.sd)


def _optimum_at(built: Built, aim: Aim, values: Mapping[str, float]) -> float | None:
    """The optimum at other values of the parameters; None where nothing is feasible."""
    there = rebuild(built, values)
    programme = Programme(open_carriers(there, aim))
    cost = aim_cost(there, aim)
    maximise = aim.sense is Sense.MAXIMISE
    best = programme.maximise(cost) if maximise else programme.minimise(cost)
    if best.outcome is Outcome.UNBOUNDED:
        return inf if maximise else -inf
    if best.outcome is Outcome.FAILED:
        raise ArithmeticError("the solver could not tell what is best")
    return best.objective + 0.0 if best.outcome is Outcome.OPTIMAL else None
