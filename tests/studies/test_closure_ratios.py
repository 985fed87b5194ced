"""Measured ratios of two rates take part in a closure as measured values."""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest

from fluxnet.network.model import Network
from fluxnet.rates.kinds import RateKind
from fluxnet.reading.model import read_model_text
from fluxnet.solving.least_squares import fit_fluxes
from fluxnet.studies.closure import close_rates
from fluxnet.studies.closure_result import RunClosure
from fluxnet.tables.rates_table import read_rates_text

sys.path.insert(0, str(Path(__file__).resolve().parent))

from closing import AEROBIC, ETHANOL, HEAD, balance, close, rate, table

RQ = "CO2 out / oxygen in"
RESPIRING = """A,glucose,in,2,0.1,mmol/g/h
A,CO2,out,6.3,0.3,mmol/g/h
A,oxygen,in,5.8,0.3,mmol/g/h
A,mu,,0.15,0.005,1/h
"""
OPEN = "A,glucose,in,,,mmol/g/h\nA,ethanol,out,,,mmol/g/h\n"
MODEL = """model burning and growing
basis mmol/g/h
substrate glucose
exchange oxygen, CO2, ammonia
biomass X CH1.8O0.5N0.2 ash 0 %
compartment all
    burn: glucose + 6 oxygen -> 6 CO2
    grow: 0.175 glucose + 0.2 ammonia -> X + 0.05 CO2
"""


def network() -> Network:
    reading = read_model_text(MODEL)
    assert reading.network is not None, [d.message for d in reading.diagnostics]
    return reading.network


def one_more(ratio: str, text: str = RESPIRING) -> RunClosure:
    return close(text + f"A,{ratio}\n")


def test_a_ratio_adds_a_degree_of_freedom_and_weighs_by_its_denominator() -> None:
    """A - r B = 0 with an sd of s times the reconciled B, against the closed formula."""
    run = close(ETHANOL + "A,CO2 / ethanol,,1.03,0.01,\n")
    y, sds = np.array([10.0, 18.6, 19.6]), np.array([0.2, 0.4, 0.4])
    balances = np.array([[-6.0, 2, 1], [-24, 12, 0], [0, -1.03, 1]])
    b = 18.6
    for _ in range(50):
        middle = balances @ np.diag(sds**2) @ balances.T + np.diag([0, 0, (0.01 * b) ** 2])
        e = balances @ y
        inverse = np.linalg.inv(middle)
        b = float((y - np.diag(sds**2) @ balances.T @ inverse @ e)[1])
    assert run.test.dof == 3
    assert run.test.h == pytest.approx(float(e @ inverse @ e), rel=1e-8)
    ratio = rate(run, "CO2 out / ethanol out")
    assert rate(run, "ethanol").reconciled == pytest.approx(b, rel=1e-8)
    assert ratio.kind is RateKind.BALANCEABLE
    assert (ratio.measured, ratio.sd, ratio.unit) == (1.03, 0.01, "mol/mol")
    assert ratio.reconciled == pytest.approx(float(rate(run, "CO2").reconciled or 0) / b)
    assert ratio.reconciled == pytest.approx(1, rel=1e-12)  # sugar to ethanol fixes it


def test_a_ratio_counts_in_closure_as_it_does_in_the_fit_of_a_model_that_only_balances() -> None:
    """The model's two reactions span what carbon and electrons leave: the same question."""
    reading = read_rates_text(HEAD + RESPIRING + f"A,{RQ},,1.02,0.02,\n", network=network())
    assert reading.table is not None, reading.diagnostics
    run = close_rates(reading.table, network=network()).runs[0]
    fit = fit_fluxes(network(), reading.table.runs[0])
    assert (run.test.dof, run.test.h) == (fit.dof, pytest.approx(float(fit.h or 0), rel=1e-7))
    told = {str(row.quantity): row for row in fit.rows}
    for name, shown in ((RQ, RQ), ("glucose", "glucose in"), ("mu", "mu")):
        ours, theirs = rate(run, name), told[shown]
        assert ours.reconciled == pytest.approx(theirs.value, rel=1e-7)
        assert ours.reconciled_sd == pytest.approx(theirs.value_sd, rel=1e-4)


