"""Exact algebra against elimination by hand in plain fractions."""

from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from fluxnet.exact.linear import echelon, independent_rows, kernel, rank, solve

fractions = st.builds(
    Fraction, st.integers(-6, 6), st.sampled_from([1, 1, 1, 2, 3, 10, 1000])
)


@st.composite
def matrices(draw, least_rows=0):
    columns = draw(st.integers(1, 6))
    count = draw(st.integers(least_rows, 6))
    rows = [draw(st.lists(fractions, min_size=columns, max_size=columns)) for _ in range(count)]
    if len(rows) > 2 and draw(st.booleans()):
        rows[-1] = [a * 3 - b / 7 for a, b in zip(rows[0], rows[1], strict=True)]
    return rows, columns


def eliminated(rows, columns):
    """The reduced echelon form as one does it on paper."""
    table = [[Fraction(v) for v in row] for row in rows]
    pivots = []
    for column in range(columns):
        place = len(pivots)
        below = [i for i in range(place, len(table)) if table[i][column]]
        if not below:
            continue
        table[place], table[below[0]] = table[below[0]], table[place]
        lead = table[place][column]
        table[place] = [v / lead for v in table[place]]
        for i, row in enumerate(table):
            if i != place and row[column]:
                factor = row[column]
                table[i] = [a - factor * b for a, b in zip(row, table[place], strict=True)]
        pivots.append(column)
    return tuple(tuple(row) for row in table[: len(pivots)]), tuple(pivots)


def product(rows, x):
    return [sum(a * b for a, b in zip(row, x, strict=True)) for row in rows]


@settings(derandomize=True)
@given(matrices())
def test_the_echelon_form_is_that_of_elimination_by_hand(case):
    rows, columns = case
    form = echelon(rows, columns)
    by_hand, pivots = eliminated(rows, columns)
    assert form.rows == by_hand
    assert form.pivots == pivots
    assert form.rank == rank(rows, columns) == len(pivots)


@settings(derandomize=True)
@given(matrices())
def test_the_kernel_is_all_that_the_rows_send_to_zero(case):
    rows, columns = case
    basis = kernel(rows, columns)
    assert len(basis) == columns - rank(rows, columns)
    for vector in basis:
        assert not any(product(rows, vector))
    assert rank(basis, columns) == len(basis)


@settings(derandomize=True)
@given(matrices(least_rows=1), st.data())
def test_a_system_made_from_a_solution_is_solved(case, data):
    rows, columns = case
    x = data.draw(st.lists(fractions, min_size=columns, max_size=columns))
    right = product(rows, x)
    found = solve(rows, right, columns)
    assert found is not None
    assert product(rows, found) == right


@settings(derandomize=True)
@given(matrices(least_rows=1), st.data())
def test_a_system_has_no_solution_exactly_when_elimination_leaves_a_contradiction(case, data):
    rows, columns = case
    right = data.draw(st.lists(fractions, min_size=len(rows), max_size=len(rows)))
    joined = [[*row, b] for row, b in zip(rows, right, strict=True)]
    contradicts = columns in eliminated(joined, columns + 1)[1]
    assert (solve(rows, right, columns) is None) is contradicts


@settings(derandomize=True)
@given(matrices())
def test_independent_rows_are_the_first_that_add_to_the_rank(case):
    rows, columns = case
    kept = []
    for i in range(len(rows)):
        chosen = [rows[k] for k in [*kept, i]]
        if len(eliminated(chosen, columns)[1]) == len(chosen):
            kept.append(i)
    assert independent_rows(rows, columns) == tuple(kept)


def test_a_difference_of_one_part_in_a_quadrillion_counts():
    tiny = Fraction(1, 10**15)
    assert rank([[1, 1], [1, 1 + tiny]], 2) == 2
    assert solve([[1, 1], [1, 1]], [1, 1 + tiny], 2) is None
    assert solve([[1, 1], [1, 1 + tiny]], [1, 1], 2) == (1, 0)


def test_coefficients_of_1e12_beside_1e_minus_12_stay_exact():
    big, small = Fraction(10**12), Fraction(1, 10**12)
    assert solve([[big, small], [small, big]], [big + small, big + small], 2) == (1, 1)
    assert kernel([[big, small]], 2) == ((-small / big, 1),)


@pytest.mark.parametrize("columns", [0, 3])
def test_a_matrix_without_rows_has_rank_zero_and_everything_in_its_kernel(columns):
    assert rank([], columns) == 0
    assert echelon([], columns).rows == ()
    assert len(kernel([], columns)) == columns
    assert independent_rows([], columns) == ()
    assert solve([], [], columns) == (0,) * columns
