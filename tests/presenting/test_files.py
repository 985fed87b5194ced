from __future__ import annotations

import csv
import math
import os
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


def test_what_is_no_ordinary_file_is_never_replaced(tmp_path: Path) -> None:
    pipe, folder = tmp_path / "pipe", tmp_path / "folder"
    os.mkfifo(pipe)
    folder.mkdir()
    for path in (pipe, folder):
        with pytest.raises(MisuseError, match="no ordinary file"):
            write_text(path, "new", force=True)

    assert pipe.is_fifo()
    assert sorted(p.name for p in tmp_path.iterdir()) == ["folder", "pipe"]


def test_a_link_is_followed_and_rights_are_kept(tmp_path: Path) -> None:
    real, link, circle = tmp_path / "real.txt", tmp_path / "link.txt", tmp_path / "circle"
    real.write_text("old")
    real.chmod(0o600)
    link.symlink_to(real)
    write_text(link, "new", force=True)

    assert link.is_symlink()
    assert real.read_text() == "new"
    assert real.stat().st_mode & 0o777 == 0o600
    circle.symlink_to(circle)
    with pytest.raises(MisuseError, match="no ordinary file"):
        write_text(circle, "new")


def test_a_file_that_cannot_be_written_is_named_as_the_user_wrote_it(tmp_path: Path) -> None:
    with pytest.raises(FileNotFoundError) as told:
        write_text(tmp_path / "missing" / "out.txt", "text")

    assert told.value.filename == str(tmp_path / "missing" / "out.txt")


def test_an_end_without_a_limit_is_a_blank_cell(tmp_path: Path) -> None:
    from python_calamine import CalamineWorkbook

    table = Table(
        "ranges",
        "Ranges",
        (Column("reaction", "reaction"), Column("low", "low"), Column("high", "high")),
        (("burn", -math.inf, math.inf), ("upkeep", math.nan, 2.0), ("x" * 40_000, 0.0, 1.0)),
    )
    (path,) = write_csv((table,), tmp_path)
    rows = list(csv.reader(path.open(encoding="utf-8")))

    assert rows[1:3] == [["burn", "", ""], ["upkeep", "", "2.0"]]
    write_workbook((table,), tmp_path / "out.xlsx")
    book = CalamineWorkbook.from_path(tmp_path / "out.xlsx")
    cells = book.get_sheet_by_name("ranges").to_python(skip_empty_area=False)
    assert cells[2:4] == [["burn", "", ""], ["upkeep", "", 2.0]]
    assert cells[4][0] == "x" * 32_767


def test_a_table_with_more_rows_than_a_sheet_is_refused_whole(tmp_path: Path) -> None:
    rows = ((1.0,),) * 1_048_575
    table = Table("long", "long", (Column("a", "a"),), rows)
    with pytest.raises(MisuseError, match="a sheet holds 1,048,576"):
        write_workbook([table], tmp_path / "book.xlsx")
    assert not (tmp_path / "book.xlsx").exists()
