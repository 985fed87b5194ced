"""Cells that hold something else than a number: what stands there, and what to write."""

from __future__ import annotations

import pytest

from fluxnet.ground.names import Name

LONG = "run;species;direction;rate;sd;unit\n"
BLANK = "leave the cell blank (exchanged, not measured)"


@pytest.mark.parametrize("cell", ["n.d.", "-", "–", "N/A", "n. n.", "n.b.", "trace", "<LOD", "?"])
def test_what_was_not_seen_can_be_left_blank_or_written_as_half_its_limit(fault, cell):
    found = fault(LONG + f"A;glucose;in;{cell};5 %;mmol\nA;CO2;out;2.5;5 %;mmol\n")
    assert found.name is Name.UNREADABLE_CELL
    assert found.mend == f"{BLANK}, or for below 0.1 write 0.05 with sd 0.05"


@pytest.mark.parametrize(("cell", "other", "told"), [
    ("<0.1", "2.5", "below 0.1 write 0.05 with sd 0.05"),
    ("< 0,30", "2,5", "below 0,30 write 0,15 with sd 0,15"),
    ("≤2 mmol", "2.5", "below 2 write 1 with sd 1"),
])  # fmt: skip
def test_below_a_limit_half_of_it_is_told(fault, cell, other, told):
    found = fault(LONG + f"A;glucose;in;{cell};5 %;mmol\nA;CO2;out;{other};5 %;mmol\n")
    assert found.mend == f"{BLANK}, or for {told}"


def test_an_sd_that_was_not_found_is_assumed(fault):
    found = fault(LONG + "A;glucose;in;2.5;n.d.;mmol\n")
    assert found.mend == "leave the cell blank: an sd is assumed"


@pytest.mark.parametrize("cell", ["2026-05-01", "01.05.2026", "1. Mai", "01.Mai", "1-May", "May-26",
                                  "5/1/2026", "01.05."])  # fmt: skip
def test_a_number_that_became_a_date_is_told_so(fault, cell):
    found = fault(LONG + f"A;glucose;in;{cell};5 %;mmol\n")
    assert "is a date" in found.message


@pytest.mark.parametrize(("cell", "words"), [
    ("#DIV/0!", "fault of the spreadsheet"),
    ("#NV", "fault of the spreadsheet"),
    ("######", "column was too narrow"),
])  # fmt: skip
def test_what_a_spreadsheet_could_not_show_is_told_so(fault, cell, words):
    assert words in fault(LONG + f"A;glucose;in;{cell};5 %;mmol\n").message


@pytest.mark.parametrize(("cell", "mend"), [
    ("2.05 mmol/g/h", "write the number alone: 2.05"),
    ("~2.05", "write the number alone: 2.05"),
    ("ca. 2.05", "write the number alone: 2.05"),
    ("2.05*", "write the number alone: 2.05"),
    ("2.05 (0.06)", "write 2.05 ± 0.06"),
    ("2.05 (3 %)", "write 2.05 ± 3 %"),
    ("2.O5", "correct it, or leave the cell blank: not measured"),
    ("two", "correct it, or leave the cell blank: not measured"),
])  # fmt: skip
def test_a_number_among_other_signs_is_told_how_to_stand_alone(fault, cell, mend):
    found = fault(LONG + f"A;glucose;in;{cell};;mmol\n")
    assert found.mend == mend
