"""How far yields move with the errors of the numbers they rest on: the same draws for all.

Each uncertain number (a parameter with ±, a measured maintenance) is drawn from a normal
distribution cut off at its range. One draw of a number serves every case (common random
numbers), so that what two cases share does not blur their difference.
"""

from __future__ import annotations

import zlib
from collections.abc import Mapping, Sequence
from fractions import Fraction
from math import isfinite
from statistics import NormalDist

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.progress import Progress, silent
from fluxnet.ground.record import record
from fluxnet.network.model import Parameter
from fluxnet.solving.linear import Outcome
from fluxnet.studies.compare_family import Family, Member
from fluxnet.studies.compare_modes import Demand, Demands, Mode, Question, ask, moles_of
from fluxnet.studies.compare_scan import scan

__all__ = ["SEED", "Asked", "Drawn", "beats", "draw_all", "interval"]

Array = NDArray[np.float64]

SEED = 20_240_229
"""The seed of the draws; it was fixed before any result was seen."""

_NORMAL = NormalDist()


@record
class Asked:
    """One yield to be drawn: a case, what is in force, and the uptake of its substrate."""

    name: str
    mode: Mode
    family: int
    member: Member
    demands: Demands
    held: frozenset[Demand]
    product: str
    uptake: Fraction


@record
class Drawn:
    """Yields [mol/mol] at ``count`` draws of the numbers of some ``names``, by case and mode."""

    names: tuple[str, ...]
    values: Mapping[tuple[str, Mode], Array]
    count: int = 0

    def of(self, name: str, mode: Mode, otherwise: Array | None = None) -> Array | None:
        """The draws of a case's yield in one mode."""
        return self.values.get((name, mode), otherwise)

    def last(self, name: str) -> Array | None:
        """The draws of a case's yield with most demands."""
        own = [self.values[name, mode] for mode in Mode if (name, mode) in self.values]
        return own[-1] if own else None


def draw_all(
    families: Sequence[Family],
    asked: Sequence[Asked],
    draws: int,
    seed: int = SEED,
    *,
    progress: Progress = silent,
) -> Drawn:
    """The yields at draws of all numbers with ± that any of them rests on.

    Where nothing is feasible at a draw, such as a maintenance that cannot be met, the yield
    counts as 0. An interruption keeps the draws that are done.
    """
    names = _uncertain(families, asked)
    if not names or not draws:
        return Drawn((), {})
    found = np.zeros((len(asked), draws))
    levels = {
        name: np.random.default_rng([seed, zlib.crc32(name.encode())]).random(draws)
        for name in names
    }
    groups = [[k for k, one in enumerate(asked) if one.family == f] for f in range(len(families))]
    done = 0
    try:
        for d in range(draws):
            progress("draws", d, draws)
            at = {name: float(level[d]) for name, level in levels.items()}
            for family, own in zip(families, groups, strict=True):
                if own:
                    found[own, d] = _one_draw(family, [asked[k] for k in own], at)
            done = d + 1
    except KeyboardInterrupt:
        if not done:
            raise
    rows = zip(asked, found[:, :done], strict=True)
    return Drawn(names, {(one.name, one.mode): row for one, row in rows}, done)


def _one_draw(family: Family, asked: Sequence[Asked], at: Mapping[str, float]) -> list[float]:
    """The yields of one family's questions at a draw."""
    questions = [(one.member, _question(one, at)) for one in asked]
    solved = scan(family, questions, asked[0].product, _matrix(family, at), places=False)
    return [
        each.solution.objective * _per_mole(one)
        if each.solution.outcome is Outcome.OPTIMAL
        else 0.0
        for one, each in zip(asked, solved, strict=True)
    ]


def _uncertain(families: Sequence[Family], asked: Sequence[Asked]) -> tuple[str, ...]:
    names = {p.name for f in families for c in f.columns for p in c.uncertain}
    for one in asked:
        if Demand.MAINTENANCE in one.held:
            rows = _uncertain_rows(one.member, one.demands)
            names |= {str(one.member.labels[k].quantity) for k in rows}
    return tuple(sorted(names))


def interval(drawn: Array) -> tuple[float, float]:
    """What holds 95 % of the draws."""
    low, high = (float(end) for end in np.quantile(drawn, [0.025, 0.975]))
    near = 1e-9 * max(abs(low), abs(high))
    return (high, high) if high - low <= near else (low, high)


def beats(first: Array, second: Array) -> float:
    """The share of draws in which the first is larger; a tie counts half.

    Examples
    --------
    >>> beats(np.array([1.0, 2.0, 3.0, 3.0]), np.array([0.0, 2.0, 4.0, 1.0]))
    0.625
    """
    near = 1e-9 * np.maximum(np.abs(first), np.abs(second))
    return float(np.mean(np.where(np.abs(first - second) <= near, 0.5, first > second)))


def _per_mole(one: Asked) -> float:
    case = one.member.case
    used = one.uptake / moles_of(case.network, case.substrate)
    return 1.0 / float(used * moles_of(case.network, one.product))


def _uncertain_rows(member: Member, demands: Demands) -> list[int]:
    return [
        k
        for k, (row, kind) in enumerate(zip(member.labels, demands.kinds, strict=True))
        if kind is Demand.MAINTENANCE and row.sd and row.value is not None
    ]


def _question(one: Asked, at: Mapping[str, float]) -> Question:
    """The question at a draw of the maintenance."""
    moved: dict[int, float] = {}
    for k in _uncertain_rows(one.member, one.demands):
        row = one.member.labels[k]
        level = at.get(str(row.quantity))
        if level is not None and row.value is not None and row.sd:
            moved[k] = _drawn(level, row.value, row.sd, 0.0, None)
    return ask(one.member, one.demands, one.held, (one.uptake, one.uptake), moved)


def _drawn(level: float, value: float, sd: float, low: float | None, high: float | None) -> float:
    """The value below which a level of the cut-off normal distribution lies."""
    first = 0.0 if low is None else _NORMAL.cdf((low - value) / sd)
    last = 1.0 if high is None else _NORMAL.cdf((high - value) / sd)
    share = first + level * (last - first)
    if not 0 < share < 1:
        return value
    found = value + sd * _NORMAL.inv_cdf(share)
    return found if isfinite(found) else value


def _matrix(family: Family, at: Mapping[str, float]) -> Array:
    """The family's matrix at a draw."""
    made = np.zeros((len(family.species), len(family.columns)))
    place = {name: i for i, name in enumerate(family.species)}
    for j, column in enumerate(family.columns):
        if not column.uncertain:
            for name, value in column.made:
                made[place[name], j] = value
            continue
        numbers = {name: float(value) for name, value in column.numbers.items()}
        numbers |= {p.name: _value(p, at) for p in column.uncertain}
        for sign, term in column.reaction.terms:
            assert term.coefficient is not None
            made[place[term.species], j] += sign * term.coefficient.at(numbers)
    return family.weights @ made + family.fluxes


def _value(parameter: Parameter, at: Mapping[str, float]) -> float:
    low = None if parameter.low is None else float(parameter.low)
    high = None if parameter.high is None else float(parameter.high)
    return _drawn(at[parameter.name], float(parameter.value), float(parameter.sd or 0), low, high)
