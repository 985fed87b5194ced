"""Fluxes fitted to measured rates: hand-worked numbers, closed formulas, a general optimiser."""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest
import scipy.optimize

from fluxnet.ground.errors import MisuseError
from fluxnet.solving.flux_fit import FitStatus
from fluxnet.solving.least_squares import fit_fluxes

sys.path.insert(0, str(Path(__file__).resolve().parent))

from fermentations import FERMENT, RATES, TUNED, YEAST, row_of
from optimiser import nearest_by_optimiser


def test_the_hand_worked_fermentation(make_network, make_run):
    """Glucose -> 2 ethanol + 2 CO2: the plain mean of 10.0, 9.3 and 9.8, and h = 6.5."""
    network = make_network(FERMENT)
    run = make_run(
        network, "glucose in 10.0 ± 0.2", "ethanol out 18.6 ± 0.4", "CO2 out 19.6 ± 0.4"
    )
    fit = fit_fluxes(network, run)
    assert fit.fluxes == pytest.approx([9.7], abs=1e-9)
    assert [r.value for r in fit.rows] == pytest.approx([9.7, 19.4, 19.4], abs=1e-9)
    assert fit.h == pytest.approx(6.5, abs=1e-9)
    assert (fit.dof, fit.closes, fit.status) == (2, False, FitStatus.INCONSISTENT)
    assert fit.p_value == pytest.approx(0.03877, abs=1e-5)
    # the mean of three values of sd 0.2
    assert fit.flux_sd == pytest.approx([0.2 / np.sqrt(3)])
    assert fit.low[0] == pytest.approx(9.7 - 1.959964 * 0.2 / np.sqrt(3), abs=1e-6)
    # adjustments: 10 - 9.7 with sd sqrt(0.04 - 0.04 / 3)
    assert fit.rows[0].z == pytest.approx(0.3 / np.sqrt(0.04 * 2 / 3))
    assert fit.shares == pytest.approx(np.full((1, 3), 1 / 3))


def test_a_parameter_with_an_error_is_one_more_measurement(make_network, make_run):
    """A 1 ± 0.1, B 2.4 ± 0.1, k 2 ± 0.1: by hand one equation in k remains.

    At given k the best flux is (1 + 2.4 k) / (1 + k^2); h = (2.4 - k)^2 / (1 + k^2) / 0.01
    + (k - 2)^2 / 0.01, at its least where its derivative by k is zero.
    """
    network = make_network(TUNED)
    run = make_run(network, "A in 1 ± 0.1", "B out 2.4 ± 0.1")
    fit = fit_fluxes(network, run)

    def h(k):
        return ((2.4 - k) ** 2 / (1 + k**2) + (k - 2) ** 2) / 0.01

    best = scipy.optimize.minimize_scalar(h, bounds=(1.5, 2.5), options={"xatol": 1e-12}).x
    assert fit.moved[0].moved == pytest.approx(best, abs=1e-6)
    assert fit.h == pytest.approx(h(best), rel=1e-10)
    assert fit.fluxes[0] == pytest.approx((1 + 2.4 * best) / (1 + best**2), abs=1e-6)
    assert fit.dof == 1
    # In place of k ± its value alone h would be 2.4 - 2 over its own error: 3.2
    assert h(2.0) == pytest.approx(3.2)
    assert fit.h < 3.2
    assert abs(fit.moved[0].z) == pytest.approx(np.sqrt(fit.h), rel=0.05)


def test_ash_with_an_error_takes_part_in_mu(make_network, make_run):
    text = """
        substrate glucose
        biomass X
        growth : 0.2 glucose -> X
    """
    network = make_network(text, ash="0.08", ash_sd="0.02")
    run = make_run(network, "glucose in 1 ± 0.02", "mu 0.15 ± 0.0001")
    fit = fit_fluxes(network, run)
    assert [m.name for m in fit.moved] == ["ash X"]
    # M_X = 24.626 / (1 - ash): mu = 5 x M_X / 1000 = 0.1338 at 8 %, so ash goes up.
    assert fit.moved[0].moved > 0.1
    assert fit.dof == 1
    mu = 1000 * row_of(fit, "mu").value / fit.fluxes[0]
    assert mu * (1 - fit.moved[0].moved) == pytest.approx(24.626, abs=0.001)


def test_exact_values_are_met_and_the_rest_is_fitted(make_network, make_run):
    network = make_network(FERMENT)
    run = make_run(network, "glucose in 10 ± 0", "ethanol out 19 ± 0.5", "CO2 out 21 ± 0.5")
    fit = fit_fluxes(network, run)
    assert fit.fluxes == pytest.approx([10.0], abs=1e-12)
    assert fit.h == pytest.approx(8.0)
    assert fit.dof == 2
    assert fit.flux_sd == pytest.approx([0.0], abs=1e-12)
    assert (fit.low[0], fit.high[0]) == pytest.approx((10.0, 10.0))


# --- against closed formulas ------------------------------------------------------------


