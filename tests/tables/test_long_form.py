"""Long tables: a row a quantity."""

from __future__ import annotations

import pytest

from fluxnet.ground.names import Name
from fluxnet.network.model import Basis, Role
from fluxnet.tables.rates_table import read_rates_text

LONG = "run,species,direction,rate,sd,unit\n"


def test_a_row_is_a_rate_with_its_direction_value_and_sd(read):
    run = read(LONG + "A,glucose,in,2.5,0.1,mmol/g/h\n")
    (found,) = run.rates
    assert (run.name, run.basis, run.unit) == ("A", Basis.SPECIFIC, "mmol/g/h")
    assert (str(found.quantity), found.value, found.sd) == ("glucose in", 2.5, 0.1)
    assert (found.written, found.unit) == ("2.5", "mmol/g/h")
    assert (found.span.line, found.span.column, found.span.end_column) == (2, 14, 17)


def test_several_runs_keep_their_order_and_their_own_rows():
    reading = read_rates_text(
        LONG + "B,glucose,in,2,1,mmol\nA,glucose,in,3,1,mmol\nB,ethanol,out,4,1,mmol\n"
    )
    runs = reading.table.runs
    assert [r.name for r in runs] == ["B", "A"]
    assert [str(r.quantity) for r in runs[0].rates] == ["glucose in", "ethanol out"]


def test_a_blank_run_cell_continues_the_run_above_and_that_is_said():
    reading = read_rates_text(LONG + "B,glucose,in,2,1,mmol\n,ethanol,out,4,1,mmol\n")
    (run,) = reading.table.runs
    assert len(run.rates) == 2
    assert "a blank run cell continues the run above" in reading.table.understood


def test_without_a_run_column_there_is_one_run_with_a_name(read):
    run = read("species,direction,rate,sd,unit\nglucose,in,2,1,mmol\nethanol,out,1,1,mmol\n")
    assert (run.name, len(run.rates)) == ("1", 2)


def test_a_blank_value_is_exchanged_but_not_measured(read, rate):
    run = read(LONG + "A,glucose,in,2,1,mmol\nA,ethanol,out,,,mmol\n")
    blank = rate(run, "ethanol out")
    assert blank.value is None
    assert blank.sd is None
    assert len(run.measured) == 1


def test_a_typed_zero_is_exact(read):
    run = read(LONG + "A,glucose,in,2,0,mmol\nA,ethanol,out,0,0,mmol\n")
    assert [r.sd for r in run.rates] == [0, 0]


@pytest.mark.parametrize("written", ["5 %", "5%", "5.0 %"])
def test_an_sd_in_per_cent_is_of_the_value_and_remembered(read, written):
    (found,) = read(LONG + f"A,glucose,in,2,{written},mmol\n").rates
    assert found.sd == pytest.approx(0.1, rel=1e-14)
    assert found.relative == 0.05


def test_an_sd_column_may_be_in_per_cent_as_a_whole(read):
    (found,) = read("species,direction,rate [mmol],sd [%]\nglucose,in,2,5\n").rates
    assert (found.sd, found.relative) == (0.1, 0.05)


def test_an_sd_may_stand_beside_the_value(read):
    run = read("species,direction,rate,unit\nglucose,in,2 ± 0.1,mmol\nethanol,out,4 +- 5 %,mmol\n")
    assert [r.sd for r in run.rates] == [0.1, 0.2]


def test_an_sd_column_may_have_a_unit_of_its_own(read):
    (found,) = read("species,direction,rate [mmol/L/h],sd [mg/L/h]\nglucose,in,2,18.0156\n").rates
    assert found.sd == pytest.approx(0.1, rel=1e-12)


def test_the_direction_may_stand_behind_the_species(read):
    run = read("species,rate,sd,unit\nglucose in,2,1,mmol\nacetic acid out,1,1,mmol\n")
    assert [str(r.quantity) for r in run.rates] == ["glucose in", "acetic acid out"]


