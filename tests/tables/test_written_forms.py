"""The many ways in which one table is written: separators, decimal signs, encodings."""

from __future__ import annotations

import subprocess
import sys

import pytest

from fluxnet.ground.names import Name
from fluxnet.tables import inputs
from fluxnet.tables.numerals import Decimal, decide_decimal, read_number
from fluxnet.tables.rates_table import read_rates, read_rates_bytes, read_rates_text

TABLE = """run,species,direction,rate,sd,unit
A,glucose,in,1234.5,0.25,µmol/g/h
A,"2,3-butanediol",out,0.5,5 %,µmol/g/h
"""


def comma(text: str, separator: str = ";") -> str:
    """The table with another separator and decimal commas."""
    cells = [["run", "species", "direction", "rate", "sd", "unit"]]
    cells += [["A", "glucose", "in", "1234,5", "0,25", "µmol/g/h"]]
    cells += [["A", "2,3-butanediol", "out", "0,5", "5 %", "µmol/g/h"]]
    assert text == TABLE
    return "".join(separator.join(row) + "\n" for row in cells)


def values(reading) -> list[tuple[str, str, float, float]]:
    assert reading.table is not None, [d.message for d in reading.diagnostics]
    return [
        (run.name, str(r.quantity), r.value, r.sd) for run in reading.table.runs for r in run.rates
    ]


WAYS = {
    "plain": TABLE.encode(),
    "with a byte-order mark": b"\xef\xbb\xbf" + TABLE.encode(),
    "UTF-16 with a mark": TABLE.encode("utf-16"),
    "UTF-16 little-endian": TABLE.encode("utf-16-le"),
    "UTF-16 big-endian with a mark": b"\xfe\xff" + TABLE.encode("utf-16-be"),
    "Latin-1": TABLE.encode("latin-1"),
    "CRLF": TABLE.replace("\n", "\r\n").encode(),
    "CR": TABLE.replace("\n", "\r").encode(),
    "no end of line at the end": TABLE.rstrip().encode(),
    "semicolons, decimal comma": comma(TABLE).encode(),
    "tabs, decimal comma": comma(TABLE, "\t").encode(),
    "decimal comma, thousands points": comma(TABLE).replace("1234,5", "1.234,5").encode(),
    "thousands blanks": comma(TABLE).replace("1234,5", "1 234,5").encode(),
    "thousands commas": TABLE.replace("1234.5", '"1,234.5"').encode(),
    "declared separator": ("sep=;\n" + comma(TABLE)).encode(),
    "trailing separators": TABLE.replace("\n", ",,\n").encode(),
    "blank lines and remarks": ("\n# remark; one, two\n\n" + TABLE + "\n\n# end\n").encode(),
    "notes above": ("Vessel 3, run of May\n\n" + TABLE).encode(),
    "all cells quoted": ("\n".join('"' + ('","'.join(line.replace('"2,3-b', "2;3-b").split(
        ","))).replace("2;3-butanediol\"", "2,3-butanediol") + '"' for line in TABLE.splitlines())
    ).encode(),
    "a line end in a quoted cell": TABLE.replace("rate,sd", '"rate\n",sd').encode(),
}  # fmt: skip


@pytest.mark.parametrize("way", WAYS)
def test_one_table_written_in_any_way_is_one_table(way):
    assert values(read_rates_bytes(WAYS[way])) == values(read_rates_text(TABLE))


def test_a_text_that_is_not_utf8_is_read_as_latin_1_and_that_is_said(tmp_path):
    path = tmp_path / "rates.csv"
    path.write_bytes(TABLE.encode("latin-1"))
    reading = read_rates(path)
    assert Name.WRONG_ENCODING in [d.name for d in reading.diagnostics]


def test_a_number_that_can_be_read_in_two_ways_is_refused_with_its_place(fault):
    found = fault("run;species;direction;rate;sd;unit\nA;glucose;in;1,234;;mmol\n")
    assert (found.name, found.span.line, found.span.column) == (Name.AMBIGUOUS_NUMBER, 2, 14)
    assert "--decimal" in found.mend


@pytest.mark.parametrize(("sign", "value"), [(Decimal.COMMA, 1.234), (Decimal.POINT, 1234.0)])
def test_the_decimal_sign_can_be_said(read, sign, value):
    run = read("species;direction;rate;unit\nglucose;in;1,234;mmol\n", decimal=sign)
    assert run.rates[0].value == value


def test_another_number_of_the_table_tells_how_a_doubtful_one_is_meant(read):
    run = read("species;direction;rate;unit\nglucose;in;1,234;mmol\nethanol;out;0,5;mmol\n")
    assert run.rates[0].value == 1.234


HEADER = "species;direction;rate;sd;unit\n"


@pytest.mark.parametrize(
    ("rates", "sd", "decimal", "larger"),
    [
        (("1.234", "2.345", "2.100"), "2,5 %", "1,234", "1234"),
        (("1,234", "2,345", "2,100"), "2.5 %", "1.234", "1234"),
    ],
)
def test_an_sd_does_not_make_thousands_signs_of_the_rates(rates, sd, decimal, larger):
    names = ("glucose;in", "ethanol;out", "CO2;out")
    rows = [f"{n};{r};;mmol\n" for n, r in zip(names, rates, strict=True)]
    reading = read_rates_text(HEADER + "".join(rows[:2]) + rows[2].replace(";;", f";{sd};"))
    errors = [d for d in reading.diagnostics if d.severity.rank == 0]
    assert reading.table is None
    assert [(d.name, d.span.line) for d in errors] == [
        (Name.AMBIGUOUS_NUMBER, line) for line in (2, 3, 4)
    ]
    assert f"`{sd}` in row 4" in errors[0].message
    assert f"1.234 or {larger}" in errors[0].message
    assert f"write {decimal} or {larger}" in errors[0].mend


