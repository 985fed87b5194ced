"""Sparse null spaces agree with the dense elimination, and hold exactly."""

from __future__ import annotations

import random
from fractions import Fraction

import pytest

from fluxnet.exact.linear import independent_rows, rank
from fluxnet.exact.sparse import independent_forms, null_space, point_near, product


def sparse_matrix(size: int, rows: int, each: int, seed: str) -> list[dict[int, Fraction]]:
    dice = random.Random(seed)
    values = [Fraction(1), Fraction(-1), Fraction(2), Fraction(-1, 2), Fraction(3, 10)]
    matrix: list[dict[int, Fraction]] = [{} for _ in range(rows)]
    for column in range(size):
        for row in dice.sample(range(rows), min(each, rows)):
            matrix[row][column] = dice.choice(values)
    if rows > 2:
        matrix[1] = {j: 2 * v for j, v in matrix[0].items()}
    return matrix


def dense(matrix: list[dict[int, Fraction]], columns: int) -> list[list[Fraction]]:
    return [[row.get(j, Fraction(0)) for j in range(columns)] for row in matrix]


SIZES = [(1, 1, 1), (6, 4, 2), (12, 30, 3), (40, 30, 3), (90, 70, 4)]


@pytest.mark.parametrize(("columns", "rows", "each"), SIZES)
def test_every_basis_vector_meets_every_row_and_their_number_is_right(
    columns: int, rows: int, each: int
) -> None:
    matrix = sparse_matrix(columns, rows, each, f"null space {columns} {rows}")

    space = null_space(matrix, columns)

    assert space.dimension == columns - rank(dense(matrix, columns), columns)
    for k in range(space.dimension):
        one = [Fraction(int(k == m)) for m in range(space.dimension)]
        point = space.point(one)
        assert point[space.free[k]] == 1
        assert all(product(row, point) == 0 for row in matrix)


def test_a_matrix_that_fills_up_is_finished_by_the_dense_elimination() -> None:
    matrix = sparse_matrix(150, 120, 12, "fills up")

    space = null_space(matrix, 150)

    assert space.dimension == 150 - rank(dense(matrix, 150), 150)
    point = space.point([Fraction(k + 1) for k in range(space.dimension)])
    assert all(product(row, point) == 0 for row in matrix)


@pytest.mark.parametrize(("columns", "rows", "each"), SIZES)
def test_the_first_independent_rows_are_those_of_the_dense_elimination(
    columns: int, rows: int, each: int
) -> None:
    matrix = sparse_matrix(columns, rows, each, f"independent {columns} {rows}")

    assert independent_forms(matrix) == independent_rows(dense(matrix, columns), columns)


def test_the_image_of_a_form_vanishes_exactly_where_the_rows_imply_it() -> None:
    space = null_space([{0: Fraction(1), 1: Fraction(-1)}], 3)

    assert space.image({0: Fraction(2), 1: Fraction(-2)}) == {}
    assert space.image({0: Fraction(1), 2: Fraction(1)}) != {}


def test_a_point_near_a_guess_is_exact_and_near() -> None:
    space = null_space([{0: Fraction(1), 1: Fraction(-3)}, {1: Fraction(2), 2: Fraction(-1)}], 3)

    point = point_near(space, [0.3 + 1e-12, 0.1, 0.2 - 1e-12])

    assert point[0] == 3 * point[1]
    assert point[2] == 2 * point[1]
    assert float(point[1]) == pytest.approx(0.1, abs=1e-8)


def test_columns_without_a_row_are_free() -> None:
    assert null_space([], 2).free == (0, 1)
    assert null_space([{}], 1).dimension == 1