def test_a_unit_may_stand_in_the_header_or_in_a_row_below_it(read):
    in_header = read("species,direction,rate [mmol/g/h],sd\nglucose,in,2,1\n")
    below = read("species,direction,rate,sd\n,,mmol/g/h,mmol/g/h\nglucose,in,2,1\n")
    assert in_header.unit == below.unit == "mmol/g/h"
    assert in_header.rates[0].value == below.rates[0].value == 2


def test_other_columns_are_carried_through_to_the_run(read):
    run = read(
        "run,species,direction,rate,sd,unit,strain,date\n"
        "A,glucose,in,2,1,mmol,s7,2026-05-01\nA,ethanol,out,2,1,mmol,s7,2026-05-02\n"
    )
    assert run.extras == (("strain", "s7"), ("date", "2026-05-01; 2026-05-02"))


def test_lines_above_the_table_are_notes_and_comments_are_kept():
    reading = read_rates_text("Vessel 3\n# weighed twice\n\n" + LONG + "A,glucose,in,2,1,mmol\n")
    assert reading.notes == ("Vessel 3", "weighed twice")
    assert reading.table is not None


def test_what_was_understood_is_told_in_one_note():
    reading = read_rates_text("run;species;direction;rate;sd;unit\nA;glucose;in;2,5;1;mmol\n")
    (note,) = [d for d in reading.diagnostics if d.name is Name.TABLE_UNDERSTOOD]
    assert "long table, semicolon-separated, decimal comma, one header row" in note.message


def test_every_fault_of_a_table_is_told_with_its_cell():
    reading = read_rates_text(
        LONG
        + "A,glucos,in,2,1,mmol\nA,ethanol,up,2,1,mmol\nA,CO2,out,x,1,mmol\n"
        + "A,acetate,out,1,-1,mmol\nA,lactate,out,1,1,mmol/kibble\n"
    )
    errors = [d for d in reading.diagnostics if d.severity.value == "error"]
    assert [(d.name, d.span.line) for d in errors] == [
        (Name.UNKNOWN_QUANTITY, 2),
        (Name.BAD_DIRECTION, 3),
        (Name.UNREADABLE_CELL, 4),
        (Name.NEGATIVE_SD, 5),
        (Name.UNKNOWN_UNIT, 6),
    ]
    assert "row 4, column D (rate): `x` is no number" in errors[2].message
    assert errors[2].source_line == "A,CO2,out,x,1,mmol"


@pytest.mark.parametrize(
    ("row", "name", "column"),
    [
        ("A,glucose,in,nan,1,mmol", Name.NOT_A_NUMBER, 14),
        ("A,glucose,in,2,inf,mmol", Name.NOT_A_NUMBER, 16),
        ("A,glucose,in,n.d.,1,mmol", Name.UNREADABLE_CELL, 14),
        ("A,glucose,in,<0.1,1,mmol", Name.UNREADABLE_CELL, 14),
        ("A,glucose,in,#DIV/0!,1,mmol", Name.UNREADABLE_CELL, 14),
        ("A,glucose,in,2026-05-01,1,mmol", Name.UNREADABLE_CELL, 14),
        ("A,glucose,in,-2,1,mmol", Name.NEGATIVE_RATE, 14),
        ("A,glucose,in,2,-0.1,mmol", Name.NEGATIVE_SD, 16),
        ("A,glucose,in,2,-5 %,mmol", Name.NEGATIVE_SD, 16),
        ("A,glucose,in,2 ± 1,1,mmol", Name.UNREADABLE_CELL, 20),
        ("A,glucose,in,,1,mmol", Name.UNREADABLE_CELL, 15),
        ("A,glucose,in,2,1,", Name.UNKNOWN_UNIT, 18),
        ("A,glucose,in,2,1,mm", Name.WRONG_UNIT, 18),
        ("A,glucose,in,2,1,L/h", Name.WRONG_UNIT, 18),
        ("A,glucose,in,2,1,1/h", Name.WRONG_UNIT, 18),
        ("A,oxygen,in,2,1,C-mol", Name.WRONG_UNIT, 17),
        ("A,mu,,0.1,1 %,mmol", Name.WRONG_UNIT, 15),
        ("A,mu,in,0.1,1 %,1/h", Name.BAD_DIRECTION, 6),
        ("A,glucose,sideways,2,1,mmol", Name.BAD_DIRECTION, 11),
        ("A,glucose,,2,1,mmol", Name.BAD_DIRECTION, 3),
        ("A,flux upkeep,,2,1,mmol", Name.UNKNOWN_QUANTITY, 3),
        ("A,,in,2,1,mmol", Name.UNREADABLE_CELL, 3),
    ],
)
def test_a_cell_that_makes_no_sense_is_an_error_at_its_place(fault, row, name, column):
    found = fault(LONG + row + "\n")
    assert (found.name, found.span.line, found.span.column) == (name, 2, column), found.message


