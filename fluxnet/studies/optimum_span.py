"""How far an optimum moves with the errors of the parameters."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from itertools import product
from math import inf

from fluxnet.solving.build import Built, Uncertain, rebuild
from fluxnet.solving.linear import Outcome, Programme
from fluxnet.studies.aim_problem import aim_cost, open_carriers
from fluxnet.studies.aims import Aim, Sense
from fluxnet.studies.solution import OptimumSpan

__all__ = ["span_optimum"]

# So many parameters make 2**5 programmes; with more, each is moved by itself and then all
# together to the ends that were the worst and the best.
_ALL_CORNERS = 5


def span_optimum(built: Built, aim: Aim, optimum: float) -> OptimumSpan | None:
    """The optimum over ± 2 sd of every uncertain parameter, within the parameters' ranges.

    Each corner of that box is solved by itself. Between corners an optimum may lie beyond
    them only where the price of a carrier changes its sign inside the box.

    Returns
    -------
    OptimumSpan or None
        None where no number of the model is uncertain. An end is infinite where the aim has
        no best value at a corner; where at one nothing is feasible, ``feasible`` is False and
        the ends are those of the other corners.
    """
    uncertain = [u for u in built.uncertain if u.sd > 0]
    if not uncertain:
        return None
    names = tuple(u.name for u in uncertain)
    ends = {u.name: _ends(u) for u in uncertain}
    found: list[float | None] = [optimum]
    if len(uncertain) <= _ALL_CORNERS:
        found += [_optimum_at(built, aim, corner) for corner in _corners(ends)]
    else:
        alone = {n: [_optimum_at(built, aim, {n: end}) for end in ends[n]] for n in names}
        found += [value for values in alone.values() for value in values]
        for sign in (-1, 1):
            together = {n: _end_of(sign, alone[n], ends[n]) for n in names}
            found.append(_optimum_at(built, aim, together))
    known = [value for value in found if value is not None]
    return OptimumSpan(min(known), max(known), names, len(known) == len(found))


def _ends(number: Uncertain) -> tuple[float, float]:
    low = max(number.low, number.value - 2 * number.sd)
    return low, min(number.high, number.value + 2 * number.sd)


def _corners(ends: Mapping[str, tuple[float, float]]) -> Iterator[dict[str, float]]:
    for corner in product(*ends.values()):
        yield dict(zip(ends, corner, strict=True))


def _end_of(sign: int, optima: Sequence[float | None], ends: tuple[float, float]) -> float:
    """The end of a parameter at which the optimum is largest (sign 1) or least (-1)."""
    known = [(sign * v, end) for v, end in zip(optima, ends, strict=True) if v is not None]
    return max(known)[1] if known else ends[0]


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
