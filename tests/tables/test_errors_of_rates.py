"""Standard deviations that are given, relative or assumed; shared errors; correlations."""

from __future__ import annotations

import numpy as np
import pytest

from fluxnet.ground.names import Name
from fluxnet.rates.measured import SdSource
from fluxnet.tables.errors_assumed import SdRule, assume_sds
from fluxnet.tables.rates_table import read_rates, read_rates_text

LONG = "run,species,direction,rate,sd,unit\n"
GAS = LONG + "A,glucose,in,2,0.1,mmol/g/h\nA,oxygen,in,3,0.2,mmol/g/h\nA,CO2,out,4,0.1,mmol/g/h\n"


def test_a_missing_sd_is_five_per_cent_but_at_least_half_a_per_cent_of_the_largest(read, rate):
    run = read(
        LONG + "A,glucose,in,10,,mmol\nA,ethanol,out,1,,mmol\nA,oxygen,in,0.2,,mmol\n"
        "A,CO2,out,20,,mmol\n"
    )
    # The largest is glucose, 60 C-mmol: the floor is 0.3 C-mmol, 0.15 mmol of ethanol; oxygen
    # holds no carbon, so its floor is 0.3 mmol.
    assert [r.sd for r in run.rates] == pytest.approx([0.5, 0.15, 0.3, 1.0], rel=1e-12)
    assert {r.sd_source for r in run.rates} == {SdSource.ASSUMED}
    assert all(r.relative is None for r in run.rates)


def test_in_rates_per_c_mol_the_floor_counts_each_carbon_once(read):
    run = read(
        LONG + "A,glucose,in,60,,C-mmol/C-mol/h\nA,ethanol,out,0.6,,C-mmol/C-mol/h\n"
        "A,oxygen,in,1,,mmol/C-mol/h\n"
    )
    assert [r.sd for r in run.rates] == pytest.approx([0.003, 0.0003, 0.0003], rel=1e-12)


def test_the_growth_rate_counts_as_carbon_of_biomass(read, rate):
    text = "biomass X CH1.8O0.5N0.2 ash 8 %\n" + LONG
    run = read(text + "A,glucose,in,0.01,,mmol/g/h\nA,mu,,0.1,,1/h\n")
    per_hour = 1000 * 0.92 / (12.011 + 1.8 * 1.008 + 0.5 * 15.999 + 0.2 * 14.007)
    assert rate(run, "mu").sd == pytest.approx(0.005, rel=1e-12)
    assert rate(run, "glucose in").sd == pytest.approx(0.005 * 0.1 * per_hour / 6, rel=1e-12)


def test_other_fractions_can_be_asked_for(read):
    run = read(
        LONG + "A,glucose,in,10,,mmol\nA,ethanol,out,1,,mmol\n", sd=0.02, sd_floor=0.01
    )
    assert [r.sd for r in run.rates] == pytest.approx([0.2, 0.3], rel=1e-12)


def test_an_assumed_sd_is_said_with_the_rates_it_was_assumed_for():
    reading = read_rates_text(LONG + "A,glucose,in,10,,mmol\nA,ethanol,out,1,0.1,mmol\n")
    (note,) = [d for d in reading.diagnostics if d.name is Name.SD_ASSUMED]
    assert "glucose in: 5 % of the value" in note.message
    assert "ethanol" not in note.message


def test_given_sds_are_kept_and_nothing_is_said():
    reading = read_rates_text(LONG + "A,glucose,in,10,1,mmol\n")
    assert [d.name for d in reading.diagnostics] == [Name.TABLE_UNDERSTOOD]
    assert reading.table.runs[0].rates[0].sd_source is SdSource.GIVEN


def test_per_cent_of_a_zero_is_no_exact_value(read, rate):
    run = read(LONG + "A,glucose,in,10,1,mmol\nA,ethanol,out,0,5 %,mmol\n")
    found = rate(run, "ethanol out")
    assert (found.sd, found.relative, found.sd_source) == (0.15, None, SdSource.ASSUMED)


def test_the_floor_of_a_run_of_zeros_is_still_no_exact_value():
    assert assume_sds([0.0], [6.0], SdRule()) == (0.0,)
    reading = read_rates_text(LONG + "A,glucose,in,0,,mmol\n")
    assert reading.table.runs[0].rates[0].sd > 0


def test_a_shared_error_moves_all_specific_rates_together_but_not_growth(read):
    run = read(
        "shared error biomass 4 %\n" + LONG + "A,glucose,in,2,0.1,mmol/g/h\n"
        "A,CO2,out,5,4 %,mmol/g/h\nA,mu,,0.1,0.002,1/h\nA,CO2 out / glucose in,,2.5,0.1,\n"
    )
    own = np.diag([0.1, 0.2, 0.002, 0.1]) ** 2
    shifts = 0.04 * np.array([2, 5, 0, 0])
    np.testing.assert_allclose(run.covariance, own + np.outer(shifts, shifts), rtol=1e-14)
    assert [r.own_sd for r in run.rates] == [0.1, 0.2, None, None]
    np.testing.assert_allclose([r.sd**2 for r in run.rates], np.diag(run.covariance), rtol=1e-14)
    assert run.shared_error == 0.04


