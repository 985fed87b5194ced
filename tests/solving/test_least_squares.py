"""Fluxes fitted to measured rates: hand-worked numbers, closed formulas, a general optimiser."""

from __future__ import annotations

import numpy as np
import pytest
import scipy.optimize

from fluxnet.ground.errors import MisuseError
from fluxnet.network.model import Basis
from fluxnet.rates.kinds import RateKind
from fluxnet.rates.measured import MeasuredRate, Run
from fluxnet.solving.flux_fit import BoundKind, FitStatus, FluxKind
from fluxnet.solving.functionals import Drifting
from fluxnet.solving.intervals import find_intervals
from fluxnet.solving.least_squares import fit_fluxes, spans_of
from fluxnet.solving.statistics import chi_squared_quantile

FERMENT = """
substrate glucose
product ethanol
exchange CO2
ferment : glucose -> 2 ethanol + 2 CO2
"""

# One parameter; ethanol tells it as well as its own value does.
TUNED = """
substrate A
product B
parameter k 2 0.1
make : A -> k B
"""

YEAST = """
substrate glucose, oxygen
product ethanol, glycerol
exchange CO2
biomass X
carrier ATP, NADH
inside pyruvate
parameter PO 1.4 0.2
parameter K_X 2 0.3
glycolysis : glucose -> 2 pyruvate + 2 ATP + 2 NADH
reduce : glucose + 2 ATP + 2 NADH -> 2 glycerol
adh : pyruvate + NADH -> ethanol + CO2
burn : pyruvate -> 3 CO2 + 5 NADH + ATP
oxphos : NADH + 0.5 oxygen -> PO ATP
growth : 0.2 glucose + K_X ATP -> X + 0.2 CO2 + 0.1 NADH
upkeep : ATP -> nothing
"""
RATES = (
    "glucose in 10 ± 0.5", "ethanol out 12 ± 0.6", "CO2 out 19 ± 1", "oxygen in 5 ± 0.3",
    "X out 8 ± 0.4", "upkeep 12 ± 4",
)


def value_of(fit, name):
    return fit.fluxes[fit.reactions.index(name)]


def row_of(fit, words):
    return next(r for r in (*fit.rows, *fit.rates) if str(r.quantity) == words)


def nearest_by_optimiser(fit, start=None):
    """The least h over fluxes and numbers, bounds kept, by a general optimiser."""
    parts = optimiser_parts(fit)
    found = scipy.optimize.minimize(
        parts["h"], parts["start"] if start is None else start, jac=parts["slope"],
        bounds=parts["bounds"], constraints=parts["constraints"], method="SLSQP",
        options={"ftol": 1e-14, "maxiter": 2000},
    )
    return found.fun


def optimiser_parts(fit):
    """The fit written out once more, from the task's rows only."""
    task = fit.task
    rows, count = task.rows, task.rows.count

    def residuals(x):
        v, p = x[:count], x[count:]
        measured = task.whitening @ (task.measured - rows.at(p)[task.soft] @ v)
        return np.concatenate([measured, (rows.start - p) / task.sd])

    def slope(x):
        v, p = x[:count], x[count:]
        whole = np.hstack([rows.at(p)[task.soft], rows.slopes_at(p, v)[task.soft]])
        design = np.vstack([
            -task.whitening @ whole,
            np.hstack([np.zeros((len(p), count)), -np.diag(1 / task.sd)]),
        ])
        return 2 * residuals(x) @ design

    def values(x):
        return rows.at(x[count:]) @ x[:count]

    def slopes(x):
        return np.hstack([rows.at(x[count:]), rows.slopes_at(x[count:], x[:count])])

    left = fit.region.point.chart.left
    below, above = np.isfinite(task.low), np.isfinite(task.high)

    def inside(x):
        reach = values(x)[task.bounded]
        return np.concatenate([(reach - task.low)[below], (task.high - reach)[above]])

    def inside_slopes(x):
        reach = slopes(x)[task.bounded]
        return np.vstack([reach[below], -reach[above]])

    return {
        "h": lambda x: residuals(x) @ residuals(x),
        "slope": slope,
        "start": np.concatenate([fit.fluxes, fit.region.point.numbers]),
        "bounds": [(None, None)] * count
        + list(zip(task.range_low, task.range_high, strict=True)),
        "constraints": [
            {"type": "eq", "fun": lambda x: left @ (values(x)[task.equal] - task.equal_values),
             "jac": lambda x: left @ slopes(x)[task.equal]},
            {"type": "ineq", "fun": inside, "jac": inside_slopes},
        ],
    }


