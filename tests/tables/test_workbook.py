"""Workbooks: sheets, cells with their addresses, cells that only look blank."""

from __future__ import annotations

import builtins
import datetime
import io
import zipfile
from collections.abc import Callable, Mapping, Sequence

import pytest
import xlsxwriter

from fluxnet.ground.names import Name
from fluxnet.tables.numerals import Decimal
from fluxnet.tables.rates_table import read_rates, read_rates_bytes

HEAD = ["run", "species", "direction", "rate", "sd", "unit"]
ROW = ["A", "glucose", "in", 2.5, 0.1, "mmol/g/h"]


def workbook(
    sheets: Mapping[str, Sequence[Sequence[object]]],
    extra: Callable[[xlsxwriter.Workbook], None] = lambda book: None,
) -> bytes:
    stream = io.BytesIO()
    with xlsxwriter.Workbook(stream, {"in_memory": True}) as book:
        for name, rows in sheets.items():
            sheet = book.add_worksheet(name)
            for number, row in enumerate(rows):
                sheet.write_row(number, 0, row)
        extra(book)
    return stream.getvalue()


def errors(reading) -> list[tuple[Name, str, int, int]]:
    return [
        (d.name, d.span.file, d.span.line, d.span.column)
        for d in reading.diagnostics
        if d.severity.value == "error"
    ]


def test_a_sheet_is_read_as_text_would_be(tmp_path):
    path = tmp_path / "rates.xlsx"
    path.write_bytes(workbook({"May": [["shared error biomass 4 %"], [], HEAD, ROW]}))
    reading = read_rates(path)
    (run,) = reading.table.runs
    assert (run.rates[0].value, run.rates[0].own_sd, run.shared_error) == (2.5, 0.1, 0.04)
    assert reading.sources[0].file == f"{path}!May"
    assert "sheet May" in reading.table.understood


def test_cells_keep_their_addresses_where_the_sheet_starts_with_blanks():
    rows = [[], [], ["", "", *HEAD], ["", "", *ROW[:3], "x", *ROW[4:]]]
    reading = read_rates_bytes(workbook({"May": rows}), file="rates.xlsx")
    assert errors(reading) == [(Name.UNREADABLE_CELL, "rates.xlsx!May", 4, 6)]
    assert "row 4, column F (rate): `x`" in reading.diagnostics[0].message


def test_a_number_keeps_all_its_digits_whatever_decimal_sign_is_said():
    data = workbook({"May": [HEAD, ["A", "glucose", "in", 1 / 3, 0.1, "mmol"]]})
    reading = read_rates_bytes(data, decimal=Decimal.COMMA)
    assert reading.table.runs[0].rates[0].value == 1 / 3


def test_a_cell_shown_in_per_cent_is_a_percentage():
    def percent(book):
        sheet = book.worksheets()[0]
        sheet.write_number(1, 4, 0.07, book.add_format({"num_format": "0.0%"}))

    (found,) = read_rates_bytes(workbook({"May": [HEAD, ROW]}, percent)).table.runs[0].rates
    assert (found.relative, found.sd) == (0.07, pytest.approx(0.175, rel=1e-14))


def test_a_quoted_per_cent_sign_in_a_format_is_no_percentage():
    def percent(book):
        sheet = book.worksheets()[0]
        sheet.write_number(1, 4, 0.07, book.add_format({"num_format": '0.0" % of x"'}))

    (found,) = read_rates_bytes(workbook({"May": [HEAD, ROW]}, percent)).table.runs[0].rates
    assert (found.relative, found.sd) == (None, 0.07)


def test_an_error_value_is_no_blank():
    def divide(book):
        book.worksheets()[0].write_formula(1, 3, "=1/0", None, "#DIV/0!")

    reading = read_rates_bytes(workbook({"May": [HEAD, ROW]}, divide), file="r.xlsx")
    assert errors(reading) == [(Name.UNREADABLE_CELL, "r.xlsx!May", 2, 4)]
    assert "`#DIV/0!` is an error of the spreadsheet" in reading.diagnostics[0].message


def test_a_formula_without_a_stored_value_is_no_blank():
    def formula(book):
        sheet = book.worksheets()[0]
        sheet.write_formula(2, 3, "=D2*2", None, "")
        sheet.write_row(2, 0, ["A", "ethanol", "out"])
        sheet.write(2, 5, "mmol/g/h")

    reading = read_rates_bytes(workbook({"May": [HEAD, ROW]}, formula), file="r.xlsx")
    assert errors(reading) == [(Name.UNREADABLE_CELL, "r.xlsx!May", 3, 4)]
    assert "without a stored value" in reading.diagnostics[0].message


def test_a_formula_with_a_stored_value_is_that_value():
    def formula(book):
        book.worksheets()[0].write_formula(1, 3, "=1+2", None, 3)

    (run,) = read_rates_bytes(workbook({"May": [HEAD, ROW]}, formula)).table.runs
    assert run.rates[0].value == 3


def test_a_date_in_place_of_a_number_is_told_as_one():
    def date(book):
        style = book.add_format({"num_format": "yyyy-mm-dd"})
        book.worksheets()[0].write_datetime(1, 3, datetime.datetime(2026, 5, 1), style)

    reading = read_rates_bytes(workbook({"May": [HEAD, ROW]}, date), file="r.xlsx")
    assert errors(reading)[0][0] is Name.UNREADABLE_CELL
    assert "`2026-05-01` is a date" in reading.diagnostics[0].message


