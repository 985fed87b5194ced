"""What holds of every network, sound or not, in the checks."""

from __future__ import annotations

import random
from fractions import Fraction

import numpy as np
from hypothesis import HealthCheck, assume, given, settings
from hypothesis import strategies as st

from fluxnet.checks.blocked import find_blocked
from fluxnet.checks.cone import flux_cone
from fluxnet.checks.freedom import Known, measure_freedom
from fluxnet.checks.graph import find_dead_ends, find_parts
from fluxnet.checks.interior import find_interior
from fluxnet.checks.nothing import find_from_nothing
from fluxnet.chemistry.reader import read_formula
from fluxnet.matrices.stoichiometry import stoichiometry
from fluxnet.network.expression import constant
from fluxnet.network.model import (
    Basis,
    Cargo,
    CargoKind,
    Compartment,
    Network,
    Reaction,
    Role,
    Species,
    Term,
)  # fmt: skip
from fluxnet.solving.build import build_problem
from fluxnet.solving.ranges import find_ranges

# Compounds of one to three carbons at several degrees of reduction; carriers of two electrons
# and of energy make every pair of them convertible.
COMPOUNDS = ("CH2O", "CH4O", "CH2O2", "C2H4O", "C2H6O", "C2H4O2", "C3H6O3", "C3H4O3", "C3H8O3")
CARBON = {name: read_formula(name).count("C") for name in COMPOUNDS}
GAMMA = {
    "CH2O": 4, "CH4O": 6, "CH2O2": 2, "C2H4O": 10, "C2H6O": 12, "C2H4O2": 8,
    "C3H6O3": 12, "C3H4O3": 10, "C3H8O3": 14,
}  # fmt: skip
ROLES = (Role.SUBSTRATE, Role.PRODUCT, Role.EXCHANGE, Role.INSIDE, Role.INSIDE)


def term(species: str, amount: Fraction) -> Term:
    return Term(species, constant(amount))


def make_network(
    roles: list[Role], pairs: list[tuple[int, int, int, bool]], *, energy: int = 0
) -> Network:
    """A network whose lines all balance: conversions closed by CO2 and a carrier of electrons.

    ``energy`` is what ATP each line may make (its absolute value at most).
    """
    dice = random.Random(str((roles, pairs)))
    species = [
        Species("CO2", Role.EXCHANGE, read_formula("CO2")),
        Species("NADH", Role.CARRIER, cargo=Cargo(CargoKind.ELECTRONS, Fraction(2))),
        Species("ATP", Role.CARRIER, cargo=Cargo(CargoKind.ENERGY)),
        *(
            Species(f"s{k}", role, read_formula(COMPOUNDS[k % len(COMPOUNDS)]))
            for k, role in enumerate(roles)
        ),
    ]
    reactions: list[Reaction] = []
    for k, (a, b, size, both) in enumerate(pairs):
        a, b = a % len(roles), b % len(roles)
        one, two = COMPOUNDS[a % len(COMPOUNDS)], COMPOUNDS[b % len(COMPOUNDS)]
        left, right = [term(f"s{a}", Fraction(size))], [term(f"s{b}", Fraction(1))]
        if a == b:
            left, right = [term(f"s{a}", Fraction(1))], []
            size, gap_c, gap_e = 1, Fraction(CARBON[one]), Fraction(GAMMA[one])
        else:
            gap_c = Fraction(size) * CARBON[one] - CARBON[two]
            gap_e = Fraction(size * GAMMA[one] - GAMMA[two])
        atp = Fraction(dice.randint(-2, 2)) if energy else Fraction(0)
        for name, gap in (("CO2", gap_c), ("NADH", gap_e / 2), ("ATP", atp)):
            if gap:
                (right if gap > 0 else left).append(term(name, abs(gap)))
        reactions.append(Reaction(f"r{k}", "all", tuple(left), tuple(right), both))
    return Network(
        "invented", Basis.SPECIFIC, tuple(species), (), (Compartment("all"),), tuple(reactions)
    )


networks = st.builds(
    make_network,
    st.lists(st.sampled_from(ROLES), min_size=2, max_size=9),
    st.lists(
        st.tuples(st.integers(0, 8), st.integers(0, 8), st.integers(1, 3), st.booleans()),
        min_size=1,
        max_size=14,
    ),
    energy=st.integers(0, 1),
)
relaxed = settings(
    max_examples=150, deadline=None, suppress_health_check=[HealthCheck.too_slow]
)


@relaxed
@given(networks)
def test_lines_that_balance_never_make_matter_or_electrons_from_nothing(network: Network) -> None:
    loops = find_from_nothing(network, stoichiometry(network)).loops

    assert all(loop.species == "ATP" for loop in loops)


@relaxed
@given(networks)
def test_every_loop_balances_exactly_makes_its_carrier_and_needs_each_member(
    network: Network,
) -> None:
    stoich = stoichiometry(network)
    for loop in find_from_nothing(network, stoich).loops:
        fluxes = [dict(loop.fluxes).get(name, Fraction(0)) for name in stoich.reactions]
        everything = tuple(range(len(stoich.species)))
        released = [
            sum(a * v for a, v in zip(row, fluxes, strict=True))
            for row in stoich.exact_rows({}, everything)
        ]
        for species, amount in zip(network.species, released, strict=True):
            if species.name == loop.species:
                assert amount > 0
            elif species.role is Role.INSIDE:
                assert amount == 0
            else:
                assert amount >= 0
        for reaction, flux in zip(network.reactions, fluxes, strict=True):
            assert reaction.reversible or flux >= 0
        for left_out in loop.reactions:
            members = tuple(
                r for r in network.reactions if r.name in loop.reactions and r.name != left_out
            )
            rest = Network(
                network.title, network.basis, network.species, (), network.compartments, members
            )
            made = {x.species for x in find_from_nothing(rest, stoichiometry(rest)).loops}
            assert loop.species not in made


@relaxed
@given(networks)
def test_blocked_reactions_are_those_whose_range_is_zero(network: Network) -> None:
    stoich = stoichiometry(network)
    cone = flux_cone(network, stoich)
    interior = find_interior(cone)

    ranges = find_ranges(build_problem(network).problem)

    widest = np.maximum(np.abs(ranges.low), np.abs(ranges.high))
    shut = [r for r, width in zip(stoich.reactions, widest, strict=True) if width < 1e-9]
    assert list(interior.blocked) == shut
    assert interior.verified


@relaxed
@given(networks)
def test_every_blocked_reaction_has_one_cause(network: Network) -> None:
    stoich = stoichiometry(network)
    cone = flux_cone(network, stoich)
    interior = find_interior(cone)

    groups = find_blocked(
        network, cone, interior,
        find_dead_ends(network, stoich), find_parts(network, stoich),
    )

    told = [name for group in groups for name in group.reactions]
    assert sorted(told) == sorted(interior.blocked)
    assert all(group.obstacles for group in groups)


@relaxed
@given(networks)
def test_what_should_be_measured_determines_all_and_nothing_less_does(network: Network) -> None:
    stoich = stoichiometry(network)
    space = find_interior(flux_cone(network, stoich)).space

    needed = measure_freedom(network, stoich, space).needed

    assert len(needed) == space.dimension
    full = measure_freedom(network, stoich, space, [Known(q) for q in needed])
    assert (full.left, full.undetermined) == (0, ())
    assume(needed)
    less = measure_freedom(network, stoich, space, [Known(q) for q in needed[1:]])
    assert less.left == 1
    assert less.undetermined
