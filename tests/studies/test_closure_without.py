"""A closure without a row is the closure of the table that does not have it."""

from __future__ import annotations

import sys
from pathlib import Path

import pytest

from fluxnet.ground.names import Name
from fluxnet.network.model import Network
from fluxnet.reading.model import read_model_text
from fluxnet.studies.closure import close_rates
from fluxnet.studies.closure_result import RunClosure
from fluxnet.tables.rates_table import read_rates_text

sys.path.insert(0, str(Path(__file__).resolve().parent))

from closing import HEAD, close, names, rate, table

TABLE = """A,glucose,in,2.1,0.1,mmol/g/h
A,CO2,out,6.3,5 %,mmol/g/h
A,oxygen,in,5.8,,mmol/g/h
A,CO2 / oxygen,,1.04,0.05,
A,acetate,out,0.01,,mmol/g/h
A,formate,out,0.02,,mmol/g/h
A,ammonia,in,1.2,0.1,mmol/g/h
A,mu,,0.15,,1/h
"""
SHARED = "shared error biomass 4 %\n"


def numbers(run: RunClosure) -> list[object]:
    """Everything that a run tells in numbers, with its kinds."""
    told: list[object] = [run.test.h, run.test.dof, run.test.p, run.or_index]
    for b in run.balances:
        told += [b.name, b.taken, b.released, b.gap, b.sd, b.z, b.recovery, b.recovery_sd]
    for r in run.rates:
        told += [r.species, r.kind, r.measured, r.sd, r.reconciled, r.reconciled_sd, r.z]
    return told


def lines_without(*beginnings: str) -> str:
    kept = [x for x in TABLE.splitlines() if not any(x.startswith(f"A,{b},") for b in beginnings)]
    return "\n".join(kept) + "\n"


@pytest.mark.parametrize(
    ("name", "rows"),
    [
        ("glucose", ("glucose",)),
        ("acetate", ("acetate",)),
        ("acetic acid", ("acetate",)),
        ("CO2 out", ("CO2", "CO2 / oxygen")),
        ("O2", ("oxygen", "CO2 / oxygen")),
        ("CO2 / oxygen", ("CO2 / oxygen",)),
        ("ammonia", ("ammonia",)),
        ("mu", ("mu",)),
        ("biomass", ("mu",)),
    ],
)
@pytest.mark.parametrize("before", ["", SHARED])
def test_leaving_a_row_out_gives_the_numbers_of_the_table_that_does_not_have_it(
    name: str, rows: tuple[str, ...], before: str
) -> None:
    """Also the sds that are assumed: they depend on the run's largest rate."""
    run = close(TABLE, before, without=(name,))
    by_hand = close(lines_without(*rows), before)
    for one, other in zip(numbers(run), numbers(by_hand), strict=True):
        assert one == (pytest.approx(other, rel=1e-9) if isinstance(other, float) else other)
    assert run.world.free == by_hand.world.free


def test_assumed_errors_are_assumed_again_without_the_largest_rate() -> None:
    """0.5 % of 12.6 C-mmol of glucose stand over acetate, then 0.5 % of 6.3 of CO2."""
    before = rate(close(TABLE), "acetate").sd
    after = rate(close(TABLE, without=("glucose",)), "acetate").sd
    assert before == pytest.approx(0.005 * 12.6 / 2)
    assert after == pytest.approx(0.005 * 6.3 / 2)


def test_the_rule_for_assumed_errors_is_the_one_the_table_was_read_with() -> None:
    reading = read_rates_text(HEAD + TABLE, sd=0.1, sd_floor=0.02)
    by_hand = read_rates_text(HEAD + lines_without("glucose"), sd=0.1, sd_floor=0.02)
    assert reading.table is not None
    assert by_hand.table is not None
    run = close_rates(reading.table, without=("glucose",)).runs[0]
    assert numbers(run) == pytest.approx(numbers(close_rates(by_hand.table).runs[0]))


