"""The best routes one after another are those of a full search, on random cones."""

from __future__ import annotations

import sys
from dataclasses import replace
from fractions import Fraction
from itertools import islice
from math import lcm
from pathlib import Path

from hypothesis import assume, given, settings

from fluxnet.modes.cone import Cone
from fluxnet.modes.enumerate import find_modes
from fluxnet.studies.routes_search import Search

sys.path.insert(0, str(Path(__file__).resolve().parents[1] / "modes"))
from small_cones import cones

ONE = Fraction(1)


def whole(route: tuple[Fraction, ...]) -> tuple[int, ...]:
    """A route in smallest whole numbers, where one of its fluxes is 1."""
    scale = lcm(*(v.denominator for v in route))
    return tuple(int(v * scale) for v in route)


def one_way(cone: Cone) -> Cone:
    """The cone with its first column, the uptake, one way."""
    return replace(cone, both_ways=(False, *cone.both_ways[1:]))


@settings(max_examples=300, deadline=None)
@given(cones(most=11))
def test_the_ranking_of_all_routes_is_that_of_their_yields(drawn: Cone) -> None:
    assume(len(drawn.columns) > 1)
    cone = one_way(drawn)
    modes = [tuple(mode) for mode in find_modes(cone).values.tolist()]
    ways = [mode for mode in modes if mode[0] > 0 and mode[1] > 0]
    search = Search(cone, {0: ONE}, {1: ONE})
    found = list(search.routes())

    if search.endless:
        back = cone.both_ways[1]
        assert any(not m[0] and (m[1] > 0 or (m[1] and back)) for m in modes)
        assert not found
        return
    yields = [route[1] / route[0] for route in found]
    assert all(route[0] == 1 for route in found)
    assert yields == sorted((Fraction(m[1], m[0]) for m in ways), reverse=True)
    assert {whole(route) for route in found} == set(ways)


@settings(max_examples=100, deadline=None)
@given(cones(most=11))
def test_the_first_few_do_not_depend_on_how_many_are_asked_for(drawn: Cone) -> None:
    assume(len(drawn.columns) > 1)
    cone = one_way(drawn)
    few = list(islice(Search(cone, {0: ONE}, {1: ONE}).routes(), 2))

    assert few == list(Search(cone, {0: ONE}, {1: ONE}).routes())[:2]
