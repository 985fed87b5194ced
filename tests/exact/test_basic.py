from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fluxnet.exact.basic import find_nonnegative, largest

numbers = st.integers(-4, 4)
systems = st.integers(1, 4).flatmap(
    lambda n: st.tuples(
        st.lists(st.lists(numbers, min_size=n, max_size=n), min_size=1, max_size=4),
        st.lists(st.integers(0, 5), min_size=n, max_size=n),
    )
)


def product(rows, x):
    return [sum(a * b for a, b in zip(row, x, strict=True)) for row in rows]


@given(systems)
def test_a_system_made_from_a_solution_gets_one_that_fits(system):
    rows, x = system
    found = find_nonnegative(rows, product(rows, x), len(x))
    assert found is not None
    assert all(v >= 0 for v in found)
    assert product(rows, found) == product(rows, x)


@given(systems, st.data())
def test_no_solution_is_larger_than_the_largest(system, data):
    rows, x = system
    unknown = data.draw(st.integers(0, len(x) - 1))
    right = product(rows, x)
    most = largest(rows, right, len(x), unknown)
    if most is None:
        pinned = [*rows, [int(j == unknown) for j in range(len(x))]]
        assert find_nonnegative(pinned, [*right, 10**6], len(x)) is not None
        return
    assert most >= x[unknown]
    pinned = [*rows, [int(j == unknown) for j in range(len(x))]]
    assert find_nonnegative(pinned, [*right, most], len(x)) is not None
    assert find_nonnegative(pinned, [*right, most + Fraction(1, 7)], len(x)) is None


def test_signs_can_forbid_what_the_equations_allow():
    # x + y = 1, x + 2 y = 3 has the one solution x = -1, y = 2
    assert find_nonnegative([[1, 1], [1, 2]], [1, 3], 2) is None
    assert find_nonnegative([[1, 1], [1, 2]], [1, 2], 2) == (0, 1)


def test_equations_that_contradict_one_another_have_no_solution():
    assert find_nonnegative([[1, 1], [1, 1]], [1, 2], 2) is None
    with pytest.raises(ValueError, match="no x"):
        largest([[1, 1], [1, 1]], [1, 2], 2, 0)
