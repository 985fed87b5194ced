from __future__ import annotations

import numpy as np
import pytest

from fluxnet.matrices.stoichiometry import stoichiometry
from fluxnet.network.model import Network
from fluxnet.reading.model import read_model_text
from fluxnet.studies.equations import find_equations
from fluxnet.studies.ledger import keep_ledger, ledger_places, ledger_rows
from fluxnet.studies.yields import ALL_CARBON, find_yields

TEXT = """
model  Two sugars to ethanol
substrate glucose, xylose
substrate ammonia, oxygen
product ethanol
exchange CO2
biomass X CH1.8O0.5N0.2 ash 0 %
carrier ATP carries energy
carrier NADH carries 2 electrons
inside pyruvate

compartment catabolism
    glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
    pentose    : xylose -> (5/3) pyruvate + (5/3) ATP + (5/3) NADH
    ferment    : pyruvate + NADH <-> ethanol + CO2
    oxphos     : NADH + 0.5 oxygen -> 1.5 ATP
compartment anabolism
    growth     : ? glucose + 0.2 ammonia + 2 ATP -> X + 0.1 CO2 + ? NADH
compartment maintenance
    upkeep     : ATP -> nothing
"""


@pytest.fixture(scope="module")
def network() -> Network:
    reading = read_model_text(TEXT)
    assert reading.network is not None, reading.diagnostics
    return reading.network


@pytest.fixture(scope="module")
def fluxes() -> np.ndarray:
    # glycolysis 3, pentose 3; growth 1 makes 0.1 NADH; ferment all 11 pyruvate; 0.1 NADH is
    # burnt; ATP: 2 * 3 + 5/3 * 3 + 1.5 * 0.1 = 11.15, growth spends 2, upkeep the rest.
    return np.array([3.0, 3.0, 11.0, 0.1, 1.0, 9.15])


def test_the_nets_of_each_carrier_add_up_to_zero(network: Network, fluxes: np.ndarray) -> None:
    matrix = stoichiometry(network)
    places = ledger_places(network, matrix)
    lines = keep_ledger(places, ledger_rows(network, matrix, matrix.floats({}), places), fluxes)

    for carrier in ("ATP", "NADH"):
        assert sum(x.net for x in lines if x.carrier == carrier) == pytest.approx(0, abs=1e-12)


def test_nothing_made_or_spent_is_a_plain_zero(network: Network, fluxes: np.ndarray) -> None:
    matrix = stoichiometry(network)
    places = ledger_places(network, matrix)
    lines = keep_ledger(places, ledger_rows(network, matrix, matrix.floats({}), places), fluxes)

    zeros = [x for line in lines for x in (line.made, line.spent) if x == 0]
    assert len(zeros) == 4  # ATP: once not spent, twice not made; growth spends no NADH
    assert not np.signbit(zeros).any()


def test_made_and_spent_are_summed_inside_a_compartment(
    network: Network, fluxes: np.ndarray
) -> None:
    matrix = stoichiometry(network)
    places = ledger_places(network, matrix)
    lines = keep_ledger(places, ledger_rows(network, matrix, matrix.floats({}), places), fluxes)
    nadh = next(x for x in lines if (x.carrier, x.compartment) == ("NADH", "catabolism"))

    assert (nadh.made, nadh.spent) == (pytest.approx(11.0), pytest.approx(11.1))
    assert ("ATP", "maintenance") in [(x.carrier, x.compartment) for x in lines]
    assert ("NADH", "maintenance") not in [(x.carrier, x.compartment) for x in lines]


def test_the_whole_cells_equation_has_boundary_species_only(
    network: Network, fluxes: np.ndarray
) -> None:
    matrix = stoichiometry(network)
    equations = find_equations(network, matrix, matrix.floats({}), fluxes)
    whole = equations[-1]

    assert whole.compartment is None
    terms = {t.species: t.coefficient for t in whole.terms}
    assert set(terms) == {"glucose", "xylose", "ammonia", "oxygen", "ethanol", "CO2", "X"}
    assert terms["oxygen"] == pytest.approx(-0.05)
    assert whole.per == "glucose"
    assert whole.per_amount == pytest.approx(3 + 11 / 60)


def test_an_inside_species_passed_on_stands_in_both_equations() -> None:
    text = TEXT.replace("? glucose + 0.2", "? pyruvate + ? NADH + 0.2").replace(" + ? NADH\n", "\n")
    network = read_model_text(text).network
    assert network is not None
    matrix = stoichiometry(network)
    # growth takes 1.1/3 pyruvate, so ferment gets that much less.
    fluxes = np.array([3.0, 3.0, 11 - 1.1 / 3, 0.1, 1.0, 0.0])
    equations = find_equations(network, matrix, matrix.floats({}), fluxes)
    pyruvate = {
        e.compartment: t.coefficient for e in equations for t in e.terms if t.species == "pyruvate"
    }

    assert pyruvate["catabolism"] == pytest.approx(1.1 / 3)
    assert pyruvate["anabolism"] == pytest.approx(-1.1 / 3)
    assert None not in pyruvate


def test_yields_per_each_substrate_and_per_all_carbon(network: Network) -> None:
    lines = find_yields(network, {"glucose": -1.0, "xylose": -1.0, "ethanol": 2.0, "X": 1.0})
    ethanol = {y.substrate: y for y in lines if y.product == "ethanol"}

    assert ethanol["glucose"].per_mole == 2.0
    assert ethanol["glucose"].per_mass == pytest.approx(2 * 46.069 / 180.156, rel=1e-4)
    assert ethanol["xylose"].per_carbon == pytest.approx(4 / 5)
    assert ethanol[ALL_CARBON].per_carbon == pytest.approx(4 / 11)
    assert ethanol[ALL_CARBON].per_mole is None


def test_biomass_is_weighed_with_its_ash() -> None:
    network = read_model_text(TEXT.replace("ash 0 %", "ash 10 %")).network
    assert network is not None
    (line,) = find_yields(network, {"glucose": -1.0, "X": 1.0})

    assert line.per_mass == pytest.approx(24.626 / 0.9 / 180.156, rel=1e-4)
