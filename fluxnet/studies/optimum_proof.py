"""The optimum of an aim in exact arithmetic, and what its prices are worth."""

from __future__ import annotations

from dataclasses import replace
from math import inf, isfinite

import numpy as np

from fluxnet.exact.simplex import End
from fluxnet.ground.progress import Progress, silent
from fluxnet.solving.build import Built
from fluxnet.solving.linear import LinearSolution, Outcome, Programme
from fluxnet.solving.prices import Price, find_prices
from fluxnet.solving.problem import Problem, RowKind
from fluxnet.solving.proof import Proven, exact_programme, exact_sums, prove_outcome
from fluxnet.solving.words import quantity_words
from fluxnet.studies.aims import Aim, Sense
from fluxnet.studies.settling import Array
from fluxnet.studies.solution import BindingLimit, SpeciesPrice
from fluxnet.studies.units import gain_unit

__all__ = ["as_proven", "find_worths", "prove_aim", "row_words"]

_OUTCOMES = {
    End.OPTIMAL: Outcome.OPTIMAL,
    End.INFEASIBLE: Outcome.INFEASIBLE,
    End.UNBOUNDED: Outcome.UNBOUNDED,
}


def sign_of(sense: Sense) -> int:
    """1 where the aim is the cost, -1 where its negative is.

    Examples
    --------
    >>> sign_of(Sense.MAXIMISE), sign_of(Sense.MINIMISE)
    (-1, 1)
    """
    return -1 if sense is Sense.MAXIMISE else 1


def prove_aim(
    built: Built, problem: Problem, aim: Aim, programme: Programme, within: float
) -> Proven:
    """Prove the outcome that a programme ended with.

    Parameters
    ----------
    problem
        That of the aim, with the rows of the built one.
    programme
        Just solved for the aim.
    """
    sign = sign_of(aim.sense)
    rows, (cost,) = exact_sums(built, [[(sign * weight, q) for weight, q in aim.terms]])
    exact = exact_programme(problem, rows, cost, within=within)
    return prove_outcome(exact, programme.places(), programme.outcome)


def as_proven(best: LinearSolution, proven: Proven, sense: Sense) -> LinearSolution:
    """The solver's answer, with the exact numbers rounded in place of its own.

    An answer that it could not give is taken from the proof, too.
    """
    found, sign = proven.solution, sign_of(sense)
    if not proven.proof.verified:
        return best
    outcome = _OUTCOMES[found.end]
    if outcome is not Outcome.OPTIMAL:
        worth = sign * (inf if outcome is Outcome.INFEASIBLE else -inf)
        return replace(best, outcome=outcome, objective=worth)
    return replace(
        best,
        outcome=outcome,
        objective=float(sign * found.objective),
        fluxes=np.array([float(v) for v in found.fluxes]),
        row_prices=np.array([float(sign * p) for p in found.prices]),
        column_prices=np.array([float(sign * g) for g in found.gains]),
    )


def find_worths(
    problem: Problem,
    cost: Array,
    proven: Proven,
    aim: Aim,
    unit: str,
    within: float,
    *,
    progress: Progress = silent,
) -> tuple[tuple[SpeciesPrice, ...], tuple[BindingLimit, ...]]:
    """What one unit of each balanced species is worth, and one unit of each limit.

    Without a proof there are no prices to tell.
    """
    if not proven.proof.verified:
        return (), ()
    sign = sign_of(aim.sense)
    asked = [i for i, row in enumerate(problem.rows) if row.kind is not RowKind.ROLE]
    prices = find_prices(problem, sign * cost, proven, asked, progress=progress)
    gifts = {q.name: -sign * float(w) for w, q in aim.terms if q.name in aim.surplus}
    species: list[SpeciesPrice] = []
    limits: list[BindingLimit] = []
    for i, price in zip(asked, prices, strict=True):
        row = problem.rows[i]
        if row.kind is RowKind.BALANCE:
            # One more unit lowers what the reactions themselves have to make.
            gift = gifts.get(row.name, 0.0)
            ends = (price.value + gift, price.low + gift, price.high + gift)
            species.append(SpeciesPrice(row.name, *ends))
        elif any(isfinite(worth) and worth for worth in (price.value, price.low, price.high)):
            # Without end is what a step into the infeasible costs: it tells of no loss by itself.
            gained = "" if row.quantity is None else gain_unit(aim.terms, row.quantity, unit)
            limits.append(_limit(problem, proven, i, price, sign, gained, within))
    return tuple(species), tuple(sorted(limits, key=lambda limit: -_weight(limit)))


def _weight(limit: BindingLimit) -> float:
    """What a limit counts for in the aim, as far as that has an end."""
    worths = [abs(w) for w in (limit.worth, limit.worth_up, limit.worth_down) if isfinite(w)]
    return max(worths) * abs(limit.value)


def _limit(
    problem: Problem, proven: Proven, i: int, price: Price, sign: int, unit: str, within: float
) -> BindingLimit:
    fluxes = np.array([float(v) for v in proven.solution.fluxes])
    value = float(problem.matrix[i] @ fluxes) + 0.0
    return BindingLimit(
        row_words(problem, i, value, within),
        value,
        sign * price.value + 0.0,
        sign * price.high + 0.0,
        sign * price.low + 0.0,
        unit,
    )


def row_words(problem: Problem, i: int, value: float, within: float) -> str:
    """A limit as it is written; of a measured value, the end of its reach that holds."""
    row = problem.rows[i]
    if not row.sd or row.value is None or row.ratio is not None:
        return row.name
    name = row.name if row.quantity is None else quantity_words(row.quantity)
    if problem.row_low[i] == problem.row_high[i]:
        return f"{name} = {value:.4g} (as measured)"
    at_low = abs(value - problem.row_low[i]) < abs(value - problem.row_high[i])
    sds = f"{'-' if at_low else '+'} {within:g} sd"
    bound = f"{'>=' if at_low else '<='} {value:.4g}"
    return f"{name} {bound} (measured {row.value:.4g} {sds})"
