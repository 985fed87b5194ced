"""The exact optimum from any basis, and proofs that stand by themselves."""

from __future__ import annotations

import random
from fractions import Fraction

import numpy as np
import pytest
from scipy.optimize import linprog

from fluxnet.exact.programme import (
    ExactProgramme,
    excludes,
    is_endless,
    least_value,
    make_programme,
    meets,
)
from fluxnet.exact.simplex import End, Place, solve_from

Bound = tuple[Fraction | None, Fraction | None]


class Draw:
    """A random programme, and the same for scipy."""

    def __init__(self, dice: random.Random) -> None:
        self.columns, count = dice.randint(2, 9), dice.randint(1, 7)
        numbers = [-3, -2, -1, 1, 2, 3]
        self.rows = [
            {
                j: Fraction(dice.choice(numbers), dice.choice([1, 1, 2, 5]))
                for j in range(self.columns)
                if dice.random() < 0.5
            }
            for _ in range(count)
        ]
        self.row_bounds = [self._bounds(dice) for _ in range(count)]
        self.column_bounds = [
            (
                dice.choice([Fraction(0), Fraction(0), None, Fraction(-5)]),
                dice.choice([None, Fraction(3), Fraction(9)]),
            )
            for _ in range(self.columns)
        ]
        self.costs = {j: Fraction(dice.randint(-3, 3)) for j in range(self.columns)}

    @staticmethod
    def _bounds(dice: random.Random) -> Bound:
        if dice.random() < 0.5:
            value = Fraction(dice.choice([0, 0, 1]))
            return value, value
        return (
            dice.choice([None, Fraction(dice.randint(-4, 0))]),
            dice.choice([None, Fraction(dice.randint(0, 5))]),
        )

    def programme(self) -> ExactProgramme:
        return make_programme(
            self.columns, self.rows, self.row_bounds, self.column_bounds, self.costs
        )

    def by_linprog(self, method: str, weight: float = 1.0):
        matrix = np.array(
            [[float(row.get(j, 0)) for j in range(self.columns)] for row in self.rows]
        )
        upper, ends, equal, values = [], [], [], []
        for line, (low, high) in zip(matrix, self.row_bounds, strict=True):
            if low is not None and low == high:
                equal.append(line)
                values.append(float(low))
                continue
            if high is not None:
                upper.append(line)
                ends.append(float(high))
            if low is not None:
                upper.append(-line)
                ends.append(-float(low))
        bounds = [
            tuple(None if end is None else float(end) for end in both)
            for both in self.column_bounds
        ]
        costs = [weight * float(self.costs[j]) for j in range(self.columns)]
        return linprog(
            costs, upper or None, ends or None, equal or None, values or None, bounds=bounds,
            method=method,
        )


@pytest.mark.parametrize("method", ["highs-ds", "highs-ipm"])
def test_from_any_basis_the_end_is_that_of_an_independent_solver(method: str) -> None:
    dice = random.Random(f"exact simplex against {method}")
    seen = dict.fromkeys(End, 0)
    for _ in range(200):
        draw = Draw(dice)
        programme = draw.programme()
        places = [dice.choice(list(Place)) for _ in range(draw.columns + len(draw.rows))]
        found = solve_from(programme, places)
        seen[found.end] += 1
        # With costs linprog may call infeasible what is unbounded, so it is asked twice.
        is_feasible = draw.by_linprog(method, weight=0.0).status == 0
        answer = draw.by_linprog(method)
        assert (found.end is End.INFEASIBLE) is not is_feasible
        assert (found.end is End.OPTIMAL) is (answer.status == 0)
        if found.end is End.OPTIMAL:
            assert float(found.objective) == pytest.approx(answer.fun, abs=1e-7)
            assert meets(programme, found.fluxes)
            assert least_value(programme, found.prices) == found.objective
        elif found.end is End.INFEASIBLE:
            assert excludes(programme, found.weights)
        else:
            assert found.end is End.UNBOUNDED
            assert meets(programme, found.fluxes)
            assert is_endless(programme, found.ray)
    assert min(seen[end] for end in (End.OPTIMAL, End.INFEASIBLE, End.UNBOUNDED)) > 20


def test_a_proof_that_is_off_by_the_last_digit_is_none() -> None:
    one, tiny = Fraction(1), Fraction(1, 10**30)
    programme = make_programme(
        2, [{0: one, 1: one}], [(one, one)], [(0 * one, None)] * 2, {0: one, 1: 2 * one}
    )

    assert meets(programme, (one, 0 * one))
    assert not meets(programme, (one + tiny, 0 * one))
    assert not meets(programme, (one + tiny, -tiny))
    assert least_value(programme, [one]) == 1
    assert least_value(programme, [one - tiny]) == 1 - tiny
    assert least_value(programme, [one + tiny]) is None


def test_when_the_pivots_run_out_it_says_how_far_off_it_is() -> None:
    one = Fraction(1)
    programme = make_programme(
        2, [{0: one, 1: 3 * one}], [(one, None)], [(0 * one, None)] * 2, {0: one, 1: one}
    )
    worst = [Place.BASIC, Place.LOW, Place.LOW]

    assert solve_from(programme, worst, most_pivots=0).end is End.OPEN
    assert solve_from(programme, worst, most_pivots=0).off == 2
    assert solve_from(programme, worst).off == 0


def test_a_singular_basis_is_mended() -> None:
    one = Fraction(1)
    programme = make_programme(
        2, [{0: one, 1: one}, {0: one, 1: one}], [(one, one)] * 2, [(0 * one, None)] * 2, {0: one}
    )
    found = solve_from(programme, [Place.BASIC, Place.BASIC, Place.LOW, Place.LOW])

    assert found.end is End.OPTIMAL
    assert found.objective == 0


def test_equalities_that_differ_by_1e_minus_20_contradict_one_another() -> None:
    one = Fraction(1)
    other = one + Fraction(1, 10**20)
    programme = make_programme(
        1, [{0: one}, {0: one}], [(one, one), (other, other)], [(0 * one, None)], {0: one}
    )
    found = solve_from(programme, [Place.BASIC, Place.LOW, Place.BASIC])

    assert found.end is End.INFEASIBLE
    assert found.off == Fraction(1, 10**20)
    assert excludes(programme, found.weights)
