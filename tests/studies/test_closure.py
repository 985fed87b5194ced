"""A closure says what closes, what is tested, what is calculable, and what it assumed."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from fluxnet.chemistry.reader import read_formula
from fluxnet.ground.names import Name
from fluxnet.network.model import Basis, Direction, Network, Quantity, QuantityKind, Role, Species
from fluxnet.rates.kinds import RateKind
from fluxnet.rates.measured import MeasuredRate, RatesTable, Run
from fluxnet.studies.closure import close_rates
from fluxnet.studies.closure_result import Balance, ClosedRate, Closure, RunClosure
from fluxnet.tables.rates_table import read_rates_text

HEAD = "run,species,direction,rate,sd,unit\n"
AEROBIC = """A,glucose,in,2,0.1,mmol/g/h
A,CO2,out,6,0.3,mmol/g/h
A,oxygen,in,5.9,0.3,mmol/g/h
A,ammonia,in,1.3,0.1,mmol/g/h
A,mu,,0.15,0.005,1/h
"""
ETHANOL = """A,glucose,in,10.0,0.2,mmol/g/h
A,ethanol,out,18.6,0.4,mmol/g/h
A,CO2,out,19.6,0.4,mmol/g/h
"""


def table(text: str, before: str = "") -> RatesTable:
    reading = read_rates_text(before + HEAD + text)
    assert reading.table is not None, reading.diagnostics
    return reading.table


def close(text: str, before: str = "", **options: object) -> RunClosure:
    closure = close_rates(table(text, before), **options)  # type: ignore[arg-type]
    assert closure.diagnostics == ()
    return closure.runs[0]


def balance(run: RunClosure, name: str) -> Balance:
    found = run.find_balance(name)
    assert found is not None, [b.name for b in run.balances]
    return found


def rate(run: RunClosure, species: str) -> ClosedRate:
    found = run.find_rate(species)
    assert found is not None
    return found


def names(closure: Closure) -> list[Name]:
    return [d.name for d in closure.diagnostics]


def by_hand(
    run: RunClosure, contents: dict[str, list[float]]
) -> tuple[float, np.ndarray, np.ndarray]:
    """h, reconciled values and their sds, by R = E_m - E_u E_u^+ E_m and pseudo-inverses."""
    measured = [r for r in run.rates if r.measured is not None]
    unmeasured = [r for r in run.rates if r.measured is None]

    def columns(rates: list[ClosedRate]) -> np.ndarray:
        return np.array(
            [np.multiply(-1 if r.direction is Direction.IN else 1, contents[r.species])
             for r in rates]
        ).reshape(len(rates), 3).T  # fmt: skip

    em, eu = columns(measured), columns(unmeasured)
    red = em - eu @ np.linalg.pinv(eu) @ em if unmeasured else em
    y = np.array([r.measured for r in measured])
    v = np.diag([float(r.sd or 0) ** 2 for r in measured])
    inverse = np.linalg.pinv(red @ v @ red.T, rcond=1e-10)
    e = red @ y
    left = v - v @ red.T @ inverse @ red @ v
    return float(e @ inverse @ e), y - v @ red.T @ inverse @ e, np.sqrt(np.diag(left))


CONTENTS = {  # carbon, nitrogen, electrons, from the formulas
    "glucose": [6.0, 0, 24], "CO2": [1.0, 0, 0], "oxygen": [0.0, 0, -4], "ammonia": [0.0, 1, 0],
    "ethanol": [2.0, 0, 12], "acetate": [2.0, 0, 8], "biomass": [1.0, 0.2, 4.2],
}  # fmt: skip


@pytest.mark.parametrize("without", [(), ("CO2",), ("glucose",), ("oxygen", "ammonia")])
def test_the_test_and_the_reconciled_rates_are_those_of_the_closed_formula(
    without: tuple[str, ...],
) -> None:
    run = close(
        "A,glucose,in,2,0.1,mmol/g/h\nA,CO2,out,6,0.3,mmol/g/h\nA,oxygen,in,4.9,0.3,mmol/g/h\n"
        "A,ammonia,in,1.3,0.1,mmol/g/h\nA,biomass,out,5.5,0.2,mmol/g/h\n"
        "A,acetate,out,0.2,0.05,mmol/g/h\n",
        without=without,
    )
    h, reconciled, sds = by_hand(run, CONTENTS)
    measured = [r for r in run.rates if r.measured is not None]
    assert run.test.dof == 3 - len(without)
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
    expected = np.hypot(0.005, 0.15 * 0.02 / 0.92)
    assert rate(ash, "mu").sd == pytest.approx(expected, rel=1e-9)


def test_nitrogen_is_balanced_only_where_its_source_has_a_row() -> None:
    assert [b.name for b in close(AEROBIC).balances] == ["carbon", "nitrogen", "electrons"]
    without_row = AEROBIC.replace("A,ammonia,in,1.3,0.1,mmol/g/h\n", "")
    run = close(without_row)
    assert [b.name for b in run.balances] == ["carbon", "electrons"]
    assert "ammonia" in run.world.free
    assert run.test.dof == 2


def test_a_species_with_sulfur_is_balanced_in_sulfur_where_sulfate_has_a_row() -> None:
    text = "A,cysteine,in,1,0.1,mmol\nA,CO2,out,3,0.2,mmol\nA,oxygen,in,4.5,0.3,mmol\n"
    assert close(text).find_balance("sulfur") is None
    run = close(text + "A,sulfate,out,0.9,0.1,mmol\n")
    assert balance(run, "sulfur").recovery == pytest.approx(90)
    assert "sulfate" not in run.world.free


def test_what_is_taken_as_not_exchanged_is_told() -> None:
    assert close(ETHANOL).world.not_exchanged == ("O2", "H2")
    network = Network(
        "m", Basis.SPECIFIC,
        (Species("glucose", Role.SUBSTRATE, read_formula("C6H12O6"), entry="glucose"),
         Species("oxygen", Role.SUBSTRATE, read_formula("O2"), entry="oxygen"),
         Species("ethanol", Role.PRODUCT, read_formula("C2H6O"), entry="ethanol"),
         Species("lactate", Role.PRODUCT, read_formula("C3H6O3"), entry="lactate"),
         Species("CO2", Role.EXCHANGE, read_formula("CO2"), entry="CO2")),
        (), (), (),
    )  # fmt: skip
    closure = close_rates(table(ETHANOL), network=network)
    assert closure.runs[0].world.not_exchanged == ("oxygen", "H2", "lactate")


def test_formulas_come_from_the_model_where_it_has_them() -> None:
    """A model's own aroma, which the catalogue does not know."""
    network = Network(
        "m", Basis.AMOUNT,
        (Species("glucose", Role.SUBSTRATE, read_formula("C6H12O6"), entry="glucose"),
         Species("aroma", Role.PRODUCT, read_formula("C8H10O"))),
        (), (), (),
    )  # fmt: skip
    reading = read_rates_text(
        HEAD + "A,glucose,in,8,0.1,mmol\nA,aroma,out,6,0.1,mmol\n", network=network
    )
    assert reading.table is not None
    run = close_rates(reading.table, network=network).runs[0]
    assert balance(run, "carbon").recovery == pytest.approx(100)


