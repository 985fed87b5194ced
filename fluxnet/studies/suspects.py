"""Which suspects explain what is wrong in a run, in the order in which to think of them.

All runs with the same rows are weighed at once; records are made of one run at a time.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from math import isfinite, sqrt

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.network.model import Direction
from fluxnet.solving.statistics import chi_squared_quantile
from fluxnet.solving.suspects import (
    SuspectArrays,
    Whitened,
    first_group,
    weigh_suspects,
    whiten_residuals,
)
from fluxnet.studies.suspect_plan import Hypothesis, SuspectPlan
from fluxnet.studies.suspect_result import Standing, Suspect, SuspectKind, Suspects

__all__ = [
    "LIKELY", "JudgedSuspects", "MeasuredValues", "RunNumbers", "judge_suspects", "make_suspect",
    "numbers_of", "rank_standings", "tell_suspects",
]  # fmt: skip

Array = NDArray[np.float64]
_STANDINGS = tuple(Standing)
LIKELY = 2.0
"""A value whose bound is so many sds away is not possible."""


@record
class MeasuredValues:
    """What was measured in some runs: arrays of runs x values.

    ``covariance`` is square over the values, ``roots`` (values x sources) is its root: V = F F'.

    ``values`` are those that enter the relations; ``given`` those that are told, one unit of
    an error in the first being ``factors`` in the second (a ratio A / B enters as A - r B).
    """

    values: Array
    covariance: Array
    roots: Array
    given: Array
    factors: Array


@record
class JudgedSuspects:
    """Suspects of many runs, each possible or not: arrays of runs x suspects.

    ``standing`` has the place of each one's :class:`Standing`. ``given`` and ``would_be_sd``
    are NaN for what is no measured value; ``factors`` turn a size as it enters the relations
    into what is told. ``measured`` (suspects) marks errors of values and parameters.
    """

    plan: SuspectPlan
    whitened: Whitened
    arrays: SuspectArrays
    given: Array
    factors: Array
    would_be_sd: Array
    standing: NDArray[np.intp]
    group: NDArray[np.bool_]
    measured: NDArray[np.bool_]


@record
class RunNumbers:
    """What was found of some suspects in one run, by their numbers; ``sizes`` are those of all."""

    plan: SuspectPlan
    sizes: list[float]
    found: dict[int, tuple[float, ...]]


def judge_suspects(plan: SuspectPlan, measured: MeasuredValues) -> JudgedSuspects:
    """Weigh all suspects of some runs, and see which of them are possible."""
    R, V = plan.relations, measured.covariance
    across = R @ V
    whitened = whiten_residuals(measured.values @ R.T, R @ measured.roots)
    arrays = weigh_suspects(whitened, plan.directions, plan.classes)
    rows = [h.row for h in plan.hypotheses]
    of_rates = np.array([i for i, row in enumerate(rows) if row is not None], dtype=np.intp)
    places = np.array([row for row in rows if row is not None], dtype=np.intp)
    shape = arrays.sizes.shape
    factors, given = np.ones(shape), np.full(shape, np.nan)
    factors[:, of_rates] = measured.factors[:, places]
    given[:, of_rates] = measured.given[:, places]
    arrays = replace(
        arrays, sizes=arrays.sizes * factors + 0.0, sds=arrays.sds * np.abs(factors)
    )
    would_be, would_be_sd = given - arrays.sizes, np.full(shape, np.nan)
    # b = u f / |g| with f the whitened residuals: what it shares with the value itself
    units = whitened.factor @ plan.directions[of_rates].T
    norms = np.sqrt(np.square(units).sum(axis=1))
    shared = (units * (whitened.factor @ across[:, :, places])).sum(axis=1) / np.square(norms)
    variances = np.einsum("nii->ni", V)[:, places] - 2 * shared + 1 / np.square(norms)
    would_be_sd[:, of_rates] = np.sqrt(np.maximum(variances, 0.0)) * np.abs(factors[:, of_rates])
    standing = np.where(
        arrays.sizes >= 0,
        [_STANDINGS.index(h.positive) for h in plan.hypotheses],
        [_STANDINGS.index(h.negative) for h in plan.hypotheses],
    )
    low = np.array([plan.hypotheses[i].low for i in of_rates])
    high = np.array([plan.hypotheses[i].high for i in of_rates])
    reach = LIKELY * would_be_sd[:, of_rates]
    outside = (would_be[:, of_rates] + reach < low) | (would_be[:, of_rates] - reach > high)
    impossible = _STANDINGS.index(Standing.IMPOSSIBLE)
    standing[:, of_rates] = np.where(outside, impossible, standing[:, of_rates])
    return JudgedSuspects(
        plan, whitened, arrays, given, factors, would_be_sd, standing,
        first_group(arrays.h_left, standing != impossible),
        np.array([row is not None for row in rows], dtype=np.bool_),
    )  # fmt: skip


def tell_suspects(judged: JudgedSuspects, run: int) -> Suspects:
    """The suspects of one run, the most plausible of those that explain it best first.

    The order inside the group: measured values and what the model makes (without a model:
    common by-products), then other common by-products, then rare ones, at last what is not
    possible; in each the one that leaves the smaller h first, and of twins a product of the
    model that has no row.
    """
    from fluxnet.studies.suspect_pairs import find_missing, tell_pairs

    plan, arrays = judged.plan, judged.arrays
    places = _ranked(judged, run)
    held = judged.group[run][places]
    group = places[held].tolist()
    others = places[~held & judged.measured[places]].tolist()
    numbers = numbers_of(judged, run, [*group, *others])
    possible = judged.standing[run] != _STANDINGS.index(Standing.IMPOSSIBLE)
    best = arrays.h_left[run][possible].min(initial=np.inf)
    dof = plan.dof
    explained = dof < 2 or bool(best <= chi_squared_quantile(0.95, dof - 1))
    pairs, more = ((), 0) if explained or dof < 3 else tell_pairs(judged, run)
    return Suspects(
        h=float(arrays.h[run]),
        dof=dof,
        group=tuple(make_suspect(numbers, i) for i in group),
        others=tuple(make_suspect(numbers, i) for i in others),
        left=len(plan.hypotheses) - len(group),
        tried=len(plan.hypotheses),
        distinct=plan.distinct,
        explained=explained,
        pairs=pairs,
        pairs_left=more,
        missing=find_missing(judged, run),
        with_model=plan.with_model,
    )


def _ranked(judged: JudgedSuspects, run: int) -> NDArray[np.intp]:
    """All suspects of a run, the first to think of first."""
    left = judged.arrays.h_left[run]
    standing = judged.standing[run]
    classes = rank_standings(with_model=judged.plan.with_model)
    # what twins leave differs by rounding only
    digits = np.round(left / (1 + judged.arrays.h[run]), 9)
    declared = np.array([h.is_declared for h in judged.plan.hypotheses], dtype=np.bool_)
    own = declared & (judged.arrays.sizes[run] >= 0) & (classes[standing] == 0)
    return np.lexsort((standing, ~own, digits, classes[standing]))


def rank_standings(*, with_model: bool) -> NDArray[np.intp]:
    """By the place of each standing: in which class it is put."""
    return np.array([0, 0, 1 if with_model else 0, 2, 3], dtype=np.intp)


def numbers_of(judged: JudgedSuspects, run: int, places: Sequence[int]) -> RunNumbers:
    """One run's numbers of some suspects, taken out of the arrays of all at once."""
    arrays = judged.arrays
    some = list(places)
    columns = (
        arrays.sds, arrays.h_left, arrays.p, arrays.separation, judged.given,
        judged.would_be_sd, judged.group,
    )  # fmt: skip
    rows = zip(*(column[run][some].tolist() for column in columns), strict=True)
    return RunNumbers(judged.plan, arrays.sizes[run].tolist(), dict(zip(some, rows, strict=True)))


