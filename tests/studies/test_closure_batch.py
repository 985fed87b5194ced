"""Many runs in one batch give what each would give alone, and bad numbers are refused."""

from __future__ import annotations

import numpy as np
import pytest
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.studies.closure_batch import ClosureMatrices, NoVarianceError, close_many

Array = NDArray[np.float64]
BALANCES = np.array([[-6.0, 2, 1, 1, 2], [-24, 12, 0, 4.2, 8]])


def matrices(
    redundancy: Array = BALANCES, exact: tuple[bool, ...] = (False,) * 5
) -> ClosureMatrices:
    calculated = np.array([[1.0, -0.5, 0, 0, 0]])
    return ClosureMatrices(
        redundancy.copy(), calculated, BALANCES.copy(),
        np.array([True, False, False, False, False]), np.full(5, True), np.array(exact),
    )  # fmt: skip


def some_runs(count: int) -> tuple[Array, Array]:
    random = np.random.default_rng(20_240)
    values = np.array([10, 15, 17, 3, 1.0]) * (1 + 0.05 * random.standard_normal((count, 5)))
    return values, 0.05 * values * random.uniform(0.5, 2, (count, 5))


def test_a_batch_gives_what_its_runs_give_alone() -> None:
    values, sds = some_runs(50)
    batch = close_many(matrices(), values, sds)
    for i in range(50):
        alone = close_many(matrices(), values[i : i + 1], sds[i : i + 1])
        for name in ("h", "p", "reconciled", "reconciled_sd", "z", "gap", "gap_sd", "recovery",
                     "recovery_sd", "calculated", "calculated_sd"):  # fmt: skip
            assert np.allclose(getattr(batch, name)[i], getattr(alone, name)[0], rtol=1e-10), name


def test_independent_errors_are_a_diagonal_covariance() -> None:
    values, sds = some_runs(20)
    covariances = np.zeros((20, 5, 5))
    covariances[:, range(5), range(5)] = sds**2
    one, two = close_many(matrices(), values, sds), close_many(
        matrices(), values, covariances=covariances
    )
    for name in ("h", "reconciled", "reconciled_sd", "z", "gap_sd", "recovery_sd",
                 "calculated_sd"):  # fmt: skip
        assert np.allclose(getattr(one, name), getattr(two, name), rtol=1e-9), name


def test_errors_of_every_answer_are_those_of_repeated_measurements() -> None:
    """Sds against the scatter over 40,000 repeats of one run with correlated errors."""
    random = np.random.default_rng(7)
    true = np.array([10.0, 15.0, 0.0, 4.0, 1.0])
    true[2] = 60 - 30 - 4 - 2
    true[0] = (12 * 15 + 4.2 * 4 + 8) / 24
    true[2] = 6 * true[0] - 2 * 15 - 4 - 2
    factor = 0.03 * true[:, None] * random.uniform(-1, 1, (5, 5))
    covariance = factor @ factor.T
    values = true + random.standard_normal((40_000, 5)) @ factor.T
    runs = close_many(matrices(), values, covariances=np.broadcast_to(covariance, (40_000, 5, 5)))
    for name, sd in (("reconciled", "reconciled_sd"), ("gap", "gap_sd"),
                     ("recovery", "recovery_sd"), ("calculated", "calculated_sd")):  # fmt: skip
        scatter = getattr(runs, name).std(axis=0)
        assert np.allclose(scatter, getattr(runs, sd).mean(axis=0), rtol=0.03), name
    assert np.allclose(runs.z.std(axis=0), 1, atol=0.03)
    assert runs.h.mean() == pytest.approx(2, rel=0.03)
    assert 1 - runs.closes.mean() == pytest.approx(0.05, abs=0.005)


def test_the_balances_are_recomputed_after_the_solve() -> None:
    values, sds = some_runs(100)
    runs = close_many(matrices(), values, sds)
    assert runs.residual.max() < 1e-13
    assert np.allclose(runs.reconciled @ BALANCES.T, 0, atol=1e-10)


def test_very_different_errors_do_not_spoil_the_balances() -> None:
    values, sds = some_runs(100)
    sds = sds * np.array([1e-6, 1, 1e3, 1, 1e-3])
    runs = close_many(matrices(), values, sds)
    assert runs.residual.max() < 1e-9
    assert np.isfinite(runs.h).all()