def test_a_rate_that_is_left_aside_is_exchanged_but_not_measured() -> None:
    run = close(ETHANOL, without=("EtOH",))
    assert rate(run, "ethanol").kind is RateKind.CALCULABLE
    assert rate(run, "ethanol").measured is None
    assert rate(run, "ethanol").reconciled == pytest.approx(
        2 * (rate(run, "glucose").reconciled or 0)
    )
    assert run.test.dof == 1
    assert balance(run, "carbon").missing == ("ethanol",)
    assert balance(run, "carbon").z is None


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


def test_a_relative_error_is_taken_of_the_reconciled_value() -> None:
    """One more pass: 5 % of 2 is first 0.1, then 5 % of what the first pass gives."""
    text = "A,glucose,in,2,5 %,mmol\nA,oxygen,in,10,0.1,mmol\nA,CO2,out,10,0.1,mmol\n"
    first = close(text.replace("5 %", "0.1"))
    moved = 0.05 * float(rate(first, "glucose").reconciled or 0)
    assert moved < 0.099
    second = close(text.replace("5 %", f"{moved!r}"))
    run = close(text)
    assert rate(run, "glucose").sd == pytest.approx(moved, rel=1e-12)
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


@pytest.mark.parametrize(
    ("source", "reference", "oxygen"),
    [("ammonia", "ammonia", 3.0), ("urea", "urea", 3.0), ("nitrate", "nitrate", 1.0),
     ("N2", "N2", 2.25)],
)  # fmt: skip
def test_the_nitrogen_source_moves_the_electrons(
    source: str, reference: str, oxygen: float
) -> None:
    """5 C-mol of cells with 1 N: nitrate takes 8 electrons as it is reduced, N2 takes 3."""
    text = "A,glucose,in,1.375,0.1,mmol\nA,biomass,out,5,0.1,mmol\nA,oxygen,in,,,mmol\n"
    run = close(text + "A,CO2,out,,,mmol\n", nitrogen=source)
    assert run.reference == reference
    assert rate(run, "oxygen").reconciled == pytest.approx(oxygen)
    shown = balance(run, "electrons")
    gamma = {"ammonia": 4.2, "urea": 4.2, "nitrate": 5.8, "N2": 4.8}[source]
    assert shown.released == pytest.approx(5 * gamma)


