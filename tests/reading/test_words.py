"""Words and numbers on a line: what is a number, what a name, what a sign."""

from __future__ import annotations

from fractions import Fraction

import pytest

HALF = Fraction(1, 2)


@pytest.mark.parametrize(
    ("written", "value", "half_unit"),
    [
        ("2", 2, 0),
        ("0.5", HALF, Fraction(1, 20)),
        (".5", HALF, Fraction(1, 20)),
        ("2.0", 2, Fraction(1, 20)),
        ("1e3", 1000, 0),
        ("1.25e2", 125, HALF),
        ("1.5e-2", Fraction(15, 1000), Fraction(5, 10000)),
    ],
)
def test_a_number_is_exact_and_knows_its_rounding(reaction, written, value, half_unit) -> None:
    term = reaction(f"r : {written} A -> B", inside="A, B").left[0]

    assert term.coefficient.number == value
    assert term.half_unit == half_unit
    assert term.written == written


@pytest.mark.parametrize(
    "name", ["3PG", "6PGL", "2-oxoglutarate", "2,3-butanediol", "acetyl-CoA", "G6P", "x_1",
             "2'3-AMP", "NADH-mit", "α-KG", "_a"]
)  # fmt: skip
def test_digits_that_touch_letters_belong_to_the_name(reaction, name) -> None:
    found = reaction(f"r : {name} -> 2 {name}2", inside=f"{name}, {name}2")

    assert found.left[0].species == name
    assert found.right[0].species == f"{name}2"
    assert found.right[0].coefficient.number == 2


@pytest.mark.parametrize(
    ("line", "left", "right"),
    [
        ("r : NAD+ + H+ -> A", ["NAD+", "H+"], ["A"]),
        ("r : NAD++H+->A", ["NAD+", "H+"], ["A"]),
        ("r : A + NAD+ -> H+", ["A", "NAD+"], ["H+"]),
        ("r:A+B->2 H+", ["A", "B"], ["H+"]),
        ("r : A+ B -> H+ + A", ["A", "B"], ["H+", "A"]),
        ("r : A<->NAD+", ["A"], ["NAD+"]),
        ("r : A -> NAD+ accept dead-end: said", ["A"], ["NAD+"]),
    ],
)
def test_a_trailing_plus_belongs_to_a_name_only_where_no_operand_follows(
    reaction, line, left, right
) -> None:
    found = reaction(line, inside="A, B, NAD+, H+")

    assert [t.species for t in found.left] == left
    assert [t.species for t in found.right] == right


@pytest.mark.parametrize("arrow", ["->", "→"])
def test_an_arrow_one_way(reaction, arrow) -> None:
    assert not reaction(f"r : A{arrow}B", inside="A, B").reversible


@pytest.mark.parametrize("arrow", ["<->", "⇌"])
def test_an_arrow_both_ways(reaction, arrow) -> None:
    assert reaction(f"r : A{arrow}B", inside="A, B").reversible


def test_text_is_made_alike_so_that_a_subscript_is_a_digit(read) -> None:
    network = read("""
        substrate glucose
        product ethanol, CO₂
        compartment c
            a : glucose -> 2 ethanol + 2 CO2
    """)

    assert network.find_species("CO2").entry == "CO2"


def test_a_minus_sign_of_typography_is_a_minus(reaction) -> None:
    found = reaction("r : (2 − p) A → B", inside="A, B", more="parameter p = 1")

    assert found.left[0].coefficient.exact({"p": Fraction(1)}) == 1


@pytest.mark.parametrize("sign", ["±", "+-", "+/-"])
def test_the_sign_of_an_error_can_be_typed(read, sign) -> None:
    network = read(f"""
        substrate glucose
        product ethanol, CO2
        parameter a = 2 {sign} 0.1
        compartment c
            b : glucose -> (a*2/a) ethanol + 2 CO2
    """)

    assert network.parameters[0].sd == Fraction(1, 10)


@pytest.mark.parametrize(
    ("written", "value"),
    [
        ("(1/2 + 0*p)", HALF), ("(2*p)", 6), ("(p-1)", 2), ("(1 - (2 - p))", 2),
        ("(-1 + p)", 2), ("(2*(p + 1)/4)", 2), ("(1-p*0)", 1), ("(7-p-2)", 2), ("(12/p/2)", 2),
    ],
)  # fmt: skip
def test_brackets_hold_sums_products_and_quotients(reaction, written, value) -> None:
    found = reaction(f"r : {written} A -> B", inside="A, B", more="parameter p = 3")

    assert found.left[0].coefficient.exact({"p": Fraction(3)}) == value
    assert found.left[0].half_unit == 0


def test_a_question_mark_may_touch_its_species(read) -> None:
    network = read("""
        substrate glucose
        product ethanol, CO2
        compartment c
            a : glucose -> ?ethanol + ? CO2
    """)

    assert [t.coefficient.number for t in network.reactions[0].right] == [2, 2]
    assert all(t.solved for t in network.reactions[0].right)


def test_a_parameter_stands_before_its_species(reaction) -> None:
    found = reaction("r : A -> PO ATP", inside="A, ATP", more="parameter PO = 1.4")

    assert str(found.right[0].coefficient) == "PO"
    assert found.right[0].written == "PO"


def test_the_place_of_a_term_covers_coefficient_and_species(read) -> None:
    network = read(
        "substrate glucose\nproduct ethanol, CO2\ncompartment c\n"
        "\ta : glucose -> 2 ethanol + (1 + 1) CO2\n"
    )
    ethanol, gas = network.reactions[0].right

    assert (ethanol.span.line, ethanol.span.column, ethanol.span.end_column) == (4, 17, 26)
    assert (gas.span.column, gas.span.end_column) == (29, 40)


def test_columns_count_the_letters_of_the_users_own_line(fault) -> None:
    found = fault(
        "substrate glucose\nproduct e\u0301thanol C2H6O, ½ CO2\ncompartment c\n"
        "    a : glucose -> 2 éthanol + 2 CO2\n"
    )

    assert (found.span.line, found.span.column) == (2, 25)