def test_the_rate_of_biomass_itself_has_no_part_in_the_shared_error(read):
    run = read(
        "biomass X CH1.8O0.5N0.2\nshared error biomass 4 %\n" + LONG
        + "A,glucose,in,2,0.1,mmol/g/h\nA,X,out,4,0.1,mmol/g/h\n"
    )  # fmt: skip
    assert run.covariance[0, 1] == run.covariance[1, 0] == 0
    assert run.covariance[1, 1] == pytest.approx(0.01, rel=1e-14)


def test_an_exact_rate_stays_exact_beside_a_shared_error(read):
    run = read(
        "shared error biomass 4 %\n" + LONG
        + "A,glucose,in,2,0,mmol/g/h\nA,CO2,out,5,0.1,mmol/g/h\n"
    )  # fmt: skip
    assert (run.rates[0].sd, run.rates[0].own_sd) == (0, None)
    np.testing.assert_allclose(run.covariance, [[0, 0], [0, 0.01 + 0.04]], rtol=1e-13)


def test_a_shared_error_may_be_a_column_of_its_own():
    reading = read_rates_text(
        "run,glucose in [mmol/g/h],glucose sd,CO2 out [mmol/g/h],CO2 sd,shared error biomass\n"
        "A,2,0.1,5,0.1,4 %\nB,2,0.1,5,0.1,2 %\nC,2,0.1,5,0.1,\n"
    )
    assert [r.shared_error for r in reading.table.runs] == [0.04, 0.02, None]


@pytest.mark.parametrize("cell", ["4", "-4 %", "x"])
def test_a_shared_error_that_is_no_percentage_is_refused(fault, cell):
    found = fault(f"species,direction,rate [mmol],sd,shared error\nglucose,in,2,1,{cell}\n")
    assert found.name in (Name.UNREADABLE_CELL, Name.NEGATIVE_SD)


@pytest.mark.parametrize("line", [
    "shared error biomass 4 %", "shared error biomass: 4%", "Shared error biomass = 4,0 %",
    "shared error 4 %", "shared error biomass,4 %", '"shared error biomass 4 %"',
    "shared error biomass 4 %,,,,,",
])  # fmt: skip
def test_a_shared_error_may_be_written_in_several_ways(read, line):
    run = read(f"{line}\n" + LONG + "A,glucose,in,2,0.1,mmol/g/h\n")
    assert run.shared_error == 0.04


def test_a_shared_error_does_not_apply_to_amounts_and_that_is_said():
    reading = read_rates_text("shared error biomass 4 %\n" + LONG + "A,glucose,in,2,0.1,mmol\n")
    (run,) = reading.table.runs
    assert (run.shared_error, run.covariance, run.rates[0].sd) == (None, None, 0.1)
    assert any("does not apply to mmol" in d.message for d in reading.diagnostics)


def test_specific_rates_without_a_shared_error_get_a_note():
    two = "A,glucose,in,2,1,{0}\nA,CO2,out,2,1,{0}\n"
    specific = read_rates_text(LONG + two.format("mmol/g/h")).diagnostics
    amounts = read_rates_text(LONG + two.format("mmol")).diagnostics
    shared = read_rates_text("shared error biomass 4 %\n" + LONG + two.format("mmol/g/h"))
    assert Name.SHARED_ERROR_ASSUMED in [d.name for d in specific]
    assert Name.SHARED_ERROR_ASSUMED not in [d.name for d in (*amounts, *shared.diagnostics)]


def test_a_covariance_table_beside_the_rates_correlates_errors(tmp_path):
    path = tmp_path / "gas.csv"
    path.write_text("shared error biomass 4 %\n" + GAS)
    (tmp_path / "gas.covariance.csv").write_text(
        "one analyser\nrun;first;second;correlation\nA;oxygen in;CO2;0,6\n"
    )
    reading = read_rates(path)
    assert reading.table is not None, reading.diagnostics
    (run,) = reading.table.runs
    expected = 0.04**2 * np.outer([2, 3, 4], [2, 3, 4]) + np.diag([0.01, 0.04, 0.01])
    expected[1, 2] += 0.6 * 0.2 * 0.1
    expected[2, 1] += 0.6 * 0.2 * 0.1
    np.testing.assert_allclose(run.covariance, expected, rtol=1e-13)
    assert len(reading.sources) == 2


