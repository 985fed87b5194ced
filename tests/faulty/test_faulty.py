"""Every diagnostic has a faulty input, and is found at the words that are at fault.

The files beside this one say themselves what should be found in them: see ``expectations``.
"""

from __future__ import annotations

import re
import sys
from collections.abc import Iterable
from pathlib import Path

import pytest

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name, Severity
from fluxnet.ground.source import Source
from fluxnet.reading.model import ModelReading, read_model, read_model_text

HERE = Path(__file__).resolve().parent
sys.path.insert(0, str(HERE))

from expectations import Expected, expectations, mended, place_of  # noqa: E402

MODELS = sorted(HERE.glob("*.flux"))
ALL_NAMES = list(Name)
OF_THE_CHECKER = {
    *ALL_NAMES[ALL_NAMES.index(Name.DEAD_END) : ALL_NAMES.index(Name.NO_SUBSTRATE) + 1],
    Name.ACCEPT_UNUSED,
}


def findings(found: Iterable[Diagnostic], expected: Iterable[Expected]) -> list[Expected]:
    """What was found: errors and warnings, and the notes that are expected."""
    names = {e.name for e in expected}
    return sorted(
        place_of(d) for d in found
        if d.accepted is None and (d.severity is not Severity.NOTE or d.name.value in names)
    )


def checked(reading: ModelReading) -> tuple[Diagnostic, ...]:
    """What reading found, and the checks of the network where there is one."""
    from fluxnet.studies.check import check_network

    if reading.network is None:
        return reading.diagnostics
    return check_network(
        reading.network, reading.diagnostics, sources=reading.sources
    ).diagnostics


@pytest.mark.parametrize("path", MODELS, ids=lambda p: p.stem)
def test_a_faulty_model_is_told_at_the_words_that_are_at_fault(path: Path) -> None:
    reading = read_model(path)
    expected = expectations(reading.sources or [Source(str(path), ())])
    asks_the_checker = any(Name(e.name) in OF_THE_CHECKER for e in expected)
    found = checked(reading) if asks_the_checker else reading.diagnostics

    assert expected, "the file expects nothing"
    assert findings(found, expected) == expected


@pytest.mark.parametrize("path", MODELS, ids=lambda p: p.stem)
def test_a_finding_shows_the_users_own_line(path: Path) -> None:
    reading = read_model(path)
    sources = {source.file: source for source in reading.sources}

    for found in reading.diagnostics:
        if found.span.line:
            assert found.source_line == sources[found.span.file].line(found.span.line)


@pytest.mark.parametrize("path", MODELS, ids=lambda p: p.stem)
def test_certain_mends_leave_only_what_needs_a_decision(path: Path) -> None:
    reading = read_model(path)
    source = reading.sources[0]
    own = [d for d in reading.diagnostics if d.span.file == source.file]
    certain = [d for d in own if d.edits]
    left = [d for d in own if not d.edits and d.severity is Severity.ERROR]
    edits = [edit for d in certain for edit in d.edits]

    again = read_model_text(mended(source, edits), file=source.file, folder=path.parent)

    mended_names = {d.name for d in certain}
    assert [d.name for d in again.diagnostics if d.edits and d.span.file == source.file] == []
    before = {(d.name, d.span.line) for d in left}
    after = {(d.name, d.span.line) for d in again.diagnostics if d.severity is Severity.ERROR
             and d.span.file == source.file}
    assert before <= after | {(n, line) for n, line in before if n in mended_names}
    assert {(n, line) for n, line in after - before if n in mended_names} == set()


def unreadable_file(name: Name, folder: Path) -> Path:
    """A file (or none) that cannot be a model, for names that no text can hold."""
    path = folder / "model.flux"
    contents: dict[Name, bytes] = {
        Name.BINARY_FILE: b"substrate glucose\n\x00\x01\x02",
        Name.EMPTY_FILE: b"\n# nothing but a comment\n",
        Name.FILE_TOO_LONG: b"# a line\n" * 20_001,
        Name.WRONG_ENCODING: "# \u00b5 and \u00e9\nsubstrate glucose\n".encode("latin-1"),
    }
    if name is Name.NOT_A_FILE:
        path.mkdir()
    elif name is not Name.FILE_MISSING:
        path.write_bytes(contents[name])
    return path


