"""A closure says what closes, what is tested, and what is calculable."""

from __future__ import annotations

import sys
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from fluxnet.chemistry.reader import read_formula
from fluxnet.ground.names import Name
from fluxnet.network.model import Basis, Direction, Quantity, QuantityKind, Role, Species
from fluxnet.rates.kinds import RateKind
from fluxnet.rates.measured import MeasuredRate, RatesTable, Run
from fluxnet.studies.closure import close_rates

sys.path.insert(0, str(Path(__file__).resolve().parent))

from closing import AEROBIC, ETHANOL, balance, by_hand, close, names, rate, table

CONTENTS = {  # carbon, nitrogen, electrons, from the formulas
    "glucose": [6.0, 0, 24], "CO2": [1.0, 0, 0], "oxygen": [0.0, 0, -4], "ammonia": [0.0, 1, 0],
    "ethanol": [2.0, 0, 12], "acetate": [2.0, 0, 8], "biomass": [1.0, 0.2, 4.2],
}  # fmt: skip


SIX = {"glucose": "in,2,0.1", "CO2": "out,6,0.3", "oxygen": "in,4.9,0.3", "ammonia": "in,1.3,0.1",
       "biomass": "out,5.5,0.2", "acetate": "out,0.2,0.05"}  # fmt: skip


@pytest.mark.parametrize("blank", [(), ("CO2",), ("glucose",), ("oxygen", "ammonia")])
def test_the_test_and_the_reconciled_rates_are_those_of_the_closed_formula(
    blank: tuple[str, ...],
) -> None:
    lines = {n: t.split(",")[0] + ",," if n in blank else t for n, t in SIX.items()}
    run = close("".join(f"A,{name},{told},mmol/g/h\n" for name, told in lines.items()))
    h, reconciled, sds = by_hand(run, CONTENTS)
    measured = [r for r in run.rates if r.measured is not None]
    assert run.test.dof == 3 - len(blank)
    assert run.test.h == pytest.approx(h, rel=1e-9)
    assert [r.reconciled for r in measured] == pytest.approx(list(reconciled), rel=1e-9)
    assert [r.reconciled_sd for r in measured] == pytest.approx(list(sds), rel=1e-7)


def test_the_growth_rate_counts_as_release_of_biomass() -> None:
    """6.0910 mmol of 24.626 g/mol per gram and hour are 0.15 1/h."""
    run = close(AEROBIC)
    assert balance(run, "carbon").released == pytest.approx(6 + 150 / 24.626, rel=1e-4)
    assert rate(run, "mu").unit == "1/h"
    assert rate(run, "mu").direction is None
    assert rate(run, "mu").kind is RateKind.BALANCEABLE
    assert [r.species for r in run.rates] == ["glucose", "CO2", "oxygen", "ammonia", "mu"]


def test_ash_makes_less_biomass_of_the_same_growth_and_its_error_is_counted() -> None:
    plain = close(AEROBIC)
    ash = close(AEROBIC, "biomass X CH1.8O0.5N0.2 ash 8 ± 2 %\n")
    grown = balance(ash, "carbon").released - 6
    assert grown == pytest.approx(0.92 * (balance(plain, "carbon").released - 6), rel=1e-9)
    assert rate(ash, "mu").sd == 0.005
    both = np.hypot(0.005, 0.15 * 0.02 / 0.92) * 920 / 24.6264
    assert balance(ash, "carbon").sd == pytest.approx(np.hypot(np.hypot(0.6, 0.3), both), rel=1e-3)


def test_a_growth_rate_that_is_calculated_has_the_error_of_its_ash_too() -> None:
    """1 C-mmol of biomass is 24.6264 / 0.92 mg of cells; both errors add in squares."""
    text = ("A,glucose,in,2,0.1,mmol/g/h\nA,CO2,out,6,0.3,mmol/g/h\nA,oxygen,in,,,mmol/g/h\n"
            "A,mu,,,,1/h\n")  # fmt: skip
    growth = rate(close(text, "biomass X CH1.8O0.5N0.2 ash 8 ± 2 %\n"), "mu")
    assert growth.reconciled == pytest.approx(6 * 24.6264 / 920, rel=1e-4)
    relative = np.hypot(np.hypot(0.6, 0.3) / 6, 0.02 / 0.92)
    assert growth.reconciled_sd == pytest.approx(float(growth.reconciled or 0) * relative)


def test_a_blank_value_is_calculable_where_the_balances_fix_it() -> None:
    """CO2 from carbon, with the errors of the two others: sd^2 = (6 0.2)^2 + (2 0.4)^2."""
    run = close(ETHANOL.replace("19.6,0.4", ",").replace("mmol/g/h\nA,CO2", "mmol/g/h\nA,CO2"))
    gas = rate(run, "CO2")
    assert gas.kind is RateKind.CALCULABLE
    alone = close(
        "A,glucose,in,10,0.2,mmol\nA,ethanol,out,18.6,0.4,mmol\nA,CO2,out,,,mmol\n"
        "A,H2,out,,,mmol\n"
    )
    free = rate(alone, "CO2")
    assert free.reconciled == pytest.approx(6 * 10 - 2 * 18.6)
    assert free.reconciled_sd == pytest.approx(np.hypot(6 * 0.2, 2 * 0.4))
    assert gas.reconciled_sd is not None
    assert free.reconciled_sd is not None
    assert gas.reconciled_sd < free.reconciled_sd


