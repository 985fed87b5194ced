"""Rates that were reckoned, not typed: noise makes a rate of nothing negative, and sds are long."""

from __future__ import annotations

import pytest

from fluxnet.ground.names import Name
from fluxnet.tables.rates_table import read_rates_text

_TABLE = (
    "run,species,direction,rate,sd,unit\nA,glucose,in,2.5,0.1,mmol/g/h\nA,acetate,out,{},{},{}\n"
)


def names(rate: str, sd: str, unit: str = "mmol/g/h") -> set[Name]:
    return {d.name for d in read_rates_text(_TABLE.format(rate, sd, unit)).diagnostics}


def test_a_reckoned_rate_within_its_noise_may_be_negative():
    reading = read_rates_text(_TABLE.format("-0.0003041", "0.2256474582017", "mmol/g/h"))
    assert reading.table is not None
    assert reading.table.runs[0].rates[1].value == -0.0003041


@pytest.mark.parametrize(
    ("rate", "sd"),
    [("-0.3", "0.2"), ("-0.5012345678", "0.2256474582017"), ("-2", "5 %"), ("-2.012345678", "3 %")],
)
def test_any_other_negative_rate_is_an_error(rate, sd):
    assert Name.NEGATIVE_RATE in names(rate, sd)


def test_an_sd_larger_than_its_rate_is_asked_about_where_it_may_have_been_typed():
    assert Name.SD_LARGER_THAN_RATE in names("1.5", "5")
    assert Name.SD_LARGER_THAN_RATE not in names("1.4552545961953995", "5.92557246733124")
