"""Why nothing is feasible: an irreducible set of limits and measurements, and the way out.

Limits and measurements are sifted first, with the whole network standing: none of those left
can be left out. Then the balances, roles and directions that they collide with are sifted.
"""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.solving.alter import without_bounds
from fluxnet.solving.least_change import Change, LeastChange, least_change
from fluxnet.solving.linear import Programme
from fluxnet.solving.members import Member, list_members
from fluxnet.solving.problem import Problem

__all__ = [
    "Change", "Conflict", "LeastChange", "find_conflict", "find_conflicts", "is_irreducible",
    "least_change", "without_members",
]

Vector = NDArray[np.float64]


@record
class Conflict:
    """Things that cannot hold together, though they can when any one of them is left out.

    ``members`` are limits and measurements first, then directions, roles and balances; empty
    where the problem has a solution. ``is_hard``: limits, roles and exact values contradict
    one another without any measured value. ``verified``: the set was solved once more on
    its own, and without each of its members.
    """

    members: tuple[Member, ...]
    is_hard: bool
    verified: bool

    @property
    def given(self) -> tuple[Member, ...]:
        """The limits and measurements among the members: no network explains them away."""
        return tuple(m for m in self.members if m.kind.is_given)


def find_conflict(problem: Problem, *, unit: str = "") -> Conflict:
    """An irreducible infeasible set of a problem without a solution.

    Where the hard part alone is infeasible, measured values take no part. The weights of the
    contradiction (Farkas) drop what plays no part in it; a deletion filter (Chinneck and
    Dravnieks 1991, from memory) makes the rest irreducible. Limits and measurements are
    filtered in two orders, and the shorter set is taken.

    Parameters
    ----------
    problem
        Built with measured values held within some of their sd.
    unit
        The text behind a measured rate in the members' words.

    Returns
    -------
    Conflict
        Without members where the problem has a solution.

    Raises
    ------
    ArithmeticError
        Where the solver could not tell.

    Examples
    --------
    >>> from fluxnet.solving.problem import Row, RowKind
    >>> rows = (Row(RowKind.LIMIT, "limit a <= 1"), Row(RowKind.LIMIT, "limit a + b >= 3"),
    ...     Row(RowKind.LIMIT, "limit b <= 1"), Row(RowKind.LIMIT, "limit a >= 0.5"))
    >>> problem = Problem(("a", "b"), rows, np.array([[1.0, 0], [1, 1], [0, 1], [1, 0]]),
    ...     np.array([-np.inf, 3, -np.inf, 0.5]), np.array([1, np.inf, 1, np.inf]),
    ...     np.zeros(2), np.full(2, np.inf))
    >>> [member.words for member in find_conflict(problem).members]
    ['limit a <= 1', 'limit a + b >= 3', 'limit b <= 1']
    """
    members = list_members(problem, unit)
    sieve = _Sieve(problem)
    if sieve.programme.is_feasible():
        return Conflict((), False, True)
    soft = [m for m in members if m.kind.is_measured and not m.exact]
    sieve.lift(soft)
    is_hard = not sieve.programme.is_feasible()
    if is_hard:
        members = tuple(m for m in members if m not in soft)
    else:
        sieve.lay(soft)
    given = [m for m in members if m.kind.is_given]
    making = [m for m in members if not m.kind.is_given]
    kept = sieve.filter(given)
    if len(kept) > 2:
        sieve.lay(m for m in given if m not in kept)
        kept = min(kept, sieve.filter(given[::-1]), key=len)
        sieve.lay(kept)
        sieve.lift(m for m in given if m not in kept)
    kept += sieve.filter(making[::-1])
    chosen = tuple(m for m in members if m in kept)
    return Conflict(chosen, is_hard, is_irreducible(problem, chosen))


