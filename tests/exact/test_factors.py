"""Both triangular halves of a matrix: solved forwards and turned, and told where it is singular."""

from __future__ import annotations

import random
from fractions import Fraction

from flint import fmpq, fmpq_mat

from fluxnet.exact.factors import factorise

SIZE = 12


def sparse(dice: random.Random) -> list[dict[int, fmpq]]:
    rows: list[dict[int, fmpq]] = [{} for _ in range(SIZE)]
    for i, row in enumerate(rows):
        row[i] = fmpq(dice.choice([1, -1, 2]))
        for j in dice.sample(range(SIZE), 2):
            row[j] = fmpq(dice.randint(-3, 3) or 1, dice.choice([1, 2, 7]))
    return rows


def test_both_systems_are_solved_exactly_as_a_dense_method_solves_them() -> None:
    dice = random.Random("factors against a dense solution")
    regular = 0
    for _ in range(60):
        rows = sparse(dice)
        dense = fmpq_mat([[row.get(j, fmpq(0)) for j in range(SIZE)] for row in rows])
        factors = factorise(list(enumerate(rows)), range(SIZE))
        assert factors.is_regular is (dense.rank() == SIZE)
        if not factors.is_regular:
            continue
        regular += 1
        right = [fmpq(dice.randint(-5, 5)) for _ in range(SIZE)]
        given = {k: v for k, v in enumerate(right) if v}
        column = fmpq_mat([[v] for v in right])
        for matrix, found in (
            (dense, factors.solve(given)),
            (dense.transpose(), factors.solve_turned(given)),
        ):
            expected = matrix.solve(column)
            assert [found.get(k, fmpq(0)) for k in range(SIZE)] == [
                expected[k, 0] for k in range(SIZE)
            ]
            assert all(found.values())
    assert regular > 40


def test_rows_and_columns_without_a_pivot_are_named() -> None:
    one = fmpq(1)
    factors = factorise([(0, {0: one, 1: one}), (1, {0: one, 1: one}), (2, {2: one})], range(3))

    assert not factors.is_regular
    assert len(factors.rows) == len(factors.columns) == 1
    assert factors.rows[0] in (0, 1)
    assert factors.columns[0] in (0, 1)


def test_a_chain_is_split_without_any_elimination() -> None:
    one, length = fmpq(1), 300
    rows = [(i, {i: one, i + 1: -one} if i + 1 < length else {i: one}) for i in range(length)]
    factors = factorise(rows, range(length))

    assert all(not step.shares for step in factors.steps)
    assert factors.solve({length - 1: fmpq(Fraction(3).numerator)})[0] == 3
