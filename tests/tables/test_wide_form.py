"""Wide tables: a row a run."""

from __future__ import annotations

import pytest

from fluxnet.ground.names import Name
from fluxnet.tables.rates_table import read_rates_text


def test_columns_name_quantity_direction_and_unit(read, rate):
    run = read(
        "run,glucose in [mmol/g/h],glucose in sd,mu [1/h],mu sd [%]\nA,2.5,0.1,0.2,3\n"
    )
    assert rate(run, "glucose in").sd == 0.1
    assert (rate(run, "mu").value, rate(run, "mu").relative) == (0.2, 0.03)


def test_each_row_is_a_run():
    reading = read_rates_text("run,glucose in [mmol],ethanol out [mmol]\nA,1,2\nB,3,\n")
    a, b = reading.table.runs
    assert [r.value for r in a.rates] == [1, 2]
    assert [r.value for r in b.rates] == [3, None]


@pytest.mark.parametrize(
    "header",
    [
        "glucose in [mmol/g/h],glucose in sd",
        "glucose in (mmol/g/h),sd",
        "glucose uptake [mmol/g/h],± glucose",
        "glucose_in [mmol/g/h],glucose_in_sd",
        "glucose in [mmol/g/h],sd glucose in [mmol/g/h]",
        "glucose in [mmol g-1 h-1],glucose SD",
    ],
)
def test_a_column_may_be_titled_in_several_ways(read, header):
    (found,) = read(f"{header}\n2.5,0.1\n").rates
    assert (str(found.quantity), found.value, found.sd) == ("glucose in", 2.5, 0.1)


def test_units_may_stand_in_a_row_below_the_titles(read):
    run = read("run,glucose in,sd,mu\n,mmol/g/h,mmol/g/h,1/h\nA,2.5,0.1,0.2\n")
    assert [(r.value, r.unit) for r in run.rates] == [(2.5, "mmol/g/h"), (0.2, "1/h")]


def test_three_header_rows_are_joined_column_by_column():
    reading = read_rates_text(
        "run;glucose;;ethanol\n;in;sd;out\n;[g/L/h];[%];[g/L/h]\nA;1,80156;5;2\n"
    )
    glucose, ethanol = reading.table.runs[0].rates
    assert glucose.value == pytest.approx(10, rel=1e-12)
    assert (glucose.relative, str(ethanol.quantity)) == (0.05, "ethanol out")
    assert "3 header rows" in reading.table.understood


def test_other_columns_are_carried_through_and_told():
    reading = read_rates_text(
        "run,strain,pH,D [1/h],titre [g/L],glucose in [mmol/g/h]\nA,s7,6.5,0.1,12,2\n"
    )
    assert reading.table.runs[0].extras == (
        ("strain", "s7"), ("pH", "6.5"), ("D [1/h]", "0.1"), ("titre [g/L]", "12"),
    )  # fmt: skip
    assert "carried through: strain, pH, D [1/h], titre [g/L]" in reading.table.understood


@pytest.mark.parametrize("title", ["ethnol out", "ethnol [mmol/g/h]", "ethnol out [mmol/g/h]"])
def test_a_misspelt_species_is_an_error_and_not_a_carried_column(title):
    reading = read_rates_text(f"run,glucose in [mmol/g/h],{title}\n,,mmol/g/h\nA,2,3\n")
    errors = [d for d in reading.diagnostics if d.severity.value == "error"]
    assert [d.name for d in errors] == [Name.UNKNOWN_QUANTITY]
    assert "ethanol" in errors[0].mend


def test_a_fault_of_a_title_is_told_once_for_all_runs(fault):
    found = fault("run,glucose in [mmol],ethnol out [mmol]\nA,2,3\nB,2,3\n")
    assert (found.name, found.span.line) == (Name.UNKNOWN_QUANTITY, 1)


def test_a_quantity_without_a_unit_is_an_error(fault):
    found = fault("run,glucose in,ethanol out [mmol]\nA,2,3\n")
    assert found.name is Name.UNKNOWN_UNIT
    assert "glucose has no unit" in found.message


def test_two_columns_of_one_quantity_are_an_error(fault):
    found = fault("run,glucose in [mmol],glucose in [mmol]\nA,2,3\n")
    assert found.name is Name.ROW_REPEATED


def test_two_rows_of_one_run_are_an_error(fault):
    found = fault("run,glucose in [mmol]\nA,2\nA,3\n")
    assert found.name is Name.ROW_REPEATED
    assert "row 2" in found.message


def test_an_sd_of_no_column_is_an_error(fault):
    assert fault("run,glucose in [mmol],ethanol sd\nA,2,3\n").name is Name.MISSING_COLUMN


def test_names_with_commas_are_quoted_or_separated_otherwise(read):
    quoted = read('"2,3-butanediol out [mmol]",glucose in [mmol]\n1,2\n')
    semicolons = read("2,3-butanediol out [mmol];glucose in [mmol]\n1;2\n")
    assert [str(r.quantity) for r in quoted.rates] == [str(r.quantity) for r in semicolons.rates]


def test_a_run_without_a_name_is_called_by_its_number():
    reading = read_rates_text("glucose in [mmol],note\n1,a\n2,b\n")
    assert [r.name for r in reading.table.runs] == ["1", "2"]


def test_a_note_that_names_species_is_no_header():
    reading = read_rates_text(
        "Products: ethanol,acetate,lactate\nrun,glucose in [mmol],ethanol out [mmol]\nA,1,2\n"
    )
    assert reading.notes == ("Products: ethanol acetate lactate",)
    assert [str(r.quantity) for r in reading.table.runs[0].rates] == ["glucose in", "ethanol out"]


def test_a_header_of_names_alone_is_one_whose_units_are_missing():
    reading = read_rates_text("run,glucose,ethanol\nA,1,2\n")
    errors = [d.name for d in reading.diagnostics if d.severity.value == "error"]
    assert set(errors) == {Name.UNKNOWN_UNIT, Name.BAD_DIRECTION}
