"""Rates beside a fit: calculated ones, directions, ratios, limits with an error, relative sds."""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest

from fluxnet.network.model import Basis
from fluxnet.rates.kinds import RateKind
from fluxnet.rates.measured import MeasuredRate, Run
from fluxnet.solving.least_squares import fit_fluxes

sys.path.insert(0, str(Path(__file__).resolve().parent))

from fermentations import FERMENT, RATES, YEAST, row_of


def test_unmeasured_rates_are_calculated_where_the_others_fix_them(make_network, make_run):
    network = make_network(FERMENT)
    fit = fit_fluxes(network, make_run(network, "glucose in 10 ± 0.2"))
    ethanol = row_of(fit, "ethanol out")
    assert ethanol.kind is RateKind.CALCULABLE
    assert (ethanol.value, ethanol.value_sd) == pytest.approx((20, 0.4))
    assert ethanol.measured is None
    assert fit.rows[0].kind is RateKind.NOT_BALANCEABLE
    assert fit.rows[0].z is None


def test_an_exchange_rate_is_told_in_the_direction_that_it_takes(make_network, make_run):
    network = make_network("""
        substrate glucose
        product succinate
        exchange CO2
        fix : 6 glucose + 6 CO2 -> 9 succinate
    """)
    fit = fit_fluxes(network, make_run(network, "glucose in 6 ± 0.3"))
    row = row_of(fit, "CO2 in")
    assert (row.value, row.value_sd) == pytest.approx((6, 0.3))
    assert row.low < row.value < row.high


def test_a_measured_limit_of_the_model_takes_part_unless_the_run_measures_it(
    make_network, make_run
):
    network = make_network(YEAST, limits=("upkeep = 12 ± 4",))
    by_model = fit_fluxes(network, make_run(network, *RATES[:-1]))
    by_run = fit_fluxes(network, make_run(network, *RATES))
    assert by_model.fluxes == pytest.approx(by_run.fluxes)
    assert by_model.dof == by_run.dof
    assert [r.of_model for r in by_model.rows] == [False] * 5 + [True]
    assert not any(r.of_model for r in by_run.rows)


def test_a_measured_ratio_weighs_with_its_denominator_as_fitted(make_network, make_run):
    network = make_network(FERMENT.replace("exchange CO2", "exchange CO2\nsubstrate oxygen")
                           + "burn : glucose + 6 oxygen -> 6 CO2\n")
    run = make_run(network, "glucose in 3 ± 0.2", "ethanol out 4.1 ± 0.2", "oxygen in 5 ± 0.5",
                   "CO2 out / oxygen in 1.8 ± 0.1")
    fit = fit_fluxes(network, run)
    ferment, burn = fit.fluxes

    def h(x):
        f, b = x
        ratio = (2 * f + 6 * b) / (6 * b)
        return (((f + b - 3) / 0.2) ** 2 + ((2 * f - 4.1) / 0.2) ** 2
                + ((6 * b - 5) / 0.5) ** 2 + ((ratio - 1.8) / 0.1) ** 2)

    # the weight holds at the fit: sd of the row is 0.1 times the fitted oxygen
    row = next(r for r in fit.built.problem.rows if r.ratio is not None)
    assert row.sd == pytest.approx(0.1 * 6 * burn, rel=1e-8)
    assert fit.h == pytest.approx(h((ferment, burn)), rel=1e-8)
    told = next(r for r in fit.rows if "/" in str(r.quantity))
    assert (told.measured, told.sd) == pytest.approx((1.8, 0.1))
    assert told.value == pytest.approx((2 * ferment + 6 * burn) / (6 * burn))
    assert told.low < told.value < told.high
    assert fit.dof == 2


def test_a_ratio_whose_denominator_nothing_fixes_weighs_with_the_one_shown(
    make_network, make_run
):
    network = make_network(YEAST)
    run = make_run(network, "glucose in 10 ± 0.5", "CO2 out / oxygen in 3 ± 0.1")
    fit = fit_fluxes(network, run)
    oxygen = row_of(fit, "oxygen in")
    assert oxygen.kind is RateKind.NOT_CALCULABLE
    told = next(r for r in fit.rows if "/" in str(r.quantity))
    assert (told.value, told.value_sd) == pytest.approx((3.0, 0.1))
    row = next(r for r in fit.built.problem.rows if r.ratio is not None)
    assert row.sd == pytest.approx(0.1 * oxygen.value)


def test_a_relative_sd_is_taken_of_the_reconciled_value(make_network):
    network = make_network(FERMENT)
    quantities = [r.quantity for r in fit_fluxes(network).rates][:2]
    rates = tuple(
        MeasuredRate(q, value, 0.1 * value, relative=0.1)
        for q, value in zip(quantities, (10.0, 24.0), strict=True)
    )
    fit = fit_fluxes(network, Run("one", Basis.SPECIFIC, rates))
    # first pass: weights 1 and (2 / 2.4)^2 / 1 for the flux
    weights = np.array([1 / 1.0**2, 4 / 2.4**2])
    first = (weights * np.array([10, 12])).sum() / weights.sum()
    sds = np.array([0.1 * first, 0.1 * 2 * first])
    assert [r.sd for r in fit.rows] == pytest.approx(sds.tolist())
    again = np.array([1, 4]) / sds**2
    assert fit.fluxes[0] == pytest.approx((again * np.array([10, 12])).sum() / again.sum())


# --- bounds -----------------------------------------------------------------------------
