"""The most ATP per mole of substrate, its conversion, and what that conversion can pay for."""

from __future__ import annotations

from collections.abc import Callable
from fractions import Fraction

import pytest

from fluxnet.checks.energy import MostEnergy, find_most_energy, tell_too_much_energy
from fluxnet.ground.names import Name
from fluxnet.matrices.stoichiometry import stoichiometry
from fluxnet.network.free_energy import find_free_energy
from fluxnet.network.model import Network

Read = Callable[[str], Network]

BASE = """
substrate glucose, oxygen
product   ethanol, lactate, acetate
exchange  CO2
carrier   ATP  carries energy
carrier   NADH carries 2 electrons
inside    hub C3H4O3
parameter PO = 1.5
compartment all
    uptake  : glucose -> 2 hub + 2 ATP + 2 NADH
    ferment : hub + NADH -> lactate
    pdc     : hub + NADH -> ethanol + CO2
    burn    : hub -> 3 CO2 + 5 NADH + ATP
    breathe : NADH + 0.5 oxygen -> PO ATP
    upkeep  : ATP -> nothing
"""


def most(network: Network) -> dict[str, MostEnergy]:
    return {m.substrate: m for m in find_most_energy(network, stoichiometry(network))}


def test_respiration_gives_the_sum_of_its_parts(read: Read) -> None:
    glucose = most(read(BASE))["glucose"]

    assert glucose.amount == 2 + 2 + 12 * Fraction(3, 2)
    assert glucose.equation == "glucose + 6 oxygen -> 6 CO2"
    assert glucose.verified


def test_without_oxygen_fermentation_is_what_is_left(read: Read) -> None:
    glucose = most(read(BASE + "limit oxygen <= 0\nlimit lactate <= 0\n"))["glucose"]

    assert glucose.amount == 2
    assert glucose.equation == "glucose -> 2 ethanol + 2 CO2"
    assert glucose.verified


def test_finite_limits_and_upkeep_do_not_bound_it(read: Read) -> None:
    assert most(read(BASE + "limit oxygen <= 1\nlimit upkeep = 3\n"))["glucose"].amount == 22


def test_substrates_are_taken_one_at_a_time(read: Read) -> None:
    text = BASE.replace("substrate glucose", "substrate glucose, xylose").replace(
        "    upkeep", "    pentose : xylose -> 5/3 hub + 5/3 ATP + 5/3 NADH\n    upkeep"
    ).replace("5/3", "(5/3)")  # fmt: skip

    found = most(read(text))

    assert found["xylose"].amount == 22 * Fraction(5, 6)
    assert dict(found["xylose"].conversion) == {"xylose": -1, "oxygen": -5, "CO2": 5}
    assert found["glucose"].amount == 22


def test_a_substrate_that_makes_none_says_zero(read: Read) -> None:
    text = BASE.replace("substrate glucose", "substrate glucose, glycerol")
    found = most(read(text + "    waste : glycerol + ATP -> lactate + NADH\n"))

    assert found["glycerol"].amount == Fraction(1, 2)
    assert found["glycerol"].equation == "glycerol + 0.5 oxygen -> lactate"
    none = most(read(text + "    waste : glycerol + 9 ATP -> lactate + NADH\nlimit oxygen <= 0\n"))
    assert (none["glycerol"].amount, none["glycerol"].equation) == (0, "")


def test_a_substrate_that_a_limit_closes_makes_none(read: Read) -> None:
    closed = most(read(BASE + "limit glucose = 0\n"))["glucose"]

    assert (closed.amount, closed.conversion, closed.verified) == (0, (), True)


def test_energy_from_nothing_has_no_end(read: Read) -> None:
    text = BASE.replace("inside    hub", "inside    A, B, hub")
    found = most(read(text + "    up : A + ATP -> B\n    down : B -> A + 2 ATP\n"))

    assert found["glucose"].amount is None


def test_a_model_without_an_energy_carrier_has_no_such_number(read: Read) -> None:
    assert most(read("substrate glucose\nproduct lactate\ncompartment all\n"
                     "    r : glucose -> 2 lactate\n")) == {}


def test_a_coefficient_too_large_is_found_where_no_loop_shows_it(read: Read) -> None:
    text = BASE + "limit oxygen <= 0\nlimit lactate <= 0\n"
    wrong = read(text.replace("2 hub + 2 ATP", "2 hub + 6 ATP"))
    right = read(text)

    found = find_most_energy(wrong, stoichiometry(wrong))
    (told,) = tell_too_much_energy(wrong, found)

    assert told.name is Name.TOO_MUCH_ENERGY
    assert told.message == "6 ATP per glucose are more than its conversion can pay for"
    assert told.because == (
        "glucose -> 2 ethanol + 2 CO2 gives 238 kJ/mol, enough for 5.3 at 45 kJ each "
        "(common practice)"
    )
    assert tell_too_much_energy(right, find_most_energy(right, stoichiometry(right))) == ()


# Published values 6.8: computed from the open OBIGT data set, tolerance 3 kJ/mol; "-234" for
# ethanol was read. Aerobic: -2870 to -2880 kJ/mol is the textbook value (from memory).
@pytest.mark.parametrize(
    ("conversion", "energy", "tolerance"),
    [
        ({"glucose": -1, "lactate": 2}, 192.7, 3),
        ({"glucose": -1, "ethanol": 2, "CO2": 2}, 238.0, 3),
        ({"glucose": -1, "acetate": 3}, 315.3, 3),
        ({"glucose": -1, "oxygen": -6, "CO2": 6}, 2870, 10),
    ],
)
def test_conversions_give_the_published_energies(
    read: Read, conversion: dict[str, int], energy: float, tolerance: float
) -> None:
    terms = {name: Fraction(n) for name, n in conversion.items()}

    found = find_free_energy(read(BASE), terms)

    assert found.value == pytest.approx(energy, abs=tolerance)
    assert not found.missing


def test_a_conversion_that_does_not_close_has_no_energy(read: Read) -> None:
    found = find_free_energy(read(BASE), {"glucose": Fraction(-1), "CO2": Fraction(5)})

    assert found.value is None
    assert found.missing == ()


def test_a_compound_without_gibbs_energy_leaves_it_open(read: Read) -> None:
    network = read(BASE.replace("product   ethanol", "product   oil C5H8, ethanol"))

    found = find_free_energy(network, {"oil": Fraction(-1), "CO2": Fraction(5)})

    assert found.value is None
    assert found.missing == ("oil",)
