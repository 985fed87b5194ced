"""The multipliers that prove a conflict, exactly: the rows of its members that add up to nothing.

An irreducible set of members leaves its multipliers no freedom but their scale (Farkas; an
irreducible system of m rows has rank m - 1): they are the null space of the members' rows.
"""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

import numpy as np

from fluxnet.exact.programme import ExactProgramme, excludes, to_fraction
from fluxnet.exact.sparse import NullSpace, null_space, point_near
from fluxnet.ground.record import record
from fluxnet.solving.linear import Programme
from fluxnet.solving.members import Member
from fluxnet.solving.problem import Problem

__all__ = ["Contradiction", "Weight", "find_contradiction"]

_ROUNDING = 1e-9


@record
class Weight:
    """One bound of a contradiction with its multiplier.

    ``row`` or ``column`` is its place in the problem (the other is None), ``end`` the bound
    that counts: the upper one where ``factor`` is positive, else the lower.
    """

    member: Member
    row: int | None
    column: int | None
    factor: Fraction
    end: Fraction

    @property
    def worth(self) -> Fraction:
        """The most that the bound lets its term be."""
        return self.factor * self.end


@record
class Contradiction:
    """Bounds whose weighted sum is nothing for any fluxes, and yet has to be negative.

    The sum of ``factor`` times row (or flux) vanishes identically; no term exceeds its
    ``worth``, and these add up to ``-gap``. Reckoned in rational numbers, so that it is a proof.
    """

    weights: tuple[Weight, ...]
    gap: Fraction


def find_contradiction(
    problem: Problem, exact: ExactProgramme, members: Sequence[Member]
) -> Contradiction | None:
    """The multipliers by which the members of a conflict contradict one another.

    Parameters
    ----------
    exact
        The same problem in exact numbers (:func:`fluxnet.solving.proof.exact_programme`).
    members
        Those of an irreducible set.

    Returns
    -------
    Contradiction or None
        None where no combination of the members is an exact proof.

    Examples
    --------
    >>> from fluxnet.solving.conflict import find_conflict
    >>> from fluxnet.solving.problem import Row, RowKind
    >>> from fluxnet.solving.proof import exact_programme
    >>> labels = (Row(RowKind.LIMIT, "limit a <= 1"), Row(RowKind.LIMIT, "limit 2 a >= 3"))
    >>> problem = Problem(("a",), labels, np.array([[1.0], [2.0]]),
    ...     np.array([-np.inf, 3.0]), np.array([1.0, np.inf]), np.zeros(1), np.full(1, np.inf))
    >>> members = find_conflict(problem).members
    >>> found = find_contradiction(problem, exact_programme(problem), members)
    >>> [float(w.factor / found.gap) for w in found.weights]
    [2.0, -1.0]
    """
    places = [(m, i) for m in members for i in m.rows]
    held = {m.column for m in members if m.column is not None}
    space = _null_space(exact, places, held)
    factors = space.point([Fraction(1)]) if space.dimension == 1 else ()
    if space.dimension > 1:
        # A member of several rows needs one of them: the solver tells which.
        rough = _rough(problem, members, [i for _, i in places])
        kept = [k for k, weight in enumerate(rough) if weight]
        places = [places[k] for k in kept]
        factors = point_near(_null_space(exact, places, held), [rough[k] for k in kept])
    for sign in (1, -1) if factors else ():
        found = _weighed(exact, members, places, [sign * f for f in factors])
        if found is not None and _is_proof(exact, found):
            return found
    return None


def _null_space(
    exact: ExactProgramme, places: list[tuple[Member, int]], held: set[int]
) -> NullSpace:
    """The combinations of rows that leave nothing of any flux without a bound."""
    columns: dict[int, dict[int, Fraction]] = {}
    for k, (_, i) in enumerate(places):
        for j, value in exact.rows[i].items():
            columns.setdefault(j, {})[k] = to_fraction(value)
    return null_space([columns[j] for j in columns if j not in held], len(places))


def _is_proof(exact: ExactProgramme, found: Contradiction) -> bool:
    """Whether the multipliers of the rows exclude all fluxes, by the check of every proof."""
    weights = [Fraction(0)] * len(exact.rows)
    for weight in found.weights:
        if weight.row is not None:
            weights[weight.row] = -weight.factor
    return excludes(exact, weights)


def _rough(problem: Problem, members: Sequence[Member], places: list[int]) -> list[float]:
    """The solver's multipliers of the members' rows, as far as they are more than rounding."""
    programme = Programme(problem)
    rows, columns = set(places), {m.column for m in members}
    for i in range(len(problem.rows)):
        if i not in rows:
            programme.set_row_bounds(i, -np.inf, np.inf)
    for j in range(len(problem.columns)):
        if j not in columns:
            programme.set_column_bounds(j, -np.inf, np.inf)
    ray = None if programme.is_feasible() else programme.dual_ray()
    if ray is None:
        return [1.0] * len(places)
    least = _ROUNDING * float(np.abs(ray).max(initial=0.0))
    return [float(ray[i]) if abs(ray[i]) > least else 0.0 for i in places]


def _weighed(
    exact: ExactProgramme,
    members: Sequence[Member],
    places: list[tuple[Member, int]],
    factors: list[Fraction],
) -> Contradiction | None:
    """The contradiction of these multipliers of the rows, where they make one."""
    weights: list[Weight] = []
    pull: dict[int, Fraction] = {}
    for (member, i), factor in zip(places, factors, strict=True):
        if not factor:
            continue
        for j, value in exact.rows[i].items():
            pull[j] = pull.get(j, Fraction(0)) + factor * to_fraction(value)
        end = _end(exact, exact.columns + i, factor)
        if end is None:
            return None
        weights.append(Weight(member, i, None, factor, end))
    owners = {m.column: m for m in members if m.column is not None}
    for j, value in pull.items():
        if not value:
            continue
        end = _end(exact, j, -value)
        if j not in owners or end is None:
            return None
        weights.append(Weight(owners[j], None, j, -value, end))
    total = sum((w.worth for w in weights), Fraction(0))
    return Contradiction(tuple(weights), -total) if total < 0 else None


def _end(exact: ExactProgramme, place: int, factor: Fraction) -> Fraction | None:
    """The bound that counts for a factor, of a flux or (behind them) a row."""
    end = (exact.high if factor > 0 else exact.low)[place]
    return None if end is None else to_fraction(end)
