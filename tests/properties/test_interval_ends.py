"""Interval ends found all at once are those found one by one, on every model."""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest

from fluxnet.network.model import Direction, Network, Quantity, QuantityKind
from fluxnet.rates.measured import MeasuredRate, Run
from fluxnet.reading.model import read_model
from fluxnet.solving import intervals
from fluxnet.solving.build import build_problem
from fluxnet.solving.flux_fit import FitStatus, FluxFit
from fluxnet.solving.joint_ends import JointEnds
from fluxnet.solving.least_squares import fit_fluxes
from fluxnet.solving.linear import Programme

sys.path.insert(0, str(Path(__file__).resolve().parents[1] / "solving"))

from optimiser import end_by_optimiser

MODELS = sorted((Path(__file__).resolve().parents[2] / "models").glob("*.flux"))


def measure(network: Network, seed: int) -> Run:
    """Some rates of a random steady state, each with an error of about 5 %."""
    draw = np.random.default_rng(seed)
    built = build_problem(network, None)
    programme = Programme(built.problem)
    for j, (low, high) in enumerate(
        zip(built.problem.column_low, built.problem.column_high, strict=True)
    ):
        programme.set_column_bounds(j, max(low, -10.0), min(high, 10.0))
    corners = []
    while len(corners) < 4:
        found = programme.maximise(draw.standard_normal(len(network.reactions)))
        assert found.fluxes is not None
        corners.append(found.fluxes)
    fluxes = np.average(corners, axis=0, weights=draw.random(4))
    matrix = built.stoichiometry
    releases = matrix.floats(built.values) @ fluxes
    rates = []
    for species in network.boundary:
        release = float(releases[matrix.row(species.name)])
        if abs(release) < 1e-6 or draw.random() < 0.4:
            continue
        way = Direction.OUT if release > 0 else Direction.IN
        value = abs(release) * (1 + 0.05 * draw.standard_normal())
        quantity = Quantity(QuantityKind.RATE, species.name, way)
        rates.append(MeasuredRate(quantity, value, 0.05 * abs(release)))
    return Run("random", network.basis, tuple(rates))


def fit_one_by_one(network: Network, run: Run, monkeypatch: pytest.MonkeyPatch) -> FluxFit:
    def nothing(task, region, functionals, gradients, *others):
        shape = (len(gradients), 2)
        return JointEnds(np.zeros(shape), np.zeros(shape), np.zeros(shape, dtype=bool))

    with monkeypatch.context() as patch:
        patch.setattr(intervals, "joint_ends", nothing)
        return fit_fluxes(network, run)


@pytest.mark.parametrize("path", MODELS, ids=[path.stem for path in MODELS])
def test_ends_found_at_once_are_those_found_one_by_one(path, monkeypatch):
    _compare(path, range(3), monkeypatch)


@pytest.mark.slow
@pytest.mark.parametrize("path", MODELS, ids=[path.stem for path in MODELS])
def test_many_ends_found_at_once_are_those_found_one_by_one(path, monkeypatch):
    _compare(path, range(3, 40), monkeypatch)


def _compare(path: Path, seeds: range, monkeypatch: pytest.MonkeyPatch) -> None:
    network = read_model(path).network
    assert network is not None
    answered = 0
    for seed in seeds:
        run = measure(network, seed)
        fit = fit_fluxes(network, run)
        other = fit_one_by_one(network, run, monkeypatch)
        if fit.status is FitStatus.INFEASIBLE:
            continue
        answered += 1
        width = other.high - other.low
        width[~np.isfinite(width)] = 1.0
        least = 1e-9 * np.abs(fit.fluxes).max()
        for name in ("low", "high", "best_low", "best_high"):
            ours, theirs = getattr(fit, name), getattr(other, name)
            with np.errstate(invalid="ignore"):  # infinite ends
                near = np.abs(ours - theirs) <= 1e-6 * width + least
            same = (ours == theirs) | near
            for j in np.flatnonzero(~same):
                # One by one an end is rarely off by some 1e-5: then a general optimiser judges.
                assert name in ("low", "high"), (seed, name, fit.reactions[j])
                judged = end_by_optimiser(fit, int(j), 1 if name == "high" else -1)
                assert abs(ours[j] - judged) <= 1e-6 * width[j] + least
                assert abs(ours[j] - theirs[j]) <= 1e-4 * width[j]
    assert answered