def test_without_redundancy_h_is_not_defined() -> None:
    values, sds = some_runs(3)
    runs = close_many(matrices(np.zeros((0, 5))), values, sds)
    assert runs.dof == 0
    assert np.isnan(runs.h).all()
    assert np.array_equal(runs.reconciled, values)


def test_a_correlation_of_one_that_hides_a_relation_is_refused() -> None:
    values = np.array([[10.0, 15, 30, 3, 1]])
    own = 0.01 * np.outer(values[0], values[0])
    with pytest.raises(NoVarianceError):
        close_many(matrices(), values, covariances=own[None])


@pytest.mark.parametrize("fault", ["nan", "inf", "negative", "zero", "shape", "both", "none"])
def test_bad_numbers_and_shapes_are_refused(fault: str) -> None:
    values, sds = some_runs(4)
    covariances = None
    if fault == "nan":
        values[2, 1] = np.nan
    elif fault == "inf":
        sds[1, 0] = np.inf
    elif fault == "negative":
        sds[1, 0] = -1
    elif fault == "zero":
        sds[1, 0] = 0
    elif fault == "shape":
        sds = sds[:, :4]
    elif fault == "both":
        covariances = np.zeros((4, 5, 5))
    with pytest.raises(MisuseError):
        close_many(matrices(), values, None if fault == "none" else sds, covariances)


def test_a_matrix_with_nan_is_refused() -> None:
    with pytest.raises(MisuseError):
        matrices(np.full((1, 5), np.nan))


def test_errors_of_very_different_size_leave_no_rounding_in_what_is_told() -> None:
    """Two relations that are nearly parallel in sds: the answer is (0, 0) exactly."""
    rows = np.array([[-6.0, -5], [-24, -18]])
    both = ClosureMatrices(
        rows, np.zeros((0, 2)), rows.copy(), np.full(2, True), np.full(2, True), np.full(2, False)
    )
    found = close_many(both, np.array([[1.0, 10]]), np.array([[1e-4, 2.0]]))
    assert found.h[0] == pytest.approx(1e8 + 25, rel=1e-12)
    assert np.abs(found.reconciled).max() <= 1e-10
    assert found.reconciled_sd.tolist() == [[0, 0]]


def test_a_rate_that_must_be_nothing_is_nothing() -> None:
    alone = ClosureMatrices(
        np.array([[-0.7]]), np.array([[0.3]]), np.array([[-0.7]]), np.array([True]),
        np.array([True]), np.array([False]),
    )  # fmt: skip
    found = close_many(alone, np.array([[0.3], [2.1]]), np.array([[0.1], [0.7]]))
    assert found.reconciled.tolist() == [[0], [0]]
    assert found.calculated.tolist() == [[0], [0]]
    assert found.h == pytest.approx([9, 9])


def test_ratios_of_correlated_runs_have_the_sd_of_repeated_measurements() -> None:
    """A / B of reconciled values against the scatter over 40,000 repeats."""
    random = np.random.default_rng(11)
    spread = np.array([[1.0, 0.6, 0, 0, 0], [0, 1, 0, 0, 0], [0, 0.5, 1, 0, 0],
                       [0, 0, 0, 1, 0], [0, 0, 0, 0, 1]]) * 0.05  # fmt: skip
    true = np.array([10.0, 15.0, 24.0, 4.0, 1.0])
    true[0] = (12 * 15 + 4.2 * 4 + 8) / 24
    true[2] = 6 * true[0] - 2 * 15 - 4 - 2
    values = true + random.standard_normal((40_000, 5)) @ spread.T
    plain = matrices()
    told = ClosureMatrices(
        plain.redundancy, plain.calculated, plain.contents, plain.inward, plain.balanceable,
        plain.exact, over=np.array([[0.0, 0, 1, 0, 0]]), below=np.array([[0.0, 1, 0, 0, 0]]),
    )  # fmt: skip
    covariances = np.broadcast_to(spread @ spread.T, (40_000, 5, 5))
    found = close_many(told, values, covariances=covariances)
    assert found.ratio.mean() == pytest.approx(true[2] / true[1], rel=1e-4)
    assert found.ratio_sd.mean() == pytest.approx(found.ratio.std(), rel=0.02)
    assert found.denominator[0, 0] == found.reconciled[0, 1]