OF_FILES = (
    Name.FILE_MISSING, Name.NOT_A_FILE, Name.BINARY_FILE, Name.EMPTY_FILE, Name.FILE_TOO_LONG,
    Name.WRONG_ENCODING,
)  # fmt: skip


@pytest.mark.parametrize("name", OF_FILES, ids=lambda n: n.value)
def test_a_file_that_cannot_be_a_model_is_told_as_a_whole(name: Name, tmp_path: Path) -> None:
    reading = read_model(unreadable_file(name, tmp_path))

    found = [d for d in reading.diagnostics if d.name is name]

    assert reading.network is None
    assert len(found) == 1
    assert found[0].span.file.endswith("model.flux")
    assert found[0].span.line == (1 if name is Name.WRONG_ENCODING else 0)


MODEL = """\
substrate glucose
product ethanol, CO2
compartment catabolism
    ferment : glucose -> 2 ethanol + 2 CO2
limit ferment = 1.2 ± 0.1
limit glucose <= 3
"""
TABLE = """\
run,species,direction,rate,sd,unit
A,glucose,in,1,0.1,{unit}
A,flux ferment,,1.1,0.1,{unit}
"""


@pytest.mark.parametrize(
    ("name", "unit", "line"),
    [(Name.LIMIT_REPLACED, "mmol/g/h", 5), (Name.LIMIT_LEFT_OUT, "mmol", 6)],
    ids=lambda v: v.value if isinstance(v, Name) else "",
)
def test_a_limit_that_a_run_sets_aside_is_told_at_its_line(
    name: Name, unit: str, line: int
) -> None:
    from fluxnet.solving.build import build_problem
    from fluxnet.tables.rates_table import read_rates_text

    network = read_model_text(MODEL).network
    assert network is not None
    table = read_rates_text(TABLE.format(unit=unit), network=network).table
    assert table is not None

    notes = build_problem(network, table.runs[0]).notes

    assert (name, line) in [(d.name, d.span.line) for d in notes]


def test_a_run_that_the_table_does_not_have_is_told() -> None:
    from fluxnet.studies.closure import close_rates
    from fluxnet.tables.rates_table import read_rates_text

    table = read_rates_text(TABLE.format(unit="mmol").replace("A,flux", "# A,flux")).table
    assert table is not None

    found = close_rates(table, runs=("B",)).diagnostics

    assert [d.name for d in found] == [Name.UNKNOWN_RUN]


# Shown by tests of workbooks, which need a file of another kind.
OF_WORKBOOKS = {
    Name.PACKAGE_MISSING: "tables/test_workbook.py",
    Name.UNKNOWN_SHEET: "tables/test_workbook.py",
}
# Shown by tests of raw data of a cultivation, which is no text that a name can stand above.
OF_CULTIVATIONS = {
    name: "cultivation/test_faults.py"
    for name in Name
    if list(Name).index(Name.NO_BIOMASS_DATA) <= list(Name).index(name)
    <= list(Name).index(Name.SPECIES_UNKNOWN)
}
ELSEWHERE = {**OF_WORKBOOKS, **OF_CULTIVATIONS}
BY_CODE = {*OF_FILES, Name.LIMIT_REPLACED, Name.LIMIT_LEFT_OUT, Name.UNKNOWN_RUN,
           Name.BEYOND_PRECISION}  # fmt: skip


def names_in_files() -> set[str]:
    """The names that the files of this folder expect."""
    models = "".join(p.read_text("utf-8") for p in HERE.rglob("*.flux"))
    tables = "".join(p.read_text("utf-8") for p in HERE.rglob("*.csv"))
    return set(re.findall(r"^\s*# expect: ([a-z-]+)", models, re.MULTILINE)) | set(
        re.findall(r"^#! ([a-z-]+)", tables, re.MULTILINE)
    )


@pytest.mark.parametrize("name", list(Name), ids=lambda n: n.value)
def test_every_diagnostic_has_a_faulty_input(name: Name) -> None:
    if name in ELSEWHERE:
        text = (HERE.parent / ELSEWHERE[name]).read_text("utf-8")
        assert f"Name.{name.name}" in text
    else:
        assert name.value in names_in_files() or name in BY_CODE


def test_no_file_expects_a_name_that_does_not_exist() -> None:
    assert names_in_files() - {"model"} <= {name.value for name in Name}
