"""An sd that is larger than its rate: most likely per cent without the sign."""

from __future__ import annotations

import pytest

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.tables.rates_table import read_rates_text

LONG = "run,species,direction,rate,sd,unit\n"


def doubts(text: str) -> list[Diagnostic]:
    reading = read_rates_text(text)
    assert reading.table is not None, [d.message for d in reading.diagnostics]
    return [d for d in reading.diagnostics if d.name is Name.SD_LARGER_THAN_RATE]


def test_an_sd_larger_than_its_rate_is_asked_about_and_kept():
    text = LONG + "A,oxygen,in,3.60,5,mmol/g/h\n"
    (found,) = doubts(text)
    assert found.message.endswith("sd 5 is larger than the rate 3.60; was 5 % meant?")
    assert (found.span.line, found.span.column) == (2, 18)
    assert read_rates_text(text).table.runs[0].rates[0].sd == 5


def test_an_error_behind_the_rate_is_asked_about_too():
    (found,) = doubts(LONG + "A,mu,,0.17 ± 3,,1/h\n")
    assert found.message.endswith("sd 3 is larger than the rate 0.17; was 3 % meant?")


@pytest.mark.parametrize("row", [
    "A,oxygen,in,3.60,5 %,mmol/g/h",
    "A,oxygen,in,3.60,3.60,mmol/g/h",
    "A,oxygen,in,0,5,mmol/g/h",
    "A,oxygen,in,0.000,5,mmol/g/h",
    "A,oxygen,in,3.60,150 %,mmol/g/h",
])  # fmt: skip
def test_an_sd_in_per_cent_or_of_nothing_or_no_larger_is_not_asked_about(row):
    assert doubts(LONG + row + "\n") == []


def test_a_small_sd_is_not_taken_for_per_cent():
    (found,) = doubts(LONG + "A,oxygen,in,0.02,0.05,mmol/g/h\n")
    assert "%" not in found.message


def test_an_sd_in_another_unit_than_the_rate_is_not_compared():
    head = "run,glucose in [g/L/h],glucose sd [mg/L/h],CO2 out [mmol/L/h],CO2 sd [%]\n"
    assert doubts(head + "A,0.36,7.2,3.3,5\n") == []


def test_a_whole_column_of_such_sds_is_told_for_the_first_and_counted():
    rows = "".join(f"{n},2.05,3\n" for n in range(30))
    found = doubts("run,glucose in [mmol/g/h],glucose sd\n" + rows)
    assert len(found) == 6
    assert "24 more" in found[-1].message
