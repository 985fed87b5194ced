"""Which values are tested, and what to measure so that all of them are."""

from __future__ import annotations

from collections.abc import Callable
from fractions import Fraction
from itertools import combinations

import pytest

from fluxnet.checks.cone import flux_cone
from fluxnet.checks.freedom import Freedom, Known, measure_freedom
from fluxnet.checks.interior import find_interior
from fluxnet.checks.redundancy import find_addition
from fluxnet.exact.sparse import dependent_forms, independent_forms
from fluxnet.matrices.stoichiometry import stoichiometry
from fluxnet.network.model import Direction, Network, Quantity, QuantityKind

Read = Callable[[str], Network]


SMALL = """
substrate glucose, oxygen
product   ethanol, glycerol
exchange  CO2
carrier   NADH carries 2 electrons
inside    pyruvate C3H4O3
compartment all
    uptake  : glucose -> 2 pyruvate + 2 NADH
    pdc     : pyruvate + NADH -> ethanol + CO2
    reduce  : glucose + 2 NADH -> 2 glycerol
    burn    : pyruvate -> 3 CO2 + 5 NADH
    breathe : NADH + 0.5 oxygen -> nothing
"""


def rate(name: str, way: str = "out") -> Quantity:
    return Quantity(QuantityKind.RATE, name, Direction(way))


GLUCOSE, OXYGEN = rate("glucose", "in"), rate("oxygen", "in")
ETHANOL, GLYCEROL, CO2 = rate("ethanol"), rate("glycerol"), rate("CO2")


def freedom(network: Network, *measured: Quantity) -> Freedom:
    stoich = stoichiometry(network)
    space = find_interior(flux_cone(network, stoich)).space
    return measure_freedom(network, stoich, space, [Known(q) for q in measured])


def test_rates_that_just_determine_everything_test_nothing(read: Read) -> None:
    found = freedom(read(SMALL), GLUCOSE, ETHANOL, GLYCEROL)

    assert found.left == 0
    assert found.untested == (GLUCOSE, ETHANOL, GLYCEROL)
    assert set(found.to_test) == {OXYGEN, CO2}
    assert found.redundancy_then == 2
    assert found.never_tested == ()


def test_without_a_run_it_is_told_of_the_rates_that_are_needed(read: Read) -> None:
    found = freedom(read(SMALL))

    assert found.untested == found.needed
    assert len(found.to_test) == 2


def test_when_every_rate_is_measured_nothing_is_missing(read: Read) -> None:
    found = freedom(read(SMALL), GLUCOSE, OXYGEN, ETHANOL, GLYCEROL, CO2)

    assert (found.untested, found.to_test, found.never_tested) == ((), (), ())
    assert found.redundancy == found.redundancy_then == 2


def test_one_redundant_value_does_not_tell_which_is_wrong(read: Read) -> None:
    found = freedom(read(SMALL), GLUCOSE, ETHANOL, GLYCEROL, CO2)

    assert found.redundancy == 1
    assert found.to_test == (OXYGEN,)


def test_a_flux_that_no_rate_sees_is_never_tested(read: Read) -> None:
    network = read(
        SMALL.replace("carrier   NADH", "carrier   ATP carries energy\ncarrier   NADH")
        .replace("uptake  : glucose -> 2 pyruvate", "uptake  : glucose -> 2 pyruvate + 2 ATP")
        + "    upkeep  : ATP -> nothing\n    waste   : ATP -> nothing\n"
        + "limit upkeep = 1 ± 0.1\n"
    )

    found = freedom(network, GLUCOSE, ETHANOL, GLYCEROL)

    assert found.never_tested == (Quantity(QuantityKind.FLUX, "upkeep"),)
    assert len(found.to_test) == 2


def test_a_hard_limit_need_not_be_tested_itself(read: Read) -> None:
    network = read(SMALL + "limit glycerol = 1\n")

    found = freedom(network, GLUCOSE, ETHANOL)

    assert found.untested == (GLUCOSE, ETHANOL)
    assert GLYCEROL not in found.to_test


def test_the_growth_rate_is_no_test_of_the_biomass_rate(read: Read) -> None:
    network = read(
        SMALL.replace("carrier", "biomass X CH1.8O0.5N0.2\ncarrier", 1)
        .replace("substrate glucose", "substrate ammonia, glucose")
        + "    growth : ? pyruvate + 0.2 ammonia + ? NADH -> X + 0.05 CO2\n"
    )

    found = freedom(network, GLUCOSE, ETHANOL, GLYCEROL, rate("X"))

    assert Quantity(QuantityKind.MU) not in found.to_test


@pytest.mark.parametrize("seed", range(12))
def test_no_smaller_addition_would_do(seed: int) -> None:
    """By brute force over all subsets of seven offered forms."""
    state = seed + 1

    def number() -> int:
        nonlocal state
        state = state * 48271 % 2147483647
        return state % 3 - 1

    def form() -> dict[int, Fraction]:
        return {k: Fraction(n) for k in range(4) if (n := number())}

    measured, offered = [form() for _ in range(4)], [form() for _ in range(7)]
    wanted = range(4)

    def tested(chosen: tuple[int, ...]) -> set[int]:
        marks = dependent_forms([*measured, *(offered[i] for i in chosen)])
        return {i for i in wanted if marks[i]}

    def redundancy(chosen: tuple[int, ...]) -> int:
        marks = [*measured, *(offered[i] for i in chosen)]
        return len(marks) - len(independent_forms(marks))

    found = find_addition(measured, offered, wanted)
    most = tested(tuple(range(7)))
    enough = min(2, redundancy(tuple(range(7))))
    sizes = [
        size for size in range(8)
        for chosen in combinations(range(7), size)
        if tested(chosen) == most and redundancy(chosen) >= enough
    ]
    assert tested(found.added) == most
    assert len(found.added) == min(sizes)
    assert set(found.never) == set(wanted) - most
    assert found.redundancy == redundancy(found.added) >= enough
