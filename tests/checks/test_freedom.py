"""Degrees of freedom, what some rates determine, and what to measure."""

from __future__ import annotations

from collections.abc import Callable
from fractions import Fraction

from fluxnet.checks.cone import flux_cone
from fluxnet.checks.freedom import Freedom, Known, measure_freedom
from fluxnet.checks.interior import find_interior
from fluxnet.matrices.stoichiometry import stoichiometry
from fluxnet.network.model import Direction, Network, Quantity, QuantityKind

Read = Callable[[str], Network]

BASE = """
product   lactate, ethanol, acetate
substrate ammonia, oxygen, glucose
exchange  CO2
biomass   X CH1.8O0.5N0.2
carrier   ATP  carries energy
carrier   NADH carries 2 electrons
inside    hub C3H4O3
compartment all
    uptake  : glucose -> 2 hub + 2 ATP + 2 NADH
    ferment : hub + NADH -> lactate
    pdc     : hub + NADH -> ethanol + CO2
    burn    : hub -> 3 CO2 + 5 NADH
    breathe : NADH + 0.5 oxygen -> 2 ATP
    upkeep  : ATP -> nothing
    growth  : ? hub + 0.2 ammonia + 2 ATP + ? NADH -> X + 0.1 CO2
"""


def rate(name: str, direction: Direction = Direction.OUT) -> Quantity:
    return Quantity(QuantityKind.RATE, name, direction)


def flux(name: str) -> Quantity:
    return Quantity(QuantityKind.FLUX, name)


GLUCOSE = rate("glucose", Direction.IN)
OXYGEN = rate("oxygen", Direction.IN)
MU = Quantity(QuantityKind.MU)


def freedom(network: Network, *measured: Known) -> Freedom:
    stoich = stoichiometry(network)
    space = find_interior(flux_cone(network, stoich)).space
    return measure_freedom(network, stoich, space, measured)


def test_dimension_is_reactions_less_independent_balances(read: Read) -> None:
    # 7 reactions, 3 balances.
    assert freedom(read(BASE)).dimension == 4


def test_needed_rates_come_in_the_order_of_practice(read: Read) -> None:
    found = freedom(read(BASE))

    assert found.needed == (GLUCOSE, MU, rate("lactate"), rate("ethanol"))
    assert found.boundary_enough


def test_the_needed_rates_determine_every_flux(read: Read) -> None:
    network = read(BASE)

    found = freedom(network, *(Known(q) for q in freedom(network).needed))

    assert (found.left, found.redundancy, found.undetermined, found.missing) == (0, 0, (), ())
    assert found.determined == tuple(r.name for r in network.reactions)


def test_one_rate_fewer_leaves_fluxes_open_and_says_what_is_missing(read: Read) -> None:
    found = freedom(read(BASE), Known(GLUCOSE), Known(MU), Known(rate("lactate")))

    assert found.left == 1
    assert found.determined == ("uptake", "ferment", "growth")
    assert found.undetermined == ("pdc", "burn", "breathe", "upkeep")
    assert found.missing == (rate("ethanol"),)


def test_more_rates_than_needed_are_redundant(read: Read) -> None:
    measured = [Known(q) for q in (GLUCOSE, MU, rate("lactate"), rate("ethanol"))]
    more = [*measured, Known(OXYGEN), Known(rate("CO2"))]

    assert freedom(read(BASE), *more).redundancy == 2
    # Oxygen and CO2 with glucose and growth leave lactate against ethanol open in nothing.
    assert freedom(read(BASE), *more[4:], *more[:2]).redundancy == 0


def test_limits_with_a_value_count_as_known_and_those_at_zero_as_nothing(read: Read) -> None:
    found = freedom(read(BASE + "limit upkeep = 1.2 ± 0.3\nlimit lactate = 0\nlimit glucose = 1\n"))

    assert found.dimension == 3
    assert found.fixed == (flux("upkeep"), GLUCOSE)
    assert found.needed == (MU,)
    assert "ferment" not in (*found.determined, *found.undetermined)


def test_a_measured_rate_replaces_the_limit_on_it(read: Read) -> None:
    found = freedom(read(BASE + "limit glucose = 1\n"), Known(GLUCOSE))

    assert (found.fixed, found.redundancy) == ((), 0)


def test_a_measured_ratio_determines_as_much_as_a_rate(read: Read) -> None:
    network = read(BASE)
    ratio = Quantity(QuantityKind.RATIO, numerator=rate("CO2"), denominator=OXYGEN)
    others = [Known(q) for q in (GLUCOSE, MU, rate("lactate"))]

    assert freedom(network, *others, Known(ratio, Fraction("1.1"))).left == 0
    # At a ratio of 1 respiration alone would do: the ratio still counts once only.
    assert freedom(network, *others, Known(rate("ethanol")), Known(ratio, Fraction(1))).left == 0


def test_fluxes_inside_are_asked_for_only_where_the_boundary_does_not_tell(read: Read) -> None:
    network = read(BASE + "    detour : hub + NADH -> ethanol + CO2 + ATP\n")

    found = freedom(network)

    assert found.dimension == 5
    assert found.needed == (GLUCOSE, MU, rate("lactate"), rate("ethanol"), flux("pdc"))
    assert not found.boundary_enough


def test_a_spender_of_carriers_is_the_last_that_one_would_measure(read: Read) -> None:
    network = read(
        BASE.replace("    upkeep ", "    shunt   : ATP -> nothing\n    upkeep ")
    )

    assert freedom(network).needed[-1] == flux("shunt")


def test_two_biomass_species_are_measured_each(read: Read) -> None:
    network = read(
        BASE.replace("biomass   X CH1.8O0.5N0.2", "biomass   X CH1.8O0.5N0.2\nbiomass   Y CH2O")
        + "    store : hub + NADH -> 3 Y\n"
    )

    assert freedom(network).needed[:3] == (GLUCOSE, rate("X"), rate("Y"))
    assert freedom(network, Known(MU), Known(rate("X")), Known(rate("Y"))).redundancy == 1


def test_what_is_blocked_is_neither_free_nor_determined(read: Read) -> None:
    found = freedom(read(BASE + "    stuck : 2 hub + 2 NADH -> glucose\nlimit stuck = 0\n"))

    assert found.dimension == 4
    assert "stuck" not in (*found.determined, *found.undetermined)
