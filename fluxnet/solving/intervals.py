"""The ranges of functionals of a fit: at the best fit, and at 95 %.

A value belongs to the 95 % interval when some fluxes within all bounds take it with
h - h_min <= 3.84 (profile likelihood; for a determined value away from bounds that is
value ± 1.96 sd). Where uncertain numbers move, or the functional is a quotient, the end is
found by :mod:`fluxnet.solving.curve`.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.progress import Progress, silent
from fluxnet.ground.record import record
from fluxnet.solving.chart import flux_scale, point_at
from fluxnet.solving.curve import Curve, End, follow_curve
from fluxnet.solving.forces import missing_at
from fluxnet.solving.functionals import Functionals
from fluxnet.solving.joint_ends import joint_ends
from fluxnet.solving.reach import Reach, reach_far, reach_flat
from fluxnet.solving.region import Region
from fluxnet.solving.statistics import chi_squared_quantile
from fluxnet.solving.task import Task

__all__ = ["Intervals", "find_intervals"]

Vector = NDArray[np.float64]

_DUST = 1e-9
"""A number below this part of what a functional changes by is what rounding left of zero."""



@record
class Intervals:
    """One entry a functional; infinite where nothing bounds it.

    ``sd`` is that of the linear formula, NaN where the functional is not determined.
    """

    values: Vector
    sd: Vector
    low: Vector
    high: Vector
    best_low: Vector
    best_high: Vector

    def part(self, start: int, stop: int) -> Intervals:
        """The entries from ``start`` up to ``stop``."""
        cut = slice(start, stop)
        return Intervals(
            self.values[cut], self.sd[cut], self.low[cut], self.high[cut],
            self.best_low[cut], self.best_high[cut],
        )

    def times(self, places: NDArray[np.intp], factors: Vector) -> Intervals:
        """The entries at some places, times factors that are not zero."""
        ends = [
            np.where(factors > 0, factors * low[places], factors * high[places])
            for low, high in (
                (self.low, self.high), (self.high, self.low),
                (self.best_low, self.best_high), (self.best_high, self.best_low),
            )
        ]  # fmt: skip
        return Intervals(factors * self.values[places], np.abs(factors) * self.sd[places], *ends)

    def among(self, others: Intervals, mine: NDArray[np.bool_]) -> Intervals:
        """These at the places marked as mine, and the others between them, both in order."""
        both = []
        for name in ("values", "sd", "low", "high", "best_low", "best_high"):
            one = np.empty(len(mine))
            one[mine], one[~mine] = getattr(self, name), getattr(others, name)
            both.append(one)
        return Intervals(*both)


@record
class _Search:
    """What all searches of one call share."""

    task: Task
    region: Region
    functionals: Functionals
    level: float
    gradients: Vector
    values: Vector
    hidden: NDArray[np.bool_]
    curved: NDArray[np.bool_]
    ends: Vector


def find_intervals(
    task: Task,
    region: Region,
    functionals: Functionals,
    determined: NDArray[np.bool_] | None = None,
    progress: Progress = silent,
) -> Intervals:
    """The sd and ranges of functionals around a fit.

    Parameters
    ----------
    region
        That of the fit with bounds: see :func:`fluxnet.solving.descent.fit_bounded`.
    determined
        Whether each functional is determined, where that was decided exactly; None decides by
        the slopes.
    """
    point = region.point
    values = functionals.values(point)
    gradients = region.gradients(functionals.slopes(point))
    seen = region.dimension
    sizes = np.linalg.norm(gradients, axis=1)
    hidden = np.abs(gradients[:, seen:]).max(axis=1, initial=0.0) > 1e-10 * sizes
    if determined is not None:
        hidden = ~determined
    gradients[~hidden, seen:] = 0.0
    sd = np.where(hidden, np.nan, np.linalg.norm(gradients[:, :seen], axis=1))
    scale = flux_scale(task, point)
    constant = sizes <= 1e-12 * np.maximum(np.abs(values), 1e-3 * scale)
    sd[constant] = 0.0
    search = _Search(
        task=task,
        region=region,
        functionals=functionals,
        level=point.h + chi_squared_quantile(0.95, 1),
        gradients=gradients,
        values=values,
        hidden=hidden,
        curved=functionals.curved | (task.numbers > 0),
        ends=np.tile(values[:, None], (1, 4)),
    )
    groups = _alike(search, ~constant & np.isfinite(values))
    joint = joint_ends(task, region, functionals, gradients, hidden, search.level, groups)
    ends = search.ends
    for up, sign in enumerate((-1.0, 1.0)):
        known = joint.known[:, up]
        reach = np.maximum(joint.far, joint.best)[known, up]
        ends[known, up] = values[known] + sign * reach
        ends[known, 2 + up] = values[known] + sign * joint.best[known, up]
    for done, group in enumerate(groups):
        progress("intervals", done, len(groups))
        for sign in (-1.0, 1.0):
            members = [
                (i, factor) for i, factor in group
                if not joint.known[i, int((factor < 0) ^ (sign > 0))]
            ]
            if members:
                _fill(search, members, sign)
    # What is left of a zero is told as zero.
    ends[np.abs(ends) <= _DUST * sizes[:, None]] = 0.0
    values = np.where(np.abs(values) <= _DUST * sizes, 0.0, values)
    return Intervals(values, sd, ends[:, 0], ends[:, 1], ends[:, 2], ends[:, 3])


def _alike(search: _Search, wanted: NDArray[np.bool_]) -> list[list[tuple[int, float]]]:
    """Groups of functionals with the same gradient up to a factor, with the factors.

    Those that bend by themselves are in groups of one.
    """
    groups: dict[bytes, list[tuple[int, float]]] = {}
    bent = search.functionals.curved
    for i in np.flatnonzero(wanted).tolist():
        gradient = search.gradients[i]
        sizes = np.abs(gradient)
        lead = gradient[int(np.argmax(sizes > 0.3 * sizes.max()))]
        key = (np.round(gradient / lead, 8) + 0.0).tobytes()
        if bent[i]:
            key += f"{i}".encode()
        groups.setdefault(key, []).append((i, float(lead)))
    return list(groups.values())


def _fill(search: _Search, members: list[tuple[int, float]], way: float) -> None:
    """The ends of the intervals of functionals that go up and down together.

    Parameters
    ----------
    way
        The sign of the way that those with a positive factor are to go.
    """
    first, lead = members[0]
    origin = np.zeros(search.gradients.shape[1])
    places = np.array([i for i, _ in members], dtype=np.intp)
    functionals = search.functionals.some(places) if search.curved[first] else None
    sign = way if lead > 0 else -way
    best, least = origin, 0.0
    if search.hidden[first]:
        flat = _flat_end(search, first, sign)
        _note(search, members, 2, sign, flat.value)
        if flat.place is None:
            _note(search, members, 0, sign, np.inf)
            return
        best, least = flat.place, flat.value
    end = _end(search, first, sign, best)
    # What the best fit allows, 95 % allows too.
    reach = max(end.value, least)
    _note(search, members, 0, sign, reach)
    there = end.point
    if there is None or functionals is None or len(members) == 1:
        return
    values = functionals.values(there) - search.values[places]
    slopes = functionals.slopes(there)
    for k, (i, other) in enumerate(members[1:], start=1):
        factor = other / lead
        size = float(np.abs(slopes[k]).max(initial=0.0))
        differs = np.abs(slopes[k] - factor * slopes[0]).max() > 1e-6 * size
        if not differs and abs(values[k] - factor * values[0]) <= 1e-6 * abs(values[k]):
            continue
        turn = sign if factor > 0 else -sign
        missing = None
        if end.forces is not None:
            missing = missing_at(
                search.task, end.forces, there, search.level, turn * slopes[k]
            )
        own = (
            _end(search, i, turn, best).value if missing is None
            else turn * float(values[k]) + missing
        )
        _note(search, [(i, 1.0)], 0, turn, max(own, abs(factor) * least))


def _note(
    search: _Search, members: list[tuple[int, float]], column: int, sign: float, reach: float
) -> None:
    """Write down an end for all functionals of a group."""
    lead = members[0][1]
    for i, other in members:
        factor = other / lead
        turn = sign if factor > 0 else -sign
        place = column + (1 if turn > 0 else 0)
        search.ends[i, place] = search.values[i] + turn * abs(factor) * reach


def _flat_end(search: _Search, i: int, sign: float) -> Reach:
    """How far a functional goes at the best fit."""
    region, point = search.region, search.region.point
    origin = np.zeros(search.gradients.shape[1])
    flat = reach_flat(region, sign * search.gradients[i], origin)
    if flat.place is None or not search.functionals.curved[i]:
        return flat
    step = region.step(flat.place)[: len(point.z)]
    there = point_at(search.task, point.chart, point.z + step, point.numbers)
    value = float(search.functionals.values(there)[i])
    return Reach(sign * (value - search.values[i]), flat.place)


def _end(search: _Search, i: int, sign: float, flat: Vector) -> End:
    """How far a functional goes at 95 %, and the point where it ends.

    Parameters
    ----------
    flat
        The place with the same fit where the functional is at its end.
    """
    region = search.region
    if not search.curved[i]:
        room = max(search.level - region.floor, 1e-12)
        reach = reach_far(region, sign * search.gradients[i], float(np.sqrt(room)), flat)
        return End(reach.value)
    functional = search.functionals.some(np.array([i]))
    curve = Curve(search.task, functional, sign, search.level, search.values[i])
    return follow_curve(curve, region, flat)