def end_by_optimiser(fit, j, sign):
    """The end of a flux's 95 % interval by a general optimiser, from two starts."""
    parts = optimiser_parts(fit)
    level = fit.region.point.h + chi_squared_quantile(0.95, 1)
    target = np.zeros(len(parts["start"]))
    target[j] = -sign
    room = {"type": "ineq", "fun": lambda x: level - parts["h"](x),
            "jac": lambda x: -parts["slope"](x)}
    ends = []
    for shake in (0.0, 0.02):
        rng = np.random.default_rng(j)
        start = parts["start"] * (1 + shake * rng.normal(size=len(target)))
        found = scipy.optimize.minimize(
            lambda x: target @ x, start, jac=lambda x: target, bounds=parts["bounds"],
            constraints=[*parts["constraints"], room], method="SLSQP",
            options={"ftol": 1e-12, "maxiter": 1000},
        )
        if found.success:
            ends.append(sign * -found.fun)
    return sign * max(sign * end for end in ends)


# --- hand-worked ------------------------------------------------------------------------


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


def test_away_from_bounds_the_interval_is_the_linear_one(make_network, make_run):
    network = make_network(YEAST.replace("1.4 0.2", "1.4").replace("2 0.3", "2"))
    fit = fit_fluxes(network, make_run(network, *RATES))
    far = fit.fluxes - 4 * fit.flux_sd > 0
    assert far.sum() >= 4
    width = 1.959964 * fit.flux_sd
    assert fit.low[far] == pytest.approx((fit.fluxes - width)[far], rel=1e-6)
    assert fit.high[far] == pytest.approx((fit.fluxes + width)[far], rel=1e-6)
    assert fit.best_low == pytest.approx(fit.fluxes)
    assert fit.best_high == pytest.approx(fit.fluxes)


# --- against a general optimiser --------------------------------------------------------


@pytest.mark.parametrize("ethanol", ["12 ± 0.6", "19 ± 0.6"])
def test_h_with_bounds_and_parameters_is_that_of_a_general_optimiser(
    make_network, make_run, ethanol
):
    network = make_network(YEAST)
    rates = [r if "ethanol" not in r else f"ethanol out {ethanol}" for r in RATES]
    fit = fit_fluxes(network, make_run(network, *rates))
    assert fit.h + fit.bound_h == pytest.approx(nearest_by_optimiser(fit), abs=1e-7)
    assert (fit.bound_h > 0) == (ethanol == "19 ± 0.6")


@pytest.mark.parametrize("left_out", [(), ("oxygen in",), ("oxygen in", "CO2 out")])
def test_interval_ends_are_those_of_a_general_optimiser(make_network, make_run, left_out):
    """With parameters, near bounds, and with fluxes that the rates leave undetermined."""
    network = make_network(YEAST)
    run = make_run(network, *(r for r in RATES if not r.startswith(left_out or ("none",))))
    fit = fit_fluxes(network, run)
    for j in range(len(fit.fluxes)):
        width = fit.high[j] - fit.low[j]
        assert np.isfinite(width)
        assert fit.low[j] == pytest.approx(end_by_optimiser(fit, j, -1), abs=1e-4 * width)
        assert fit.high[j] == pytest.approx(end_by_optimiser(fit, j, 1), abs=1e-4 * width)


# --- undetermined fluxes ----------------------------------------------------------------


PARALLEL = """
substrate glucose
product ethanol
inside a
take : glucose -> a
left : a -> ethanol
right : a -> ethanol
"""


def test_an_undetermined_flux_has_ranges_and_no_sd(make_network, make_run):
    network = make_network(PARALLEL)
    fit = fit_fluxes(network, make_run(network, "glucose in 4 ± 0.1", "ethanol out 4.2 ± 0.1"))
    assert fit.kinds == (FluxKind.DETERMINED, FluxKind.UNDETERMINED, FluxKind.UNDETERMINED)
    assert np.isnan(fit.flux_sd).tolist() == [False, True, True]
    assert not fit.is_unique
    assert (fit.best_low[1], fit.best_high[1]) == pytest.approx((0, 4.1))
    assert fit.low[1] == pytest.approx(0)
    assert fit.high[1] == pytest.approx(fit.high[0])
    assert len(fit.relations) == 1
    assert fit.relations[0].words == "left + right"
    assert fit.relations[0].value == pytest.approx(4.1)
    assert fit.relations[0].sd == pytest.approx(0.1 / np.sqrt(2))
    assert fit.free[:, 0] @ [1, 0, 0] == pytest.approx(0)


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