def test_the_adjustment_of_a_ratio_has_its_sign_and_h_is_z_squared_where_it_stands_alone() -> None:
    run = close("A,glucose,in,10,0,mmol\nA,CO2,out,60,0,mmol\nA,oxygen,in,,,mmol\n"
                f"A,{RQ},,1.06,0.03,\n")  # fmt: skip
    ratio = rate(run, RQ)
    assert ratio.reconciled == pytest.approx(1)
    assert ratio.z == pytest.approx(-0.06 / 0.03)
    assert run.test.h == pytest.approx(4)
    assert run.test.dof == 1


def test_a_ratio_makes_the_other_rate_calculable() -> None:
    """Oxygen is CO2 / 1.05; relative errors add in squares."""
    run = close(f"A,CO2,out,6.3,0.3,mmol/g/h\n{OPEN}A,{RQ},,1.05,0.03,\n")
    oxygen = rate(run, "oxygen")
    assert oxygen.kind is RateKind.CALCULABLE
    assert oxygen.direction is not None
    assert oxygen.direction.value == "in"
    assert oxygen.reconciled == pytest.approx(6.0)
    assert oxygen.reconciled_sd == pytest.approx(6 * np.hypot(0.3 / 6.3, 0.03 / 1.05))
    assert "O2" not in run.world.not_exchanged
    assert [r.species for r in run.rates] == ["CO2", "glucose", "ethanol", "oxygen", RQ]


def test_a_ratio_of_rates_that_nothing_fixes_stays_as_it_was_measured() -> None:
    run = close("A,glucose,in,2,0.1,mmol\nA,biomass,out,,,mmol\nA,acetate,out,,,mmol\n"
                f"A,{RQ},,1.05,0.03,\n")  # fmt: skip
    ratio = rate(run, RQ)
    assert (ratio.kind, ratio.reconciled) == (RateKind.NOT_BALANCEABLE, 1.05)
    assert (ratio.reconciled_sd, ratio.z) == (0.03, None)
    assert run.test.h is None


def test_a_ratio_without_a_value_is_told_where_both_rates_are_known() -> None:
    run = one_more(f"{RQ},,,,")
    ratio = rate(run, RQ)
    parts = [float(rate(run, n).reconciled or 0) for n in ("CO2", "oxygen")]
    assert ratio.kind is RateKind.CALCULABLE
    assert ratio.measured is None
    assert ratio.reconciled == pytest.approx(parts[0] / parts[1])
    plain = close(RESPIRING)
    assert (run.test.h, run.test.dof) == (pytest.approx(plain.test.h), plain.test.dof)
    open_ = close("A,glucose,in,2,0.1,mmol\nA,CO2,out,,,mmol\nA,acetate,out,,,mmol\n"
                  f"A,oxygen,in,,,mmol\nA,{RQ},,,,\n")  # fmt: skip
    assert rate(open_, RQ).kind is RateKind.NOT_CALCULABLE
    assert rate(open_, RQ).reconciled is None


def test_the_sd_of_a_reconciled_ratio_is_that_of_repeated_measurements() -> None:
    """By small changes of every measured value, at data that agree (6, 6.39 and 1.0325)."""
    values = {"glucose,in": 2.0 + 0.1, "CO2,out": 6.2, "oxygen,in": 6.0, f"{RQ},": 1.03}
    sds = {"glucose,in": 0.1, "CO2,out": 0.3, "oxygen,in": 0.3, f"{RQ},": 0.02}

    def ratio(moved: dict[str, float]) -> tuple[float, float]:
        text = "".join(
            f"A,{n},{v!r},{sds[n]},{'mmol' if v > 1.5 else ''}\n" for n, v in moved.items()
        )
        found = rate(close(text + "A,biomass,out,,,mmol\n"), RQ)
        return float(found.reconciled or 0), float(found.reconciled_sd or 0)

    first = close("".join(
        f"A,{n},{v!r},{sds[n]},{'mmol' if v > 1.5 else ''}\n" for n, v in values.items()
    ) + "A,biomass,out,,,mmol\n")  # fmt: skip
    agreed = dict(zip(values, (float(r.reconciled or 0) for r in first.rates), strict=False))
    spread = 0.0
    for name, sd in sds.items():
        up, down = ({**agreed, name: agreed[name] + s * 1e-4 * sd} for s in (1, -1))
        spread += ((ratio(up)[0] - ratio(down)[0]) / 2e-4) ** 2
    assert ratio(agreed)[1] == pytest.approx(np.sqrt(spread), rel=1e-5)


