"""Dead ends with what they close, and parts that nothing feeds."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from fractions import Fraction

from fluxnet.checks.carriers import tell_one_way_carriers
from fluxnet.checks.graph import find_dead_ends, find_parts, tell_dead_ends, tell_parts
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.matrices.stoichiometry import stoichiometry
from fluxnet.network.model import Network

Read = Callable[[str], Network]

CHAIN = """
substrate glucose
product   ethanol
exchange  CO2
carrier   ATP carries energy
inside    A C6H12O6, B C6H12O6, C C6H12O6, D C6H12O6
compartment all
    r1 : glucose -> A
    r2 : A -> 2 ethanol + 2 CO2
"""


def dead(network: Network) -> dict[str, tuple[str, ...]]:
    return {e.species: e.blocked for e in find_dead_ends(network, stoichiometry(network))}


def told(network: Network) -> tuple[Diagnostic, ...]:
    ends = find_dead_ends(network, stoichiometry(network))
    return tell_dead_ends(network, ends) + tell_one_way_carriers(network, ends)


def test_a_chain_that_ends_in_a_product_has_no_dead_end(read: Read) -> None:
    assert dead(read(CHAIN)) == {}


def test_a_dead_end_closes_the_whole_chain_that_leads_to_it(read: Read) -> None:
    network = read(CHAIN + "    r3 : A -> B\n    r4 : B <-> C\n    r5 : C -> D\n")

    assert dead(network) == {"D": ("r5", "r4", "r3")}
    (warning,) = told(network)
    assert warning.name is Name.DEAD_END
    assert warning.message == "D is made by r5, but nothing uses it"
    assert warning.because == "no flux can run in r5, r4 and r3"
    assert warning.mend == "add the reaction that uses D, or declare it as a product"
    assert warning.span.line == 8


def test_a_species_that_is_only_used_closes_what_follows_it(read: Read) -> None:
    network = read(CHAIN + "    r3 : B -> C\n    r4 : C -> A\n")

    assert dead(network) == {"B": ("r3", "r4")}
    assert told(network)[0].message == "B is used by r3, but nothing makes it"


def test_one_reaction_that_runs_both_ways_does_not_save_a_species(read: Read) -> None:
    network = read(CHAIN + "    r3 : A <-> B\n")

    assert dead(network) == {"B": ("r3",)}
    assert told(network)[0].message == "B takes part in r3 alone: no flux can pass"


def test_two_reactions_of_which_one_runs_both_ways_do_save_it(read: Read) -> None:
    assert dead(read(CHAIN + "    r3 : A <-> B\n    r4 : B -> A\n")) == {}


def test_two_dead_ends_of_one_reaction_are_both_told(read: Read) -> None:
    network = read(CHAIN + "    r3 : 2 A -> B + C\n")

    assert dead(network) == {"B": ("r3",), "C": ("r3",)}


def test_a_sound_branch_beside_a_dead_end_stays_open(read: Read) -> None:
    network = read(CHAIN + "    r3 : A -> B\n    r4 : B -> 2 ethanol + 2 CO2\n    r5 : B -> C\n")

    assert dead(network) == {"C": ("r5",)}


def test_a_parameter_at_zero_makes_no_link(read: Read) -> None:
    text = "parameter k = 1\n" + CHAIN + "    r3 : A + ATP -> B\n    r4 : B -> A + k ATP\n"
    network = read(text)
    (k,) = network.parameters

    assert dead(network) == {}
    assert dead(replace(network, parameters=(replace(k, value=Fraction(0)),))) == {
        "ATP": ("r3", "r4")
    }


def test_a_carrier_that_is_only_loaded_is_told_in_its_own_words(read: Read) -> None:
    network = read(
        """
substrate glucose
exchange  CO2
product   lactate
carrier   NADH  carries 2 electrons
carrier   NADPH carries 2 electrons
compartment all
    r1 : glucose -> 2 lactate
    r2 : glucose -> 6 CO2 + 12 NADPH
    r3 : glucose + 12 NADH -> glucose + 12 NADH
"""
    )

    (warning,) = told(network)

    assert warning.message == "r2 loads NADPH, but nothing unloads it"
    assert warning.mend == "add what unloads NADPH, or a reaction that exchanges it with NADH"
    assert warning.because == "no flux can run in r2"


def test_an_energy_carrier_without_a_spender_is_offered_upkeep(read: Read) -> None:
    network = read(CHAIN.replace("r1 : glucose ->", "r1 : glucose -> ATP +"))

    (warning,) = told(network)

    assert warning.message == "r1 makes ATP, but nothing spends it"
    assert warning.mend == "add what spends ATP: upkeep : ATP -> nothing"


def test_a_part_with_products_alone_is_cut_off(read: Read) -> None:
    network = read("product lactate, P C3H6O3\n" + CHAIN + "    r3 : P + ATP -> lactate\n")

    (part,) = find_parts(network, stoichiometry(network))

    assert part.species == ("lactate", "P")
    assert part.reactions == ("r3",)
    (warning,) = tell_parts(network, [part])
    assert warning.name is Name.CUT_OFF
    assert warning.message == "r3 hangs together with nothing that can be taken up"


def test_a_circle_that_carriers_alone_turn_is_not_cut_off(read: Read) -> None:
    network = read(CHAIN + "    r3 : B + ATP -> C\n    r4 : C -> B\n")

    assert find_parts(network, stoichiometry(network)) == ()


def test_a_circle_that_nothing_turns_is_cut_off(read: Read) -> None:
    network = read(CHAIN + "    r3 : B -> C\n    r4 : C -> B\n")

    assert [p.reactions for p in find_parts(network, stoichiometry(network))] == [("r3", "r4")]


def test_hydrogen_that_a_carrier_feeds_is_not_cut_off(read: Read) -> None:
    network = read(
        "product hydrogen\ncarrier NADH carries 2 electrons\n"
        + CHAIN
        + "    r3 : NADH -> hydrogen\n    r4 : glucose -> 6 CO2 + 12 NADH\n"
    )

    assert find_parts(network, stoichiometry(network)) == ()


def test_a_carrier_of_a_carbon_group_connects_what_it_feeds(read: Read) -> None:
    network = read(
        "product acetate\ncarrier acetylP carries C2H2O\n"
        + CHAIN
        + "    r3 : acetylP -> acetate + ATP\n    r4 : glucose -> 3 acetylP\n"
    )

    assert find_parts(network, stoichiometry(network)) == ()