def test_without_any_rate_everything_is_a_range(make_network):
    network = make_network(PARALLEL, limits=("glucose <= 5",))
    fit = fit_fluxes(network)
    assert (fit.status, fit.h, fit.dof) == (FitStatus.SOLVED, None, 0)
    assert fit.fluxes == pytest.approx([0, 0, 0])
    assert fit.best_high == pytest.approx([5, 5, 5])
    assert fit.high == pytest.approx([5, 5, 5])


# --- rows and rates ---------------------------------------------------------------------


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


def test_a_bound_that_pulls_is_named_and_h_stays_that_of_the_equalities(make_network, make_run):
    network = make_network(
        """
        substrate glucose
        product ethanol, acetate
        inside a
        take : glucose -> a
        one : a -> ethanol
        two : a -> acetate
        """
    )
    run = make_run(network, "glucose in 4 ± 0.1", "ethanol out 4.5 ± 0.1")
    fit = fit_fluxes(network, run)
    # lifted: acetate -0.5 ± 0.14; kept: the mean of 4 and 4.5, h = 2 x 2.5^2
    assert fit.h is None
    assert fit.fluxes == pytest.approx([4.25, 4.25, 0], abs=1e-9)
    assert fit.bound_h == pytest.approx(12.5)
    assert fit.bound_p == pytest.approx(1 / 201)
    assert len(fit.bounds) == 1
    bound = fit.bounds[0]
    assert bound.kind in (BoundKind.ROLE, BoundKind.DIRECTION)
    assert bound.name in ("acetate", "two")
    assert bound.pulled == "two"
    assert bound.pull == pytest.approx(0.5 / np.hypot(0.1, 0.1))
    assert bound.is_strong
    assert fit.status is FitStatus.SOLVED
    # acetate a: h = (0.5 + a)^2 / 0.02 <= 12.5 + 3.84; the bound lets go only under a hard pull
    assert fit.high[2] == pytest.approx(np.sqrt(0.02 * (12.5 + 3.841459)) - 0.5, rel=1e-5)
    assert fit.low[2] == 0


def test_a_bound_that_hardly_presses_is_no_surprise(make_network, make_run):
    network = make_network(PARALLEL, limits=("glucose <= 4",))
    fit = fit_fluxes(network, make_run(network, "glucose in 4.05 ± 0.1"))
    assert fit.bound_h == pytest.approx(0.25)
    # half of all data lie inside; of the others |z| > 0.5 in 0.617: p is about 0.31
    assert fit.bound_p == pytest.approx(0.309, abs=0.08)
    assert not fit.bounds[0].is_strong
    assert fit.bounds[0].kind is BoundKind.LIMIT
    assert fit.bounds[0].value == 4


def test_the_same_run_gives_the_same_numbers_to_the_last_digit(make_network, make_run):
    network = make_network(YEAST)
    run = make_run(network, *RATES[:1], "ethanol out 19 ± 0.6", *RATES[2:])
    first, second = fit_fluxes(network, run), fit_fluxes(network, run)
    assert first.bound_p == second.bound_p
    assert (first.fluxes == second.fluxes).all()
    assert (first.low == second.low).all()


def test_a_parameter_stops_at_the_end_of_its_range(make_network, make_run):
    from dataclasses import replace
    from fractions import Fraction

    network = make_network(TUNED)
    tight = replace(network.parameters[0], low=Fraction(19, 10), high=Fraction(41, 20))
    network = replace(network, parameters=(tight,))
    fit = fit_fluxes(network, make_run(network, "A in 1 ± 0.1", "B out 2.6 ± 0.1"))
    assert fit.moved[0].moved == pytest.approx(2.05, abs=1e-9)
    assert fit.fluxes[0] == pytest.approx((1 + 2.6 * 2.05) / (1 + 2.05**2), abs=1e-7)
    assert [(b.kind, b.name) for b in fit.bounds] == [(BoundKind.RANGE, "k")]
    assert fit.bound_h > 0
    assert fit.h + fit.bound_h == pytest.approx(nearest_by_optimiser(fit), abs=1e-8)


# --- what cannot be ---------------------------------------------------------------------


