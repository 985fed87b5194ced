"""Units of rates and amounts: conversion by formula, one basis a run."""

from __future__ import annotations

import pytest

from fluxnet.chemistry.reader import read_formula
from fluxnet.ground.names import Name
from fluxnet.network.model import Basis, Role, Species
from fluxnet.tables.rates_table import read_rates_text

LONG = "run,species,direction,rate,sd,unit\n"

# By hand: C 12.011, H 1.008, O 15.999, N 14.007 g/mol.
GLUCOSE, ACETIC = 180.156, 60.052
X_ORGANIC = 12.011 + 1.8 * 1.008 + 0.5 * 15.999 + 0.2 * 14.007
X_DECLARED = "biomass X CH1.8O0.5N0.2 ash 8 %\n"


@pytest.mark.parametrize(
    ("unit", "factor", "shown"),
    [
        ("mmol/g/h", 1, "mmol/g/h"),
        ("mmol/gDW/h", 1, "mmol/g/h"),
        ("µmol/g/min", 0.06, "mmol/g/h"),
        ("g/g/h", 1000 / GLUCOSE, "mmol/g/h"),
        ("C-mmol/g/h", 1 / 6, "mmol/g/h"),
        ("mmol/L/h", 1, "mmol/L/h"),
        ("g/L/d", 1000 / GLUCOSE / 24, "mmol/L/h"),
        ("mmol/h", 1, "mmol/h"),
        ("mmol", 1, "mmol"),
        ("g", 1000 / GLUCOSE, "mmol"),
        ("mol", 1000, "mmol"),
        ("g/L", 1000 / GLUCOSE, "mmol/L"),
        ("gC/L", 1000 / 12.011 / 6, "mmol/L"),
        ("mM", 1, "mmol/L"),
        ("mmol per 100 mmol", 1, "mol/100 mol"),
        ("mol/100 mol", 1, "mol/100 mol"),
        ("mol/mol", 1, "mol/mol"),
        ("C-mol/C-mol", 1 / 6, "mol/C-mol"),
        ("g/g", 1000 / GLUCOSE, "mmol/g"),
    ],
)
def test_a_unit_is_brought_to_moles_in_its_own_basis(read, unit, factor, shown):
    run = read(LONG + f"A,glucose,in,3,0.5,{unit}\n")
    (found,) = run.rates
    assert found.value == pytest.approx(3 * factor, rel=1e-12)
    assert found.sd == pytest.approx(0.5 * factor, rel=1e-12)
    assert (run.unit, found.unit) == (shown, unit)


def test_amounts_have_no_time_and_volumetric_rates_have(read):
    assert read(LONG + "A,glucose,in,3,1,g/L\n").basis is Basis.AMOUNT
    assert read(LONG + "A,glucose,in,3,1,g/L/h\n").basis is Basis.VOLUMETRIC


def test_rates_per_c_mol_of_biomass_count_c_mol_where_there_is_carbon(read):
    run = read(
        LONG + "A,glucose,in,2.87,1 %,C-mol/C-mol/h\nA,oxygen,in,0.313,1 %,mol/C-mol/h\n"
        "A,ethanol,out,0.2,1 %,mol/C-mol/h\nA,mu,,0.44,1 %,1/h\n"
    )
    assert (run.basis, run.unit) == (Basis.CARBON, "C-mol/C-mol/h")
    assert [r.value for r in run.rates] == pytest.approx([2.87, 0.313, 0.4, 0.44], rel=1e-12)


def test_with_a_model_per_gram_the_rates_per_c_mol_are_brought_to_grams(read, network):
    run = read(LONG + "A,glucose,in,2.4,1 %,C-mol/C-mol/h\n", network=network)
    mass = X_ORGANIC / 0.92  # 8 % ash
    assert run.basis is Basis.SPECIFIC
    assert run.rates[0].value == pytest.approx(2.4 / 6 * 1000 / mass, rel=1e-12)


def test_with_a_model_per_c_mol_the_rates_per_gram_are_brought_to_c_mol(read, carbon_network):
    run = read(LONG + "A,glucose,in,2.4,1 %,mmol/g/h\n", network=carbon_network)
    mass = X_ORGANIC / 0.92
    assert run.basis is Basis.CARBON
    assert run.rates[0].value == pytest.approx(2.4 * 6 * mass / 1000, rel=1e-12)