def test_two_unmeasured_rates_of_one_balance_cannot_be_calculated() -> None:
    run = close("A,glucose,in,10,0.2,mmol\nA,ethanol,out,,,mmol\nA,acetate,out,,,mmol\n"
                "A,CO2,out,,,mmol\n")  # fmt: skip
    kinds = {r.species: r.kind for r in run.rates}
    assert kinds == {
        "glucose": RateKind.NOT_BALANCEABLE, "ethanol": RateKind.NOT_CALCULABLE,
        "acetate": RateKind.NOT_CALCULABLE, "CO2": RateKind.NOT_CALCULABLE,
    }  # fmt: skip
    assert rate(run, "ethanol").reconciled is None


def test_without_redundancy_there_is_no_test_and_it_is_said() -> None:
    run = close("A,glucose,in,10,0.2,mmol\nA,ethanol,out,,,mmol\nA,CO2,out,,,mmol\n")
    assert (run.test.h, run.test.dof, run.test.closes) == (None, 0, None)
    assert "nothing is redundant" in run.words
    assert run.is_sound


def test_a_rate_that_no_balance_tests_keeps_its_value() -> None:
    """Carbon is spoilt by unmeasured CO2, nitrogen has no row: oxygen is tested alone."""
    run = close("A,glucose,in,1,0.1,mmol\nA,CO2,out,,,mmol\nA,oxygen,in,5,0.3,mmol\n"
                "A,bicarbonate,out,0.5,0.1,mmol\n")  # fmt: skip
    assert rate(run, "bicarbonate").kind is RateKind.NOT_BALANCEABLE
    assert rate(run, "bicarbonate").z is None
    assert rate(run, "bicarbonate").reconciled == 0.5
    assert rate(run, "oxygen").kind is RateKind.BALANCEABLE


def test_exact_values_are_kept_and_take_no_degree_of_freedom() -> None:
    run = close("A,glucose,in,10,0,mmol\nA,ethanol,out,18.6,0.4,mmol\nA,CO2,out,19.6,0.4,mmol\n")
    assert rate(run, "glucose").reconciled == 10
    assert rate(run, "glucose").reconciled_sd == 0
    assert rate(run, "ethanol").reconciled == pytest.approx(20)
    assert run.test.h == pytest.approx((1.4 / 0.4) ** 2 + (0.4 / 0.4) ** 2)
    assert run.test.dof == 2
    both = close("A,glucose,in,10,0,mmol\nA,ethanol,out,20,0,mmol\nA,CO2,out,19.6,0.4,mmol\n")
    assert both.test.dof == 1
    assert both.contradictions == ()


def test_exact_values_that_contradict_one_another_are_named() -> None:
    run = close("A,glucose,in,10,0,mmol\nA,ethanol,out,19,0,mmol\nA,CO2,out,20,0.5,mmol\n")
    assert run.contradictions == (("glucose in", "ethanol out"),)
    assert run.test.closes is False
    assert run.test.h is None
    assert "contradict" in run.words
    assert not run.is_sound


def test_a_contradiction_names_no_value_that_it_does_not_need() -> None:
    """20 CO2 go with 10 of sugar; 19 of ethanol go with neither, but one relation tells it."""
    run = close("A,glucose,in,10,0,mmol\nA,ethanol,out,19,0,mmol\nA,CO2,out,20,0,mmol\n")
    assert run.contradictions == (("ethanol out", "CO2 out"),)


def test_a_relative_error_is_taken_of_the_reconciled_value() -> None:
    """One more pass: 5 % of 2 is first 0.1, then 5 % of what the first pass gives.

    What is told is the sd as typed; the test is that of the second pass.
    """
    text = "A,glucose,in,2,5 %,mmol\nA,oxygen,in,10,0.1,mmol\nA,CO2,out,10,0.1,mmol\n"
    first = close(text.replace("5 %", "0.1"))
    moved = 0.05 * float(rate(first, "glucose").reconciled or 0)
    assert moved < 0.099
    second = close(text.replace("5 %", f"{moved!r}"))
    run = close(text)
    assert rate(run, "glucose").sd == pytest.approx(0.1, rel=1e-12)
    assert run.test.h == pytest.approx(float(second.test.h or 0), rel=1e-12)


