"""A fault that many rows share is told once: with the title, or with how many rows have it."""

from __future__ import annotations

import pytest

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.tables.rates_table import read_rates_text

LONG = "run,species,direction,rate,sd,unit\n"
NAMES = ("glucose,in", "CO2,out", "ethanol,out", "acetate,out")


def errors(text: str) -> list[Diagnostic]:
    return [d for d in read_rates_text(text).diagnostics if d.severity.rank == 0]


def wide(titles: str, cells: str) -> str:
    return f"run,{titles}\n" + "".join(f"R{n},{cells}\n" for n in range(8))


@pytest.mark.parametrize(("titles", "name", "column"), [
    ("glucose in [kibbles/g/h],glucose sd,CO2 out [mmol/g/h]", Name.UNKNOWN_UNIT, "B"),
    ("glucose in [m],glucose sd,CO2 out [mmol/g/h]", Name.WRONG_UNIT, "B"),
    ("glucose in [mmol/g/h],glucose sd [kibbles],CO2 out [mmol/g/h]", Name.UNKNOWN_UNIT, "C"),
    ("glucose in,glucose sd,CO2 out [mmol/g/h]", Name.UNKNOWN_UNIT, "B"),
    ("glucoes in [mmol/g/h],glucoes sd,CO2 out [mmol/g/h]", Name.UNKNOWN_QUANTITY, "B"),
    ("glucose [mmol/g/h],glucose sd,CO2 out [mmol/g/h]", Name.BAD_DIRECTION, "B"),
    ("glucose in [1/h],glucose sd,CO2 out [mmol/g/h]", Name.WRONG_UNIT, "B"),
])  # fmt: skip
def test_a_fault_of_a_title_is_told_once_at_the_title(titles, name, column):
    (found,) = errors(wide(titles, "2.05,0.1,4.4"))
    assert (found.name, found.span.line) == (name, 1)
    assert f"column {column}" in found.message


def test_a_bad_unit_in_the_title_of_all_rates_is_told_once():
    rows = "".join(f"A,{n},2.5\n" for n in NAMES) + "A,mu,,0.1\n"
    (found,) = errors("run,species,direction,rate [kibbles/g/h]\n" + rows)
    assert (found.name, found.span.line) == (Name.UNKNOWN_UNIT, 1)


def test_a_table_without_any_unit_says_so_once():
    rows = "".join(f"A,{n},2.5\n" for n in NAMES)
    (found,) = errors("run,species,direction,rate\n" + rows)
    assert (found.name, found.span.line) == (Name.UNKNOWN_UNIT, 1)
    assert "no column `unit`" in found.message


def test_one_bad_unit_typed_in_many_rows_is_told_once_and_counted():
    (found,) = errors(LONG + "".join(f"A,{n},2.5,0.1,mmoll/g/h\n" for n in NAMES))
    assert found.span.line == 2
    assert found.message.endswith("; the same in 3 more rows")


def test_two_bad_cells_are_told_one_by_one():
    found = errors(LONG + "".join(f"A,{n},n.d.,,mmol\n" for n in NAMES[:2]))
    assert [d.span.line for d in found] == [2, 3]


def test_different_faults_of_many_rows_are_all_told():
    found = errors(LONG + "".join(f"A,{n},x{k},,mmol\n" for k, n in enumerate(NAMES)))
    assert [d.span.line for d in found] == [2, 3, 4, 5]


def test_one_fault_of_all_runs_is_told_once_and_counted():
    (found,) = errors(wide("glucose in [mmol/g/h],CO2 out [mmol/L/h]", "2.05,4.4"))
    assert found.name is Name.MIXED_BASIS
    assert found.message.endswith("; the same in 7 more runs")
