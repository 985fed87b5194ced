"""Where an expression divides by zero within the ranges of its parameters."""

from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fluxnet.network.expression import ONE, Expression, constant, parameter
from fluxnet.network.poles import find_pole

A, B = parameter("a"), parameter("b")


def number(text: str) -> Expression:
    return constant(Fraction(text))


def span(low: str, high: str) -> tuple[Fraction, Fraction]:
    return Fraction(low), Fraction(high)


@pytest.mark.parametrize(
    ("denominator", "low", "high", "at"),
    [
        (number("0.5") - B, "0.2", "0.6", "0.5"),
        (number("0.5") - B, "0.2", "0.5", "0.5"),
        (number("0.5") - B, "0.5", "0.9", "0.5"),
        (number("0.5") - B, "0.2", "0.4999999", None),
        ((B - number("2")) * (B - number("2")), "0", "3", "2"),
        (B * B - number("2"), "0", "1.4", None),
        (B * B + number("0.000001"), "-1", "1", None),
        ((B - number("1")) * (B - number("2")), "1.1", "1.9", None),
        (B * B * B - number("0.001"), "-5", "5", "0.1"),
    ],
)
def test_a_root_of_a_denominator_in_one_parameter_is_found_exactly(
    denominator, low, high, at
) -> None:
    pole = find_pole(ONE / denominator, {"b": span(low, high)})

    assert (None if pole is None else pole.place["b"]) == (None if at is None else Fraction(at))
    assert pole is None or (pole.exact and pole.proven)


def test_a_root_that_is_no_fraction_is_told_as_near() -> None:
    pole = find_pole(ONE / (B * B - number("2")), {"b": span("0", "2")})

    assert pole is not None
    assert not pole.exact
    assert float(pole.place["b"]) == pytest.approx(2**0.5, abs=1e-5)


def test_what_the_numerator_cancels_is_no_pole() -> None:
    gap = number("0.5") - B

    assert find_pole(gap * B / (gap * (B + ONE)), {"b": span("0", "1")}) is None
    assert find_pole(gap * B / (gap * gap), {"b": span("0", "1")}) is not None


@pytest.mark.parametrize(
    ("denominator", "found"),
    [
        (A * B - number("0.8"), True),
        (A * B - number("1.1"), False),
        (A + B - number("2"), True),  # at a corner
        (A * A + B * B - A * B + number("0.01"), False),
        (A * A * B - number("0.5"), True),
        (ONE - A * B + A * B * B * number("0.1"), False),
        (ONE - A * B * number("1.2") + A * B * B * number("0.1"), True),
    ],
)
def test_in_several_parameters_a_root_is_proven_or_ruled_out(denominator, found) -> None:
    pole = find_pole(ONE / denominator, {"a": span("0", "1"), "b": span("0", "1")})

    assert (pole is not None) is found
    assert pole is None or pole.proven


def test_what_can_be_neither_proven_nor_ruled_out_says_so() -> None:
    """(a - b/3)^2 touches zero along a line that meets no corner of any box but the first."""
    gap = A - B * constant(Fraction(1, 3)) - constant(Fraction(1, 7))

    pole = find_pole(ONE / (gap * gap), {"a": span("0", "1"), "b": span("0", "1")})

    assert pole is not None
    assert not pole.proven


roots = st.fractions(min_value=-3, max_value=3, max_denominator=12)


@given(st.lists(roots, min_size=1, max_size=4), roots, roots)
def test_a_product_of_linear_factors_vanishes_where_one_does(places, one, other) -> None:
    low, high = sorted((one, other))
    denominator = ONE
    for place in places:
        denominator = denominator * (B - constant(place))
    inside = any(low <= place <= high for place in places)

    pole = find_pole(ONE / denominator, {"b": (low, high)})

    assert (pole is not None) is inside
    if pole is not None and pole.exact:
        assert denominator.exact(pole.place) == 0
