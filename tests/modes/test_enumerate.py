"""All elementary modes: exact, minimal, and none missing."""

from __future__ import annotations

import sys
from fractions import Fraction
from math import gcd
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings

from fluxnet.exact.linear import kernel
from fluxnet.modes.cone import Cone
from fluxnet.modes.enumerate import Ending, Modes, find_modes

sys.path.insert(0, str(Path(__file__).resolve().parent))
from every_support import canonical, every_mode, fits
from small_cones import cones

ONE = Fraction(1)


def found(cone: Cone, modes: Modes) -> set[tuple[int, ...]]:
    return {canonical(cone, mode) for mode in modes.values.tolist()}


@settings(max_examples=300, deadline=None)
@given(cones())
def test_the_modes_are_those_of_an_exhaustive_search(cone: Cone) -> None:
    modes = find_modes(cone)

    assert modes.ending is Ending.COMPLETE
    assert found(cone, modes) == every_mode(cone)
    assert modes.count == len(found(cone, modes))


@settings(max_examples=100, deadline=None)
@given(cones(most=14))
def test_each_mode_balances_exactly_and_no_part_of_it_does(cone: Cone) -> None:
    for mode in find_modes(cone).values.tolist():
        support = [j for j, v in enumerate(mode) if v]
        rows = [[row.get(j, Fraction(0)) for j in support] for row in cone.rows]

        assert all(sum(row.get(j, 0) * v for j, v in enumerate(mode)) == 0 for row in cone.rows)
        assert fits(cone, mode)
        assert gcd(*mode) == 1
        assert len(kernel(rows, len(support))) == 1


@settings(max_examples=60, deadline=None)
@given(cones())
def test_a_search_without_memory_keeps_modes_that_are_among_all(cone: Cone) -> None:
    few = find_modes(cone, memory=1)

    assert found(cone, few) <= found(cone, find_modes(cone))
    assert few.needed > 1 or few.ending is Ending.COMPLETE


def wide_cone(layers: int) -> Cone:
    """A chain of species with two reactions from each to the next, and a way back for half."""
    columns, rows = [], [dict[int, Fraction]() for _ in range(layers + 1)]
    for k in range(layers):
        for name in ("a", "b"):
            rows[k][len(columns)], rows[k + 1][len(columns)] = -ONE, ONE
            columns.append(f"{name}{k}")
    rows[0][len(columns)] = ONE
    columns.append("in")
    rows[layers][len(columns)] = -ONE
    columns.append("out")
    return Cone(tuple(columns), (False,) * len(columns), tuple(rows))


def test_a_chain_of_choices_has_a_mode_for_each_way_through() -> None:
    assert find_modes(wide_cone(10)).count == 2**10


def test_more_columns_than_a_word_holds_change_nothing() -> None:
    # 70 columns that cannot be lumped: two words of bits
    modes = find_modes(wide_cone(9))
    rows = wide_cone(9).rows
    idle = Cone(
        (*wide_cone(9).columns, *(f"x{k}" for k in range(60))),
        (*wide_cone(9).both_ways, *([False] * 60)),
        (*rows, *({20 + 2 * k: ONE, 21 + 2 * k: -ONE} for k in range(30))),
    )
    free = Cone(idle.columns, idle.both_ways, rows)

    assert find_modes(idle).count == modes.count + 30
    assert find_modes(free).count == modes.count + 60


def test_numbers_beyond_64_bits_stay_exact() -> None:
    big = Fraction(10**12 + 39)
    rows = tuple({k: -big, k + 1: Fraction(10**12 + 61), 8 + k: ONE} for k in range(7))
    cone = Cone(tuple(f"r{j}" for j in range(15)), (False,) * 8 + (True,) * 7, rows)
    chain = Cone(cone.columns[:8], (False,) * 8, tuple(
        {j: v for j, v in row.items() if j < 8} for row in rows
    ))
    (mode,) = find_modes(chain).values.tolist()

    assert mode[0] == (10**12 + 61) ** 7
    for row in rows:
        assert all(
            sum(a * v[j] for j, a in row.items()) == 0 for v in find_modes(cone).values.tolist()
        )


def test_an_interrupted_search_keeps_what_it_found() -> None:
    told: list[int] = []

    def stop(what: str, done: int, total: int) -> None:
        told.append(done)
        if len(told) == 6:
            raise KeyboardInterrupt

    modes = find_modes(wide_cone(12), progress=stop)

    assert modes.ending is Ending.INTERRUPTED
    assert modes.held > 0
    everything = {tuple(v) for v in find_modes(wide_cone(12)).values.tolist()}
    assert {tuple(v) for v in modes.values.tolist()} <= everything


def test_a_bound_on_memory_stops_the_search_before_it_is_passed() -> None:
    modes = find_modes(wide_cone(16), memory=20e6)

    assert modes.ending is Ending.MEMORY
    assert modes.needed > 20e6
    assert modes.values.nbytes < 20e6


@pytest.mark.parametrize(("rows", "found"), [((), [[1]]), (({0: ONE},), [])])
def test_a_cone_of_one_column_has_its_one_mode_or_none(rows: tuple, found: list) -> None:
    modes = find_modes(Cone(("a",), (False,), rows))

    assert modes.values.tolist() == found
    assert modes.values.dtype == np.int64
