"""What is declared and never used, and a model that has nothing to live on."""

from __future__ import annotations

from collections.abc import Callable

from fluxnet.checks.unused import check_substrates, check_unused
from fluxnet.ground.names import Name
from fluxnet.network.model import Network
from fluxnet.network.variant import apply_variant

Read = Callable[[str], Network]

BASE = """
substrate glucose
product   lactate, ethanol
exchange  CO2
inside    A C6H12O6, stray C6H12O6
parameter k = 2
carrier   ATP carries energy
compartment all
    r1 : glucose -> A
    r2 : A -> 2 lactate
variant other
    add to all
        r3 : A + k ATP -> 2 ethanol + 2 CO2
"""


def names(network: Network) -> list[tuple[Name, str]]:
    return [(d.name, d.message.split()[0]) for d in check_unused(network)]


def test_only_what_neither_the_model_nor_a_variant_uses_is_told(read: Read) -> None:
    assert names(read(BASE)) == [(Name.UNUSED_SPECIES, "stray")]


def test_what_a_variant_leaves_without_use_is_meant(read: Read) -> None:
    variant, _ = apply_variant(read(BASE + "variant less\n    drop r2\n"), "less")

    assert variant is not None
    assert check_unused(variant) == ()


def test_a_model_with_a_carbon_substrate_can_live(read: Read) -> None:
    assert check_substrates(read(BASE)) == ()


def test_carbon_dioxide_as_an_exchange_is_no_substrate(read: Read) -> None:
    network = read(
        """
substrate oxygen
exchange  CO2
product   lactate
inside    A C6H12O6
compartment all
    r1 : A -> 2 lactate
    r2 : A + 6 oxygen -> 6 CO2
"""
    )

    (told,) = check_substrates(network)

    assert told.name is Name.NO_SUBSTRATE


def test_an_exchange_with_electrons_is_a_substrate(read: Read) -> None:
    network = read("exchange acetate, CO2\ncompartment all\n    r1 : acetate -> acetate\n")

    assert check_substrates(network) == ()


def test_a_model_of_carriers_alone_is_told_at_its_first_compartment(read: Read) -> None:
    network = read("carrier ATP\ncompartment all\n    r1 : ATP -> nothing\n")
    (told,) = check_substrates(network)

    assert (told.name, told.span) == (Name.NO_SUBSTRATE, network.compartments[0].span)
    assert told.span.line