def test_growth_may_be_a_rate_of_the_biomass_species(read):
    rows = "A,glucose,in,2,1,mmol/g/h\nA,X,out,0.2,1 %,{}\n"
    mass = X_ORGANIC / 0.92
    for unit in ("1/h", "g/g/h"):
        found = read(X_DECLARED + LONG + rows.format(unit)).rates[1]
        assert str(found.quantity) == "X out"
        assert found.value == pytest.approx(0.2 * 1000 / mass, rel=1e-12), unit


@pytest.mark.parametrize(("unit", "value"), [("1/h", 0.2), ("1/d", 4.8), ("g/g/h", 0.2)])
def test_the_growth_rate_is_told_per_hour(read, unit, value):
    run = read(LONG + f"A,mu,,{value},1 %,{unit}\n")
    assert run.rates[0].value == pytest.approx(0.2, rel=1e-12)


def test_grams_of_an_acid_are_grams_of_the_free_acid_and_that_is_said():
    reading = read_rates_text(LONG + f"A,acetate,out,{ACETIC},1,mg\n")
    assert reading.table.runs[0].rates[0].value == pytest.approx(1, rel=1e-12)
    (note,) = [d for d in reading.diagnostics if d.name is Name.FREE_ACID_TAKEN]
    assert "acetate" in note.message


@pytest.mark.parametrize(
    ("form", "mass"), [("as ion", 59.044), ("as sodium salt", 82.034), ("monohydrate", 78.067)]
)
def test_another_form_in_the_unit_changes_the_mass(form, mass):
    reading = read_rates_text(LONG + f"A,acetate,out,{mass},1,mg {form}\n")
    assert reading.table.runs[0].rates[0].value == pytest.approx(1, rel=1e-12)
    assert Name.FREE_ACID_TAKEN not in [d.name for d in reading.diagnostics]


def test_volumetric_rates_become_specific_with_a_biomass_concentration(read):
    run = read(
        "biomass concentration 4 ± 0.2 g/L\n" + LONG
        + "A,glucose,in,10,1,mmol/L/h\nA,ethanol,out,12,1,mmol/L/h\nA,mu,,0.1,1 %,1/h\n"
    )  # fmt: skip
    assert (run.basis, run.shared_error) == (Basis.SPECIFIC, 0.05)
    assert [r.value for r in run.rates] == [2.5, 3.0, 0.1]
    assert [r.own_sd for r in run.rates] == [0.25, 0.25, None]
    assert run.covariance[0, 1] == pytest.approx(0.05**2 * 2.5 * 3, rel=1e-12)


def test_the_biomass_concentration_may_be_a_column():
    reading = read_rates_text(
        "run,glucose in [g/L/h],biomass concentration [mg/L],biomass concentration sd\n"
        "A,1.80156,4000,200\nB,1.80156,2000,10 %\n"
    )
    a, b = reading.table.runs
    assert (a.rates[0].value, b.rates[0].value) == pytest.approx((2.5, 5), rel=1e-12)
    assert (a.shared_error, b.shared_error) == (0.05, 0.1)


def test_one_run_keeps_to_one_basis(fault):
    found = fault(LONG + "A,glucose,in,2,1,mmol/g/h\nA,ethanol,out,3,1,mmol/L/h\n")
    assert found.name is Name.MIXED_BASIS
    assert "glucose in is in mmol/g/h, ethanol out is in mmol/L/h" in found.message


@pytest.mark.parametrize("unit", ["mmol", "mmol/L/h"])
def test_a_growth_rate_has_no_place_beside_amounts_or_rates_per_litre(fault, unit):
    found = fault(LONG + f"A,glucose,in,2,1,{unit}\nA,mu,,0.1,1 %,1/h\n")
    assert found.name is Name.MIXED_BASIS


def test_two_runs_may_have_two_bases():
    reading = read_rates_text(LONG + "A,glucose,in,2,1,mmol\nB,glucose,in,2,1,mmol/g/h\n")
    assert [r.basis for r in reading.table.runs] == [Basis.AMOUNT, Basis.SPECIFIC]