def test_exact_values_that_contradict_are_infeasible(make_network, make_run):
    network = make_network(FERMENT)
    fit = fit_fluxes(network, make_run(network, "glucose in 10 ± 0", "ethanol out 18 ± 0"))
    assert fit.status is FitStatus.INFEASIBLE
    assert set(fit.contradictions[0]) == {"glucose in", "ethanol out"}
    assert np.isnan(fit.fluxes).all()
    with pytest.raises(MisuseError):
        spans_of(fit, np.ones((1, 1)))


def test_an_exact_value_beyond_a_limit_is_infeasible(make_network, make_run):
    network = make_network(YEAST, limits=("oxygen <= 2",))
    run = make_run(network, "oxygen in 3 ± 0", "glucose in 10 ± 1")
    assert fit_fluxes(network, run).status is FitStatus.INFEASIBLE


def test_a_demand_that_no_parameter_can_meet_is_infeasible(make_network):
    network = make_network(YEAST, limits=("glucose <= 1", "upkeep >= 1000"))
    assert fit_fluxes(network).status is FitStatus.INFEASIBLE


def test_limits_that_leave_one_point_are_feasible(make_network, make_run):
    network = make_network(
        """
        substrate glucose
        product ethanol, acetate
        inside a
        take : glucose -> a
        one : a -> ethanol
        two : a -> acetate
        """,
        limits=("ethanol <= 0.3", "acetate <= 0.1"),
    )
    fit = fit_fluxes(network, make_run(network, "glucose in 0.4 ± 0", "ethanol out 1 ± 1"))
    assert fit.status is FitStatus.SOLVED
    assert fit.fluxes == pytest.approx([0.4, 0.3, 0.1], abs=1e-8)
    assert (fit.low[1], fit.high[1]) == pytest.approx((0.3, 0.3), abs=1e-7)


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


def test_any_functional_has_its_sd_and_range(make_network, make_run):
    network = make_network(YEAST)
    fit = fit_fluxes(network, make_run(network, *RATES))
    # Multiples of one flux are taken from what is known, others searched: both in their order.
    rows = np.vstack([-2 * np.eye(7)[:4], np.ones(7), 0.5 * np.eye(7)[4:]])
    factors = np.array([-2, -2, -2, -2, 0.5, 0.5, 0.5])
    single = [0, 1, 2, 3, 5, 6, 7]
    spans = spans_of(fit, rows)
    searched = find_intervals(
        fit.task, fit.region,
        Drifting(rows, np.zeros((fit.task.numbers, *rows.shape)), fit.region.point.numbers),
    )  # fmt: skip
    assert spans.sd[single] == pytest.approx(np.abs(factors) * fit.flux_sd)
    assert spans.sd[4] == pytest.approx(np.sqrt(np.sum(fit.covariance[:7, :7])))
    for name in ("values", "sd", "low", "high", "best_low", "best_high"):
        found, expected = getattr(spans, name), getattr(searched, name)
        assert found == pytest.approx(expected, rel=1e-6, abs=1e-9), name
    assert (spans.low[:4] < spans.high[:4]).all()
    # ATP from oxphos is PO times its flux: PO's error must reach it
    oxphos = np.zeros((1, 7))
    oxphos[0, 4] = fit.numbers["PO"]
    unit = np.zeros((1, 7))
    unit[0, 4] = 1
    with_error = spans_of(fit, oxphos, {"PO": unit})
    without = spans_of(fit, oxphos)
    slope = np.zeros(9)
    slope[4] = fit.numbers["PO"]
    slope[7] = fit.fluxes[4]
    assert with_error.sd[0] == pytest.approx(np.sqrt(slope @ fit.covariance @ slope))
    assert with_error.sd[0] != pytest.approx(without.sd[0], rel=0.01)


def test_an_end_that_is_seen_at_once_is_the_one_found_by_going_on(
    make_network, make_run, monkeypatch
):
    network = make_network(YEAST)
    run = make_run(network, *RATES)
    at_once = fit_fluxes(network, run)
    monkeypatch.setattr("fluxnet.solving.curve.missing_at", lambda *_: None)
    monkeypatch.setattr("fluxnet.solving.intervals.missing_at", lambda *_: None)
    by_going_on = fit_fluxes(network, run)

    assert at_once.low == pytest.approx(by_going_on.low, rel=1e-8, abs=1e-10)
    assert at_once.high == pytest.approx(by_going_on.high, rel=1e-8, abs=1e-10)