def test_the_first_sheet_with_a_table_is_read_and_the_others_are_named():
    sheets = {"Notes": [["nothing"]], "May": [HEAD, ROW], "June": [HEAD, ROW]}
    reading = read_rates_bytes(workbook(sheets))
    assert "sheet May" in reading.table.understood
    assert any("not read: June" in d.message for d in reading.diagnostics)


def test_a_sheet_can_be_asked_for_by_name():
    sheets = {"May": [HEAD, ROW], "June": [HEAD, ["B", *ROW[1:]]]}
    assert read_rates_bytes(workbook(sheets), sheet="june").table.runs[0].name == "B"
    (fault,) = read_rates_bytes(workbook(sheets), sheet="July").diagnostics
    assert (fault.name, fault.mend) == (Name.UNKNOWN_SHEET, "its sheets are May, June")


def test_a_sheet_of_a_text_file_cannot_be_asked_for():
    text = b"species,direction,rate,unit\nglucose,in,2,mmol\n"
    assert [d.name for d in read_rates_bytes(text, sheet="May").diagnostics] == [
        Name.UNKNOWN_SHEET
    ]


def test_a_sheet_named_covariance_correlates_the_errors():
    rows = [HEAD, ROW, ["A", "CO2", "out", 5, 0.2, "mmol/g/h"]]
    pairs = [["first", "second", "correlation"], ["glucose", "CO2", 0.5]]
    (run,) = read_rates_bytes(workbook({"May": rows, "Covariance": pairs})).table.runs
    assert run.covariance[0, 1] == pytest.approx(0.5 * 0.1 * 0.2, rel=1e-14)


def test_remarks_and_blank_rows_are_passed_over():
    reading = read_rates_bytes(workbook({"May": [["# remark"], [], HEAD, [], ROW]}))
    assert reading.notes == ("remark",)
    assert len(reading.table.runs[0].rates) == 1


def test_without_the_package_that_reads_workbooks_it_is_named(monkeypatch):
    real = builtins.__import__

    def without(name, *rest, **more):
        if name == "python_calamine":
            raise ImportError(name)
        return real(name, *rest, **more)

    data = workbook({"May": [HEAD, ROW]})
    monkeypatch.setattr(builtins, "__import__", without)
    (fault,) = read_rates_bytes(data).diagnostics
    assert fault.name is Name.PACKAGE_MISSING
    assert "fluxnet[sheets]" in fault.mend


def test_an_archive_that_is_no_workbook_is_refused():
    stream = io.BytesIO()
    with zipfile.ZipFile(stream, "w") as archive:
        archive.writestr("rates.csv", "a,b")
    (fault,) = read_rates_bytes(stream.getvalue()).diagnostics
    assert fault.name is Name.BINARY_FILE


@pytest.mark.parametrize("member", ["xl/workbook.xml", "xl/worksheets/sheet1.xml"])
def test_a_damaged_workbook_is_refused(member):
    whole = zipfile.ZipFile(io.BytesIO(workbook({"May": [HEAD, ROW]})))
    stream = io.BytesIO()
    with zipfile.ZipFile(stream, "w") as archive:
        for name in whole.namelist():
            archive.writestr(name, whole.read(name)[:-40] if name == member else whole.read(name))
    reading = read_rates_bytes(stream.getvalue())
    assert reading.table is None
    assert {d.name for d in reading.diagnostics} == {Name.BINARY_FILE}


def test_a_cell_at_the_far_end_of_a_sheet_is_refused_before_room_is_made_for_it():
    def far(book):
        book.worksheets()[0].write(1_048_575, 16_383, "x")

    reading = read_rates_bytes(workbook({"May": [HEAD, ROW]}, far), file="r.xlsx")
    assert reading.table is None
    assert reading.diagnostics[0].name is Name.BINARY_FILE
    assert "r.xlsx!May reaches down to row 1048576" in reading.diagnostics[0].message


def test_a_format_far_from_the_table_does_no_harm():
    def far(book):
        book.worksheets()[0].write_blank(1_048_575, 16_383, None, book.add_format({"bold": True}))

    assert read_rates_bytes(workbook({"May": [HEAD, ROW]}, far)).table is not None


def test_a_hidden_sheet_is_not_read_in_place_of_one_that_is_seen():
    def hide(book):
        old, seen = book.worksheets()
        old.hide()
        seen.activate()

    old, new = [HEAD, [*ROW[:3], 99, *ROW[4:]]], [HEAD, ROW]
    reading = read_rates_bytes(workbook({"old": old, "May": new}, hide), file="r.xlsx")
    assert reading.table.runs[0].rates[0].value == 2.5
    assert any("not read: old" in d.message for d in reading.diagnostics)


def test_a_part_that_names_an_unknown_encoding_is_told_as_damage():
    packed = io.BytesIO(workbook({"May": [HEAD, ROW]}))
    damaged = io.BytesIO()
    with zipfile.ZipFile(packed) as before, zipfile.ZipFile(damaged, "w") as after:
        for name in before.namelist():
            after.writestr(name, before.read(name).replace(b'encoding="UTF-8"', b'encoding="U8?"'))
    reading = read_rates_bytes(damaged.getvalue(), file="r.xlsx")
    assert [d.name for d in reading.diagnostics] == [Name.BINARY_FILE]
