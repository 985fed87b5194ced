"""Rows with more cells than the header: decimal commas between commas, columns without a title."""

from __future__ import annotations

import pytest

from fluxnet.ground.names import Name
from fluxnet.tables.rates_table import read_rates_text

LONG = "run,species,direction,rate,sd,unit\n"
GOOD = "A,CO2,out,2.5,5 %,mmol/g/h\n"
WIDE = "run,glucose in [mmol/g/h],glucose sd,CO2 out [mmol/g/h]\n"


def test_a_decimal_comma_between_commas_is_one_error_of_its_row(fault):
    found = fault(LONG + "A,glucose,in,2,05,3 %,mmol/g/h\n" + GOOD)
    assert found.name is Name.UNREADABLE_CELL
    assert found.message == "row 2 has 7 cells, the header 6: is 2,05 a decimal comma?"
    assert found.mend == "write 2.05, or separate the columns by semicolons"
    assert found.source_line[found.span.column - 1 : found.span.end_column - 1] == "2,05"


@pytest.mark.parametrize(("row", "count", "words"), [
    ("A,glucose,in,2,05,0,06,mmol/g/h", 8, "are 2,05 and 0,06 decimal commas?"),
    ("A,glucose,in,2,05,3,5 %,mmol/g/h", 8, "are 2,05 and 3,5 % decimal commas?"),
    ("A,glucose,in,2,05 ± 0,06,,mmol/g/h", 8, "is 2,05 ± 0,06 a decimal comma?"),
    ("A,2,3-butanediol,out,0.5,5 %,mmol/g/h", 7, "is `2,3-butanediol` one name?"),
    ("A,2,3-butanediol,out,0,5,5 %,mmol/g/h", 8,
     "is `2,3-butanediol` one name? is 0,5 a decimal comma?"),
])  # fmt: skip
def test_all_that_was_cut_in_a_row_is_told_in_one_error(fault, row, count, words):
    found = fault(LONG + row + "\n" + GOOD)
    assert found.message == f"row 2 has {count} cells, the header 6: {words}"


def test_a_wide_table_with_decimal_commas_between_commas_is_not_read_wrongly(fault):
    found = fault(WIDE + "A,2,05,0,06,4,4\nB,2.05,0.06,4.4\n")
    assert "are 2,05, 0,06 and 4,4 decimal commas?" in found.message


def test_blank_cells_at_the_end_do_not_hide_a_cut_number(fault):
    found = fault(WIDE + "A,2,05,,\nB,2.05,0.06,4.4\n")
    assert "row 2 has 5 cells, the header 4: is 2,05 a decimal comma?" in found.message


def test_the_rows_below_a_cut_one_stay_in_its_run(fault):
    found = fault(LONG + "A,CO2,out,4.4,,mmol\nB,CO2,out,4,4,5 %,mmol\n,ethanol,out,1.5,,mmol\n")
    assert found.span.line == 3


def test_many_cut_rows_are_told_for_the_first_and_counted():
    reading = read_rates_text(WIDE + "A,2,05,0,06,4,4\n" * 1 + "".join(
        f"B{n},2,05,0,06,4,4\n" for n in range(20)
    ))
    errors = [d for d in reading.diagnostics if d.severity.rank == 0]
    assert {d.name for d in errors} == {Name.UNREADABLE_CELL}
    assert len(errors) == 6
    assert "15 more" in errors[-1].message


@pytest.mark.parametrize(("text", "words"), [
    (LONG + GOOD.replace("\n", ",late sample\n"), "column G has no title and is not read"),
    (WIDE.replace("\n", ",\n") + "A,2.05,0.06,4.4,1.5\n", "column E has no title"),
    (WIDE + "A,2.05,0.06,4.4,,7,x\n", "columns F, G have no title and are not read"),
    (WIDE.replace(",", ";") + "A;2.05;0.06;4.4;7;8\n", "columns E, F have no title"),
])  # fmt: skip
def test_a_column_without_a_title_is_said_not_to_be_read(text, words):
    reading = read_rates_text(text)
    assert reading.table is not None, [d.message for d in reading.diagnostics]
    assert any(words in d.message for d in reading.diagnostics)


def test_blank_cells_right_of_the_titles_are_nothing_to_tell():
    reading = read_rates_text(WIDE + "A,2.05,0.06,4.4,,,\n")
    assert reading.table is not None
    assert not any("title" in d.message for d in reading.diagnostics)
