"""What bounds and exact values do to a fit: some press, and are named; some contradict."""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest

from fluxnet.ground.errors import MisuseError
from fluxnet.solving.flux_fit import BoundKind, FitStatus
from fluxnet.solving.least_squares import fit_fluxes
from fluxnet.solving.spans import spans_of

sys.path.insert(0, str(Path(__file__).resolve().parent))

from fermentations import FERMENT, PARALLEL, TUNED, YEAST
from optimiser import nearest_by_optimiser


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


def test_z_is_the_shown_change_over_its_sd_also_beside_a_bound(make_network, make_run):
    network = make_network(FERMENT, limits=("glucose <= 4",))
    (held,) = fit_fluxes(network, make_run(network, "glucose in 4.3 ± 0.1")).rows
    # the bound fixes the value: the change is the whole error of the measurement
    assert held.value == pytest.approx(4)
    assert held.z == pytest.approx(3.0)

    (free,) = fit_fluxes(network, make_run(network, "glucose in 3.9 ± 0.1")).rows
    assert free.z is None
