"""Tables as spreadsheets and colleagues export them, German and American."""

from __future__ import annotations

import pytest

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.tables.rates_table import RatesReading, read_rates_bytes, read_rates_text

LONG = "run,species,direction,rate,sd,unit\n"


def errors(reading: RatesReading) -> list[Diagnostic]:
    return [d for d in reading.diagnostics if d.severity.rank == 0]


def rates(reading: RatesReading) -> dict[str, dict[str, float]]:
    assert reading.table is not None, [d.message for d in reading.diagnostics]
    return {
        run.name: {str(r.quantity): pytest.approx(r.value) for r in run.rates}
        for run in reading.table.runs
    }


GERMAN = """\
Auswertung Fermentation;;;;;;;
Bearbeitet: Labor 3;;;Datum: 03.05.2026;;;;
;;;;;;;
Versuch;Datum;glucose in;oxygen in;CO2 out;mu;ethanol out;Bemerkung
;;mmol/gTS/h;mmol/gTS/h;mmol/gTS/h;1/h;mmol/gTS/h;
F1;03.05.2026;2,05;3,60;4,40;0,172;0,58;ok
F2;04.05.2026;2,11;3,55;4,38;0,168;0,61;
{below}"""


def german(below: str = "", encoding: str = "utf-8-sig") -> RatesReading:
    text = GERMAN.format(below=below).replace("\n", "\r\n")
    return read_rates_bytes(text.encode(encoding))


@pytest.mark.parametrize("encoding", ["utf-8-sig", "cp1252", "utf-16"])
def test_a_german_export_with_titles_above_a_units_row_and_dates_is_read(encoding):
    read = rates(german("\n;;;;;;;\n", encoding))
    assert list(read) == ["F1", "F2"]
    assert read["F1"]["glucose in"] == 2.05
    assert read["F2"]["mu"] == 0.168


def test_a_mean_below_the_runs_is_a_run_and_that_is_said():
    reading = german("Mittelwert;;2,08;3,575;4,39;0,170;0,595;\n")
    assert list(rates(reading)) == ["F1", "F2", "Mittelwert"]
    assert any(
        d.message == "row 8, Mittelwert, is read as a run like the others"
        for d in reading.diagnostics
    )


@pytest.mark.parametrize(
    "label", ["Summe", "Summe:", "SD", "Std. Dev.", "Total", "RSD (%)", "Stabw"]
)
def test_a_total_or_spread_below_the_runs_is_refused_as_one(label):
    (found,) = errors(german(f"{label};;4,16;7,15;8,78;0,34;1,19;\n"))
    assert found.message == f"row 8, {label}, is reckoned from the rows above and is no run"
    assert "start its line with #" in found.mend


def test_a_run_in_the_middle_may_be_called_as_it_likes():
    rows = "".join(f"{name};2,05;4,4\n" for name in ("SD", "b", "c", "d", "e"))
    read = rates(read_rates_text("run;glucose in [mmol];CO2 out [mmol]\n" + rows))
    assert list(read) == ["SD", "b", "c", "d", "e"]


@pytest.mark.parametrize("row", ["A,Total carbon,,12.3,,", ",Summe,,,,", "A,98.2%,,,,"])
def test_a_total_among_the_species_is_one_error(row):
    (found,) = errors(read_rates_text(LONG + "A,glucose,in,2,0.1,mmol\n" + row + "\n"))
    assert (found.name, found.span.line) == (Name.UNKNOWN_QUANTITY, 3)
    assert found.mend == "take the row out, or start its line with #"


def test_a_total_without_a_species_is_told_to_go():
    (found,) = errors(read_rates_text(LONG + "A,glucose,in,2,0.1,mmol\nTotal,,,2,,\n"))
    assert "take the row out" in found.mend


def test_german_titles_of_a_long_table_are_known():
    text = "Versuch;Stoff;Richtung;Messwert;Stabw;Einheit;Kommentar\r\n"
    text += "F1;glucose;in;2,05;3 %;mmol/gBTM/h;\r\nF1;CO2;out;4,40;5 %;mmol/gBTM/h;Abgas\r\n"
    reading = read_rates_text(text)
    assert rates(reading) == {"F1": {"glucose in": 2.05, "CO2 out": 4.40}}


@pytest.mark.parametrize(("header", "run"), [
    ("batch,run", "2"), ("run,batch", "1"), ("sample,reactor", "1"), ("reactor,date", "1"),
])  # fmt: skip
@pytest.mark.parametrize(("titles", "cells"), [
    ("species,direction,rate,mean,unit", "glucose,in,2.5,9,mmol"),
    ("species,direction,mean,rate,unit", "glucose,in,9,2.5,mmol"),
    ("species,direction,mean,unit", "glucose,in,2.5,mmol"),
    ("glucose in [mmol]", "2.5"),
])  # fmt: skip
def test_one_column_names_the_run_and_the_like_are_carried(header, run, titles, cells):
    reading = read_rates_text(f"{header},{titles}\n1,2,{cells}\n")
    assert rates(reading) == {run: {"glucose in": 2.5}}


def test_two_columns_called_run_are_a_fault():
    (found,) = errors(read_rates_text("run,run,glucose in [mmol]\n1,2,2.5\n"))
    assert found.name is Name.ROW_REPEATED