def test_two_rows_for_one_quantity_are_an_error_that_shows_both(fault):
    found = fault(LONG + "A,glucose,in,2,1,mmol\nA,glucose,out,3,1,mmol\n")
    assert found.name is Name.ROW_REPEATED
    assert [s.line for s in (found.span, *found.also)] == [3, 2]


def test_two_names_of_one_compound_are_one_quantity(fault):
    found = fault(LONG + "A,acetate,out,2,1,mmol\nA,acetic acid,out,3,1,mmol\n")
    assert found.name is Name.ROW_REPEATED


def test_the_growth_rate_and_the_rate_of_the_one_biomass_are_one_quantity(fault):
    found = fault(LONG + "A,mu,,0.1,1 %,1/h\nA,biomass,out,4,1,mmol/g/h\n")
    assert found.name is Name.ROW_REPEATED


def test_a_run_without_a_measured_rate_is_an_error(fault):
    assert fault(LONG + "A,glucose,in,,,mmol\n").name is Name.NO_MEASURED_RATE


def test_a_header_without_rows_is_an_error(fault):
    empty = fault(LONG)
    assert empty.name is Name.NO_MEASURED_RATE
    assert empty.mend.startswith("type your numbers below the units; or try the example.csv")


def test_a_table_without_a_header_is_an_error_that_shows_what_stood_there(fault):
    found = fault("A,in,2\nB,in,3\n")
    assert found.name is Name.MISSING_COLUMN
    assert "A, in, 2" in found.message


def test_a_second_column_of_one_title_is_an_error(fault):
    found = fault("species,direction,rate,rate,unit\nglucose,in,2,3,mmol\n")
    assert found.name is Name.ROW_REPEATED


def test_a_catalogue_name_keeps_the_way_it_was_typed(read):
    reading = read_rates_text(LONG + "A,Acetic acid,out,2,1,mmol\nA,cells,out,2,1,mmol\n")
    acid, cells = reading.table.species
    assert (acid.name, acid.entry, acid.role) == ("Acetic acid", "acetate", Role.EXCHANGE)
    assert (cells.name, cells.role) == ("biomass", Role.BIOMASS)
    assert Name.BIOMASS_ASSUMED in [d.name for d in reading.diagnostics]


@pytest.mark.parametrize(
    ("one", "other", "what"),
    [
        ("shared error biomass 4 %", "shared error biomass 5 %", "the shared error"),
        ("nitrogen source urea", "nitrogen source nitrate", "the nitrogen source"),
    ],
)
def test_two_different_lines_of_one_kind_above_a_table_are_a_fault_with_its_line(
    one: str, other: str, what: str
) -> None:
    rows = "species,direction,rate,sd,unit\nglucose,in,2,3 %,mmol/g/h\n"
    reading = read_rates_text(f"{one}\n{other}\n{rows}")
    (fault,) = (d for d in reading.diagnostics if d.name is Name.ROW_REPEATED)

    assert reading.table is None
    assert what in fault.message
    assert fault.span.line == 2
    assert read_rates_text(f"{one}\n{one}\n{rows}").table is not None