def find_conflicts(problem: Problem, *, most: int = 3, unit: str = "") -> tuple[Conflict, ...]:
    """Conflicts that share no limit and no measurement; ``most`` of them at most.

    After each the limits and measurements among its members are lifted, and the rest is asked
    again. The search ends where there are none to lift, or the solver cannot tell of the rest.

    Returns
    -------
    tuple of Conflict
        Empty where the problem has a solution.

    Raises
    ------
    ArithmeticError
        Where the solver could not tell of the first.

    Examples
    --------
    >>> from fluxnet.solving.problem import Row, RowKind
    >>> rows = tuple(Row(RowKind.LIMIT, f"limit {n}") for n in ("a <= 1", "a >= 2", "b <= -1"))
    >>> problem = Problem(("a", "b"), rows, np.array([[1.0, 0], [1, 0], [0, 1]]),
    ...     np.array([-np.inf, 2, -np.inf]), np.array([1, np.inf, -1]), np.zeros(2),
    ...     np.full(2, np.inf))
    >>> sorted([m.name for m in conflict.given] for conflict in find_conflicts(problem))
    [['limit a <= 1', 'limit a >= 2'], ['limit b <= -1']]
    """
    found: list[Conflict] = []
    while len(found) < most:
        try:
            conflict = find_conflict(problem, unit=unit)
        except ArithmeticError:
            if not found:
                raise
            break
        if conflict.members:
            found.append(conflict)
        if not conflict.given:
            break
        problem = without_members(problem, conflict.given)
    return tuple(found)


def without_members(problem: Problem, members: Iterable[Member]) -> Problem:
    """The problem with the bounds of some limits and measurements lifted."""
    return without_bounds(problem, [i for member in members for i in member.rows])


class _Sieve:
    """A programme whose members are lifted off and laid back."""

    def __init__(self, problem: Problem) -> None:
        self.problem = problem
        self.programme = Programme(problem)

    def lift(self, members: Iterable[Member]) -> None:
        """Take the bounds of members away."""
        for member in members:
            for i in member.rows:
                self.programme.set_row_bounds(i, -np.inf, np.inf)
            if member.column is not None:
                self.programme.set_column_bounds(member.column, -np.inf, np.inf)

    def lay(self, members: Iterable[Member]) -> None:
        """Put the bounds of members back."""
        problem = self.problem
        for member in members:
            for i in member.rows:
                self.programme.set_row_bounds(
                    i, float(problem.row_low[i]), float(problem.row_high[i])
                )
            if member.column is not None:
                j = member.column
                self.programme.set_column_bounds(
                    j, float(problem.column_low[j]), float(problem.column_high[j])
                )

    def filter(self, members: Iterable[Member]) -> list[Member]:
        """Lift all members that can go while the rest stays infeasible; those that stay."""
        waiting, kept = list(members), list[Member]()
        self._drop_idle(waiting, kept)
        while waiting:
            member = waiting.pop(0)
            self.lift([member])
            if self.programme.is_feasible():
                self.lay([member])
                kept.append(member)
            else:
                self._drop_idle(waiting, kept)
        return kept

    def _drop_idle(self, waiting: list[Member], kept: list[Member]) -> None:
        """Lift, all at once, what has no weight in the contradiction just found."""
        if self.programme.is_feasible():
            raise ArithmeticError("the solver contradicts itself about a solution")
        weights = self.programme.dual_ray()
        if weights is None:
            return
        pull = weights @ self.problem.matrix
        size = np.abs(weights) @ np.abs(self.problem.matrix)
        rows = np.abs(weights) > 1e-9 * np.abs(weights).max(initial=0.0)
        columns = np.abs(pull) > 1e-9 * size
        idle = [
            m
            for m in waiting
            if not any(rows[i] for i in m.rows)
            and not (m.column is not None and columns[m.column])
        ]
        self.lift(idle)
        if self.programme.is_feasible():
            self.lay(idle)  # the weights were too rough to go by: each is tried on its own
            self.programme.is_feasible()
        else:
            waiting[:] = [m for m in waiting if m not in idle]


def is_irreducible(problem: Problem, members: tuple[Member, ...]) -> bool:
    """Whether members cannot hold together, and can without any one; from a cold start."""
    sieve = _Sieve(problem)
    sieve.lift(m for m in list_members(problem) if not _is_among(m, members))
    if sieve.programme.is_feasible():
        return False
    for member in members:
        sieve.lift([member])
        if not sieve.programme.is_feasible():
            return False
        sieve.lay([member])
    return True


def _is_among(member: Member, members: tuple[Member, ...]) -> bool:
    return any(m.rows == member.rows and m.column == member.column for m in members)

