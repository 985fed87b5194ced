"""The stoichiometric matrix, with numbers and with parameters."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest

from fluxnet.matrices.stoichiometry import parameter_values, stoichiometry
from fluxnet.network.expression import constant, parameter
from fluxnet.network.model import (
    Basis,
    Compartment,
    Network,
    Parameter,
    Reaction,
    Role,
    Species,
    Term,
)

PO = parameter("PO")


def network_of(*reactions: Reaction) -> Network:
    roles = {"A": Role.SUBSTRATE, "ATP": Role.CARRIER, "B": Role.INSIDE, "P": Role.PRODUCT}
    return Network(
        "made up", Basis.SPECIFIC, tuple(Species(n, r) for n, r in roles.items()),
        (Parameter("PO", Fraction(7, 5), Fraction(1, 5)),), (Compartment("all"),), reactions,
    )


def term(species, coefficient):
    return Term(species, coefficient)


MAKE = Reaction("make", "all", (term("A", constant(1)),), (term("B", PO * PO / constant(2)),))
SPEND = Reaction(
    "spend", "all", (term("B", constant(Fraction(1, 3))), term("ATP", constant(1))),
    (term("P", constant(1)), term("ATP", PO)),
)


def test_what_is_made_is_positive_and_what_is_used_negative():
    network = network_of(MAKE, SPEND)
    matrix = stoichiometry(network)
    assert matrix.species == ("A", "ATP", "B", "P")
    assert matrix.reactions == ("make", "spend")
    floats = matrix.floats({"PO": 2.0})
    assert floats.tolist() == [[-1, 0], [0, 1], [2, pytest.approx(-1 / 3)], [0, 1]]
    assert [matrix.species[i] for i in matrix.balanced] == ["ATP", "B"]
    assert [matrix.species[i] for i in matrix.boundary] == ["A", "P"]


def test_a_species_on_both_sides_stands_with_the_difference():
    matrix = stoichiometry(network_of(SPEND))
    found = {(i, j): e for i, j, e in matrix.entries}
    assert found[matrix.row("ATP"), 0] == PO - constant(1)


def test_a_species_that_cancels_has_no_entry():
    same = Reaction("same", "all", (term("B", PO), term("A", constant(1))), (term("B", PO),))
    matrix = stoichiometry(network_of(same))
    assert [(matrix.species[i], e.number) for i, _, e in matrix.entries] == [("A", -1)]


def test_exact_rows_are_the_decimals_as_written():
    network = network_of(MAKE, SPEND)
    matrix = stoichiometry(network)
    rows = matrix.exact_rows(parameter_values(network), (matrix.row("B"), matrix.row("ATP")))
    assert rows == [[Fraction(49, 50), Fraction(-1, 3)], [0, Fraction(2, 5)]]


def test_the_derivative_by_a_parameter_is_the_difference_quotient():
    matrix = stoichiometry(network_of(MAKE, SPEND))
    step = 1e-6
    quotient = (matrix.floats({"PO": 1.4 + step}) - matrix.floats({"PO": 1.4 - step})) / (2 * step)
    assert matrix.derivative("PO", {"PO": 1.4}) == pytest.approx(quotient, abs=1e-8)
    assert np.abs(quotient).max() > 1


def test_an_unsolved_coefficient_makes_no_matrix():
    open_ = Reaction("open", "all", (Term("A", None),), (term("B", constant(1)),))
    with pytest.raises(ValueError, match="open"):
        stoichiometry(network_of(open_))


def test_names_that_are_not_there_are_key_errors():
    matrix = stoichiometry(network_of(MAKE))
    with pytest.raises(KeyError):
        matrix.row("nowhere")
    with pytest.raises(KeyError):
        matrix.column("nowhere")
