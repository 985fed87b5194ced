"""The best value of a quantity while a parameter of the model moves.

Coefficients change with the parameter, so that the curve is not straight: between two changes
of the basis it is a quotient of polynomials. The changes are found by bisection from a grid of 33
values, on which each stretch is also looked at in its middle: a basis that is the best at both
ends of a stretch and in its middle is taken to be so all along. A change is then moved to where
the two bases give the same, to a billionth of the range; bases that are the best on less than a
millionth of the range are passed over.
"""

from __future__ import annotations

from collections.abc import Iterator
from itertools import pairwise
from math import isfinite
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.network.model import Network
from fluxnet.solving.build import build_problem
from fluxnet.solving.linear import LinearSolution, Outcome, Programme
from fluxnet.solving.parametric import Extreme
from fluxnet.solving.parametric_proof import Break, Change, ChangeKind, Hold
from fluxnet.solving.problem import Problem
from fluxnet.solving.proof import Proof
from fluxnet.solving.unbounded import explain_unbounded
from fluxnet.studies.aim_problem import aim_cost, open_carriers
from fluxnet.studies.aims import Aim, Sense
from fluxnet.studies.frontier_axis import Axis
from fluxnet.studies.frontier_over import set_to
from fluxnet.studies.frontier_result import Curve, CurveStatus, FrontierPoint, Setting
from fluxnet.studies.frontier_words import change_words, tell_curve
from fluxnet.studies.optimum_proof import prove_aim
from fluxnet.studies.telling import tell_unbounded

if TYPE_CHECKING:
    from fluxnet.exact.simplex import Place

__all__ = ["sweep_parameter"]

Vector = NDArray[np.float64]

_GRID = 33
_TOLERANCE = 1e-9
_DRAWN = 24
_THIN = 1e-6
_WITHIN = 2.0
_NEAR = 1e-9


@record
class _Spot:
    """The optimum at one value; ``places`` is None where there is none."""

    at: float
    y: float
    places: tuple[Place, ...] | None


@record
class _Stretch:
    """A range with one basis."""

    start: float
    stop: float
    places: tuple[Place, ...]


class _Sweep:
    """One quantity's best value at any value of the parameter."""

    def __init__(self, network: Network, y: Axis, setting: Setting, extreme: Extreme) -> None:
        self.network, self.setting, self.extreme = network, setting, extreme
        sense = Sense.MAXIMISE if extreme is Extreme.MOST else Sense.MINIMISE
        self.aim = Aim(sense, y.terms)
        self.endless: tuple[Problem, Vector] | None = None
        self.proofs: list[Proof] = []

    def set_up(self, at: float) -> tuple[Problem, Vector]:
        """The problem and its cost (to be minimised) at a value."""
        network, _ = set_to(self.network, self.setting, at)
        built = build_problem(network, None, within=_WITHIN)
        return open_carriers(built, self.aim), self.extreme.sign * aim_cost(built, self.aim)

    def solve(self, at: float) -> _Spot:
        """The optimum at a value."""
        problem, cost = self.set_up(at)
        programme = Programme(problem)
        best: LinearSolution = programme.minimise(cost)
        if best.outcome is Outcome.UNBOUNDED:
            self.endless = problem, -cost
        if best.outcome is Outcome.FAILED:
            raise ArithmeticError("the solver could not tell what is best")
        places = programme.places() if best.outcome is Outcome.OPTIMAL else None
        return _Spot(at, self.extreme.sign * best.objective + 0.0, places)

    def prove(self, at: float) -> tuple[float, str]:
        """The optimum at a value, proven; its exact value as text."""
        network, _ = set_to(self.network, self.setting, at)
        built = build_problem(network, None, within=_WITHIN)
        problem, cost = open_carriers(built, self.aim), aim_cost(built, self.aim)
        programme = Programme(problem)
        programme.minimise(self.extreme.sign * cost)
        proven = prove_aim(built, problem, self.aim, programme, _WITHIN)
        self.proofs.append(proven.proof)
        exact = self.extreme.sign * proven.solution.objective
        return float(exact), str(exact)

    def holds(self, places: tuple[Place, ...] | None, at: float) -> bool:
        """Whether a basis is the best at a value."""
        if places is None:
            return False
        problem, cost = self.set_up(at)
        state = _state(problem, cost, places)
        if state is None:
            return False
        values, worth, low, high = state
        room = 1e-8 * np.maximum(1.0, np.abs(values))
        open_ = low < high
        signs = np.array([{1: 1.0, 2: -1.0}.get(int(p), 0.0) for p in places])
        fits = (values >= low - room) & (values <= high + room)
        pays = ~open_ | (signs * worth >= -_NEAR) | (signs == 0)
        free = np.array([int(p) == 3 for p in places])
        return bool(fits.all() and pays.all() and (np.abs(worth[free]) <= _NEAR).all())

    def value(self, places: tuple[Place, ...], at: float) -> float:
        """What a basis gives at a value, whether it is the best or not."""
        problem, cost = self.set_up(at)
        state = _state(problem, cost, places)
        return float("nan") if state is None else self.extreme.sign * float(
            cost @ state[0][: len(cost)]
        )

    def slope(self, places: tuple[Place, ...], at: float) -> float:
        """The derivative of a basis's value, by differences over the basis alone."""
        step = 1e-5 * (self.setting.stop - self.setting.start)
        return (self.value(places, at + step) - self.value(places, at - step)) / (2 * step)

    def stretches(self, left: _Spot, right: _Spot) -> Iterator[_Stretch | None]:
        """The bases between two values; None for one without a solution."""
        width = self.setting.stop - self.setting.start
        narrow = right.at - left.at <= _TOLERANCE * width
        if left.places is None and right.places is None:
            return
        middle = (left.at + right.at) / 2
        for own, other in ((left, right), (right, left)):
            if self.holds(own.places, other.at) and (narrow or self.holds(own.places, middle)):
                assert own.places is not None
                yield _Stretch(left.at, right.at, own.places)
                return
        if narrow:
            for spot, start, stop in ((left, left.at, middle), (right, middle, right.at)):
                if spot.places is not None:
                    yield _Stretch(start, stop, spot.places)
            return
        between = self.solve(middle)
        yield from self.stretches(left, between)
        yield from self.stretches(between, right)


