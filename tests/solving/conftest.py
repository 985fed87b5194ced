"""Networks and runs written down briefly."""

from __future__ import annotations

import re
from collections.abc import Callable
from fractions import Fraction

import pytest

from fluxnet.chemistry.formula import composition
from fluxnet.network.expression import constant, parameter
from fluxnet.network.model import (
    Basis,
    Compartment,
    Direction,
    Limit,
    Network,
    Parameter,
    Quantity,
    QuantityKind,
    Reaction,
    Relation,
    Role,
    Species,
    Term,
)
from fluxnet.rates.measured import MeasuredRate, Run

FORMULAS = {
    "glucose": {"C": 6, "H": 12, "O": 6},
    "oxygen": {"O": 2},
    "CO2": {"C": 1, "O": 2},
    "ethanol": {"C": 2, "H": 6, "O": 1},
    "X": {"C": 1, "H": Fraction(9, 5), "O": Fraction(1, 2), "N": Fraction(1, 5)},
    "ammonia": {"N": 1, "H": 3},
}


def _side(text: str) -> tuple[Term, ...]:
    terms = []
    for part in re.split(r"\s\+\s", text.strip()):
        words = part.split()
        if words == ["nothing"]:
            continue
        number = words[0] if len(words) == 2 else "1"
        value = parameter(number) if number[0].isalpha() else constant(Fraction(number))
        terms.append(Term(words[-1], value))
    return tuple(terms)


def _quantity(text: str, roles: dict[str, Role]) -> Quantity:
    if " / " in text:
        top, bottom = text.split(" / ")
        return Quantity(
            QuantityKind.RATIO, numerator=_quantity(top, roles),
            denominator=_quantity(bottom, roles),
        )
    name, *way = text.split()
    if name == "mu":
        return Quantity(QuantityKind.MU)
    if name not in roles:
        return Quantity(QuantityKind.FLUX, name)
    if way:
        return Quantity(QuantityKind.RATE, name, Direction(way[0]))
    direction = Direction.IN if roles[name] is Role.SUBSTRATE else Direction.OUT
    return Quantity(QuantityKind.RATE, name, direction)


def network_of(
    text: str,
    limits: tuple[str, ...] = (),
    basis: Basis = Basis.SPECIFIC,
    ash: str = "0",
    ash_sd: str = "0",
) -> Network:
    """Lines ``substrate a, b``, ``parameter PO 1.4 0.2`` and ``name : a + 2 b -> c``."""
    species: list[Species] = []
    parameters: list[Parameter] = []
    reactions: list[Reaction] = []
    for line in filter(None, (line.strip() for line in text.splitlines())):
        word, _, rest = line.partition(" ")
        if word == "parameter":
            name, value, *sd = rest.split()
            parameters.append(
                Parameter(name, Fraction(value), Fraction(sd[0]) if sd else None)
            )
        elif " : " not in line:
            for name in rest.split(","):
                name = name.strip()
                formula = composition(FORMULAS[name]) if name in FORMULAS else None
                role = Role(word)
                is_biomass = role is Role.BIOMASS
                species.append(
                    Species(
                        name, role, formula,
                        ash=Fraction(ash) if is_biomass else Fraction(0),
                        ash_sd=Fraction(ash_sd) if is_biomass else Fraction(0),
                    )
                )
        else:
            name, _, equation = line.partition(" : ")
            both = "<->" in equation
            left, right = equation.split("<->" if both else "->")
            reactions.append(
                Reaction(name.strip(), "all", _side(left), _side(right), reversible=both)
            )
    roles = {s.name: s.role for s in species}
    return Network(
        "made up", basis, tuple(species), tuple(parameters), (Compartment("all"),),
        tuple(reactions), tuple(limit_of(words, roles) for words in limits),
    )


def limit_of(text: str, roles: dict[str, Role]) -> Limit:
    what, relation, numbers = re.fullmatch(
        r"(.*?) (<=|>=|=|between) (.*)", text
    ).groups()  # type: ignore[union-attr]
    quantity = _quantity(what, roles)
    if relation == "between":
        low, high = (Fraction(n) for n in numbers.split(" and "))
        return Limit(quantity, Relation.BETWEEN, low, high)
    value, *sd = (Fraction(n) for n in numbers.split(" ± "))
    return Limit(
        quantity, Relation(relation), None if relation == "<=" else value,
        None if relation == ">=" else value, sd[0] if sd else None,
    )


def run_of(network: Network, *rows: str, basis: Basis | None = None, covariance=None) -> Run:
    """Rows such as ``glucose in 2 ± 0.1``, ``mu 0.1 ± 0``, ``ethanol out``."""
    roles = {s.name: s.role for s in network.species}
    rates = []
    for row in rows:
        words, _, sd = row.partition(" ± ")
        *what, last = words.split()
        if sd:
            quantity = _quantity(" ".join(what), roles)
            rates.append(MeasuredRate(quantity, float(last), float(sd)))
        else:
            rates.append(MeasuredRate(_quantity(words, roles), None, None))
    return Run("first", basis or network.basis, tuple(rates), covariance)


@pytest.fixture
def make_network() -> Callable[..., Network]:
    return network_of


@pytest.fixture
def make_run() -> Callable[..., Run]:
    return run_of
