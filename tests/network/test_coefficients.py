from __future__ import annotations

from fractions import Fraction

from fluxnet.ground.names import Name, Severity
from fluxnet.network.coefficients import check_coefficients
from fluxnet.network.expression import constant, parameter
from fluxnet.network.model import Parameter
from fluxnet.network.unknown_signs import changes_sign

SPECIES = {"A": "CH2O", "B": "CH2O"}


def names(network):
    return [d.name for d in check_coefficients(network)]


def test_an_expression_that_is_negative_at_the_values_is_an_error(build):
    a = Parameter("a", Fraction(2))
    assert names(build(SPECIES, "r: (1-a) A -> B", parameters=(a,))) == [
        Name.COEFFICIENT_NOT_POSITIVE
    ]


def test_an_expression_that_changes_sign_within_the_range_is_a_warning(build):
    a = Parameter("a", Fraction(1, 2), None, Fraction(0), Fraction(2))
    network = build(SPECIES, "r: (1-a) A -> B", parameters=(a,))
    (finding,) = check_coefficients(network)
    assert finding.name is Name.COEFFICIENT_CHANGES_SIGN
    assert "-1 at a = 2" in finding.message


def test_one_expression_on_several_terms_of_a_line_is_told_once(build):
    a = Parameter("a", Fraction(1, 2), None, Fraction(0), Fraction(2))
    network = build(SPECIES, "r: (1-a) A -> (1-a) B", parameters=(a,))
    (finding,) = check_coefficients(network)
    assert finding.message.startswith("the coefficient of A and B in r")
    assert finding.also == (network.reactions[0].right[0].span,)


def test_a_written_zero_is_an_error(build):
    assert names(build(SPECIES, "r: 0 A -> B")) == [Name.COEFFICIENT_NOT_POSITIVE]


def test_coefficients_of_very_different_size_in_one_reaction_are_an_error(build):
    assert names(build(SPECIES, "r: 1000000000000 A -> 0.000000000001 B")) == [
        Name.WIDE_COEFFICIENTS
    ]
    assert Name.WIDE_COEFFICIENTS.severity is Severity.ERROR
    assert names(build(SPECIES, "r: 100000 A -> 0.001 B")) == []


def test_a_square_that_dips_below_zero_between_the_ends_is_found():
    a = parameter("a")
    dip = a * a - a + constant(Fraction(1, 5))  # negative around a = 1/2, positive at 0 and 1
    ranges = {"a": Parameter("a", Fraction(0), None, Fraction(0), Fraction(1))}
    found = changes_sign(dip, ranges)
    assert found is not None
    assert found[1] < 0
    lifted = dip + constant(1)
    assert changes_sign(lifted, ranges) is None