def test_without_parameters_it_is_the_closed_formula(make_network, make_run):
    """Reconciled = y - V R' (R V R')^-1 R y, h = (R y)' (R V R')^-1 R y, with correlations."""
    network = make_network(YEAST.replace("1.4 0.2", "1.4").replace("2 0.3", "2"))
    sd = np.array([0.5, 0.6, 1.0, 0.3, 0.4, 4.0])
    correlation = np.eye(6)
    correlation[2, 3] = correlation[3, 2] = 0.7
    correlation[0, 4] = correlation[4, 0] = -0.3
    covariance = correlation * np.outer(sd, sd)
    run = make_run(network, *RATES, covariance=covariance)
    fit = fit_fluxes(network, run)
    problem = fit.built.problem
    balances = [i for i, row in enumerate(problem.rows) if row.kind.value == "balance"]
    kernel = scipy.linalg.null_space(problem.matrix[balances])
    seen = problem.matrix[list(fit.built.measured)] @ kernel
    relations = scipy.linalg.null_space(seen.T).T
    y = fit.built.measured_values
    spread = relations @ covariance @ relations.T
    gain = covariance @ relations.T @ np.linalg.inv(spread)
    assert len(relations) == fit.dof == 2
    assert fit.h == pytest.approx((relations @ y) @ np.linalg.solve(spread, relations @ y))
    assert fit.bound_h == 0
    assert [r.value for r in fit.rows] == pytest.approx(list(y - gain @ relations @ y))
    left = covariance - gain @ relations @ covariance
    assert [r.value_sd for r in fit.rows] == pytest.approx(list(np.sqrt(np.diag(left))))
    adjustments = (gain @ relations @ y) / np.sqrt(np.diag(covariance - left))
    assert [r.z for r in fit.rows] == pytest.approx(list(adjustments), rel=1e-6)
    assert fit.shares.sum(axis=1) == pytest.approx(np.ones(7))


@pytest.mark.parametrize("ethanol", ["12 ± 0.6", "19 ± 0.6"])
def test_h_with_bounds_and_parameters_is_that_of_a_general_optimiser(
    make_network, make_run, ethanol
):
    network = make_network(YEAST)
    rates = [r if "ethanol" not in r else f"ethanol out {ethanol}" for r in RATES]
    fit = fit_fluxes(network, make_run(network, *rates))
    assert fit.h + fit.bound_h == pytest.approx(nearest_by_optimiser(fit), abs=1e-7)
    assert (fit.bound_h > 0) == (ethanol == "19 ± 0.6")


def test_the_representative_has_the_least_total_flux(make_network, make_run):
    network = make_network("""
        substrate glucose
        product ethanol
        inside a, b, c
        take : glucose -> a
        short : a -> ethanol
        one : a -> b
        two : b -> c
        three : c -> ethanol
        round : b <-> c
    """)
    fit = fit_fluxes(network, make_run(network, "glucose in 4 ± 0.1"))
    assert fit.fluxes == pytest.approx([4, 4, 0, 0, 0, 0])
    assert fit.best_high[2] == pytest.approx(4)
    # two and round can run in a circle without end
    assert np.isinf(fit.high[3])
    assert np.isinf(fit.low[5])


def test_the_same_run_gives_the_same_numbers_to_the_last_digit(make_network, make_run):
    network = make_network(YEAST)
    run = make_run(network, *RATES[:1], "ethanol out 19 ± 0.6", *RATES[2:])
    first, second = fit_fluxes(network, run), fit_fluxes(network, run)
    assert first.bound_p == second.bound_p
    assert (first.fluxes == second.fluxes).all()
    assert (first.low == second.low).all()


def test_badly_scaled_reactions_give_the_same_answer(make_network, make_run):
    plain = make_network(YEAST)
    scaled = make_network(
        YEAST.replace(
            "burn : pyruvate -> 3 CO2 + 5 NADH + ATP",
            "burn : 1000000 pyruvate -> 3000000 CO2 + 5000000 NADH + 1000000 ATP",
        ).replace(
            "adh : pyruvate + NADH -> ethanol + CO2",
            "adh : 0.000001 pyruvate + 0.000001 NADH -> 0.000001 ethanol + 0.000001 CO2",
        )
    )
    factor = np.ones(7)
    factor[plain.reactions.index(plain.find_reaction("burn"))] = 1e6
    factor[plain.reactions.index(plain.find_reaction("adh"))] = 1e-6
    one, two = (fit_fluxes(n, make_run(n, *RATES)) for n in (plain, scaled))
    assert two.h == pytest.approx(one.h, rel=1e-7)
    assert two.fluxes * factor == pytest.approx(one.fluxes, rel=1e-6)
    assert two.flux_sd * factor == pytest.approx(one.flux_sd, rel=1e-6)
    assert two.low * factor == pytest.approx(one.low, rel=1e-5, abs=1e-5)
    assert two.residual < 1e-9


def test_an_impossible_covariance_is_refused(make_network, make_run):
    network = make_network(FERMENT)
    covariance = np.array([[1.0, 2.0], [2.0, 1.0]])
    run = make_run(network, "glucose in 10 ± 1", "ethanol out 20 ± 1", covariance=covariance)
    with pytest.raises(MisuseError):
        fit_fluxes(network, run)


# --- other functionals ------------------------------------------------------------------
