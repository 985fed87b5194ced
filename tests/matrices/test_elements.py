from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest

from fluxnet.chemistry.formula import NitrogenReference
from fluxnet.chemistry.reader import read_formula
from fluxnet.exact.linear import kernel
from fluxnet.matrices.elements import element_matrix, network_elements
from fluxnet.matrices.stoichiometry import stoichiometry
from fluxnet.reading.model import read_model_text

MODEL = """
substrate glucose, ammonia, oxygen
product ethanol, CO2
biomass X CH1.8O0.5N0.2 ash 8 %
carrier NADH carries 2 electrons
carrier ATP carries energy
inside pyruvate
compartment all
    glycolysis : glucose -> 2 pyruvate + 2 NADH + 2 ATP
    ferment    : pyruvate + NADH -> ethanol + CO2
    respire    : NADH + 0.5 oxygen -> 1.5 ATP
    burn       : pyruvate -> 3 CO2 + 5 NADH
    growth     : ? glucose + ? ammonia + 2 ATP -> X + 0.1 CO2 + ? NADH
    upkeep     : ATP -> nothing
"""


def test_the_electrons_of_biomass_depend_on_the_nitrogen_reference_as_published():
    # published check value: 4.2, 4.8 and 5.8 for CH1.8O0.5N0.2
    x = {"X": read_formula("CH1.8O0.5N0.2")}
    gammas = [float(element_matrix(x, n).exact[-1][0]) for n in NitrogenReference]
    assert gammas == pytest.approx([4.2, 4.8, 5.8])


def test_an_element_without_reference_takes_the_electron_row_away():
    matrix = element_matrix({"A": read_formula("C2H4Ti"), "B": read_formula("CO2")})
    assert matrix.balances == ("C", "Ti")
    assert matrix.without_reference == ("Ti",)


def test_amounts_are_found_by_name():
    matrix = element_matrix({"ethanol": read_formula("C2H6O"), "CO2": read_formula("CO2")})
    assert matrix.gaps({"CO2": Fraction(3)}) == {"C": 3, "electrons": 0}
    with pytest.raises(KeyError):
        matrix.gaps({"water": Fraction(1)})


def test_every_steady_state_of_a_balanced_network_closes_every_element_and_electrons():
    network = read_model_text(MODEL).network
    stoich = stoichiometry(network)
    columns = len(stoich.reactions)
    inner = stoich.exact_rows({}, stoich.balanced)
    outer = stoich.exact_rows({}, stoich.boundary)
    names = [stoich.species[i] for i in stoich.boundary]
    matrix = network_elements(network)
    assert matrix.species == tuple(names)
    states = kernel(inner, columns)
    assert states
    for state in states:
        releases = {
            name: sum(a * v for a, v in zip(row, state, strict=True))
            for name, row in zip(names, outer, strict=True)
        }
        assert set(matrix.gaps(releases).values()) == {0}


def test_floats_are_those_of_the_exact_rows_and_read_only():
    matrix = element_matrix({"X": read_formula("CH1.8O0.5N0.2"), "N": read_formula("NH3")})
    assert np.allclose(matrix.floats, [[1, 0], [0.2, 1], [4.2, 0]])
    with pytest.raises(ValueError, match="read-only"):
        matrix.floats[0, 0] = 2