def test_correlated_errors_of_what_stays_stay() -> None:
    pairs = "first,second,correlation\nCO2,oxygen,0.8\nglucose,acetate,0.3\n"
    reading = read_rates_text(HEAD + TABLE, covariance=pairs)
    by_hand = read_rates_text(
        HEAD + lines_without("glucose"), covariance=pairs.replace("glucose,acetate,0.3\n", "")
    )
    assert reading.table is not None, reading.diagnostics
    assert by_hand.table is not None
    run = close_rates(reading.table, without=("glucose",)).runs[0]
    independent = close(TABLE, without=("glucose",))
    assert numbers(run) == pytest.approx(numbers(close_rates(by_hand.table).runs[0]))
    assert run.test.h != pytest.approx(independent.test.h, rel=0.01)


def test_what_is_left_out_is_named_as_not_exchanged() -> None:
    assert close(TABLE, without=("acetate",)).world.not_exchanged == ("H2", "acetate")
    assert close(TABLE, without=("O2",)).world.not_exchanged == ("O2", "H2")
    assert close(TABLE, without=("mu",)).world.not_exchanged == ("H2", "biomass")
    ammonia = close(TABLE, without=("ammonia",)).world
    assert ammonia.not_exchanged == ("H2",)
    assert "ammonia" in ammonia.free
    ratio = close("A,CO2,out,6,0.3,mmol/g/h\nA,glucose,in,1,0.1,mmol/g/h\n"
                  "A,CO2 / oxygen,,1,0.1,\n", without=("CO2 / oxygen",))  # fmt: skip
    assert ratio.world.not_exchanged == ("O2", "H2")


def test_a_blank_value_remains_the_way_to_say_exchanged_but_not_measured() -> None:
    blank = close(TABLE.replace("A,CO2,out,6.3,5 %", "A,CO2,out,,"))
    gone = close(TABLE, without=("CO2",))
    assert "CO2" not in blank.world.not_exchanged
    assert "CO2" in gone.world.not_exchanged
    assert rate(blank, "CO2").reconciled is not None
    assert gone.find_rate("CO2") is None
    # one unmeasured rate less to be found, and the ratio is gone with CO2
    assert blank.test.dof == 3
    assert gone.test.dof == 3


def test_the_model_tells_which_biomass_a_growth_rate_means() -> None:
    network = _network()
    reading = read_rates_text(HEAD + TABLE, network=network)
    assert reading.table is not None, reading.diagnostics
    run = close_rates(reading.table, network=network, without=("X",)).runs[0]
    assert run.find_rate("mu") is None
    assert "X" in run.world.not_exchanged
    assert "lactate" in run.world.not_exchanged


def _network() -> Network:
    reading = read_model_text(
        "model one\nbasis mmol/g/h\nsubstrate glucose\nexchange oxygen, CO2, ammonia\n"
        "product acetate, formate, lactate\nbiomass X CH1.8O0.5N0.2 ash 0 %\ncompartment all\n"
        "    burn: glucose + 6 oxygen -> 6 CO2\n"
    )
    assert reading.network is not None, reading.diagnostics
    return reading.network


def test_a_run_that_lacks_the_row_is_closed_as_it_is() -> None:
    text = TABLE + "B,glucose,in,1,0.1,mmol/g/h\nB,ethanol,out,2,0.1,mmol/g/h\n"
    closure = close_rates(table(text), without=("acetate",))
    assert closure.diagnostics == ()
    assert closure.runs[1].test.h == pytest.approx(
        close("A,glucose,in,1,0.1,mmol/g/h\nA,ethanol,out,2,0.1,mmol/g/h\n").test.h
    )
    assert "acetate" not in closure.runs[1].world.not_exchanged


@pytest.mark.parametrize(
    ("name", "mend"),
    [
        ("acettate", "did you mean acetate?"),
        ("CO2 in", "the rows are"),
        ("lactate", "the rows are"),
        ("CO2 / oxigen", "did you mean CO2 out / oxygen in?"),
    ],
)
def test_a_name_that_no_row_has_is_a_fault_with_the_nearest_name(name: str, mend: str) -> None:
    closure = close_rates(table(TABLE), without=(name,))
    assert names(closure) == [Name.UNKNOWN_QUANTITY]
    assert closure.runs == ()
    assert name in closure.diagnostics[0].message
    assert mend in str(closure.diagnostics[0].mend)