def _state(
    problem: Problem, cost: Vector, places: tuple[Place, ...]
) -> tuple[Vector, Vector, Vector, Vector] | None:
    """Each variable's value and worth at a basis, and its bounds; None where it is none."""
    count = len(problem.columns)
    everything = np.vstack([np.eye(count), problem.matrix])
    low = np.append(problem.column_low, problem.row_low)
    high = np.append(problem.column_high, problem.row_high)
    held = np.array([int(place) for place in places])
    outside = np.flatnonzero(held != 0)
    try:
        inverse = np.linalg.inv(everything[outside])
    except np.linalg.LinAlgError:
        return None
    at = np.where(held[outside] == 2, high[outside], low[outside])
    fluxes = inverse @ np.where(held[outside] == 3, 0.0, at)
    worth = np.zeros(len(everything))
    worth[outside] = cost @ inverse
    return everything @ fluxes, worth, low, high


def sweep_parameter(
    network: Network, y: Axis, setting: Setting, extreme: Extreme, unit: str
) -> Curve:
    """The best y over a range of a parameter: where the basis changes, and the curve between."""
    sweep = _Sweep(network, y, setting, extreme)
    spots = [sweep.solve(float(at)) for at in np.linspace(setting.start, setting.stop, _GRID)]
    if sweep.endless is not None:
        problem, gain = sweep.endless
        aim, reason = sweep.aim, explain_unbounded(problem, gain)
        return Curve("", "", CurveStatus.UNBOUNDED, (), tell_unbounded(aim, reason, network))
    found: list[_Stretch] = []
    for left, right in pairwise(spots):
        for stretch in sweep.stretches(left, right):
            if stretch is not None:
                _join(found, stretch, sweep)
    if not found:
        words = f"Nowhere between {setting.start:g} and {setting.stop:g} do fluxes meet all limits."
        return Curve("", "", CurveStatus.INFEASIBLE, (), words)
    found = _refined(sweep, found)
    breaks, exact = _points(sweep, found)
    points = tuple(
        FrontierPoint(b.x, b.y, b.slope_before, b.slope_after,
                      change_words(b.changes, sweep.set_up(b.x)[0]), None, text)
        for b, text in zip(breaks, exact, strict=True)
    )  # fmt: skip
    verified = all(proof.verified for proof in sweep.proofs)
    words = (
        f"At each of the {len(points)} values the optimum is proven in exact arithmetic; the "
        "values themselves were found by bisection, to a billionth of the range"
        if verified
        else next(proof.words for proof in sweep.proofs if not proof.verified)
    )
    told = tell_curve(breaks, setting.name, y.name, y.unit, unit, extreme)
    return Curve(
        "", "", CurveStatus.TRACED, points, told, Proof(verified, 0.0, words),
        tuple(_drawn(sweep, found)),
    )  # fmt: skip