def test_an_exact_ratio_is_kept() -> None:
    run = one_more(f"{RQ},,1.04,0,")
    ratio = rate(run, RQ)
    assert run.test.dof == 3
    assert (ratio.reconciled, ratio.reconciled_sd) == (pytest.approx(1.04, rel=1e-12), 0)
    parts = [float(rate(run, n).reconciled or 0) for n in ("CO2", "oxygen")]
    assert parts[0] / parts[1] == pytest.approx(1.04, rel=1e-12)


def test_exact_rates_that_contradict_an_exact_ratio_are_named_with_it() -> None:
    run = close(f"A,CO2,out,6,0,mmol/g/h\nA,oxygen,in,6,0,mmol/g/h\nA,{RQ},,1.05,0,\n{OPEN}")
    assert run.contradictions == (("CO2 out", "oxygen in", RQ),)
    assert run.test.closes is False


def test_a_relative_error_of_a_ratio_is_one_of_its_reconciled_value() -> None:
    run = one_more(f"{RQ},,1.2,10 %,")
    ratio = rate(run, RQ)
    first = one_more(f"{RQ},,1.2,0.12,")
    moved = 0.1 * float(rate(first, RQ).reconciled or 0)
    assert moved < 0.11
    assert ratio.sd == pytest.approx(0.12, rel=1e-9)
    again = one_more(f"{RQ},,1.2,{moved!r},")
    assert run.test.h == pytest.approx(again.test.h, rel=1e-9)


def test_a_ratio_counts_moles_where_rates_count_c_mol() -> None:
    text = ("A,glucose,in,1,0.05,C-mol/C-mol/h\nA,biomass,out,0.6,0.03,C-mol/C-mol/h\n"
            "A,oxygen,in,,,mol/C-mol/h\n"
            "A,CO2 out / glucose in,,2.4,0.1,mol/mol\n")  # fmt: skip
    gas = rate(close(text), "CO2")
    assert gas.unit == "C-mol/C-mol/h"
    fixed = close(text.replace("0.05,C", "0,C").replace("2.4,0.1", "2.4,0"))
    assert rate(fixed, "CO2").reconciled == pytest.approx(2.4 / 6)
    assert balance(fixed, "carbon").missing == ("CO2",)


def test_a_ratio_with_the_growth_rate_is_in_the_units_of_the_run() -> None:
    run = close("A,glucose,in,2,0.1,mmol/g/h\nA,CO2,out,6,0.3,mmol/g/h\nA,oxygen,in,,,mmol/g/h\n"
                "A,mu / glucose in,,0.075,0.002,\n")  # fmt: skip
    growth = rate(run, "mu")
    assert growth.kind is RateKind.CALCULABLE
    ratio = rate(run, "mu / glucose in")
    assert ratio.unit == "(1/h)/(mmol/g/h)"
    assert growth.reconciled is not None
    sugar = float(rate(run, "glucose").reconciled or 0)
    assert growth.reconciled / sugar == pytest.approx(ratio.reconciled, rel=1e-12)


def test_a_biomass_yield_is_tied_to_the_growth_rate() -> None:
    """6.0910 mmol of biomass per gram and hour from 2 of glucose."""
    run = close(AEROBIC + "A,biomass out / glucose in,,3.0455,0.1,mol/mol\n")
    assert run.test.dof == 4
    found = rate(run, "biomass out / glucose in")
    made = 1000 * float(rate(run, "mu").reconciled or 0) / 24.6264
    sugar = float(rate(run, "glucose").reconciled or 0)
    assert found.reconciled == pytest.approx(made / sugar, rel=1e-5)


def test_runs_with_different_ratios_give_what_each_gives_alone() -> None:
    texts = {n: RESPIRING.replace("A,", f"{n},") + f"{n},{RQ},,{v},0.02,\n"
             for n, v in (("A", 1.02), ("B", 1.1), ("C", 1.02))}  # fmt: skip
    together = close_rates(table("".join(texts.values()))).runs
    alone = [close_rates(table(t)).runs[0] for t in texts.values()]
    assert [r.test.h for r in together] == pytest.approx([r.test.h for r in alone], rel=1e-12)
    assert together[1].test.h != pytest.approx(together[0].test.h)


def test_a_flux_is_left_out_and_told() -> None:
    text = HEAD + RESPIRING + "A,flux grow,,6,0.1,mmol/g/h\n"
    reading = read_rates_text(text, network=network())
    assert reading.table is not None, reading.diagnostics
    run = close_rates(reading.table, network=network()).runs[0]
    assert run.left_out == ("flux grow",)
    assert any("flux grow" in note for note in run.notes)
    assert run.test.h == pytest.approx(close(RESPIRING).test.h, rel=1e-9)
