"""The intervals of a fit: linear ones, those at bounds, and ends that an optimiser finds too."""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest

from fluxnet.solving.flux_fit import FitStatus, FluxKind
from fluxnet.solving.functionals import Drifting
from fluxnet.solving.intervals import find_intervals
from fluxnet.solving.least_squares import fit_fluxes
from fluxnet.solving.spans import spans_of

sys.path.insert(0, str(Path(__file__).resolve().parent))

from fermentations import PARALLEL, RATES, YEAST
from optimiser import end_by_optimiser


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


def test_without_any_rate_everything_is_a_range(make_network):
    network = make_network(PARALLEL, limits=("glucose <= 5",))
    fit = fit_fluxes(network)
    assert (fit.status, fit.h, fit.dof) == (FitStatus.SOLVED, None, 0)
    assert fit.fluxes == pytest.approx([0, 0, 0])
    assert fit.best_high == pytest.approx([5, 5, 5])
    assert fit.high == pytest.approx([5, 5, 5])


# --- rows and rates ---------------------------------------------------------------------


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


def test_long_fits_tell_how_far_they_are(make_network, make_run):
    told = []
    network = make_network(YEAST)
    run = make_run(network, *RATES)
    fit_fluxes(network, run, progress=lambda what, done, total: told.append((what, done, total)))

    assert {what for what, _, _ in told} == {"intervals"}
    assert [done for _, done, _ in told] == list(range(told[0][2]))
