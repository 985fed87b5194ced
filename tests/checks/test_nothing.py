"""Energy, electrons, biomass and products out of nothing, with the loop that makes them."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from fractions import Fraction

import pytest

from fluxnet.checks.nothing import FromNothing, Made, find_from_nothing, tell_from_nothing
from fluxnet.ground.names import Name
from fluxnet.matrices.stoichiometry import stoichiometry
from fluxnet.network.model import Network

Read = Callable[[str], Network]

BASE = """
substrate glucose, ammonia, oxygen
product   ethanol, lactate
exchange  CO2
biomass   X CH1.8O0.5N0.2
carrier   ATP   carries energy
carrier   NADH  carries 2 electrons
carrier   NADPH carries 2 electrons
inside    A, B, hub C3H4O3
compartment all
    uptake  : glucose -> 2 hub + 2 ATP + 2 NADH
    ferment : hub + NADH -> lactate
    pdc     : hub + NADH -> ethanol + CO2
    breathe : NADH + 0.5 oxygen -> 1.4 ATP
    burn    : hub -> 3 CO2 + 5 NADH
    shift   : NADH <-> NADPH
    growth  : ? hub + 0.2 ammonia + 2 ATP + ? NADPH -> X + 0.1 CO2
    upkeep  : ATP -> nothing
"""


def found(network: Network) -> FromNothing:
    return find_from_nothing(network, stoichiometry(network))


def test_a_sound_network_makes_nothing_out_of_nothing_and_that_is_proven(read: Read) -> None:
    assert found(read(BASE)) == FromNothing((), verified=True)


def test_a_pair_that_gains_energy_is_shown_with_whole_fluxes(read: Read) -> None:
    network = read(BASE + "    up : A + ATP -> B\n    down : 2 B -> 2 A + 3 ATP\n")

    (loop,) = found(network).loops

    assert loop.kind is Made.ENERGY
    assert loop.fluxes == (("up", 2), ("down", 1))
    assert loop.made == (("ATP", 1),)
    (told,) = tell_from_nothing(network, [loop])
    assert told.name is Name.ENERGY_FROM_NOTHING
    assert told.message == "reactions up and down together make ATP out of nothing"
    assert told.because == "2 up + down: nothing -> ATP"
    assert told.mend == "correct a coefficient of ATP or a direction in one of these reactions"
    assert [told.span.line, *(s.line for s in told.also)] == [22, 21]


def test_a_reaction_that_must_run_backwards_is_counted_negative(read: Read) -> None:
    network = read(BASE + "    up : B <-> A + ATP\n    down : B -> A + 2 ATP\n")

    (loop,) = found(network).loops

    assert dict(loop.fluxes) == {"up": -1, "down": 1}
    assert tell_from_nothing(network, [loop])[0].because == "-up + down: nothing -> ATP"


@pytest.mark.parametrize("carrier", ["NADH", "NADPH"])
def test_electrons_of_one_carrier_draw_the_other_in_their_wake(read: Read, carrier: str) -> None:
    network = read(BASE + f"    load : A -> B + {carrier}\n    back : B -> A\n")

    (loop,) = found(network).loops

    assert (loop.kind, loop.species) == (Made.ELECTRONS, carrier)
    assert loop.reactions == ("load", "back")
    other = {"NADH": "NADPH", "NADPH": "NADH"}[carrier]
    assert loop.through == (other,)
    (told,) = tell_from_nothing(network, [loop])
    assert told.name is Name.ELECTRONS_FROM_NOTHING
    assert told.because == f"load + back: nothing -> {carrier}; through it also {other}"


def test_a_species_without_formula_that_doubles_makes_products_and_biomass(read: Read) -> None:
    network = read(
        BASE.replace("inside    A, B", "inside    A, B, C, D")
        + "    double : A -> B + C\n    back : B + C -> 3 A\n    leak : 0.5 A -> D\n"
        "    out : D -> ethanol + CO2\n"
    )

    loops = found(network).loops

    assert [loop.kind for loop in loops] == [Made.PRODUCT]
    assert set(loops[0].reactions) == {"double", "back", "leak", "out"}
    assert {name for name, _ in loops[0].made} == {"ethanol", "CO2"}


def test_biomass_from_nothing_is_told_as_growth(read: Read) -> None:
    network = read(BASE.replace("growth  : ? hub +", "growth  : A +").replace("? NADPH", "NADPH")
                   + "    make : B -> A\n    more : A -> 2 B\n")

    kinds = [loop.kind for loop in found(network).loops]

    assert kinds == []
    # Growth needs ammonia, which is closed: with a biomass that holds none it runs.
    bare = read(
        BASE.replace("CH1.8O0.5N0.2", "CH1.8O0.5")
        .replace("growth  : ? hub + 0.2 ammonia + 2 ATP + ? NADPH", "growth  : A")
        .replace("X + 0.1 CO2", "X")
        + "    make : B -> A\n    more : A -> 2 B\n"
    )
    (loop,) = found(bare).loops
    assert (loop.kind, loop.species) == (Made.BIOMASS, "X")
    assert dict(loop.fluxes) == {"growth": 1, "make": 2, "more": 1}
    (told,) = tell_from_nothing(bare, [loop])
    assert told.name is Name.BIOMASS_FROM_NOTHING


def test_a_group_without_electrons_counts_as_matter(read: Read) -> None:
    network = read(
        "carrier carboxyl carries CO2\n"
        + BASE
        + "    load : A -> B + carboxyl\n    back : B -> A\n"
    )

    loops = found(network).loops

    assert [(loop.kind, loop.species) for loop in loops] == [(Made.PRODUCT, "carboxyl")]


def test_limits_are_taken_by_their_signs(read: Read) -> None:
    loop = BASE + "    up : A + ATP -> B\n    down : B -> A + 2 ATP\n"

    assert found(read(loop + "limit down <= 3\nlimit upkeep >= 5\n")).loops
    assert found(read(loop + "limit down <= 0\n")).loops == ()
    assert found(read(loop + "limit down = 0 ± 0.1\n")).loops


def test_two_causes_are_two_loops(read: Read) -> None:
    network = read(
        BASE.replace("inside    A, B", "inside    A, B, C, D")
        + "    up : A + ATP -> B\n    down : B -> A + 2 ATP\n"
        "    load : C -> D + NADH\n    back : D -> C\n"
    )

    assert [loop.kind for loop in found(network).loops] == [Made.ENERGY, Made.ELECTRONS]


def test_fluxes_that_are_no_small_whole_numbers_are_exact_all_the_same(read: Read) -> None:
    up, down = "A + 1.0007 ATP -> B", "1.3331 B -> 1.3331 A + 2.0003 ATP"
    network = read(BASE + f"    up : {up}\n    down : {down}\n")

    (loop,) = found(network).loops

    fluxes = dict(loop.fluxes)
    assert fluxes["up"] == Fraction("1.3331") * fluxes["down"]
    made = Fraction("2.0003") * fluxes["down"] - Fraction("1.0007") * fluxes["up"]
    assert loop.made == (("ATP", made),)


def test_one_reaction_alone_is_told_in_the_singular(read: Read) -> None:
    network = read(BASE)
    kinase = next(r for r in network.reactions if r.name == "upkeep")
    turned = replace(kinase, left=(), right=kinase.left)
    network = replace(
        network, reactions=tuple(turned if r is kinase else r for r in network.reactions)
    )

    (loop,) = found(network).loops

    (told,) = tell_from_nothing(network, [loop])
    assert told.message == "reaction upkeep makes ATP out of nothing"
    assert told.mend == "correct a coefficient of ATP or a direction in it"
