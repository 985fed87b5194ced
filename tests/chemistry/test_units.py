"""Units are read as people write them, and converted without loss."""

from __future__ import annotations

import subprocess
import sys
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fluxnet.chemistry.catalogue import find_compound
from fluxnet.chemistry.conversion import conversion_factor
from fluxnet.chemistry.reader import read_formula
from fluxnet.chemistry.unit_words import Dimension
from fluxnet.chemistry.units import UnitError, UnitFault, parse_unit
from fluxnet.chemistry.weighed import Substance


def substance(name: str) -> Substance:
    compound = find_compound(name)
    assert compound is not None
    return Substance(name, compound.formula, compound.formula_ph7)


def to(value: str, unit: str, target: str, name: str) -> float:
    factor = conversion_factor(parse_unit(unit), parse_unit(target), substance(name))
    return float(Fraction(value) * factor)


@pytest.mark.parametrize(
    "text",
    [
        "mmol/g/h", "mmol/(g h)", "mmol/(g*h)", "mmol g-1 h-1", "mmol g^-1 h^-1", "mmol/gDW/h",
        "mmol/g DW/h", "mmol/g dry weight/h", "mmol per g per h", "mmol g⁻¹ h⁻¹", "mmol·g-1·h-1",
        "mol/kg/h", "µmol/mg/h",
    ],
)  # fmt: skip
def test_one_unit_is_read_in_all_its_ways_of_writing(text: str) -> None:
    unit = parse_unit(text)
    assert unit.amount is Dimension.MOLES
    assert set(unit.per) == {Dimension.MASS, Dimension.TIME}
    assert unit.scale == 1


@pytest.mark.parametrize(
    ("text", "amount", "scale", "per"),
    [
        ("mM", Dimension.MOLES, 1, ["L"]), ("mol/m3", Dimension.MOLES, 1, ["L"]),
        ("g/L/d", Dimension.MASS, Fraction(1, 24), ["L", "h"]),
        ("mmol per 100 mmol", Dimension.MOLES, Fraction(1, 100), ["mmol"]),
        ("C-mol/C-mol/h", Dimension.CARBON, 1, ["C-mmol", "h"]),
        ("C-mmol/g/h", Dimension.CARBON, 1, ["g", "h"]),
        ("gC/L", Dimension.CARBON_MASS, 1, ["L"]), ("e-mol/L", Dimension.ELECTRONS, 1000, ["L"]),
        ("mmol/L/min", Dimension.MOLES, 60, ["L", "h"]), ("kg", Dimension.MASS, 1000, []),
        ("mM/h", Dimension.MOLES, 1, ["L", "h"]), ("mmol/100 mL", Dimension.MOLES, 10, ["L"]),
        ("1/h", None, 1, ["h"]), ("h-1", None, 1, ["h"]), ("1/d", None, Fraction(1, 24), ["h"]),
        ("g/g/h", Dimension.MASS, 1, ["g", "h"]),
    ],
)  # fmt: skip
def test_amount_size_and_denominators_are_told_apart(
    text: str, amount: Dimension | None, scale: Fraction, per: list[str]
) -> None:
    unit = parse_unit(text)
    assert (unit.amount, unit.scale, [d.value for d in unit.per]) == (amount, scale, per)


@pytest.mark.parametrize(
    ("text", "kind"),
    [
        ("xyz", UnitFault.UNKNOWN), ("", UnitFault.UNKNOWN), ("mmol?", UnitFault.UNKNOWN),
        ("m/s", UnitFault.WRONG), ("L/h", UnitFault.WRONG), ("mmol/L h", UnitFault.WRONG),
        ("mmol/L/L", UnitFault.WRONG), ("mmol as ion", UnitFault.WRONG), ("h", UnitFault.WRONG),
        ("g mmol/h", UnitFault.WRONG),
    ],
)  # fmt: skip
def test_what_is_no_unit_of_an_amount_is_refused(text: str, kind: UnitFault) -> None:
    with pytest.raises(UnitError) as caught:
        parse_unit(text)
    assert caught.value.kind is kind


def test_unusual_words_are_looked_up() -> None:
    assert parse_unit("g/L/week").scale == Fraction(1, 168)
    assert float(parse_unit("lb/h").scale) == pytest.approx(453.59237)


def test_usual_units_do_not_load_the_units_library() -> None:
    code = (
        "import sys; from fluxnet.chemistry.units import parse_unit;"
        "[parse_unit(t) for t in ('mmol/g/h', 'gC/L', 'mM', '1/h', 'kg/m3/d')];"
        "assert 'pint' not in sys.modules; parse_unit('g/week'); assert 'pint' in sys.modules"
    )
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0


