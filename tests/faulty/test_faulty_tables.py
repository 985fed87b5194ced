"""Faulty rates tables: one file per diagnostic name, each finding expected at its line.

``#! NAME`` stands above the line on which NAME must be found; ``#! NAME whole`` expects it of
the file as a whole; ``#! model`` reads the table with a small model. Errors and warnings that
are not expected fail the test; of the notes only the expected ones are asked for.
"""

from __future__ import annotations

from pathlib import Path

import pytest

from fluxnet.chemistry.reader import read_formula
from fluxnet.ground.names import Name, Severity
from fluxnet.network.model import Basis, Network, Role, Species
from fluxnet.tables.rates_table import read_rates

HERE = Path(__file__).resolve().parent
FILES = sorted(p for p in HERE.glob("*.csv") if ".covariance" not in p.name)

# Names of tables that another kind of input gives; the tests that show them.
ELSEWHERE = {
    Name.UNKNOWN_RUN: "tests/cli",
    Name.LIMIT_LEFT_OUT: "tests/solving",
    Name.LIMIT_REPLACED: "tests/solving",
}
NAMES = list(Name)
TABLE_NAMES = NAMES[NAMES.index(Name.UNREADABLE_CELL) : NAMES.index(Name.LIMIT_REPLACED) + 1]


def network() -> Network:
    species = (
        Species("glucose", Role.SUBSTRATE, read_formula("C6H12O6"), entry="glucose"),
        Species("acetate", Role.PRODUCT, read_formula("C2H4O2"), entry="acetate"),
        Species("CO2", Role.EXCHANGE, read_formula("CO2"), entry="CO2"),
    )
    return Network("small", Basis.SPECIFIC, species, (), (), ())


def expectations(path: Path) -> tuple[set[tuple[str, int]], bool]:
    """Pairs (name, line) of a file, and whether it is read with the model."""
    expected: set[tuple[str, int]] = set()
    with_model = False
    waiting: list[str] = []
    for number, line in enumerate(path.read_text(encoding="utf-8").splitlines(), start=1):
        if line == "#! model":
            with_model = True
        elif line.startswith("#!"):
            name, _, whole = line.removeprefix("#!").strip().partition(" ")
            if whole:
                expected.add((name, 0))
            else:
                waiting.append(name)
        elif not line.startswith("#"):
            expected.update((name, number) for name in waiting)
            waiting = []
    assert not waiting, "an expectation stands above no line"
    return expected, with_model


@pytest.mark.parametrize("path", FILES, ids=lambda p: p.stem)
def test_a_faulty_table_gives_the_findings_written_in_it(path):
    expected, with_model = expectations(path)
    beside = path.with_suffix(".covariance.csv")
    if beside.exists():
        expected |= expectations(beside)[0]
    reading = read_rates(path, network=network() if with_model else None)
    told = {(d.name.value, d.span.line): d for d in reading.diagnostics}
    found = {k for k, d in told.items() if d.severity is not Severity.NOTE or k in expected}
    assert found == expected
    assert path.stem in {name for name, _ in expected}
    assert (reading.table is None) == any(told[k].severity is Severity.ERROR for k in expected)


@pytest.mark.parametrize("path", FILES, ids=lambda p: p.stem)
def test_a_finding_in_a_table_shows_the_line_and_underlines_something(path):
    _, with_model = expectations(path)
    reading = read_rates(path, network=network() if with_model else None)
    for finding in reading.diagnostics:
        if finding.span.line and finding.severity is not Severity.NOTE:
            assert finding.source_line
            assert 1 <= finding.span.column <= finding.span.end_column
            assert finding.span.end_column <= len(finding.source_line) + 1


def test_every_name_of_rates_tables_has_a_faulty_file():
    missing = {n.value for n in TABLE_NAMES} - {p.stem for p in FILES}
    assert missing == {n.value for n in ELSEWHERE}
