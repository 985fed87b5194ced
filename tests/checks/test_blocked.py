"""Reactions without flux, each with the one thing that keeps it from running."""

from __future__ import annotations

from collections.abc import Callable

from fluxnet.checks.blocked import Blocked, BlockedBy, find_blocked
from fluxnet.checks.blocked_words import tell_blocked
from fluxnet.checks.cone import flux_cone
from fluxnet.checks.graph import find_dead_ends, find_parts
from fluxnet.checks.interior import find_interior
from fluxnet.ground.names import Name
from fluxnet.matrices.stoichiometry import stoichiometry
from fluxnet.network.model import Network
from fluxnet.network.variant import apply_variant

Read = Callable[[str], Network]

BASE = """
substrate glucose, oxygen
product   ethanol, lactate, acetate
exchange  CO2
carrier   ATP   carries energy
carrier   NADH  carries 2 electrons
carrier   NADPH carries 2 electrons
inside    hub C3H4O3, A C3H4O3, B C3H4O3, C C3H6O3
compartment all
    uptake  : glucose -> 2 hub + 2 ATP + 2 NADH
    ferment : hub + NADH -> lactate
    pdc     : hub + NADH -> ethanol + CO2
    burn    : hub -> 3 CO2 + 5 NADH
    breathe : NADH + 0.5 oxygen -> 2 ATP
    upkeep  : ATP -> nothing
"""


def blocked(network: Network) -> tuple[Blocked, ...]:
    stoich = stoichiometry(network)
    cone = flux_cone(network, stoich)
    ends, parts = find_dead_ends(network, stoich), find_parts(network, stoich)
    return find_blocked(network, cone, find_interior(cone), ends, parts)


def causes(network: Network) -> dict[tuple[str, ...], list[tuple[BlockedBy, str]]]:
    return {b.reactions: [(o.by, o.name) for o in b.obstacles] for b in blocked(network)}


def test_nothing_is_blocked_in_a_sound_network(read: Read) -> None:
    assert blocked(read(BASE)) == ()


def test_a_dead_end_is_told_with_its_reactions_and_not_again(read: Read) -> None:
    network = read(BASE + "    r1 : hub -> A\n    r2 : A -> B\n")

    assert causes(network) == {("r2", "r1"): [(BlockedBy.DEAD_END, "B")]}
    assert tell_blocked(network, blocked(network)) == ()


def test_a_carrier_that_cannot_be_got_rid_of_blocks_what_makes_it(read: Read) -> None:
    # NADPH has a spender; but what that makes can only give more of it back.
    network = read(
        BASE
        + "    load : hub -> 3 CO2 + 5 NADPH\n"
        + "    take : hub + NADPH -> C\n"
        + "    give : C -> 3 CO2 + 6 NADPH\n"
    )

    assert causes(network) == {("load", "take", "give"): [(BlockedBy.CARRIER, "NADPH")]}
    (told,) = tell_blocked(network, blocked(network))
    assert told.name is Name.BLOCKED_REACTION
    assert told.message == (
        "load, take and give can carry no flux: the NADPH that would be made has nowhere to go"
    )
    assert told.mend == "add a reaction that uses NADPH, or let one run both ways"


def test_a_carrier_that_goes_in_a_circle_can_spare_none(read: Read) -> None:
    network = read(
        BASE
        + "    take  : hub + NADPH -> C\n"
        + "    give  : C -> hub + NADPH\n"
        + "    spend : hub + NADPH -> lactate\n"
    )

    assert causes(network) == {("spend",): [(BlockedBy.CARRIER, "NADPH")]}
    (told,) = tell_blocked(network, blocked(network))
    assert told.message == "spend can carry no flux: no NADPH can be spared for it"
    assert told.mend == "add a reaction that makes NADPH, or let one run both ways"


def test_a_product_that_would_be_taken_up_is_the_cause(read: Read) -> None:
    network = read(BASE + "    r1 : acetate + CO2 + NADH -> A\n    r2 : A -> hub\n")

    assert causes(network) == {("r1", "r2"): [(BlockedBy.ROLE, "acetate")]}
    (told,) = tell_blocked(network, blocked(network))
    assert told.message == "r1 and r2 can carry no flux: acetate can only be released"
    assert told.mend == "declare acetate as exchange, or turn the reaction"


def test_a_substrate_that_would_be_released_is_the_cause(read: Read) -> None:
    network = read("substrate xylose\n" + BASE + "    r1 : 5 hub + 5 NADH -> 3 xylose\n")

    assert causes(network) == {("r1",): [(BlockedBy.ROLE, "xylose")]}
    (told,) = tell_blocked(network, blocked(network))
    assert told.message == "r1 can carry no flux: xylose can only be taken up"


