from __future__ import annotations

from collections.abc import Callable
from fractions import Fraction

import pytest

from fluxnet.chemistry.formula import degree_of_reduction
from fluxnet.chemistry.reader import read_formula
from fluxnet.ground.source import Span
from fluxnet.network.expression import Expression, constant, parameter
from fluxnet.network.model import (
    Basis,
    Cargo,
    CargoKind,
    Compartment,
    Network,
    Parameter,
    Reaction,
    Role,
    Species,
    Term,
)

Build = Callable[..., Network]


def make_species(name: str, what: str | None) -> Species:
    """`energy`, `2 electrons`, `carries FORMULA`, `biomass FORMULA`, a formula, or None."""
    span = Span("model.flux", 1, 1, 1 + len(name))
    if what is None:
        return Species(name, Role.INSIDE, span=span)
    if what == "energy":
        return Species(name, Role.CARRIER, cargo=Cargo(CargoKind.ENERGY), span=span)
    if what.endswith("electrons"):
        cargo = Cargo(CargoKind.ELECTRONS, Fraction(what.split()[0]))
        return Species(name, Role.CARRIER, cargo=cargo, span=span)
    if what.startswith("carries "):
        formula = read_formula(what.removeprefix("carries "))
        electrons = degree_of_reduction(formula) or Fraction(0)
        cargo = Cargo(CargoKind.GROUP, electrons, formula, checks_protons=True)
        return Species(name, Role.CARRIER, cargo=cargo, span=span)
    role = Role.BIOMASS if what.startswith("biomass ") else Role.EXCHANGE
    return Species(name, role, read_formula(what.removeprefix("biomass ")), span=span)


def make_reaction(text: str, line: int = 1) -> Reaction:
    """`name: 2 A + PO B + ? C <-> 0.5 D`, spans as in the text."""
    name, body = text.split(":")
    arrow = "<->" if "<->" in body else "->"
    left, right = body.split(arrow)
    start = len(name) + 1
    whole = Span("model.flux", line, 1, len(text) + 1)
    return Reaction(
        name.strip(),
        "all",
        make_terms(left, line, start),
        make_terms(right, line, start + len(left) + len(arrow)),
        arrow == "<->",
        whole,
    )


def make_terms(side: str, line: int, start: int) -> tuple[Term, ...]:
    terms = []
    place = start
    for part in side.split(" + "):
        words = part.split()
        if words and words != ["nothing"]:
            column = place + len(part) - len(part.lstrip()) + 1
            span = Span("model.flux", line, column, column + len(part.strip()))
            written = words[0] if len(words) > 1 else ""
            coefficient, half = make_coefficient(written)
            terms.append(Term(words[-1], coefficient, half, written, span=span))
        place += len(part) + 3
    return tuple(terms)


def make_coefficient(written: str) -> tuple[Expression | None, Fraction]:
    if written == "?":
        return None, Fraction(0)
    if not written:
        return constant(1), Fraction(0)
    if written.startswith("("):  # (1-a)
        return constant(1) - parameter(written[3:-1]), Fraction(0)
    if "*" in written:
        factor, name = written.split("*")
        return parameter(name).scaled(Fraction(factor)), Fraction(0)
    if written[0].isdigit():
        decimals = len(written.partition(".")[2])
        half = Fraction(1, 2 * 10**decimals) if decimals else Fraction(0)
        return constant(Fraction(written)), half
    return parameter(written), Fraction(0)


@pytest.fixture
def build() -> Build:
    """A network from species (name: what it is) and lines of reactions."""

    def make(
        species: dict[str, str | None],
        *lines: str,
        parameters: tuple[Parameter, ...] = (),
        **fields: object,
    ) -> Network:
        return Network(
            "test",
            Basis.SPECIFIC,
            tuple(make_species(n, w) for n, w in species.items()),
            parameters,
            (Compartment("all"),),
            tuple(make_reaction(text, k + 1) for k, text in enumerate(lines)),
            **fields,  # type: ignore[arg-type]
        )

    return make
