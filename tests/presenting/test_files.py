from __future__ import annotations

import csv
from pathlib import Path

import pytest

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.table import Column, Table
from fluxnet.presenting.files import write_csv, write_text, write_workbook

TABLE = Table(
    "rates",
    "Rates",
    (Column("species", "species"), Column("rate", "rate", "mmol/g/h")),
    (("=HYPERLINK(1)", 0.1234567890123), ("CO2", None)),
)


def test_csv_keeps_every_digit_and_leaves_missing_values_blank(tmp_path: Path) -> None:
    (path,) = write_csv((TABLE,), tmp_path)
    rows = list(csv.reader(path.open(encoding="utf-8")))

    assert float(rows[1][1]) == 0.1234567890123
    assert rows[2] == ["CO2", ""]


def test_a_name_that_looks_like_a_formula_is_escaped(tmp_path: Path) -> None:
    (path,) = write_csv((TABLE,), tmp_path)

    assert "'=HYPERLINK(1)" in path.read_text(encoding="utf-8")


def test_an_existing_file_is_kept_unless_forced(tmp_path: Path) -> None:
    path = tmp_path / "out.txt"
    path.write_text("mine")
    with pytest.raises(MisuseError, match="--force"):
        write_text(path, "other")

    assert path.read_text() == "mine"
    write_text(path, "other", force=True)
    assert path.read_text() == "other"


def test_a_workbook_holds_numbers_as_numbers(tmp_path: Path) -> None:
    from python_calamine import CalamineWorkbook

    path = tmp_path / "out.xlsx"
    write_workbook((TABLE, TABLE), path)
    book = CalamineWorkbook.from_path(path)

    assert book.sheet_names == ["rates", "rates_2"]
    rows = book.get_sheet_by_name("rates").to_python(skip_empty_area=False)
    assert rows[0] == ["species", "rate"]
    assert rows[1] == ["", "mmol/g/h"]
    assert rows[2] == ["=HYPERLINK(1)", 0.1234567890123]


def test_nothing_is_left_behind_where_writing_fails(tmp_path: Path) -> None:
    with pytest.raises(OSError, match="missing"):
        write_text(tmp_path / "missing" / "out.txt", "text")

    assert list(tmp_path.iterdir()) == []