def test_the_carbon_of_urea_goes_with_its_nitrogen() -> None:
    """0.5 urea for 1 N of cells brings 0.5 C: that much more CO2."""
    text = ("A,glucose,in,1.375,0.1,mmol\nA,biomass,out,5,0.1,mmol\nA,CO2,out,,,mmol\n"
            "A,oxygen,in,,,mmol\n")  # fmt: skip
    with_urea = close(text, nitrogen="urea")
    with_ammonia = close(text)
    assert rate(with_ammonia, "CO2").reconciled == pytest.approx(3.25)
    assert rate(with_urea, "CO2").reconciled == pytest.approx(3.75)
    assert any("urea" in note for note in with_urea.notes)


def test_the_reference_of_nitrogen_changes_no_verdict_while_nitrogen_is_balanced() -> None:
    text = AEROBIC + "A,nitrate,in,0.01,0.001,mmol/g/h\n"
    one = close(text, nitrogen="ammonia")
    two = close(text, nitrogen="nitrate")
    assert two.reference == "nitrate"
    assert balance(one, "electrons").gap != pytest.approx(balance(two, "electrons").gap)
    # ammonia has a row in both, so no species is free in one and not in the other
    assert two.test.dof == one.test.dof
    assert two.test.h == pytest.approx(float(one.test.h or 0), rel=1e-9)


def test_oxygen_and_other_acceptors_are_counted_with_what_is_made_of_the_electrons() -> None:
    run = close("A,ethanol,in,1,0.1,mmol\nA,oxygen,in,1,0.1,mmol\nA,nitrate,in,1,0.1,mmol\n"
                "A,N2,out,0.5,0.1,mmol\nA,CO2,out,2,0.1,mmol\n")  # fmt: skip
    shown = balance(run, "electrons")
    assert shown.taken == pytest.approx(12)
    assert shown.released == pytest.approx(4 + 8 - 3)
    assert run.or_index is None


def test_the_or_index_is_null_where_nothing_is_more_reduced_than_sugar() -> None:
    assert close("A,glucose,in,1,0.1,mmol\nA,acetate,out,3,0.1,mmol\n").or_index is None
    index = close("A,glucose,in,1,0.1,mmol\nA,ethanol,out,2,0.1,mmol\nA,CO2,out,2,0.1,mmol\n")
    assert index.or_index == pytest.approx(1.0)


def test_a_ratio_cannot_be_used_and_is_told() -> None:
    one = table(ETHANOL)
    q = {r.quantity.name: r.quantity for r in one.runs[0].rates}
    ratio = Quantity(
        QuantityKind.RATIO, numerator=q["CO2"], denominator=q["ethanol"]
    )
    more = replace(one.runs[0], rates=(*one.runs[0].rates, MeasuredRate(ratio, 1.05, 0.03)))
    run = close_rates(replace(one, runs=(more,))).runs[0]
    assert run.left_out == (str(ratio),)
    assert any(str(ratio) in note for note in run.notes)
    assert run.test.h == pytest.approx(6.5)


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


def test_an_element_without_a_reference_leaves_the_electrons_out_and_is_told() -> None:
    kinds = (
        Species("selenol", Role.EXCHANGE, read_formula("C3H7NO2Se")),
        Species("selenite", Role.EXCHANGE, read_formula("H2SeO3")),
    )
    rates = (
        MeasuredRate(Quantity(QuantityKind.RATE, "selenol", Direction.IN), 1.0, 0.1),
        MeasuredRate(Quantity(QuantityKind.RATE, "selenite", Direction.OUT), 0.9, 0.1),
    )
    table_ = RatesTable((Run("A", Basis.AMOUNT, rates, unit="mmol"),), species=kinds)
    run = close_rates(table_).runs[0]
    assert run.find_balance("electrons") is None
    assert balance(run, "Se").recovery == pytest.approx(90)
    assert any("Se" in note for note in run.notes)


def test_the_verdict_says_that_a_closed_balance_is_no_proof() -> None:
    assert "no proof" in close(AEROBIC).words
    rejected = close(ETHANOL)
    assert "no proof" not in rejected.words
    assert "h = 6.5 on 2 degrees of freedom" in rejected.words


def test_rates_in_c_mol_are_counted_by_their_carbon() -> None:
    run = close("A,glucose,in,1,0.05,C-mol/C-mol/h\nA,CO2,out,0.4,0.02,C-mol/C-mol/h\n"
                "A,biomass,out,0.6,0.03,C-mol/C-mol/h\nA,oxygen,in,0.37,0.02,mol/C-mol/h\n"
                )  # fmt: skip
    assert balance(run, "carbon").unit == "C-mol/C-mol/h"
    assert balance(run, "carbon").recovery == pytest.approx(100)
    assert balance(run, "electrons").recovery == pytest.approx(100 * (0.6 * 4.2 + 4 * 0.37) / 4)
