"""What is determined, tested and related, on networks where one sees it."""

from __future__ import annotations

from fractions import Fraction

import pytest

from fluxnet.solving.build import build_problem
from fluxnet.solving.classify import classify
from fluxnet.solving.equalities import find_equalities

# Glucose goes through a chain and then by two parallel routes to the same product.
PARALLEL = """
substrate glucose
product ethanol, acetate
inside a, b, c
take : glucose -> a
chain : a -> 2 b
left : b -> c
right : b -> c
end : c -> ethanol
side : b -> acetate
"""


def structure_of(network, run=None):
    return classify(find_equalities(build_problem(network, run)))


def determined(network, run=None):
    found = structure_of(network, run)
    return {r.name for r, fixed in zip(network.reactions, found.determined, strict=True) if fixed}


def test_one_measured_rate_fixes_a_chain_and_nothing_else(make_network, make_run):
    network = make_network(PARALLEL)
    run = make_run(network, "glucose in 2 ± 0.1")
    assert determined(network, run) == {"take", "chain"}
    assert structure_of(network, run).dof == 0


def test_rates_are_tested_by_others_or_not(make_network, make_run):
    network = make_network(PARALLEL)
    run = make_run(
        network, "glucose in 2 ± 0.1", "acetate out 1 ± 0.1", "ethanol out 3 ± 0.1",
        "left 1 ± 0.1",
    )
    found = structure_of(network, run)
    assert found.dof == 1
    assert found.balanceable == (True, True, True, False)


def test_an_exact_value_takes_no_degree_of_freedom_but_is_tested(make_network, make_run):
    network = make_network(PARALLEL)
    run = make_run(
        network, "glucose in 2 ± 0", "acetate out 1 ± 0.1", "ethanol out 3 ± 0.1"
    )
    found = structure_of(network, run)
    assert found.dof == 1
    # soft rows first, the exact one behind them
    assert found.balanceable == (True, True, True)
    alone = structure_of(network, make_run(network, "glucose in 2 ± 0", "left 1 ± 0.1"))
    assert alone.balanceable == (False, False)
    assert alone.dof == 0


def test_a_closed_uptake_and_what_hangs_on_it_are_zero(make_network):
    network = make_network(
        """
        substrate glucose, oxygen
        product ethanol
        carrier ATP, NADH
        inside a
        take : glucose -> a + NADH + ATP
        burn : NADH + oxygen -> 2 ATP
        after : a + NADH -> ethanol
        upkeep : ATP -> nothing
        """,
        limits=("oxygen <= 0",),
    )
    exact = find_equalities(build_problem(network))
    names = {e.name for e in exact.equalities}
    assert "burn" in names
    assert structure_of(network).space.dimension == 1


def test_a_dead_end_carries_nothing_even_through_two_reactions(make_network):
    network = make_network("""
        substrate glucose
        product ethanol
        inside a, dead
        take : glucose -> a
        out : a -> ethanol
        first : a -> dead
        second : a -> 2 dead
    """)
    exact = find_equalities(build_problem(network))
    zeros = {e.name for e in exact.equalities if e.place >= len(exact.rows) - exact.columns}
    assert zeros == {"first", "second"}
    assert structure_of(network).space.dimension == 1


def test_reversible_reactions_into_a_dead_end_may_circle(make_network):
    network = make_network("""
        substrate glucose
        product ethanol
        inside a, dead
        take : glucose -> a
        out : a -> ethanol
        first : a <-> dead
        second : a <-> dead
    """)
    assert structure_of(network).space.dimension == 2


def test_limits_that_cross_are_named(make_network):
    network = make_network(PARALLEL, limits=("glucose >= 3", "chain <= 2"))
    assert find_equalities(build_problem(network)).contradictions == ()
    crossed = make_network(PARALLEL, limits=("glucose >= 3", "glucose <= 2"))
    found = find_equalities(build_problem(crossed)).contradictions
    assert found == (("limit glucose >= 3", "limit glucose <= 2"),)


def test_exact_values_that_contradict_are_named_and_nobody_else(make_network, make_run):
    network = make_network(PARALLEL)
    run = make_run(network, "glucose in 2 ± 0", "take 2.5 ± 0", "acetate out 1 ± 0")
    found = find_equalities(build_problem(network, run)).contradictions
    assert [set(names) for names in found] == [{"glucose in", "flux take"}]


def test_exact_values_that_agree_up_to_rounding_do_not_contradict(make_network, make_run):
    network = make_network(PARALLEL)
    third = repr(1 / 3)
    run = make_run(network, f"glucose in {third} ± 0", f"chain {1 - 2 / 3!r} ± 0")
    assert 1 - 2 / 3 != 1 / 3
    assert find_equalities(build_problem(network, run)).contradictions == ()


@pytest.mark.parametrize("value", ["1/3", "0.1", "7"])
def test_ranks_come_from_the_numbers_as_written(make_network, make_run, value):
    network = make_network(f"""
        substrate glucose
        product ethanol, acetate
        parameter k {value}
        inside a
        take : glucose -> k a
        one : a -> ethanol
        two : a -> acetate
    """)
    run = make_run(network, "glucose in 2 ± 0.1", "ethanol out 1 ± 0.1", "acetate out 1 ± 0.1")
    assert structure_of(network, run).dof == 1
    assert structure_of(network, run).is_determined({0: Fraction(1), 2: Fraction(-5)})