def test_covariances_are_in_the_units_of_the_rates_table():
    rows = "A,oxygen,in,96,6.4,mg/g/h\nA,CO2,out,4,0.1,mmol/g/h\n"
    pairs = "first,second,covariance\noxygen,CO2,0.384\noxygen,oxygen,40.96\n"
    reading = read_rates_text(LONG + rows, covariance=pairs)
    run = reading.table.runs[0]
    # 0.384 (mg/g/h)(mmol/g/h) over 31.998 mg/mmol: 0.6 of the product of the sds
    assert run.covariance[0, 1] == pytest.approx(0.384 / 31.998, rel=1e-12)


def test_a_pair_without_a_run_holds_for_every_run_that_measures_both():
    more = GAS + "B,oxygen,in,3,0.1,mmol/g/h\nB,CO2,out,4,0.1,mmol/g/h\nC,CO2,out,1,1,mmol/g/h\n"
    reading = read_rates_text(more, covariance="first,second,correlation\nCO2,oxygen,50 %\n")
    a, b, c = reading.table.runs
    assert a.covariance[1, 2] == pytest.approx(0.5 * 0.02, rel=1e-13)
    assert b.covariance[0, 1] == pytest.approx(0.5 * 0.01, rel=1e-13)
    assert c.covariance is None


@pytest.mark.parametrize(
    ("pairs", "name"),
    [
        ("first,second,correlation\noxygen,CO2,1.2\n", Name.BAD_COVARIANCE),
        ("first,second,correlation\noxygen,CO2,0.9\noxygen,glucose,0.9\nCO2,glucose,-0.9\n",
         Name.BAD_COVARIANCE),
        ("first,second,correlation\noxygen,CO2,0.5\nCO2,oxygen,0.6\n", Name.BAD_COVARIANCE),
        ("first,second,covariance\noxygen,oxygen,0.05\n", Name.BAD_COVARIANCE),
        ("run,first,second,correlation\nZ,oxygen,CO2,0.5\n", Name.BAD_COVARIANCE),
        ("run,first,second,correlation\nA,oxygen,ethanol,0.5\n", Name.UNKNOWN_QUANTITY),
        ("first,second,correlation\noxygen out,CO2,0.5\n", Name.UNKNOWN_QUANTITY),
        ("first,second,correlation\noxygen,CO2,x\n", Name.UNREADABLE_CELL),
        ("first,second,correlation\noxygen,CO2,\n", Name.UNREADABLE_CELL),
        ("first;second;covariance\noxygen;CO2;1,234\n", Name.AMBIGUOUS_NUMBER),
        ("oxygen,CO2,0.5\n", Name.MISSING_COLUMN),
    ],
)  # fmt: skip
def test_a_covariance_table_that_makes_no_sense_is_an_error(fault, pairs, name):
    assert fault(GAS, covariance=pairs).name is name


@pytest.mark.parametrize(
    ("rate", "sd", "words"),
    [
        ("1e308", "3 %", "`1e308` is out of reach"),
        ("1e-320", "3 %", "`1e-320` is out of reach"),
        ("2", "1e300", "`1e300` is out of reach"),
        ("2 ± 1e-300", "", "`2 ± 1e-300` is out of reach"),
        ("2", "1e-10", "`1e-10` is nothing beside the rate"),
        ("2 ± 1e-10", "", "`2 ± 1e-10` is nothing beside the rate"),
        ("2", "1e-8 %", "`1e-8 %` is nothing beside the rate"),
        ("2", "1e10", "`1e10` leaves nothing of the rate"),
        ("2", "1e12 %", "`1e12 %` leaves nothing of the rate"),
    ],
)
def test_numbers_that_no_computer_can_weigh_are_refused_at_their_cell(rate, sd, words):
    reading = read_rates_text(LONG + f"A,glucose,in,{rate},{sd},mmol/g/h\n")
    (fault,) = [d for d in reading.diagnostics if d.severity.value == "error"]
    assert reading.table is None
    assert (fault.name, fault.span.line) == (Name.UNREADABLE_CELL, 2)
    assert words in fault.message


def test_an_sd_of_zero_and_the_sd_of_a_rate_of_zero_are_no_faults(read):
    run = read(LONG + "A,glucose,in,2,0,mmol/g/h\nA,ethanol,out,0,1e-12,mmol/g/h\n")
    assert [r.sd for r in run.rates] == [0.0, 1e-12]


def test_a_ratio_of_a_quantity_to_itself_is_no_measurement():
    reading = read_rates_text(LONG + "A,glucose,in,2,0.1,mmol/g/h\nA,CO2 / CO2,,1,3 %,\n")
    assert [(d.name, d.span.line) for d in reading.diagnostics if d.severity.value == "error"] == [
        (Name.UNKNOWN_QUANTITY, 3)
    ]
