"""Units of raw data are read as they are written, and converted without loss."""

from __future__ import annotations

from fractions import Fraction

import pytest

from fluxnet.chemistry.catalogue import find_compound
from fluxnet.chemistry.reader import read_formula
from fluxnet.chemistry.units import UnitError
from fluxnet.chemistry.units_based import Conversion, conversion_of
from fluxnet.chemistry.units_measured import Measure, read_measured_unit
from fluxnet.chemistry.weighed import Substance


def substance(name: str) -> Substance:
    if name == "biomass":
        return Substance(name, read_formula("CH1.8O0.5N0.2"), ash=Fraction(8, 100))
    compound = find_compound(name)
    assert compound is not None
    return Substance(name, compound.formula, compound.formula_ph7)


def conversion(unit: str, species: str = "", broth: float | None = None) -> Conversion:
    known = substance(species) if species else None
    return conversion_of(
        read_measured_unit(unit), known, broth=broth, grams=species == "biomass"
    )


# unit, species, value, its value in the base unit reckoned by hand, the base unit
VALUES = [
    ("g/L", "glucose", 18.0156, 100.0, "mmol/L"), ("mg/L", "glucose", 180.156, 1.0, "mmol/L"),
    ("mM", "glucose", 12.5, 12.5, "mmol/L"), ("µM", "acetate", 250.0, 0.25, "mmol/L"),
    ("mol/L", "glucose", 0.5, 500.0, "mmol/L"), ("mol/m3", "ethanol", 3.0, 3.0, "mmol/L"),
    ("C-mmol/L", "glucose", 60.0, 10.0, "mmol/L"), ("C-mol/L", "ethanol", 0.2, 100.0, "mmol/L"),
    ("gC/L", "glucose", 7.2066, 100.0, "mmol/L"), ("g/kg", "ethanol", 4.6069, 100.0, "mmol/kg"),
    ("g/kg broth", "glucose", 18.0156, 100.0, "mmol/kg"),
    ("mmol/kg", "acetate", 8.0, 8.0, "mmol/kg"), ("% w/v", "glucose", 1.80156, 100.0, "mmol/L"),
    ("% (w/w)", "ethanol", 0.46069, 100.0, "mmol/kg"),
    ("g/100 mL", "glucose", 1.80156, 100.0, "mmol/L"),
    ("g/L as sodium salt", "acetate", 8.2034, 100.0, "mmol/L"), ("g/L", "", 4.2, 4.2, "g/L"),
    ("mg/mL", "", 4.2, 4.2, "g/L"), ("mol/L", "", 0.3, 300.0, "mmol/L"),
    ("g dry weight/L", "biomass", 5.5, 5.5, "g/L"), ("gDW/L", "biomass", 5.5, 5.5, "g/L"),
    ("g CDW/kg broth", "biomass", 5.5, 5.5, "g/kg"), ("mg DCW L-1", "biomass", 5500.0, 5.5, "g/L"),
    ("% v/v", "", 20.95, 0.2095, "mol/mol"), ("vol.-%", "", 0.04, 0.0004, "mol/mol"),
    ("ppm", "", 400.0, 0.0004, "mol/mol"), ("mol/mol", "", 0.2, 0.2, "mol/mol"),
    ("NL/h", "", 22.413969545, 1.0, "mol/h"), ("Nm3/h", "", 0.022413969545, 1.0, "mol/h"),
    ("L/min (20 °C)", "", 2.0, 120 * 1.01325 / (0.0831446261815324 * 293.15), "mol/h"),
    ("NL/min at 20 °C", "", 1.0, 60 * 1.01325 / (0.0831446261815324 * 293.15), "mol/h"),
    ("mLn/min", "", 500.0, 30 * 1.01325 / (0.0831446261815324 * 273.15), "mol/h"),
    ("L/min", "", 2.0, 120.0, "L/h"), ("sL/min", "", 2.0, 120.0, "L/h"),
    ("sccm", "", 100.0, 6.0, "L/h"), ("vvm", "", 1.5, 1.5 * 60 * 2, "L/h"),
    ("mmol/min", "", 50.0, 3.0, "mol/h"), ("g/h", "", 120.0, 0.12, "kg/h"),
    ("mL/min", "", 3.0, 0.18, "L/h"), ("kg/d", "", 2.4, 0.1, "kg/h"), ("1/h", "", 0.1, 0.1, "1/h"),
    ("1/d", "", 2.4, 0.1, "1/h"), ("OD", "", 12.3, 12.3, "1"), ("min", "", 90.0, 1.5, "h"),
    ("s", "", 5400.0, 1.5, "h"), ("d", "", 2.0, 48.0, "h"), ("mL", "", 20.0, 0.02, "L"),
    ("g", "", 20.0, 0.02, "kg"), ("t", "", 0.02, 20.0, "kg"), ("mbar", "", 1020.0, 1.02, "bar"),
    ("barg", "", 0.5, 1.51325, "bar"), ("kPa", "", 101.325, 1.01325, "bar"),
    ("atm", "", 1.0, 1.01325, "bar"), ("psi", "", 14.5, 14.5 * 0.0689475729317831, "bar"),
    ("K", "", 303.15, 30.0, "°C"), ("°F", "", 86.0, 30.0, "°C"),
    ("gallon/day", "", 1.0, 3.785411784 / 24, "L/h"),
]  # fmt: skip


@pytest.mark.parametrize(("unit", "species", "value", "base_value", "base"), VALUES)
def test_a_unit_becomes_its_base_and_comes_back(
    unit: str, species: str, value: float, base_value: float, base: str
) -> None:
    found = conversion(unit, species, broth=2.0 if unit == "vvm" else None)

    there = found.forth(value)

    assert found.base == base
    assert there == pytest.approx(base_value, rel=2e-10)
    assert found.back(there) == pytest.approx(value, rel=1e-12, abs=0)


def test_normal_and_standard_litres_are_told_apart() -> None:
    assert read_measured_unit("NL/h").reference == 0
    assert read_measured_unit("L/h @ 20 °C").reference == 20
    standard = read_measured_unit("SLPM")
    assert standard.standard
    assert standard.reference is None
    ratio = conversion("NL/h").factor / conversion("L/h (20 °C)").factor
    assert float(ratio) == pytest.approx(293.15 / 273.15, rel=1e-15)


@pytest.mark.parametrize(
    "text", ["kibbles", "", "m/s", "mmol/g/h", "g/m", "rpm", "mmol/L/L", "lux"]
)
def test_what_raw_data_do_not_hold_is_refused(text: str) -> None:
    with pytest.raises(UnitError):
        read_measured_unit(text)


def test_carbon_needs_a_formula() -> None:
    with pytest.raises(UnitError, match="formula"):
        conversion("C-mmol/L")


def test_per_cent_is_a_fraction_and_no_concentration() -> None:
    assert read_measured_unit("%").measure is Measure.FRACTION
    assert read_measured_unit("% w/v").measure is Measure.PER_VOLUME
