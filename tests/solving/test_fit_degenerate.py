"""Fits of measured values that tell next to nothing."""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest

from fluxnet.network.model import Basis
from fluxnet.rates.measured import Run
from fluxnet.solving.flux_fit import FitStatus
from fluxnet.solving.least_squares import fit_fluxes
from fluxnet.solving.weightless import without_weightless

sys.path.insert(0, str(Path(__file__).resolve().parent))

from fermentations import RATES, YEAST, row_of

LONELY = ("glucose in 10 ± 0.5", "ethanol out 12 ± 0.6", "X out 8 ± 0.4", "upkeep 12 ± 4")


@pytest.mark.parametrize("sd", ["400", "1e6", "1e9"])
def test_a_rate_whose_sd_is_far_above_all_rates_counts_as_not_measured(
    make_network, make_run, sd
):
    network = make_network(YEAST)
    with_it = fit_fluxes(network, make_run(network, *LONELY, f"oxygen in 5 ± {sd}"))
    without = fit_fluxes(network, make_run(network, *LONELY))

    assert with_it.h == without.h
    assert with_it.dof == without.dof
    assert with_it.low.tolist() == without.low.tolist()
    assert with_it.high.tolist() == without.high.tolist()
    assert row_of(with_it, "oxygen in").measured is None


@pytest.mark.parametrize("share", [10.0, 25.0])
def test_rates_that_tell_little_are_fitted_all_the_same(make_network, make_run, share):
    network = make_network(YEAST)
    rates = [f"{rate.partition(' ± ')[0]} ± {share * 19}" for rate in RATES]
    fit = fit_fluxes(network, make_run(network, *rates))

    assert fit.status is FitStatus.SOLVED
    assert (fit.low <= fit.fluxes + 1e-9).all()
    assert (fit.high >= fit.fluxes - 1e-9).all()


def test_what_is_left_of_a_covariance_stays_with_its_rates(make_network, make_run):
    network = make_network(YEAST)
    run = make_run(network, "glucose in 10 ± 1", "oxygen in 5 ± 1e6", "CO2 out 19 ± 2")
    shared = np.array([[1.0, 0.0, 0.5], [0.0, 1e12, 0.0], [0.5, 0.0, 4.0]])
    left = without_weightless(Run("first", Basis.SPECIFIC, run.rates, shared))

    assert left.covariance.tolist() == [[1.0, 0.5], [0.5, 4.0]]
    assert [rate.value for rate in left.rates] == [10.0, None, 19.0]


def test_a_run_whose_rates_tell_something_stays_as_it_is(make_network, make_run):
    run = make_run(make_network(YEAST), *RATES)
    assert without_weightless(run) is run


def test_a_measured_ratio_over_a_rate_of_zero_can_be_anything(make_network, make_run):
    network = make_network(YEAST)
    rates = ("glucose in 10 ± 0.5", "ethanol out 19 ± 1", "oxygen in 0 ± 0")
    ratio = row_of(fit_fluxes(network, make_run(network, *rates, "CO2 / oxygen 1.05 ± 0.03")),
                   "CO2 out / oxygen in")  # fmt: skip

    assert (ratio.value, ratio.value_sd) == (ratio.measured, None)
    assert (ratio.low, ratio.high) == (-np.inf, np.inf)
    assert (ratio.best_low, ratio.best_high) == (-np.inf, np.inf)