def _join(found: list[_Stretch], new: _Stretch, sweep: _Sweep) -> None:
    """Add a stretch; to the last one where the curve goes on smoothly, whatever the basis."""
    before = found[-1] if found else None
    if before is not None and before.stop == new.start:
        same = before.places == new.places
        if not same:
            slopes = [sweep.slope(s.places, new.start) for s in (before, new)]
            room = 1e-6 * max(1.0, *map(abs, slopes))
            same = isfinite(sum(slopes)) and abs(slopes[0] - slopes[1]) <= room
        if same and sweep.holds(before.places, new.stop):
            found[-1] = _Stretch(before.start, new.stop, before.places)
            return
    found.append(new)


def _refined(sweep: _Sweep, found: list[_Stretch]) -> list[_Stretch]:
    """Without thin stretches, and with each change where the bases of both sides give the same."""
    width = sweep.setting.stop - sweep.setting.start
    kept = [s for s in found if s.stop - s.start > _THIN * width] or found[:1]
    for k in range(len(kept) - 1):
        left, right = kept[k], kept[k + 1]
        if right.start - left.stop > _THIN * width:
            continue  # nothing is feasible between the two
        at = (left.stop + right.start) / 2
        for _ in range(4):
            gap = sweep.value(left.places, at) - sweep.value(right.places, at)
            steep = sweep.slope(left.places, at) - sweep.slope(right.places, at)
            nearer = at - gap / steep if steep else at
            if not abs(nearer - at) <= _THIN * width:
                break
            at = nearer
        kept[k] = _Stretch(left.start, at, left.places)
        kept[k + 1] = _Stretch(at, right.stop, right.places)
    return kept


def _points(
    sweep: _Sweep, found: list[_Stretch]
) -> tuple[tuple[Break, ...], tuple[str, ...]]:
    breaks: list[Break] = []
    texts: list[str] = []
    for k in range(len(found) + 1):
        before = found[k - 1] if k else None
        after = found[k] if k < len(found) else None
        at = after.start if after is not None else found[-1].stop
        y, text = sweep.prove(at)
        slopes = [None if s is None else sweep.slope(s.places, at) for s in (before, after)]
        changes = () if before is None or after is None else _changes(sweep, before, after)
        breaks.append(Break(at, y, slopes[0], slopes[1], changes))
        texts.append(text)
    return tuple(breaks), tuple(texts)


def _changes(
    sweep: _Sweep, before: _Stretch, after: _Stretch
) -> tuple[Change, ...]:
    """What has a price on one side and is inside the basis on the other."""
    found: list[Change] = []
    for kind, own, other in (
        (ChangeKind.LEAVES, before, after), (ChangeKind.MEETS, after, before),
    ):  # fmt: skip
        # In the middle of its stretch: where the bases change, a price is zero.
        problem, cost = sweep.set_up((own.start + own.stop) / 2)
        count = len(problem.columns)
        state = _state(problem, cost, own.places)
        if state is None:
            continue
        _, worth, low, high = state
        for k in np.flatnonzero(np.abs(worth) > 1e-7).tolist():
            bound = float(low[k] if worth[k] > 0 else high[k])
            if int(other.places[k]) == 0 and (low[k] < high[k] or bound):
                hold = Hold(k, None, bound) if k < count else Hold(None, k - count, bound)
                found.append(Change(kind, hold))
    return tuple(found)


def _drawn(sweep: _Sweep, found: list[_Stretch]) -> Iterator[tuple[float, float]]:
    for stretch in found:
        for at in np.linspace(stretch.start, stretch.stop, _DRAWN + 1).tolist():
            yield at, sweep.value(stretch.places, at)