def make_suspect(told: RunNumbers, i: int, beside: tuple[float, float] | None = None) -> Suspect:
    """One suspect of a run as a record.

    Parameters
    ----------
    beside
        Its size and sd where it does not stand alone.
    """
    one, number = told.plan.hypotheses[i], told.plan.classes[i]
    alone, h_left, p, separation, given, would_be_sd, group = told.found[i]
    size, sd = (told.sizes[i], alone) if beside is None else beside
    is_rate = one.row is not None
    would_be = given - size
    if beside is not None and is_rate:
        # what its size shares with its value is the same beside another one
        would_be_sd = sqrt(max(0.0, sd**2 - alone**2 + would_be_sd**2))
    standing = one.positive if size >= 0 else one.negative
    if is_rate and not _fits(one, would_be, would_be_sd):
        standing = Standing.IMPOSSIBLE
    direction, shown = one.direction, size
    if one.kind is SuspectKind.UNMEASURED_SPECIES:
        direction, shown = Direction.OUT if size >= 0 else Direction.IN, abs(size)
    return Suspect(
        kind=one.kind,
        name=one.name,
        direction=direction,
        size=shown,
        sd=sd,
        unit=one.unit,
        h_left=h_left,
        p=p,
        separation=separation if isfinite(separation) else None,
        standing=standing,
        group=1 if group else 2,
        direction_number=number,
        measured=given if is_rate else None,
        would_be=would_be if is_rate else None,
        would_be_sd=would_be_sd if is_rate else None,
        why_not=_why_not(one, size, would_be) if standing is Standing.IMPOSSIBLE else None,
        twins=tuple(
            told.plan.label(k, told.sizes[k]) for k in told.plan.members(number) if k != i
        ),
        is_declared=one.is_declared and size >= 0 and standing is Standing.MODEL,
    )


def _fits(one: Hypothesis, would_be: float, sd: float) -> bool:
    """Whether a true value is within its bounds, or near enough."""
    return one.low - LIKELY * sd <= would_be <= one.high + LIKELY * sd


def _why_not(one: Hypothesis, size: float, would_be: float) -> str:
    """Why a suspect of this size is not possible."""
    if one.row is not None:
        if would_be < one.low:
            return "it would be below zero" if one.low == 0 else "it would be below its limit"
        return "it would be above its limit"
    if size >= 0:
        return "nothing here releases it"
    return "nothing here can take it up"
