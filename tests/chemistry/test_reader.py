"""Formulas as text are read exactly, or refused with the place."""

from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fluxnet.chemistry import reader
from fluxnet.chemistry.elements import ATOMIC_WEIGHT, VALENCE
from fluxnet.chemistry.formula import degree_of_reduction, molar_mass
from fluxnet.chemistry.reader import FormulaError, FormulaFault, read_formula


def counts(text: str) -> dict[str, Fraction]:
    return dict(read_formula(text).counts)


def test_a_formula_with_brackets_is_multiplied_out() -> None:
    assert counts("(NH4)2SO4") == {"N": 2, "H": 8, "S": 1, "O": 4}
    assert counts("Ca(C3H5O3)2") == {"Ca": 1, "C": 6, "H": 10, "O": 6}


def test_crystal_water_behind_a_middle_dot_is_added() -> None:
    assert counts("MgSO4·7H2O") == {"Mg": 1, "S": 1, "O": 11, "H": 14}


def test_an_element_written_twice_is_added_up() -> None:
    assert counts("CH3COOH") == {"C": 2, "H": 4, "O": 2}


def test_subscripts_of_typographers_are_digits() -> None:
    assert counts("C₂H₆O") == {"C": 2, "H": 6, "O": 1}


@pytest.mark.parametrize(
    ("text", "charge"),
    [
        ("C2H3O2 charge -1", -1), ("C2H3O2(-)", -1), ("C4H4O4(2-)", -2), ("C4H4O4(-2)", -2),
        ("NH4(+)", 1), ("NH4 charge +1", 1), ("NH4 charge 1", 1), ("C6H12O6", 0),
        ("Mg(2+)", 2), ("C2H3O2 charge \u22121", -1), ("H charge -1", -1),
    ],
)  # fmt: skip
def test_a_charge_is_read_in_each_way_of_writing_it(text: str, charge: int) -> None:
    assert read_formula(text).charge == charge


def test_decimals_keep_half_a_unit_of_their_last_digit() -> None:
    formula = read_formula("CH1.80O0.5N0.2")
    assert formula.half_unit("H") == Fraction(1, 200)
    assert formula.half_unit("O") == Fraction(1, 20)
    assert formula.half_unit("C") == 0


def test_a_decimal_count_behind_a_bracket_makes_all_its_elements_uncertain() -> None:
    formula = read_formula("(C6H10O5)1.5")
    assert formula.count("C") == 9
    assert formula.half_unit("C") == Fraction(6, 20)


@pytest.mark.parametrize(
    ("text", "kind", "place"),
    [
        ("Cx", FormulaFault.UNKNOWN_ELEMENT, 0),
        ("C6H12Xy6", FormulaFault.UNKNOWN_ELEMENT, 5),
        ("c6h12", FormulaFault.UNKNOWN_ELEMENT, 0),
        ("CH1,8", FormulaFault.BAD, 3),
        ("(CH2", FormulaFault.BAD, 0),
        ("CH2)", FormulaFault.BAD, 3),
        ("C2 H6", FormulaFault.BAD, 2),
        ("", FormulaFault.BAD, 0),
        ("C0", FormulaFault.BAD, 0),
        ("6C", FormulaFault.BAD, 0),
    ],
)
def test_a_text_that_is_no_formula_is_refused_with_its_place(
    text: str, kind: FormulaFault, place: int
) -> None:
    with pytest.raises(FormulaError) as caught:
        read_formula(text)
    assert caught.value.kind is kind
    assert caught.value.position == place


def test_cobalt_is_not_carbon_monoxide() -> None:
    assert counts("Co") == {"Co": 1}
    assert counts("CO") == {"C": 1, "O": 1}


@given(
    st.dictionaries(
        st.sampled_from(sorted(ATOMIC_WEIGHT)),
        st.decimals("0.01", "50", places=2),
        min_size=1, max_size=6,
    )
)  # fmt: skip
def test_writing_and_reading_a_formula_gives_the_same_counts(amounts: dict[str, object]) -> None:
    text = "".join(f"{element}{count}" for element, count in amounts.items())
    assert counts(text) == {e: Fraction(str(n)) for e, n in amounts.items()}


def test_atomic_weights_are_those_of_the_reference_package() -> None:
    """chemicals holds an older table: agreement to 0.03 %, and each symbol is an element."""
    from chemicals.elements import periodic_table

    table = {e.symbol: e.MW for e in periodic_table}
    for symbol, weight in ATOMIC_WEIGHT.items():
        assert weight == pytest.approx(table[symbol], rel=4e-4), symbol


@pytest.mark.parametrize(
    "salt",
    [
        "NaCl", "K2SO4", "MgSO4·7H2O", "(NH4)2SO4", "CaCl2", "FeSO4", "Na2HPO4", "ZnSO4",
        "MnCl2", "CuSO4", "Na2MoO4", "H3BO3", "KI", "CoCl2", "NiCl2",
    ],
)  # fmt: skip
def test_salts_of_a_medium_hold_no_electrons(salt: str) -> None:
    assert degree_of_reduction(read_formula(salt)) == 0


def test_an_element_without_a_reference_gives_no_degree_of_reduction() -> None:
    assert "Se" not in VALENCE
    assert degree_of_reduction(read_formula("H2SeO3")) is None


def test_molar_mass_weighs_no_charge() -> None:
    assert molar_mass(read_formula("C6H12O6")) == pytest.approx(180.156, abs=1e-9)
    assert molar_mass(read_formula("C2H3O2(-)")) == pytest.approx(59.044, abs=1e-9)


PIECES = st.sampled_from(
    ["C", "H", "O", "N", "Na", "Cl", "Xx", "0", "1", "2", "12", "(", ")", ".", " "]
)


@given(st.lists(PIECES, max_size=8).map("".join))
def test_a_plain_formula_is_read_as_the_longer_way_reads_it(text: str) -> None:
    def read(text: str) -> object:
        try:
            return read_formula(text)
        except FormulaError as error:
            return str(error), error.kind, error.position, error.end

    with pytest.MonkeyPatch.context() as patch:
        quick = read(text)
        patch.setattr(reader, "_read_plain", lambda text: None)
        assert read(text) == quick
