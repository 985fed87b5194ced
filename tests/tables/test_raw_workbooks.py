"""Cells that a workbook's reader hands on as blank are told by their address."""

from __future__ import annotations

import importlib.util
import struct
import zipfile
from pathlib import Path

import pytest
import xlsxwriter

from fluxnet.ground.names import Name
from fluxnet.rates.cultivation import SeriesKind
from fluxnet.tables.cultivation_tables import CultivationReading, read_cultivation

HERE = Path(__file__).resolve().parent / "dialects"
SPEC = importlib.util.spec_from_file_location("dialects_make", HERE / "make.py")
assert SPEC is not None
assert SPEC.loader is not None
MAKE = importlib.util.module_from_spec(SPEC)
SPEC.loader.exec_module(MAKE)


def told(reading: CultivationReading) -> dict[str, str]:
    return {d.name.value: d.message for d in reading.diagnostics}


def workbook(path: Path) -> Path:
    book = xlsxwriter.Workbook(path)
    sheet = book.add_worksheet("HPLC")
    sheet.write_row(0, 0, ("mode", "batch"))
    sheet.write_row(3, 1, ("time [h]", "dry weight [g/L]", "glucose [g/L]", "ethanol [g/L]"))
    for i in range(6):
        sheet.write_row(4 + i, 1, (i, 0.1 * (i + 1), 20.0 - i, 0.5 * i))
    sheet.write_formula("D6", "=1/0", None, "#DIV/0!")
    sheet.write_formula("D7", "=A1*2", None, "")
    sheet.write("D8", "lost")
    sheet.write_formula("E10", "=NA()", None, "#N/A")
    book.close()
    return path


def test_errors_and_formulas_without_a_value_are_told_by_cell(tmp_path: Path) -> None:
    reading = read_cultivation(workbook(tmp_path / "run.xlsx"))
    raw = reading.cultivations[0]
    done = {d.place: (d.text, d.what_was_done) for d in raw.doubtful}

    assert done == {
        "run.xlsx HPLC!D6": ("#DIV/0!", "is an error of the spreadsheet: left out"),
        "run.xlsx HPLC!D7": ("", "a formula stands there without a stored value: left out"),
        "run.xlsx HPLC!D8": ("lost", "is no number: left out"),
        "run.xlsx HPLC!E10": ("#N/A", "is an error of the spreadsheet: left out"),
    }
    glucose = raw.find(SeriesKind.CONCENTRATION, "glucose")
    assert glucose is not None
    assert glucose.time.tolist() == [0.0, 4.0, 5.0]
    assert glucose.places[1] == "run.xlsx HPLC!D9"
    assert "HPLC!D6" in told(reading)["cells-left-out"]


def test_no_cell_that_holds_no_value_becomes_zero(tmp_path: Path) -> None:
    raw = read_cultivation(workbook(tmp_path / "run.xlsx")).cultivations[0]

    for series in raw.series:
        if series.name == "glucose":
            assert (series.value > 0).all()


def open_document(path: Path, cell: str) -> Path:
    with zipfile.ZipFile(HERE / "18-open-document.ods") as old, zipfile.ZipFile(path, "w") as new:
        for name in old.namelist():
            text = old.read(name).decode()
            if name == "content.xml":
                before = '<table:table-cell office:value-type="float" office:value="15.5">'
                start = text.index(before)
                end = text.index("</table:table-cell>", start) + len("</table:table-cell>")
                text = text[:start] + cell + text[end:]
            new.writestr(name, text)
    return path


@pytest.mark.parametrize(
    ("cell", "words"),
    [
        ('<table:table-cell table:formula="of:=1/0" office:value-type="string" '
         'office:string-value=""><text:p>#DIV/0!</text:p></table:table-cell>',
         "is an error of the spreadsheet: left out"),
        ('<table:table-cell table:formula="of:=[.A1]*2"/>',
         "a formula stands there without a stored value: left out"),
    ],
)  # fmt: skip
def test_an_open_document_tells_them_too(tmp_path: Path, cell: str, words: str) -> None:
    reading = read_cultivation(open_document(tmp_path / "run.ods", cell))
    glucose = reading.cultivations[0].find(SeriesKind.CONCENTRATION, "glucose")

    assert glucose is not None
    assert glucose.time.size == 4
    done = {d.place: d.what_was_done for d in reading.cultivations[0].doubtful}
    assert done["run.ods Cultivation!D9"] == words


def test_an_older_workbook_tells_errors_and_how_far_it_reaches(tmp_path: Path) -> None:
    path = tmp_path / "run.xls"
    records = MAKE.old_records(MAKE.grid())
    number = struct.pack("<HHHHHd", 0x0203, 14, 8, 3, 0, 15.5)
    assert records.count(number) == 1
    failed = struct.pack("<HHHHHBB", 0x0205, 8, 8, 3, 0, 0x07, 1)
    filler = struct.pack("<HH", 0x0033, 2) + b"\0\0"
    path.write_bytes(MAKE.compound_file(records.replace(number, failed + filler)))

    raw = read_cultivation(path).cultivations[0]

    assert "run.xls Cultivation!D9" in {d.place for d in raw.doubtful if d.text == "#DIV/0!"}
    far = struct.pack("<HHHHHd", 0x0203, 14, 60_000, 60_000, 0, 15.5)
    path.write_bytes(MAKE.compound_file(records.replace(number, far)))
    assert "row 60001" in read_cultivation(path).diagnostics[0].message


def test_a_workbook_with_a_password_is_told_as_such(tmp_path: Path) -> None:
    path = tmp_path / "locked.xlsx"
    data = MAKE.compound_file(b"locked".ljust(4096, b"x")).replace(
        "Workbook".encode("utf-16-le"), "Encrypte".encode("utf-16-le")
    )
    # the name of the stream that holds a workbook with a password
    path.write_bytes(data + "EncryptedPackage".encode("utf-16-le"))

    reading = read_cultivation(path)

    assert reading.cultivations == ()
    assert [d.name for d in reading.diagnostics] == [Name.BINARY_FILE]
    assert "has a password" in reading.diagnostics[0].message


@pytest.mark.parametrize("length", [0, 8, 30, 200, 700, 1500])
def test_a_damaged_workbook_is_refused(tmp_path: Path, length: int) -> None:
    for name in ("run.xlsx", "run.xls"):
        path = tmp_path / name
        if name.endswith("xlsx"):
            data = workbook(tmp_path / "whole.xlsx").read_bytes()
        else:
            data = MAKE.compound_file(MAKE.old_records([["mode", "batch"]]))
        path.write_bytes(data[:length])

        reading = read_cultivation(path)

        assert reading.cultivations == ()
        assert {d.name for d in reading.diagnostics} <= {
            Name.BINARY_FILE, Name.EMPTY_FILE, Name.NO_RAW_DATA
        }  # fmt: skip
        assert reading.diagnostics


def test_a_sheet_that_reaches_to_the_last_row_and_column_is_refused(tmp_path: Path) -> None:
    path = tmp_path / "far.xlsx"
    book = xlsxwriter.Workbook(path)
    sheet = book.add_worksheet("far")
    sheet.write(0, 0, "time [h]")
    sheet.write(1_048_575, 16_383, 1.0)
    book.close()

    reading = read_cultivation(path)

    assert [d.name for d in reading.diagnostics] == [Name.BINARY_FILE]
    assert "row 1048576 and across 16384 columns" in reading.diagnostics[0].message
