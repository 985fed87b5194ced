"""Two suspects at once, where none by itself explains a run; and what something missing holds."""

from __future__ import annotations

from math import sqrt
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.solving.statistics import chi_squared_quantile
from fluxnet.solving.suspects import weigh_pairs
from fluxnet.studies.suspect_result import (
    MissingContent,
    Standing,
    Suspect,
    SuspectPair,
)
from fluxnet.studies.suspects import RunNumbers, make_suspect, numbers_of, rank_standings

if TYPE_CHECKING:
    from fluxnet.studies.suspects import JudgedSuspects

__all__ = ["find_missing", "tell_pairs"]

Array = NDArray[np.float64]
_SHOWN = 6
_STANDINGS = tuple(Standing)


def tell_pairs(judged: JudgedSuspects, run: int) -> tuple[tuple[SuspectPair, ...], int]:
    """The pairs that do best, the most plausible first, and how many more do as well.

    One suspect stands for each direction, the most plausible one for the sign of its size. Pairs
    with one that is not possible are left out.
    """
    plan = judged.plan
    numbers = numbers_of(judged, run)
    first = [plan.members(number)[0] for number in range(plan.distinct)]
    found = weigh_pairs(judged.whitened, run, plan.directions, first)
    classes = rank_standings(with_model=plan.with_model)
    reach = None
    told: list[tuple[int, float, SuspectPair]] = []
    for k, left in enumerate(found.h_left.tolist()):
        if reach is not None and left > reach:
            break
        pair = [
            _beside(
                numbers, judged.factors[run], int(place),
                float(found.sizes[k, side]), float(found.sds[k, side]),
            )
            for side, place in enumerate((found.first[k], found.second[k]))
        ]
        if not all(one.possible for one in pair):
            continue
        if reach is None:
            reach = left + chi_squared_quantile(0.95, 1)
        ranks = [int(classes[_STANDINGS.index(one.standing)]) for one in pair]
        pair.sort(key=lambda one: classes[_STANDINGS.index(one.standing)])
        told.append((sum(ranks), left, SuspectPair(pair[0], pair[1], left)))
    told.sort(key=lambda entry: entry[:2])
    pairs = tuple(pair for _, _, pair in told[:_SHOWN])
    return pairs, len(told) - len(pairs)


def _beside(
    numbers: RunNumbers, factors: Array, place: int, size: float, sd: float
) -> Suspect:
    """The most plausible suspect of a direction at the size that it has beside another one.

    ``size`` and ``sd`` are those of the suspect at ``place``, as they enter the relations;
    ``factors`` turn them into what is told.
    """
    plan = numbers.plan
    members = plan.members(plan.classes[place])
    own = plan.directions[place]
    best: Suspect | None = None
    for i in members:
        other = plan.directions[i]
        factor = float(own @ other) / float(other @ other) * float(factors[i])
        one = make_suspect(numbers, i, (size * factor, sd * abs(factor)))
        if best is None or _STANDINGS.index(one.standing) < _STANDINGS.index(best.standing):
            best = one
    if best is None:
        raise MisuseError("a direction without a suspect")
    return best


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
