"""The error after further measurements, against generalised least squares from scratch."""

from __future__ import annotations

from hashlib import sha256

import numpy as np
import pytest

from fluxnet.solving.outlook import Slopes, sd_after


def by_information(covariance, aim, added, errors):
    """The same by the information of everything together, pseudo-inverted."""
    seen, unseen = len(covariance), aim.unseen.shape[1]
    information = np.zeros((seen + unseen, seen + unseen))
    information[:seen, :seen] = np.linalg.inv(covariance)
    slopes = np.hstack([added.seen, added.unseen])
    information += slopes.T @ (slopes / (errors**2)[:, None])
    wanted = np.concatenate([aim.seen[0], aim.unseen[0]])
    return np.sqrt(wanted @ np.linalg.pinv(information, rcond=1e-10) @ wanted)


@pytest.mark.parametrize("case", range(40))
def test_the_closed_form_is_that_of_the_information(case):
    seed = sha256(f"closed form {case}".encode()).digest()[:8]
    rng = np.random.default_rng(int.from_bytes(seed, "big"))
    seen, unseen, count = rng.integers(1, 6), rng.integers(0, 4), rng.integers(0, 3)
    root = rng.normal(size=(seen, seen))
    covariance = root @ root.T + 0.1 * np.eye(seen)
    rank = int(rng.integers(0, min(unseen, count) + 1))
    hidden = rng.normal(size=(count, rank)) @ rng.normal(size=(rank, unseen))
    added = Slopes(rng.normal(size=(count, seen)), hidden)
    errors = rng.uniform(0.1, 2, size=count)
    aim = Slopes(rng.normal(size=(1, seen)), rng.normal(size=(1, count)) @ hidden)
    found = sd_after(covariance, aim, added, errors, rank)
    assert found == pytest.approx(by_information(covariance, aim, added, errors), rel=1e-6)


def test_one_measurement_of_what_nothing_tells_else_leaves_the_rest_as_it_is():
    aim = Slopes(np.array([[1.0, 2.0]]), np.zeros((1, 1)))
    added = Slopes(np.array([[1.0, -1.0]]), np.array([[3.0]]))
    assert sd_after(np.eye(2), aim, added, np.array([0.01]), 1) == pytest.approx(np.sqrt(5))


def test_two_of_them_tell_something_together():
    aim = Slopes(np.array([[1.0, 0.0]]), np.zeros((1, 1)))
    added = Slopes(np.array([[1.0, 0.0], [0.0, 0.0]]), np.array([[1.0], [1.0]]))
    # their difference is a measurement with sd 1: 1 / (1 + 1)
    errors = np.array([0.6, 0.8])
    assert sd_after(np.eye(2), aim, added, errors, 1) == pytest.approx(np.sqrt(0.5))
