"""An optimum is believed where exact prices say so, however far the coefficients lie apart."""

from __future__ import annotations

import numpy as np

from fluxnet.solving.basis_proof import Basis, is_best, is_spread
from fluxnet.solving.linear import Outcome, Programme
from fluxnet.solving.problem import Problem, Row, RowKind

# glucose -> ATP made by the 1e12, spent by growth or by an upkeep of 1e-12 each.
MATRIX = np.array(
    [
        [2.0, 0.0, 1.0, 1e12, -1.8, -1e-12],
        [2.0, -1.0, 5.0, -1.0, 0.1, 0.0],
        [2.0, -1.0, -1.0, 0.0, 0.0, 0.0],
        [1.0, 0.0, 0.0, 0.0, 0.18333333333333332, 0.0],
    ]
)
GROWTH = np.array([0.0, 0.0, 0.0, 0.0, 1.0, 0.0])


def problem(matrix: np.ndarray) -> Problem:
    kinds = (RowKind.BALANCE, RowKind.BALANCE, RowKind.BALANCE, RowKind.LIMIT)
    rows = tuple(Row(kind, str(i)) for i, kind in enumerate(kinds))
    low, high = np.array([0.0, 0.0, 0.0, -np.inf]), np.array([0.0, 0.0, 0.0, 10.0])
    columns = ("glycolysis", "ferment", "burn", "oxphos", "growth", "upkeep")
    return Problem(columns, rows, matrix, low, high, np.zeros(6), np.full(6, np.inf))


def test_an_optimum_with_a_price_that_the_solver_took_for_zero_is_mended() -> None:
    # Growth from glucose, its ATP from oxphos: upkeep takes the rest, whatever it is.
    found = Programme(problem(MATRIX)).maximise(GROWTH)

    assert found.outcome is Outcome.OPTIMAL
    assert np.isclose(found.objective, 10 / 0.18333333333333332)


def test_a_circle_whose_gain_is_small_beside_its_parts_is_not_lost() -> None:
    # fluxes 1, 2, 3 and 5 (or 4) can run for ever; the solver stays at zero.
    matrix = np.array(
        [
            [1.0, -0.0115599405, 23.7239986, 0.0, 0.0, 0.0],
            [0.0, 582.700376, 0.0, -0.00123433685, -0.0817801742, 0.0],
            [0.0, 0.0, -0.0420130736, 272.386234, 0.0, 1.86298719],
            [1.0, 0.0, 0.0, 0.0, 0.0, 0.0],
        ]
    )
    aim = np.array([0.0, 0.0, 0.0, 1.0, 0.0, 0.0])
    assert Programme(problem(matrix)).maximise(aim).outcome is not Outcome.OPTIMAL


def test_the_basis_tells_what_may_move() -> None:
    # Two fluxes into one: the cheap one (-2) must be in the basis.
    matrix, costs = np.array([[1.0, 1.0]]), np.array([-1.0, -2.0])
    cheap, dear = np.array([False, True, False]), np.array([True, False, False])
    limit = np.array([False, False, True])

    def basis(inside: np.ndarray, low: np.ndarray) -> Basis:
        return Basis(inside, low & ~inside, limit)

    assert is_best(matrix, costs, basis(cheap, ~limit))
    assert not is_best(matrix, costs, basis(dear, ~limit))


def test_the_same_network_in_sensible_numbers_is_solved() -> None:
    sensible = MATRIX.copy()
    sensible[0, 3], sensible[0, 5] = 1e3, -1e-3
    found = Programme(problem(sensible)).maximise(GROWTH)

    assert found.outcome is Outcome.OPTIMAL
    assert np.isclose(found.objective, 10 / 0.18333333333333332)


def test_a_spread_that_prices_survive_is_no_spread() -> None:
    assert not is_spread(np.array([[0.0, 0.1], [1.0, 90.0]]))
    assert is_spread(np.array([[0.0, 1e-3], [1.0, 2e4]]))
    assert not is_spread(np.zeros((2, 2)))
