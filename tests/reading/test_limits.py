"""Limits: the quantity meant, its direction and its bounds."""

from __future__ import annotations

from fractions import Fraction

import pytest

HEAD = """\
substrate glucose, oxygen
product ethanol
exchange CO2
biomass X CH1.8O0.5N0.2 ash 8 %
compartment c
    a : glucose -> 2 ethanol + 2 CO2
    b : ethanol + 3 oxygen -> 2 CO2
    r : ethanol + 3 oxygen <-> 2 CO2
"""


@pytest.fixture
def limit(read):
    return lambda text: read(f"{HEAD}limit {text}\n").limits[0]


@pytest.mark.parametrize(
    ("text", "quantity", "low", "high", "sd"),
    [
        ("oxygen <= 8", "oxygen in", None, 8, None),
        ("oxygen in ≤ 8", "oxygen in", None, 8, None),
        ("ethanol >= 1.5", "ethanol out", Fraction(3, 2), None, None),
        ("CO2 in <= 1", "CO2 in", None, 1, None),
        ("CO2 out = 1", "CO2 out", 1, 1, None),
        ("mu = 0.1 ± 5 %", "mu", Fraction(1, 10), Fraction(1, 10), Fraction(5, 1000)),
        ("X >= 0.1", "X out", Fraction(1, 10), None, None),
        ("a = 1.2 ± 0.3", "flux a", Fraction(12, 10), Fraction(12, 10), Fraction(3, 10)),
        ("flux a <= 3", "flux a", None, 3, None),
        ("a between 1 and 3", "flux a", 1, 3, None),
        ("CO2 between in 1 and out 5", "CO2 out", -1, 5, None),
        ("CO2 between out 5 and in 1", "CO2 out", -1, 5, None),
        ("CO2 between in 1 and in 5", "CO2 in", 1, 5, None),
        ("CO2 in between 1 and 5", "CO2 in", 1, 5, None),
        ("CO2 / oxygen = 1.05 ± 0.03", "CO2 out / oxygen in", Fraction(105, 100),
         Fraction(105, 100), Fraction(3, 100)),
        ("CO2 in / oxygen <= 1", "CO2 in / oxygen in", None, 1, None),
        ("a / b = 2", "flux a / flux b", 2, 2, None),
        ("oxygen / mu <= 20", "oxygen in / mu", None, 20, None),
        ("r >= -2", "flux r", -2, None, None),
        ("r <= - 2", "flux r", None, -2, None),
        ("r between -2.5 and 1e1", "flux r", Fraction(-5, 2), 10, None),
        ("r = -2 ± 5 %", "flux r", -2, -2, Fraction(1, 10)),
        ("a / r >= -3", "flux a / flux r", -3, None, None),
    ],
)  # fmt: skip
def test_a_limit_bounds_a_quantity_in_its_direction(limit, text, quantity, low, high, sd) -> None:
    found = limit(text)

    assert str(found.quantity) == quantity
    assert (found.low, found.high, found.sd) == (low, high, sd)
    assert found.is_measured is (sd is not None)


@pytest.mark.parametrize(
    ("lines", "name"),
    [
        (["oxygen >= 2", "oxygen <= 8"], None),
        (["a = 1.2 ± 0.3", "a <= 5"], None),
        (["CO2 in <= 1", "CO2 out <= 5"], None),
        (["oxygen <= 2", "oxygen <= 8"], "limit-repeated"),
        (["a = 1.2 ± 0.3", "a = 1.3 ± 0.3"], "limit-repeated"),
        (["oxygen between 1 and 2", "oxygen <= 8"], "limit-repeated"),
        (["oxygen >= 8", "oxygen <= 2"], "contradictory-limits"),
        (["oxygen = 8", "oxygen <= 2"], "contradictory-limits"),
        (["CO2 in >= 1", "CO2 out >= 1"], "contradictory-limits"),
        (["CO2 between in 1 and out 5", "CO2 in >= 2"], "contradictory-limits"),
        (["a / b >= 2", "a / b <= 1"], "contradictory-limits"),
        (["mu >= 0.2", "mu <= 0.1"], "contradictory-limits"),
        (["r >= -1", "r <= -2"], "contradictory-limits"),
        (["r >= -2", "r <= -1"], None),
    ],
)
def test_limits_are_held_against_one_another(faults, lines, name) -> None:
    found = faults(HEAD + "".join(f"limit {line}\n" for line in lines))

    assert [d.name.value for d in found] == ([name] if name else [])
    if name:
        assert found[0].span.line == 10
        assert found[0].also[0].line == 9


@pytest.mark.parametrize(
    ("text", "name"),
    [
        ("CO2 <= 1", "limit-needs-direction"),
        ("CO2 between 1 and 5", "limit-needs-direction"),
        ("CO2 between in 1 and 5", "limit-needs-direction"),
        ("glucose out <= 1", "limit-against-role"),
        ("glucose between out 1 and out 5", "limit-against-role"),
        ("ethanol in <= 1", "limit-against-role"),
        ("a in <= 1", "bad-limit"),
        ("mu between in 1 and out 2", "bad-limit"),
        ("a / b between in 1 and out 2", "bad-limit"),
        ("glucose / glucose = 1", "bad-limit"),
        ("CO2 in / CO2 out = 1", "bad-limit"),
        ("oxigen <= 1", "unknown-limit"),
        ("Oxygen <= 1", "case-differs"),
        ("Mu <= 1", "case-differs"),
        ("oxygen <= 1e200", "unreadable-line"),
        ("oxygen >= -1", "bad-limit"),
        ("CO2 in <= -1", "bad-limit"),
        ("CO2 between in -1 and out 5", "bad-limit"),
        ("mu = -0.1 ± 0.1", "bad-limit"),
        ("a / b >= -1", "bad-limit"),
        ("a = -1 ± 0.1", "limit-against-direction"),
        ("a between -2 and -1", "limit-against-direction"),
        ("r between -1 and -2", "contradictory-limits"),
    ],
)
def test_a_limit_that_makes_no_sense_is_told(fault, text, name) -> None:
    found = fault(f"{HEAD}limit {text}\n")

    assert (found.name.value, found.span.line) == (name, 9)
