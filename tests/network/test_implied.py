from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import pytest

from fluxnet.chemistry.catalogue import load_catalogue
from fluxnet.ground.errors import MisuseError
from fluxnet.network.implied import find_implied
from fluxnet.network.model import Role


@pytest.fixture
def catalogued(build):
    """A network whose species stand in the catalogue, or have a formula of their own."""

    def make(*names, **own):
        network = build({**dict.fromkeys(names), **own})
        species = []
        for one in network.species:
            if one.name in names:
                compound = load_catalogue().find(one.name)
                one = replace(one, role=Role.EXCHANGE, formula=compound.formula, entry=one.name)
            species.append(one)
        return replace(network, species=tuple(species))

    return make


def test_burning_makes_the_water_that_the_oxygen_balance_asks_for(catalogued):
    network = catalogued("glucose", "oxygen", "CO2")
    found = find_implied(network, {"glucose": -1.0, "oxygen": -6.0, "CO2": 6.0})
    assert (found.water, found.protons, found.base) == (6.0, 0.0, 0.0)


def test_each_lactate_takes_one_proton_along_and_needs_one_base(catalogued):
    network = catalogued("glucose", "lactate")
    found = find_implied(network, {"glucose": Fraction(-1), "lactate": Fraction(2)})
    assert (found.protons, found.base, found.acid) == (2, 2, 0)
    assert all(gap == 0 for _, gap in found.residual)


def test_succinate_counts_with_its_two_charges_and_carbon_dioxide_as_gas(catalogued):
    # 7 glucose + 6 CO2 -> 12 succinate + 6 H2O (electrons 168 = 12 x 14)
    network = catalogued("glucose", "CO2", "succinate")
    releases = {"glucose": Fraction(-7), "CO2": Fraction(-6), "succinate": Fraction(12)}
    found = find_implied(network, releases)
    assert (found.protons, found.water) == (24, 6)
    assert all(gap == 0 for _, gap in found.residual)


def test_an_acid_taken_up_as_its_ion_needs_acid(catalogued):
    network = catalogued("acetate", "oxygen", "CO2")
    found = find_implied(network, {"acetate": -1.0, "oxygen": -2.0, "CO2": 2.0})
    assert (found.protons, found.base, found.acid) == (-1.0, 0.0, 1.0)
    assert found.water == 2.0


def test_ammonia_as_nitrogen_source_leaves_a_proton_that_the_base_includes_once(catalogued):
    # 0.2 NH4+ into biomass CH1.8O0.5N0.2 leave 0.2 H+; 1.05 acetate leave 1.05
    network = catalogued("glucose", "ammonia", "acetate", X="biomass CH1.8O0.5N0.2")
    releases = {"glucose": Fraction(-21, 40), "ammonia": Fraction(-1, 5), "X": Fraction(1),
                "acetate": Fraction(43, 40)}  # fmt: skip
    found = find_implied(network, releases)
    assert found.protons == Fraction(43, 40) + Fraction(1, 5)
    assert found.base == found.protons
    assert found.ammonia == Fraction(1, 5)
    # fed as ammonia: all of the base, not the base and the nitrogen source besides
    assert found.ammonia_fed == found.base


def test_where_less_base_is_needed_than_nitrogen_the_nitrogen_source_is_what_is_fed(catalogued):
    network = catalogued("acetate", "ammonia", "CO2", X="biomass CH1.8O0.5N0.2")
    releases = {"acetate": -0.525, "ammonia": -0.2, "X": 1.0, "CO2": 0.05}
    found = find_implied(network, releases)
    assert found.protons == pytest.approx(0.2 - 0.525)
    assert found.base == 0.0
    assert found.ammonia_fed == 0.2


def test_phosphate_left_over_is_implied_as_the_free_species_it_is(catalogued):
    network = catalogued("glucose", "phosphate", F="C6H13O9P")
    found = find_implied(network, {"glucose": Fraction(-1), "F": Fraction(1)})
    assert [(name, amount) for name, amount in found.free] == [("phosphate", -1)]
    balanced = replace(network, balance_phosphate=True)
    found = find_implied(balanced, {"glucose": Fraction(-1), "F": Fraction(1)})
    assert found.free == ()
    assert dict(found.residual)["P"] == 1


def test_a_free_species_closes_its_own_element(catalogued):
    network = catalogued("lactate", S="C3H7NO2S", Q="C3H7NO3")
    network = replace(network, free=("sulfate",))
    found = find_implied(network, {"Q": Fraction(-1), "S": Fraction(1)})
    assert found.free == (("sulfate", Fraction(-1)),)
    assert dict(found.residual)["S"] == 0


def test_what_does_not_close_is_told_as_residual(catalogued):
    network = catalogued("glucose", "ethanol", "CO2")
    found = find_implied(network, {"glucose": -1.0, "ethanol": 2.0, "CO2": 1.5})
    assert dict(found.residual)["C"] == pytest.approx(-0.5)


def test_a_species_without_formula_implies_nothing(build):
    network = build({"thing": None, "CO2": "CO2"})
    with pytest.raises(MisuseError, match="thing"):
        find_implied(network, {"thing": 1.0})
    with pytest.raises(MisuseError):
        find_implied(network, {})
