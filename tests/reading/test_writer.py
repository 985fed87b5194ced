"""Networks written as text."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

from fluxnet.chemistry.formula import composition
from fluxnet.network.expression import ONE, constant, parameter
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
from fluxnet.reading.model import read_model_text
from fluxnet.reading.writer import write_model

TEXT = """\
model      Yeast
basis      mmol/L/h

substrate  glucose, oxygen accept unused-species: only for a variant
product    ethanol
exchange   CO2
biomass    X  CH1.8O0.5N0.2  ash 7.5 ± 0.5 %
carrier    ATP  carries energy
carrier    NADH
carrier    acetylP  carries C2H2O
inside     pyruvate
free       sulfate

parameter  PO = 1.4 ± 0.2  in [0.5, 2.5]

compartment upper
    glyc : glucose -> 2 pyruvate + ? NADH + (2*PO/1.4) ATP  accept dead-end: shown below

compartment empty

compartment lower
    pdc : pyruvate + NADH <-> ethanol + CO2

compartment upper
    use : PO ATP -> nothing

limit      oxygen <= 8
limit      CO2 between in 1 and out 5
limit      CO2 out / oxygen = 1.05 ± 0.03

variant anaerobic "without air"
    limit  oxygen <= 0
variant lean from anaerobic
    product  formate
    set      PO = 1
    add to lower
        back : ethanol + CO2 -> pyruvate + NADH
    drop     use
"""


def test_a_canonical_text_is_written_as_it_was_read() -> None:
    reading = read_model_text(TEXT)
    assert reading.network is not None, reading.diagnostics

    assert write_model(reading.network).split() == TEXT.split()


def test_a_network_made_by_hand_is_written_so_that_it_is_read_as_the_same() -> None:
    a = Species("A", Role.SUBSTRATE, composition({"C": 6, "H": 12, "O": 6}))
    b = Species("B", Role.PRODUCT, composition({"C": 2, "H": 3, "O": 2}, -1))
    d = Species("D", Role.CARRIER, cargo=Cargo(CargoKind.ELECTRONS, Fraction(2)))
    third = Reaction("r", "all", (Term("A", constant(Fraction(1, 3))),), (Term("B", ONE),))
    share = parameter("p") / constant(3) - constant(Fraction(1, 2))
    parts = Reaction("s", "all", (Term("A", share), Term("D", constant(Fraction(1, 4)))),
                     (Term("B", share.scaled(Fraction(3))), Term("D", constant(Fraction(1, 4)))))
    network = Network(
        "", Basis.SPECIFIC, (a, b, d), (Parameter("p", Fraction(3)),), (Compartment("all"),),
        (third, parts),
    )

    text = write_model(network)
    found = read_model_text(text)

    assert "(1/3) A" in text
    assert "0.25 D" in text
    assert "charge -1" in text
    assert found.network is not None, found.diagnostics
    for made, read in zip(network.reactions, found.network.reactions, strict=True):
        assert [t.coefficient for _, t in read.terms] == [t.coefficient for _, t in made.terms]


def test_a_variant_that_was_applied_is_written_as_a_model_of_its_own() -> None:
    from fluxnet.network.variant import apply_variant

    network = read_model_text(TEXT).network
    assert network is not None
    lean, _ = apply_variant(network, "lean")
    assert lean is not None

    again = read_model_text(write_model(replace(lean, variants=(), variant="base"))).network

    assert again is not None
    assert [r.name for r in again.reactions] == [r.name for r in lean.reactions]
    assert again.find_reaction("back") is not None
    assert again.parameters[0].value == 1


def test_limits_below_zero_are_written_as_they_are_read() -> None:
    text = "substrate glucose\nproduct ethanol, CO2\ncompartment c\n"
    text += "    r : glucose <-> 2 ethanol + 2 CO2\nlimit r between -2 and -0.5\n"
    network = read_model_text(text + "variant v\n    limit r = -1.5 ± 0.2\n").network
    assert network is not None
    written = write_model(network)
    again = read_model_text(written).network

    assert again is not None
    assert "r between -2 and -0.5" in written
    assert "r = -1.5 ± 0.2" in written
    assert [(m.low, m.high) for m in again.limits] == [(-2, Fraction(-1, 2))]
    assert again.variants[0].limits[0].low == Fraction(-3, 2)
