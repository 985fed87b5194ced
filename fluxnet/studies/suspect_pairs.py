"""Two suspects at once, where none by itself explains a run; and what something missing holds."""

from __future__ import annotations

from math import sqrt
from typing import TYPE_CHECKING

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
_STANDINGS = tuple(Standing)
_IMPOSSIBLE = _STANDINGS.index(Standing.IMPOSSIBLE)


def tell_pairs(judged: JudgedSuspects, run: int) -> tuple[tuple[SuspectPair, ...], int]:
    """The pairs that do best, the most plausible first, and how many more do as well.

    One suspect stands for each direction: the most plausible one that the size allows. Pairs
    with a direction that allows none are left out.
    """
    plan, numbers = judged.plan, numbers_of(judged, run)
    first = [plan.members(number)[0] for number in range(plan.distinct)]
    found = weigh_pairs(judged.whitened, run, plan.directions, first)
    sides = [
        _choose(judged, run, places, found.sizes[:, side], found.sds[:, side])
        for side, places in enumerate((found.first, found.second))
    ]
    possible = np.flatnonzero((sides[0].place >= 0) & (sides[1].place >= 0))
    if not len(possible):
        return (), 0
    reach = found.h_left[possible[0]] + chi_squared_quantile(0.95, 1)
    near = possible[found.h_left[possible] <= reach]
    classes = rank_standings(with_model=plan.with_model)
    ranks = np.array([classes[side.standing[near]] for side in sides])
    best = near[np.lexsort((found.h_left[near], ranks.sum(axis=0)))]

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

    ``sizes`` and ``sds`` are those of the suspects at ``places``, as they enter the relations.
    """
    plan = judged.plan
    count = len(places)
    chosen = np.full(count, -1, dtype=np.intp)
    standing, size, sd = np.zeros(count, dtype=np.intp), np.zeros(count), np.zeros(count)
    for place in np.unique(places).tolist():
        own = plan.directions[place]
        mine = np.flatnonzero(places == place)
        for i in plan.members(plan.classes[place]):
            one, other = plan.hypotheses[i], plan.directions[i]
            factor = float(own @ other) / float(other @ other) * float(judged.factors[run, i])
            here, its_sd = sizes[mine] * factor, sds[mine] * abs(factor)
            stands = np.where(
                here >= 0, _STANDINGS.index(one.positive), _STANDINGS.index(one.negative)
            )
            if one.row is not None:
                alone = judged.arrays.sds[run, i] ** 2 - judged.would_be_sd[run, i] ** 2
                slack = LIKELY * np.sqrt(np.maximum(its_sd**2 - alone, 0.0))
                true = judged.given[run, i] - here
                fits = (one.low - slack <= true) & (true <= one.high + slack)
                stands = np.where(fits, stands, _IMPOSSIBLE)
            known = chosen[mine] >= 0
            better = (stands < _IMPOSSIBLE) & (~known | (stands < standing[mine]))
            at = mine[better]
            chosen[at], standing[at] = i, stands[better]
            size[at], sd[at] = here[better], its_sd[better]
    return _Side(chosen, standing, size, sd)


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