@pytest.mark.parametrize(
    ("unit", "factor"),
    [
        ("", 1),
        ("mol/mol", 1),
        ("%", 0.01),
        ("C-mol/C-mol", 6 / 2),
        ("g/g", GLUCOSE / ACETIC),
        ("mmol/mol", 0.001),
    ],
)
def test_a_ratio_is_brought_to_mol_per_mol(read, unit, factor):
    run = read(
        LONG + f"A,glucose,in,2,1,mmol/g/h\nA,acetate out / glucose in,,0.5,10 %,{unit}\n"
    )
    found = run.rates[1]
    assert str(found.quantity) == "acetate out / glucose in"
    assert found.value == pytest.approx(0.5 * factor, rel=1e-12)
    assert found.relative == 0.1


def test_a_complex_medium_is_declared_above_the_table(read):
    reading = read_rates_text(
        "substrate yeast-extract CH1.6O0.5N0.2\n" + LONG + "A,yeast-extract,,12.011,1,gC/L\n"
    )
    (species,) = reading.table.species
    assert (species.name, species.role) == ("yeast-extract", Role.SUBSTRATE)
    assert str(reading.table.runs[0].rates[0].quantity) == "yeast-extract in"
    assert reading.table.runs[0].rates[0].value == pytest.approx(1000, rel=1e-12)


def test_a_biomass_is_declared_with_its_ash():
    text = "biomass X CH1.8O0.5N0.2 ash 8 ± 1 %\n" + LONG + "A,mu,,0.1,1 %,1/h\n"
    (species,) = read_rates_text(text).table.species
    assert (species.name, float(species.ash), float(species.ash_sd)) == ("X", 0.08, 0.01)
    assert species.formula == read_formula("CH1.8O0.5N0.2")


@pytest.mark.parametrize(
    ("line", "name"),
    [
        ("species broth CH2Q", Name.UNKNOWN_ELEMENT),
        ("species broth C(H2", Name.BAD_FORMULA),
        ("biomass X H2O", Name.BIOMASS_WITHOUT_CARBON),
        ("species ethanol C2H4O", Name.FORMULA_DIFFERS),
        ("species acetate C2H3O2", Name.FORMULA_DIFFERS),
        ("species broth CH2\nspecies broth CH2", Name.DECLARED_TWICE),
        ("shared error biomass many", Name.UNREADABLE_CELL),
        ("shared error biomass 4", Name.UNREADABLE_CELL),
        ("biomass concentration 4 mmol/h", Name.WRONG_UNIT),
        ("biomass concentration 4 kibbles", Name.UNKNOWN_UNIT),
        ("biomass concentration 0 g/L", Name.UNREADABLE_CELL),
    ],
)
def test_a_line_above_the_table_that_makes_no_sense_is_an_error(fault, line, name):
    found = fault(f"{line}\n" + LONG + "A,glucose,in,2,1,mmol/g/h\n")
    assert found.name is name


def test_a_declared_formula_that_the_model_contradicts_is_an_error(fault, network):
    found = fault("biomass X CH2O\n" + LONG + "A,glucose,in,2,1,mmol/g/h\n", network=network)
    assert found.name is Name.FORMULA_DIFFERS


def test_the_nitrogen_source_may_be_named_above_the_table():
    reading = read_rates_text("nitrogen source urea\n" + LONG + "A,glucose,in,2,1,mmol\n")
    assert reading.table.nitrogen == "urea"


def test_an_unknown_biomass_gets_the_common_formula_and_that_is_said():
    reading = read_rates_text(LONG + "A,biomass,out,2,1,mmol\n")
    assert reading.table.species == (
        Species("biomass", Role.BIOMASS, read_formula("CH1.8O0.5N0.2"), entry="biomass"),
    )
    assert Name.BIOMASS_ASSUMED in [d.name for d in reading.diagnostics]


def test_a_column_in_c_mol_is_refused_for_what_holds_no_carbon_and_only_where_it_is_measured(fault):
    head = "species,direction,rate [C-mol/C-mol],sd\nglucose,in,1,0\n"
    assert read_rates_text(head + "oxygen,in,,\n").table is not None
    found = fault(head + "oxygen,in,0.1,0.01\n")
    assert found.name is Name.WRONG_UNIT
    assert found.message.endswith("oxygen holds no carbon to count in `C-mol/C-mol`")
    assert "mol/C-mol" in found.mend
