"""What can run at all, proven in whole numbers."""

from __future__ import annotations

from collections.abc import Callable
from fractions import Fraction

import pytest

from fluxnet.checks.cone import Cone, Form, FormKind, flux_cone
from fluxnet.checks.interior import (
    Interior,
    exact_weights,
    find_interior,
    open_exactly,
    open_most,
)
from fluxnet.exact.sparse import null_space
from fluxnet.matrices.stoichiometry import stoichiometry
from fluxnet.network.model import Network

Read = Callable[[str], Network]

BASE = """
substrate glucose, oxygen
product   lactate
exchange  CO2
carrier   NADH carries 2 electrons
inside    A C6H12O6, B C6H12O6
compartment all
    r1 : glucose -> A
    r2 : A -> 2 lactate
    r3 : A -> 6 CO2 + 12 NADH
    r4 : NADH + 0.5 oxygen -> nothing
"""


def interior(network: Network) -> Interior:
    return find_interior(flux_cone(network, stoichiometry(network)))


def test_a_sound_network_has_nothing_closed(read: Read) -> None:
    found = interior(read(BASE))

    assert (found.blocked, found.closed, found.verified) == ((), (), True)
    assert found.space.dimension == 2


def test_directions_alone_can_close_reactions_whose_balances_would_run(read: Read) -> None:
    # r5 and r6 both lead away from A into B and out of B nothing leads: by balances alone they
    # could run against each other.
    found = interior(read(BASE + "    r5 : A -> B\n    r6 : 2 A -> 2 B\n"))

    assert found.blocked == ("r5", "r6")
    assert found.verified


def test_a_reaction_both_ways_is_closed_through_what_lies_behind_it(read: Read) -> None:
    found = interior(read(BASE + "    r5 : A <-> B\n    r6 : B -> 6 CO2 + 12 NADH\nlimit r6 = 0\n"))

    assert found.blocked == ("r5", "r6")
    assert found.verified


def test_a_limit_at_zero_closes_all_that_needs_it(read: Read) -> None:
    found = interior(read(BASE + "limit oxygen <= 0\n"))

    assert found.blocked == ("r3", "r4")
    assert found.verified


def test_sizes_of_coefficients_do_not_matter(read: Read) -> None:
    wide = BASE.replace("r4 : NADH + 0.5 oxygen", "r4 : 1e6 NADH + 5e5 oxygen")

    assert interior(read(wide)).blocked == ()
    assert interior(read(wide)).verified
    assert interior(read(wide + "limit oxygen <= 0\n")).blocked == ("r3", "r4")


def test_only_the_sides_that_are_asked_for_are_opened(read: Read) -> None:
    network = read(BASE)
    cone = flux_cone(network, stoichiometry(network))

    assert open_most(cone, [2]).open == frozenset({2})


def test_weights_prove_what_is_closed_and_nothing_else() -> None:
    def side(row: dict[int, int]) -> Form:
        return Form(FormKind.LIMIT, "x", {j: Fraction(v) for j, v in row.items()})

    forms = [side({0: 1}), side({0: -1, 1: -1}), side({1: 1})]
    plane = null_space([], 2)

    assert exact_weights(plane, forms, [1.0, 1.0, 1.0]) == (1, 1, 1)
    assert exact_weights(plane, forms[:2], [1.0, 1.0]) is None
    found = find_interior(Cone(("a", "b"), (), tuple(forms)))
    assert (len(found.closed), found.blocked, found.verified) == (3, ("a", "b"), True)


@pytest.mark.parametrize("side", [0, 1])
def test_two_sides_against_each_other_leave_a_plane(side: int) -> None:
    rows = [{0: Fraction(1), 1: Fraction(-1)}, {0: Fraction(-1), 1: Fraction(1)}]
    forms = tuple(Form(FormKind.LIMIT, "x", row) for row in rows)

    found = find_interior(Cone(("a", "b"), (), forms))

    assert forms[side] in found.closed
    assert found.space.dimension == 1
    assert found.blocked == ()


SPREAD = """
carrier s1 carries energy
carrier s2 carries energy
carrier s4 carries energy
carrier s5 carries energy
compartment c
    r2 : 3 s4 -> 1000 s5 + 1000000 s2
    r6 : 0.37 s1 + 2 s4 -> 0.000001 s2
"""


def test_coefficients_twelve_decades_apart_are_told_and_proven(read: Read) -> None:
    found = interior(read(SPREAD))

    assert (found.blocked, found.verified) == (("r2", "r6"), True)


def test_exact_pivots_open_what_the_solver_opens(read: Read) -> None:
    for text in (BASE, BASE + "    r5 : A -> B\nlimit oxygen <= 0\n", SPREAD):
        network = read(text)
        cone = flux_cone(network, stoichiometry(network))

        assert open_exactly(cone).open == open_most(cone).open
