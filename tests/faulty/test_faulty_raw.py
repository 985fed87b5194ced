"""Faulty raw data: one file or folder per diagnostic name, each found at its line.

A file's first line is ``#! NAME LINE``, LINE 0 for the file as a whole; behind it may stand the
file beside it that the finding is about. Errors and warnings that are not expected fail.
"""

from __future__ import annotations

from pathlib import Path

import pytest

from fluxnet.ground.names import Name, Severity
from fluxnet.tables.cultivation_tables import read_cultivation

HERE = Path(__file__).resolve().parent / "raw"
PATHS = sorted(HERE.iterdir())
NAMES = list(Name)
OF_RAW_TABLES = NAMES[NAMES.index(Name.NO_RAW_DATA) : NAMES.index(Name.MODE_GUESSED) + 1]


def expected(path: Path) -> tuple[str, int, str]:
    file = path / "table.csv" if path.is_dir() else path
    name, line, *beside = file.read_text("utf-8").splitlines()[0].removeprefix("#! ").split()
    return name, int(line), beside[0] if beside else file.name


@pytest.mark.parametrize("path", PATHS, ids=lambda p: p.stem)
def test_a_fault_of_raw_data_is_told_at_its_line(path: Path) -> None:
    name, line, file = expected(path)
    reading = read_cultivation(path)
    grave = [d for d in reading.diagnostics if d.severity is not Severity.NOTE]
    found = {d.name.value for d in grave} | {
        d.name.value for d in reading.diagnostics if d.name.value == name
    }
    one = next(d for d in reading.diagnostics if d.name.value == name)

    assert name == path.stem
    assert found == {name}
    assert one.span.line == line
    assert not line or one.span.file.endswith(file)
    assert not line or one.source_line
    assert bool(reading.cultivations) is (one.severity is not Severity.ERROR)


def test_every_name_of_raw_tables_has_a_faulty_file() -> None:
    assert {n.value for n in OF_RAW_TABLES} <= {p.stem for p in PATHS}