def test_a_shared_error_cancels_in_what_all_rates_share() -> None:
    """All rates are off by the same 10 %: their ratios, and so the test, do not see it."""
    shared = close(ETHANOL, "shared error biomass 10 %\n")
    alone = close(ETHANOL)
    assert shared.test.h == pytest.approx(float(alone.test.h or 0), rel=1e-6)
    assert rate(shared, "glucose").reconciled == pytest.approx(9.7)
    assert rate(shared, "glucose").reconciled_sd == pytest.approx(0.97, rel=0.06)
    recovery = (balance(shared, "carbon").recovery_sd, balance(alone, "carbon").recovery_sd)
    assert recovery[0] == pytest.approx(recovery[1], rel=0.03)


def test_a_covariance_without_error_in_a_tested_direction_is_a_fault_with_the_run() -> None:
    one = table(ETHANOL)
    run = one.runs[0]
    y = np.array([10.0, 20.0, 20.0])
    rates = tuple(
        replace(r, value=v, sd=0.1 * v) for r, v in zip(run.rates, y.tolist(), strict=True)
    )
    spoilt = replace(run, rates=rates, covariance=0.01 * np.outer(y, y))
    closure = close_rates(replace(one, runs=(spoilt, replace(run, name="B"))))
    assert names(closure) == [Name.BAD_COVARIANCE]
    assert [r.run for r in closure.runs] == ["B"]
    assert not closure.is_sound


def test_names_that_the_table_does_not_have_are_faults() -> None:
    one = table(ETHANOL)
    assert names(close_rates(one, runs=("B",))) == [Name.UNKNOWN_RUN]
    assert names(close_rates(one, without=("lactate",))) == [Name.UNKNOWN_QUANTITY]
    assert names(close_rates(one, nitrogen="glucose")) == [Name.UNKNOWN_QUANTITY]
    assert names(close_rates(one, nitrogen="amonia")) == [Name.UNKNOWN_QUANTITY]
    assert "ammonia" in str(close_rates(one, nitrogen="amonia").diagnostics[0].mend)
    everything = close_rates(one, without=("glucose", "ethanol", "CO2"))
    assert names(everything) == [Name.NO_MEASURED_RATE]


def test_several_biomass_species_share_one_growth_rate() -> None:
    """mu is their sum: with one of them measured the other is calculable."""
    kinds = (
        Species("glucose", Role.SUBSTRATE, read_formula("C6H12O6"), entry="glucose"),
        Species("X1", Role.BIOMASS, read_formula("CH1.8O0.5N0.2")),
        Species("X2", Role.BIOMASS, read_formula("CH2O0.5N0.1")),
    )
    mu = MeasuredRate(Quantity(QuantityKind.MU), 0.2, 0.01)
    x1 = MeasuredRate(Quantity(QuantityKind.RATE, "X1", Direction.OUT), 4.0, 0.2)
    sugar = MeasuredRate(Quantity(QuantityKind.RATE, "glucose", Direction.IN), 3.0, 0.1)
    run = Run("A", Basis.SPECIFIC, (sugar, x1, mu))
    found = close_rates(RatesTable((run,), species=kinds)).runs[0]
    second = rate(found, "X2")
    assert second.kind is RateKind.CALCULABLE
    mass_1 = 12.011 + 1.8 * 1.008 + 0.5 * 15.999 + 0.2 * 14.007
    mass_2 = 12.011 + 2 * 1.008 + 0.5 * 15.999 + 0.1 * 14.007
    told = {r.species: float(r.reconciled or 0) for r in found.rates}
    assert told["X1"] * mass_1 + told["X2"] * mass_2 == pytest.approx(1000 * told["mu"])


def test_runs_of_one_table_give_the_same_answers_together_and_alone() -> None:
    text = ETHANOL + ETHANOL.replace("A,", "B,").replace("18.6", "19.9")
    text += AEROBIC.replace("A,", "C,")
    together = close_rates(table(text))
    assert [r.run for r in together.runs] == ["A", "B", "C"]
    for run in together.runs:
        (alone,) = close_rates(table(text), runs=(run.run,)).runs
        assert alone.test.h == pytest.approx(float(run.test.h or 0), rel=1e-12)
        assert alone.words == run.words
        assert [r.reconciled for r in alone.rates] == pytest.approx(
            [r.reconciled for r in run.rates], rel=1e-12
        )
    assert not together.is_sound


def test_rates_in_c_mol_are_counted_by_their_carbon() -> None:
    run = close("A,glucose,in,1,0.05,C-mol/C-mol/h\nA,CO2,out,0.4,0.02,C-mol/C-mol/h\n"
                "A,biomass,out,0.6,0.03,C-mol/C-mol/h\nA,oxygen,in,0.37,0.02,mol/C-mol/h\n"
                )  # fmt: skip
    assert balance(run, "carbon").unit == "C-mol/C-mol/h"
    assert balance(run, "carbon").recovery == pytest.approx(100)
    assert balance(run, "electrons").recovery == pytest.approx(100 * (0.6 * 4.2 + 4 * 0.37) / 4)
