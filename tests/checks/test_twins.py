"""Reactions that do the same are told once each, at the second."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from fluxnet.checks.twins import check_twins
from fluxnet.ground.names import Name
from fluxnet.matrices.stoichiometry import stoichiometry
from fluxnet.network.model import Network

Read = Callable[[str], Network]

BASE = """
substrate glucose
product   lactate
exchange  CO2
carrier   ATP carries energy
inside    A C6H12O6
parameter k = 2
compartment all
    first : glucose + k ATP {arrow} A
    other : A -> 2 lactate
"""


def twins(read: Read, line: str, arrow: str = "->") -> list[tuple[Name, str]]:
    network = read(BASE.replace("{arrow}", arrow) + f"    second : {line}\n")
    return [(d.name, d.message) for d in check_twins(network, stoichiometry(network))]


@pytest.mark.parametrize(
    ("line", "arrow", "name", "message"),
    [
        ("k ATP + glucose -> A", "->", Name.DUPLICATE_REACTION, "second is the same as first"),
        ("glucose + k ATP <-> A", "<->", Name.DUPLICATE_REACTION, "second is the same as first"),
        ("glucose + k ATP <-> A", "->", Name.PARALLEL_REACTIONS, "second does the same as first"),
        (
            "2 glucose + (2*k) ATP -> 2 A", "->",
            Name.PARALLEL_REACTIONS, "second does the same as first, times 2",
        ),
        ("A -> glucose + k ATP", "->", Name.PARALLEL_REACTIONS, "second is first backwards"),
        (
            "0.5 A -> 0.5 glucose + (k/2) ATP", "<->",
            Name.PARALLEL_REACTIONS, "second is first backwards, times 0.5",
        ),
    ],
)  # fmt: skip
def test_what_two_proportional_reactions_are_to_each_other(
    read: Read, line: str, arrow: str, name: Name, message: str
) -> None:
    assert twins(read, line, arrow) == [(name, f"reaction {message}")]


@pytest.mark.parametrize(
    "line", ["glucose + 2 ATP -> A", "glucose -> A", "A -> glucose", "glucose + 3 ATP -> A"]
)
def test_reactions_that_differ_in_one_coefficient_are_no_twins(read: Read, line: str) -> None:
    # 2 ATP equals k ATP only at the value that k happens to have.
    assert twins(read, line) == []


def test_the_first_place_is_shown_beside_the_second(read: Read) -> None:
    network = read(BASE.replace("{arrow}", "->") + "    again : A -> 2 lactate\n")

    (told,) = check_twins(network, stoichiometry(network))

    assert (told.span.line, [s.line for s in told.also]) == (13, [12])