def test_american_titles_and_directions_are_known():
    text = "Sample ID,Metabolite,In/Out,Mean,+/-,Units\n"
    text += "S1,Glucose,consumption,2.05,0.06,mmol/gDCW/h\nS1,CO2,evolution,4.4,0.2,mmol/gDCW/h\n"
    reading = read_rates_text(text)
    assert rates(reading) == {"S1": {"Glucose in": 2.05, "CO2 out": 4.4}}
    assert [r.sd for r in reading.table.runs[0].rates] == [0.06, 0.2]


def test_directions_with_the_word_rate_are_known():
    text = "Run,Glucose uptake rate,O2 consumption rate,CO2 evolution rate,Growth rate\n"
    text += ",mmol/g/h,mmol/g/h,mmol/g/h,1/h\nA,2.05,3.6,4.4,0.172\n"
    assert list(rates(read_rates_text(text))["A"]) == ["Glucose in", "O2 in", "CO2 out", "mu"]


def test_titles_that_were_merged_over_value_and_sd_are_joined():
    text = "Run,glucose in,,CO2 out,,growth rate,\n,q,SD,q,SD,mu,SD\n"
    text += ",mmol/g/h,,mmol/g/h,,h-1,\nR1,2.05,0.06,4.4,0.2,0.172,0.005\n"
    reading = read_rates_text(text)
    assert rates(reading) == {"R1": {"glucose in": 2.05, "CO2 out": 4.4, "mu": 0.172}}
    assert [r.sd for r in reading.table.runs[0].rates] == [0.06, 0.2, 0.005]


def test_a_units_row_with_an_unknown_unit_is_told_as_a_unit():
    text = "run,glucose in,CO2 out\n,kibbles/g/h,kibbles/g/h\nA,2.05,4.4\n"
    found = errors(read_rates_text(text))
    assert {d.name for d in found} == {Name.UNKNOWN_UNIT}


def test_a_row_of_one_run_is_not_taken_for_units():
    text = "run,glucose in [mmol],CO2 out [mmol]\nwt/a,,\nwt/b,2,4\n"
    assert [(d.name, d.span.line) for d in errors(read_rates_text(text))] == [
        (Name.NO_MEASURED_RATE, 2)
    ]


def test_rows_named_in_a_first_column_without_a_title_are_runs_of_that_name():
    read = rates(read_rates_text(",glucose in [mmol],CO2 out [mmol]\nwt,2,4\nmutant,3,5\n"))
    assert list(read) == ["wt", "mutant"]


def test_names_without_direction_are_told_in_one_error_with_the_minus():
    text = "Sample,Glucose (mmol/g/h),O2 (mmol/g/h),CO2 (mmol/g/h)\nS1,-2.05,-3.6,4.4\n"
    (found,) = errors(read_rates_text(text))
    assert found.name is Name.BAD_DIRECTION
    assert "no direction is written for Glucose, O2, CO2" in found.message
    assert "numbers without the minus" in found.mend


def test_a_direction_that_is_none_is_underlined_itself():
    (found,) = errors(read_rates_text(LONG + "A,glucose,auf,2,0.1,mmol\n"))
    assert found.source_line[found.span.column - 1 : found.span.end_column - 1] == "auf"


@pytest.mark.parametrize(("header", "row", "words", "mend"), [
    ("Species,Strain A,Strain B,Unit", "Glucose uptake,2.05,2.11,mmol/g/h",
     "a column of species (`Species`) and no rate", "Strain A, Strain B are runs"),
    ("Compound,Start (g/L),End (g/L)", "Glucose,20,0.1",
     "a column of species (`Compound`) and no rate", "call the column with the numbers rate"),
    ("Run,Item,Direction,Rate,Unit", "A,glucose,in,2,mmol",
     "a column of rates (`Rate`) and no species", "the other columns are Item"),
])  # fmt: skip
def test_a_long_table_that_lacks_a_column_says_which(header, row, words, mend):
    (found,) = errors(read_rates_text(f"{header}\n{row}\n"))
    assert found.name is Name.MISSING_COLUMN
    assert words in found.message
    assert mend in found.mend


def test_a_row_that_repeats_a_run_is_one_error_of_the_row():
    text = "run,glucose in [mmol],CO2 out [mmol]\nwt,2,4\nwt,3,5\n"
    (found,) = errors(read_rates_text(text))
    assert (found.name, found.span.line) == (Name.ROW_REPEATED, 3)
    assert found.message == "row 3: glucose in, CO2 out of run wt stand already in row 2"
    assert "wt-1, wt-2" in found.mend


def test_per_cent_of_the_substrate_has_a_unit_of_its_own():
    (found, _) = errors(read_rates_text(LONG + "A,glucose,in,45,,%\nA,CO2,out,21,,%\n"))
    assert "`%` is no unit of the rate of glucose" in found.message
    assert "mmol per 100 mmol" in found.mend


def test_a_symbol_of_a_textbook_is_asked_for_its_compound():
    text = "run,qS [g/g/h],CO2 out [mmol/g/h]\nA,0.37,4.4\n"
    (found,) = errors(read_rates_text(text))
    assert "`qS` does not say which compound it is" in found.message
