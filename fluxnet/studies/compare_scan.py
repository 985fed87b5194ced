"""The optima of many cases on one warm programme, and their proofs."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from fluxnet.exact.programme import to_fraction
from fluxnet.exact.simplex import End, Place
from fluxnet.ground.record import record
from fluxnet.solving.linear import LinearSolution, Outcome, Programme
from fluxnet.solving.problem import Problem
from fluxnet.solving.proof import Proven, prove_outcome
from fluxnet.studies.aims import Sense
from fluxnet.studies.compare_family import Family, Member, own_problem, own_programme
from fluxnet.studies.compare_modes import Question
from fluxnet.studies.optimum_proof import as_proven

__all__ = ["Best", "Solved", "find_best", "scan", "solve_again"]

Array = NDArray[np.float64]


@record
class Solved:
    """What the floating-point solver says of one question, and where its basis stands."""

    solution: LinearSolution
    places: tuple[Place, ...]


@record
class Best:
    """The most product of one question.

    ``amount`` is exact (None unless the outcome is OPTIMAL), in the unit of the basis.
    ``problem`` is the case's own, ``best`` its solution there with the exact numbers rounded,
    ``cost`` the product's release by column.
    """

    outcome: Outcome
    amount: Fraction | None
    question: Question
    problem: Problem
    cost: Array
    best: LinearSolution
    proven: Proven


def scan(
    family: Family,
    asked: Sequence[tuple[Member, Question]],
    product: str,
    matrix: Array | None = None,
    *,
    places: bool = True,
) -> Iterator[Solved]:
    """The most of a product under each question, one after another on one warm programme.

    Parameters
    ----------
    matrix
        The family's matrix at other numbers of uncertain parameters.
    places
        Tell the last basis as well, from which :func:`find_best` proves the answer.
    """
    problem = family.problem
    if matrix is not None:
        problem = _with_matrix(problem, matrix)
    cost = problem.matrix[family.place(product)]
    programme = Programme(problem)
    rows, columns = len(problem.rows), len(problem.columns)
    now = _Bounds(np.full(rows, -np.inf), np.full(rows, np.inf),
                  np.full(columns, -np.inf), np.full(columns, np.inf))  # fmt: skip
    backwards = np.array([-np.inf if c.reaction.reversible else 0.0 for c in family.columns])
    for member, question in asked:
        new = _Bounds(np.full(rows, -np.inf), np.full(rows, np.inf),
                      np.zeros(columns), np.zeros(columns))  # fmt: skip
        own = list(member.rows)
        new.row_low[own], new.row_high[own] = question.low, question.high
        own = list(member.columns)
        new.column_low[own], new.column_high[own] = backwards[own], np.inf
        _move(programme, now, new)
        now = new
        solution = programme.maximise(cost)
        yield Solved(solution, programme.places() if places else ())


@record
class _Bounds:
    row_low: Array
    row_high: Array
    column_low: Array
    column_high: Array


def _move(programme: Programme, now: _Bounds, new: _Bounds) -> None:
    """Change the bounds that differ."""
    changed = (now.row_low != new.row_low) | (now.row_high != new.row_high)
    for i in np.flatnonzero(changed).tolist():
        programme.set_row_bounds(i, new.row_low[i], new.row_high[i])
    changed = (now.column_low != new.column_low) | (now.column_high != new.column_high)
    for j in np.flatnonzero(changed).tolist():
        programme.set_column_bounds(j, new.column_low[j], new.column_high[j])


def _with_matrix(problem: Problem, matrix: Array) -> Problem:
    from dataclasses import replace

    return replace(problem, matrix=matrix)


def find_best(
    family: Family, member: Member, question: Question, product: str, solved: Solved
) -> Best:
    """Prove an answer of :func:`scan` in exact arithmetic, on the case's own programme."""
    row = family.rows[family.place(product)]
    place = {j: k for k, j in enumerate(member.columns)}
    costs = {place[j]: -to_fraction(a) for j, a in row.items() if j in place}
    programme = own_programme(family, member, question.bounds, costs)
    count = len(family.problem.columns)
    own = [solved.places[j] for j in member.columns]
    own += [solved.places[count + i] for i in member.rows]
    proven = prove_outcome(programme, own, solved.solution.outcome)
    problem = own_problem(family, member, (question.low, question.high))
    cost = np.zeros(len(problem.columns))
    for j, value in costs.items():
        cost[j] = -float(value)
    solution = LinearSolution(
        solved.solution.outcome,
        solved.solution.objective,
        np.array(solved.solution.fluxes[list(member.columns)]),
        solved.solution.row_prices[list(member.rows)],
        solved.solution.column_prices[list(member.columns)],
        solved.solution.residual,
    )
    best = as_proven(solution, proven, Sense.MAXIMISE)
    amount: Fraction | None = None
    if best.outcome is Outcome.OPTIMAL:
        is_exact = proven.proof.verified and proven.solution.end is End.OPTIMAL
        amount = -proven.solution.objective if is_exact else Fraction(best.objective)
    return Best(best.outcome, amount, question, problem, cost, best, proven)


def solve_again(
    family: Family, member: Member, question: Question, product: str
) -> Best:
    """One question by itself, from a cold start."""
    (solved,) = scan(family, [(member, question)], product)
    return find_best(family, member, question, product, solved)
