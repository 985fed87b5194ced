"""Two suspects at once, where none by itself explains a run; and what something missing holds."""

from __future__ import annotations

from math import sqrt
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.solving.statistics import chi_squared_quantile
from fluxnet.solving.suspects import weigh_pairs
from fluxnet.studies.suspect_result import (
    MissingContent,
    Standing,
    Suspect,
    SuspectPair,
)
from fluxnet.studies.suspects import LIKELY, make_suspect, numbers_of, rank_standings

if TYPE_CHECKING:
    from fluxnet.studies.suspects import JudgedSuspects

__all__ = ["find_missing", "tell_pairs"]

Array = NDArray[np.float64]
_SHOWN = 6
_FEW = 200
_STANDINGS = tuple(Standing)
_IMPOSSIBLE = _STANDINGS.index(Standing.IMPOSSIBLE)


def tell_pairs(judged: JudgedSuspects, run: int) -> tuple[tuple[SuspectPair, ...], int]:
    """The pairs that do best, the most plausible first, and how many more do as well.

    One suspect stands for each direction: the most plausible one that the size allows. Pairs
    with a direction that allows none are left out.
    """
    plan = judged.plan
    first = [plan.members(number)[0] for number in range(plan.distinct)]
    found = weigh_pairs(judged.whitened, run, plan.directions, first)
    # the best come first; how many are needed shows when one is met that is possible
    count, near = 0, np.zeros(0, dtype=np.intp)
    sides: tuple[_Side, ...] = ()
    while count < len(found.h_left):
        count = min(len(found.h_left), max(_FEW, 8 * count))
        sides = tuple(
            _choose(judged, run, places[:count], found.sizes[:count, k], found.sds[:count, k])
            for k, places in enumerate((found.first, found.second))
        )
        possible = np.flatnonzero((sides[0].place >= 0) & (sides[1].place >= 0))
        if len(possible):
            reach = found.h_left[possible[0]] + chi_squared_quantile(0.95, 1)
            near = possible[found.h_left[possible] <= reach]
            if found.h_left[count - 1] > reach:
                break
    if not len(near):
        return (), 0
    classes = rank_standings(with_model=plan.with_model)
    ranks = np.array([classes[side.standing[near]] for side in sides])
    best = near[np.lexsort((found.h_left[near], ranks.sum(axis=0)))]
    shown = {int(side.place[k]) for side in sides for k in best[:_SHOWN]}
    numbers = numbers_of(judged, run, sorted(shown))

    def suspect(side: _Side, k: int) -> Suspect:
        return make_suspect(
            numbers, int(side.place[k]), (float(side.size[k]), float(side.sd[k]))
        )

    told: list[SuspectPair] = []
    for k in best[:_SHOWN].tolist():
        # the more plausible one of the two first
        one, other = sorted(sides, key=lambda side: int(classes[side.standing[k]]))
        told.append(SuspectPair(suspect(one, k), suspect(other, k), float(found.h_left[k])))
    return tuple(told), len(best) - len(told)


@record
class _Side:
    """One suspect of each of many pairs, at its size there; ``place`` is -1 for none."""

    place: NDArray[np.intp]
    standing: NDArray[np.intp]
    size: Array
    sd: Array


def _choose(
    judged: JudgedSuspects, run: int, places: NDArray[np.intp], sizes: Array, sds: Array
) -> _Side:
    """The most plausible suspect of each direction at the size that it has in a pair.

    ``places`` are the first suspects of their directions; ``sizes`` and ``sds`` are those of
    them, as they enter the relations.
    """
    plan, hypotheses = judged.plan, judged.plan.hypotheses
    classes, directions = np.array(plan.classes, dtype=np.intp), plan.directions
    longest = max(len(plan.members(number)) for number in range(plan.distinct))
    table = np.full((plan.distinct, longest), -1, dtype=np.intp)
    for number in range(plan.distinct):
        members = plan.members(number)
        table[number, : len(members)] = members
    # parallel directions: a size of the first one as that of each other
    first = directions[table[classes, 0]]
    factors = (first * directions).sum(axis=1) / np.square(directions).sum(axis=1)
    factors *= judged.factors[run]
    candidates = table[classes[places]]
    there = candidates >= 0
    size, sd = sizes[:, None] * factors[candidates], sds[:, None] * np.abs(factors[candidates])
    positive = np.array([_STANDINGS.index(h.positive) for h in hypotheses], dtype=np.intp)
    negative = np.array([_STANDINGS.index(h.negative) for h in hypotheses], dtype=np.intp)
    standing = np.where(size >= 0, positive[candidates], negative[candidates])
    alone = np.square(judged.arrays.sds[run]) - np.square(judged.would_be_sd[run])
    slack = LIKELY * np.sqrt(np.maximum(np.square(sd) - alone[candidates], 0.0))
    true = judged.given[run][candidates] - size
    low, high = (np.array([getattr(h, end) for h in hypotheses]) for end in ("low", "high"))
    outside = (true + slack < low[candidates]) | (true - slack > high[candidates])
    standing[~there | (judged.measured[candidates] & outside)] = _IMPOSSIBLE
    best = standing.argmin(axis=1)[:, None]

    def taken(of: NDArray[Any]) -> NDArray[Any]:
        return np.take_along_axis(of, best, axis=1)[:, 0]

    possible = taken(standing) < _IMPOSSIBLE
    place = np.where(possible, taken(candidates), -1)
    return _Side(place, taken(standing), taken(size), taken(sd))


def find_missing(judged: JudgedSuspects, run: int) -> MissingContent | None:
    """How many electrons per carbon something that was not measured would hold.

    With c and d what one unit of carbon, and one of electrons, add to the whitened residuals f,
    a compound with gamma electrons per carbon adds c + gamma d. All gammas that leave at most
    3.84 more than the best one are its 95 % interval (Fieller 1954; from memory). None where
    there is no interval, or the balances cannot tell carbon from electrons.
    """
    probes = judged.plan.probes
    if probes is None or len(probes) != 2:
        return None
    f = judged.whitened.residuals[run]
    c, d = probes @ judged.whitened.factor[run].T
    cc, dd, cd, fc, fd = c @ c, d @ d, c @ d, f @ c, f @ d
    apart = cc * dd - cd * cd
    if apart <= 1e-9 * cc * dd:
        return None
    carbon = (fc * dd - fd * cd) / apart
    electrons = (fd * cc - fc * cd) / apart
    enough = carbon * fc + electrons * fd - chi_squared_quantile(0.95, 1)
    a, b, rest = fd * fd - enough * dd, fc * fd - enough * cd, fc * fc - enough * cc
    inside = b * b - a * rest
    if enough <= 0 or a >= 0 or inside < 0 or not carbon:
        return None
    ends = sorted(((-b - sqrt(inside)) / a, (-b + sqrt(inside)) / a))
    return MissingContent(
        gamma=float(electrons / carbon),
        low=float(ends[0]),
        high=float(ends[1]),
        carbon=float(carbon),
        carbon_sd=float(np.sqrt(dd / apart)),
        unit="",
    )
