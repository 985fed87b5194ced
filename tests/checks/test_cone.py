"""Limits count by their signs: what stays of each."""

from __future__ import annotations

from collections.abc import Callable
from fractions import Fraction

import pytest

from fluxnet.checks.cone import FormKind, flux_cone
from fluxnet.matrices.stoichiometry import stoichiometry
from fluxnet.network.model import Network

Read = Callable[[str], Network]

BASE = """
substrate glucose, oxygen
product   lactate
exchange  CO2
carrier   NADH carries 2 electrons
compartment all
    r1 : glucose -> 2 lactate
    r2 : glucose -> 6 CO2 + 12 NADH
    r3 : NADH + 0.5 oxygen <-> nothing
"""


def kept(network: Network) -> tuple[list[str], list[tuple[str, dict[int, Fraction]]]]:
    cone = flux_cone(network, stoichiometry(network))
    equal = [f.name for f in cone.equal if f.kind is FormKind.LIMIT]
    sides = [(f.name, dict(f.row)) for f in cone.sides if f.kind is FormKind.LIMIT]
    return equal, sides


@pytest.mark.parametrize(
    "line",
    [
        "glucose <= 10", "glucose = 5", "glucose = 5 ± 0.3", "glucose >= 1", "r1 >= 2",
        "CO2 in <= 1", "r3 <= 4",
        "CO2 / oxygen = 1.05 ± 0.03", "CO2 / oxygen = 1.05", "CO2 / oxygen <= 1.05",
        "CO2 between in 1 and out 5",
    ],
)  # fmt: skip
def test_a_limit_that_leaves_both_its_signs_or_its_role_leaves_no_trace(
    read: Read, line: str
) -> None:
    assert kept(read(BASE + f"limit {line}\n")) == ([], [])


def test_a_limit_that_allows_only_zero_stays(read: Read) -> None:
    assert kept(read(BASE + "limit oxygen = 0\n"))[0] == ["limit oxygen = 0"]
    assert kept(read(BASE + "limit oxygen <= 0\n"))[1] == [
        ("limit oxygen <= 0", {2: Fraction(-1, 2)})
    ]


def test_of_a_positive_lower_limit_the_direction_stays(read: Read) -> None:
    assert kept(read(BASE + "limit r3 >= 2\n"))[1] == [("limit r3 >= 2", {2: Fraction(1)})]
    assert kept(read(BASE + "limit CO2 out >= 2\n"))[1] == [
        ("limit CO2 out >= 2", {1: Fraction(6)})
    ]


def test_closed_uptakes_hold_substrates_at_zero_and_let_exchanges_out(read: Read) -> None:
    network = read(BASE)

    cone = flux_cone(network, stoichiometry(network), uptake=())

    held = {f.name for f in cone.equal if f.kind is FormKind.ROLE}
    out = {f.name for f in cone.sides if f.kind is FormKind.ROLE}
    assert held == {"glucose", "oxygen"}
    assert out == {"lactate", "CO2"}