@pytest.mark.parametrize(
    ("value", "unit", "target", "name", "expected"),
    [
        ("180.156", "g/L", "mmol/L", "glucose", 1000.0),
        ("60.052", "g", "mmol", "acetate", 1000.0),
        ("59.044", "g as ion", "mmol", "acetate", 1000.0),
        ("82.034", "g as sodium salt", "mmol", "acetate", 1000.0),
        ("136.079", "g as sodium salt trihydrate", "mmol", "acetate", 1000.0),
        ("198.171", "g monohydrate", "mmol", "glucose", 1000.0),
        ("182.648", "g as hydrochloride", "mmol", "lysine", 1000.0),
        ("66.067", "g as sulfate", "mmol", "ammonia", 1000.0),
        ("218.216", "g as calcium salt", "mmol", "lactate", 2000.0),
        ("162.052", "g as disodium salt", "mmol", "succinate", 1000.0),
        ("140.070", "g as monosodium salt", "mmol", "succinate", 1000.0),
        ("12.011", "gC/L", "mmol/L", "glucose", 1000.0 / 6),
        ("6", "C-mol", "mmol", "glucose", 1000.0),
        ("24", "e-mol", "mmol", "glucose", 1000.0),
        ("4", "e-mol", "mmol", "oxygen", 1000.0),
        ("0.1", "mol/C-mol/h", "mmol/C-mmol/h", "oxygen", 0.1),
    ],
)  # fmt: skip
def test_values_are_converted_with_the_formula(
    value: str, unit: str, target: str, name: str, expected: float
) -> None:
    assert to(value, unit, target, name) == pytest.approx(expected, rel=1e-5)


def test_grams_of_biomass_are_dry_weight_with_its_ash() -> None:
    cells = Substance("X", read_formula("CH1.8O0.5N0.2"), ash=Fraction(8, 100))
    factor = conversion_factor(parse_unit("g/L"), parse_unit("mmol/L"), cells)
    assert float(factor) == pytest.approx(1000 * 0.92 / 24.626, rel=1e-4)


@pytest.mark.parametrize(
    ("unit", "name"),
    [("C-mol", "hydrogen"), ("gC", "ammonia"), ("e-mol", "CO2"), ("g as sodium salt", "glucose"),
     ("g as ion", "ethanol"), ("g as chloride", "acetate")],
)  # fmt: skip
def test_a_species_cannot_be_counted_by_what_it_does_not_hold(unit: str, name: str) -> None:
    with pytest.raises(UnitError, match=name):
        conversion_factor(parse_unit(unit), parse_unit("mmol"), substance(name))


def test_units_per_different_things_are_not_converted() -> None:
    with pytest.raises(UnitError, match="not per the same"):
        conversion_factor(parse_unit("g/L/h"), parse_unit("mmol/g/h"), substance("glucose"))


UNITS = ["mmol/L/h", "g/L/h", "C-mol/m3/d", "gC/L/h", "e-mmol/L/min", "g/L/h as sodium salt",
         "mg/mL/s as ion"]  # fmt: skip


@given(
    st.sampled_from(UNITS), st.sampled_from(UNITS),
    st.sampled_from(["acetate", "lactate", "citrate", "glutamate"]),
    st.fractions(Fraction(1, 1000), 10**6, max_denominator=10**4),
)  # fmt: skip
def test_there_and_back_is_exact(unit: str, other: str, name: str, value: Fraction) -> None:
    one, two = parse_unit(unit), parse_unit(other)
    there = value * conversion_factor(one, two, substance(name))
    assert there * conversion_factor(two, one, substance(name)) == value


@pytest.mark.parametrize("text", ["mol/0 mol", "mmol/min-99999999", "mmol^0/L", "0 mmol", "nan/h"])
def test_a_unit_with_a_senseless_number_is_refused(text):
    with pytest.raises(UnitError):
        parse_unit(text)


@pytest.mark.parametrize(
    "text",
    [
        "mmol**9999999/g/h", "9**9**9 mmol/g/h", "mmol//g/h", "mmol/g/", "*mmol", "mmol 5",
        "((mmol))/g/h", "mmol/(g h", "mmol)/g/h", "mmol/()g", "mmol/g/h" + "*1" * 60,
    ],
)  # fmt: skip
def test_signs_that_make_no_unit_are_no_factors_of_it(text: str) -> None:
    with pytest.raises(UnitError) as told:
        parse_unit(text)

    assert told.value.kind is UnitFault.UNKNOWN


def test_a_number_in_a_unit_has_a_size_that_somebody_meant() -> None:
    assert parse_unit("1000000 mmol/g/h").scale == 10**6
    for text in ("99999999999 mmol/g/h", "mmol/99999999999 g", "0.00000000001 mmol"):
        with pytest.raises(UnitError, match="out of reach"):
            parse_unit(text)