def test_a_limit_at_zero_is_silent_about_what_it_names_itself(read: Read) -> None:
    network = read(BASE + "    ack : hub -> acetate + CO2 + NADH\nlimit acetate <= 0\n")

    assert causes(network) == {("ack",): [(BlockedBy.LIMIT, "limit acetate <= 0")]}
    assert tell_blocked(network, blocked(network)) == ()


def test_what_a_limit_closes_farther_away_is_told(read: Read) -> None:
    network = read(BASE + "limit oxygen <= 0\n")

    assert causes(network) == {("burn", "breathe"): [(BlockedBy.LIMIT, "limit oxygen <= 0")]}
    (told,) = tell_blocked(network, blocked(network))
    assert told.name is Name.BLOCKED_REACTION
    assert told.message == "burn and breathe can carry no flux: `limit oxygen <= 0` forbids it"
    assert told.mend == "open `limit oxygen <= 0`, if that is not meant"
    assert [s.line for s in told.also] == [18]


def test_what_a_variants_limit_closes_is_listed_but_is_no_warning(read: Read) -> None:
    network = read(BASE + "variant closed\n    limit oxygen <= 0\n")
    variant, _ = apply_variant(network, "closed")
    assert variant is not None

    groups = blocked(variant)

    assert [group.reactions for group in groups] == [("burn", "breathe")]
    assert tell_blocked(variant, groups) == ()


def test_limits_that_only_together_close_a_reaction_are_named_together(read: Read) -> None:
    network = read(
        BASE + "    ack : hub -> acetate + CO2 + NADH\n    r1 : A -> acetate + CO2 + NADH\n"
        "    r2 : 2 hub -> A + B\n    r3 : B -> hub\nlimit ack = 0\nlimit r1 = 0\nlimit r3 = 0\n"
    )

    together = [obstacles for names, obstacles in causes(network).items() if "r2" in names]

    assert together == [[(BlockedBy.LIMIT, "limit r1 = 0"), (BlockedBy.LIMIT, "limit r3 = 0")]]
    assert any("r1 = 0` forbids it and `limit r3" in (d.because or "")
               for d in tell_blocked(network, blocked(network)))


def test_a_part_that_is_cut_off_is_told_with_the_part(read: Read) -> None:
    network = read("product P C3H6O3, Q C3H6O3\n" + BASE + "    r1 : P -> Q\n")

    assert causes(network) == {("r1",): [(BlockedBy.CUT_OFF, "P")]}


def test_an_arrow_against_the_chain_is_named_with_the_whole_chain(read: Read) -> None:
    network = read(
        BASE + "    r1 : hub -> A\n    r2 : A <-> B\n    r3 : lactate -> B + NADH\n"
    )

    assert causes(network) == {("r1", "r2", "r3"): [(BlockedBy.DIRECTION, "r3")]}
    (told,) = tell_blocked(network, blocked(network))
    assert told.message == "r1, r2 and r3 can carry no flux: they would if r3 ran the other way"
    assert told.mend == "turn r3, or write <-> in it, if that is meant"


def test_a_species_in_a_circle_that_loses_is_named_where_no_turn_helps(read: Read) -> None:
    # D comes back halved: with ATP at every step the circle is no part of its own, but at
    # steady state it cannot turn, whichever way.
    network = read(
        BASE.replace("C C3H6O3", "C, D") + "    r1 : C + ATP -> D\n    r2 : 2 D -> C + ATP\n"
    )

    assert causes(network) == {("r1", "r2"): [(BlockedBy.SPECIES, "C")]}
    (told,) = tell_blocked(network, blocked(network))
    assert told.message == "r1 and r2 can carry no flux: no C can be spared for them"


def test_two_causes_are_two_groups(read: Read) -> None:
    network = read(
        "substrate xylose\n" + BASE + "    r1 : acetate + CO2 + NADH -> hub\n"
        "    r2 : 5 hub + 5 NADH -> 3 xylose\n"
    )

    assert causes(network) == {
        ("r1",): [(BlockedBy.ROLE, "acetate")],
        ("r2",): [(BlockedBy.ROLE, "xylose")],
    }


def test_what_was_not_proven_says_so(read: Read) -> None:
    network = read("substrate xylose\n" + BASE + "    r1 : 5 hub + 5 NADH -> 3 xylose\n")

    (told,) = tell_blocked(network, blocked(network), proven=False)

    assert told.because == "found in floating-point numbers, and not proven exactly"
