from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fluxnet.presenting.numbers import format_measured, format_number, format_p, format_range

REALS = st.floats(allow_nan=False, allow_infinity=False)


@pytest.mark.parametrize(
    ("value", "sd", "text"),
    [
        (9.96, 0.31, "9.96 ± 0.31"),
        (9.96, 0.4, "10.0 ± 0.4"),
        (0.012345, 0.00099, "0.0123 ± 0.0010"),
        (-0.001, 0.02, "-0.001 ± 0.020"),
        (-0.0001, 0.2, "0.00 ± 0.20"),
        (123456.0, 2345.0, "123500 ± 2300"),
    ],
)
def test_value_and_sd_are_rounded_to_the_same_decimals(value: float, sd: float, text: str) -> None:
    assert format_measured(value, sd) == text


def test_an_exact_value_says_so() -> None:
    assert format_measured(1.5, 0.0) == "1.5 exact"


@given(REALS, st.floats(min_value=1e-9, max_value=1e9))
def test_a_rounded_value_lies_within_half_its_sd(value: float, sd: float) -> None:
    if not 1e-6 < abs(value) < 1e9 or sd < 1e-6:
        return
    shown = format_measured(value, sd).split(" ± ")

    assert abs(float(shown[0]) - value) <= 0.51 * sd


@given(REALS)
def test_any_number_can_be_shown(value: float) -> None:
    assert format_number(value)
    assert format_range(value, value)


def test_four_digits_are_within_half_a_unit_of_the_fourth() -> None:
    assert float(format_number(0.000123456)) == pytest.approx(0.000123456, rel=5e-4)


def test_an_open_range_says_which_side_is_open() -> None:
    assert format_range(float("-inf"), 3.0) == "3 or less"
    assert format_range(1.0, float("inf")) == "1 or more"


def test_small_probabilities_are_bounded_not_rounded_to_zero() -> None:
    assert format_p(1e-12) == "< 0.001"