@pytest.mark.parametrize("proof", ["1.234,5", "1.234.567", "1.234.567,8"])
def test_a_number_that_proves_thousands_signs_settles_the_others(read, proof):
    run = read(HEADER + f"glucose;in;1.234;5 %;mmol\nethanol;out;{proof};5 %;mmol\n")
    assert run.rates[0].value == 1234


def test_a_number_that_proves_thousands_commas_settles_the_others(read):
    run = read(HEADER + "glucose;in;1,234;5 %;mmol\nethanol;out;1,234.5;5 %;mmol\n")
    assert run.rates[0].value == 1234


def test_an_error_beside_a_number_is_no_thousand_either(fault):
    found = fault(HEADER + "glucose;in;12,5 ± 1.234;;mmol\n")
    assert found.name is Name.AMBIGUOUS_NUMBER


def test_a_thousands_sign_can_be_said(read):
    text = HEADER + "glucose;in;1.234;2,5 %;mmol\n"
    assert read(text, decimal=Decimal.COMMA).rates[0].value == 1234


def test_the_same_doubt_of_many_numbers_is_told_for_the_first_and_counted():
    rows = "".join(f"A{n};glucose;in;1.234;2,5 %;mmol\n" for n in range(40))
    reading = read_rates_text("run;" + HEADER + rows)
    errors = [d for d in reading.diagnostics if d.severity.rank == 0]
    assert [d.span.line for d in errors] == [2, 3, 4, 5, 6, 7]
    assert "34 more are like it" in errors[-1].message


def test_a_point_in_a_comma_separated_file_is_a_decimal_point(read):
    assert read("species,direction,rate,unit\nglucose,in,1.234,mmol\n").rates[0].value == 1.234


def test_a_number_written_otherwise_than_the_rest_is_refused(fault):
    found = fault(
        "species;direction;rate;unit\nglucose;in;1,5;mmol\nethanol;out;2,5;mmol\nCO2;out;2.5;mmol\n"
    )
    assert (found.name, found.span.line) == (Name.AMBIGUOUS_NUMBER, 4)


@pytest.mark.parametrize(
    ("text", "point", "comma"),
    [
        ("12", 12, 12),
        ("1.5", 1.5, None),
        ("0,123", None, 0.123),
        ("1,234", 1234, 1.234),
        ("1.234.567", None, 1234567),
        ("1.234,5", None, 1234.5),
        ("1,23,4", None, None),
        ("12,34.5", None, None),
        (".5", 0.5, None),
        ("5.", 5, None),
        ("1e3", 1000, 1000),
        ("−2", -2, -2),
        ("+2", 2, 2),
        ("1'234.5", 1234.5, None),
        ("1 234", 1234, 1234),
        ("12 34", None, None),
        ("1e999", None, None),
        ("", None, None),
        (".", None, None),
        ("٣", None, None),
    ],
)
def test_numbers_are_read_with_a_point_or_a_comma(text, point, comma):
    assert (read_number(text, Decimal.POINT), read_number(text, Decimal.COMMA)) == (point, comma)


def test_whole_numbers_tell_no_decimal_sign():
    choice = decide_decimal([], ";")
    assert (choice.decimal, choice.said) == (Decimal.POINT, False)


@pytest.mark.parametrize(
    ("data", "name"),
    [
        (b"", Name.EMPTY_FILE),
        (b"\n \n", Name.EMPTY_FILE),
        (b"# only a remark\n", Name.EMPTY_FILE),
        (bytes(range(256)), Name.BINARY_FILE),
        (b"PK\x03\x04 no archive", Name.BINARY_FILE),
        (b"\xd0\xcf\x11\xe0 an old workbook", Name.BINARY_FILE),
    ],
)
def test_bytes_that_hold_no_table_are_told_apart(data, name):
    reading = read_rates_bytes(data)
    assert reading.table is None
    assert [d.name for d in reading.diagnostics] == [name]


def test_a_missing_file_and_a_folder_are_told_apart(tmp_path):
    (missing,) = read_rates(tmp_path / "none.csv").diagnostics
    (folder,) = read_rates(tmp_path).diagnostics
    assert (missing.name, folder.name) == (Name.FILE_MISSING, Name.NOT_A_FILE)


def test_a_text_table_is_read_without_heavy_packages():
    script = (
        "import sys; from fluxnet.tables.rates_table import read_rates_text as read;"
        "t = 'species,direction,rate,sd,unit\\nglucose,in,2,5 %,g/L/h\\n';"
        "assert read(t).table;"
        "print([m for m in ('pandas', 'pint', 'python_calamine', 'scipy') if m in sys.modules])"
    )
    found = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True)
    assert found.stdout.strip() == "[]", found.stderr


def test_a_path_without_a_name_is_told_as_the_folder_that_it_is():
    for path in (".", "/"):
        (told,) = read_rates(path).diagnostics
        assert told.name is Name.NOT_A_FILE


def test_a_file_without_an_end_is_not_read_to_its_end(tmp_path, monkeypatch):
    monkeypatch.setattr(inputs, "MOST_BYTES", 2_000_000)
    (told,) = read_rates("/dev/zero").diagnostics
    assert (told.name, "more than 2 million bytes" in told.message) == (Name.FILE_TOO_LONG, True)
