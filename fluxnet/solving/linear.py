"""Linear programmes on a warm model: costs and bounds change, the model is never built again.

The solver's own model is made by :mod:`fluxnet.solving.solver_model`.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.solving.basis_proof import Basis, is_best, is_spread
from fluxnet.solving.exactly import Exactly, outcome_of
from fluxnet.solving.outcome import LinearSolution, Outcome
from fluxnet.solving.problem import Problem
from fluxnet.solving.residuals import (
    Entries,
    Pair,
    is_contradiction,
    is_ray,
    violation_of,
    worst_violation,
)
from fluxnet.solving.scaling import find_scales
from fluxnet.solving.solver_model import basis_places, load_model

if TYPE_CHECKING:
    from fluxnet.exact.programme import ExactProgramme
    from fluxnet.exact.simplex import ExactSolution, Place

__all__ = ["LinearSolution", "Outcome", "Programme", "worst_violation"]

Vector = NDArray[np.float64]

TOLERANCE = 1e-9
"""How far the solver may leave a bound or a price, in the units of the problem."""

_MOST_ROWS = 100  # with more, each answer of an exact programme would take too long
_CHOOSE, _DUAL, _PRIMAL = 0, 1, 4  # numbers of HiGHS for its simplex methods
_ATTEMPTS = (
    (_CHOOSE, TOLERANCE),
    (_DUAL, TOLERANCE),
    (_PRIMAL, TOLERANCE),
    (_DUAL, 1e-7),
    (_PRIMAL, 1e-7),
)


_MEANINGS = {
    "kOptimal": Outcome.OPTIMAL,
    "kModelEmpty": Outcome.OPTIMAL,
    "kInfeasible": Outcome.INFEASIBLE,
    "kUnbounded": Outcome.UNBOUNDED,
}


class Programme:
    """A warm linear programme: the one mutable object of the package.

    It starts with the bounds of a problem and remembers the last basis, so that a change of
    the costs or of a bound is a few pivots. Presolve is off: a warm start needs the whole
    model, and rays exist only there. Nothing is written anywhere.

    Parameters
    ----------
    exact
        The problem from its decimals as written. Where its coefficients lie decades apart, and
        it is not too large, exact pivots from the solver's basis then prove or mend each answer.

    Examples
    --------
    >>> from fluxnet.solving.problem import Row, RowKind
    >>> one = np.ones(1)
    >>> rows = (Row(RowKind.BALANCE, "a"), Row(RowKind.LIMIT, "limit in <= 5"))
    >>> problem = Problem(("in", "out"), rows, np.array([[1.0, -1.0], [1.0, 0.0]]),
    ...     np.array([0.0, -np.inf]), np.array([0.0, 5.0]), np.zeros(2), np.full(2, np.inf))
    >>> solution = Programme(problem).maximise(np.array([0.0, 1.0]))
    >>> solution.objective, solution.row_prices.tolist()
    (5.0, [-1.0, 1.0])
    """

    def __init__(self, problem: Problem, exact: ExactProgramme | None = None) -> None:
        self.problem = problem
        self.outcome = Outcome.FAILED
        self.residual = 0.0
        self._fluxes = np.zeros(len(problem.columns))
        self._row_low, self._row_high = problem.row_low.copy(), problem.row_high.copy()
        self._column_low = problem.column_low.copy()
        self._column_high = problem.column_high.copy()
        sizes = np.abs(problem.matrix)
        self._entries = Entries.of(problem.matrix)
        self._costs = np.zeros(len(problem.columns))
        self._cost_scale = 1.0
        self._row_scale, self._column_scale = find_scales(problem, sizes)
        self._is_spread = is_spread(sizes)
        self._exactly = Exactly(problem, exact)
        self.is_exact = self._is_spread and exact is not None and len(problem.rows) <= _MOST_ROWS
        self._found: ExactSolution | None = None
        self._highs = load_model(problem, self._entries, self._row_scale, self._column_scale)
        self._set_method(*_ATTEMPTS[0])

    # --- changes ---------------------------------------------------------------------

    def set_row_bounds(self, i: int, low: float, high: float) -> None:
        """Give row ``i`` other bounds; infinities lift them."""
        self._refuse_nan(low, high)
        self._row_low[i], self._row_high[i] = low, high
        self._exactly.set_bounds(len(self._column_low) + i, low, high)
        scale = self._row_scale[i]
        self._highs.changeRowBounds(i, low * scale, high * scale)

    def set_column_bounds(self, j: int, low: float, high: float) -> None:
        """Give the flux of column ``j`` other bounds; infinities lift them."""
        self._refuse_nan(low, high)
        self._column_low[j], self._column_high[j] = low, high
        self._exactly.set_bounds(j, low, high)
        scale = self._column_scale[j]
        self._highs.changeColBounds(j, low / scale, high / scale)

    def set_costs(self, costs: Vector) -> None:
        """Give every flux its cost per unit, to be minimised by :meth:`run`."""
        costs = np.asarray(costs, dtype=np.float64)
        if costs.shape != self._costs.shape:
            raise MisuseError("one cost is needed for each column")
        self._refuse_nan(costs)
        scaled = costs * self._column_scale
        largest = float(np.abs(scaled).max(initial=0.0))
        # The largest cost the solver sees is about 1, as its tolerances suppose.
        self._cost_scale = 2.0 ** -int(np.frexp(largest)[1] - 1) if largest else 1.0
        scaled *= self._cost_scale
        changed = np.flatnonzero(scaled != self._costs)
        self._costs[changed] = scaled[changed]
        self._highs.changeColsCost(len(changed), changed.astype(np.int32), scaled[changed])

    # --- questions -------------------------------------------------------------------

    def minimise(self, cost: Vector) -> LinearSolution:
        """The least value of ``cost @ v``."""
        return self._solve(cost, 1.0)

    def maximise(self, cost: Vector) -> LinearSolution:
        """The largest value of ``cost @ v``."""
        return self._solve(cost, -1.0)

    def is_feasible(self) -> bool:
        """Whether any fluxes meet all bounds.

        Raises
        ------
        ArithmeticError
            Where the solver could not tell.
        """
        self.set_costs(np.zeros_like(self._costs))
        outcome = self.run()
        if outcome is Outcome.FAILED:
            raise ArithmeticError("the solver could not tell whether the problem has a solution")
        return outcome is Outcome.OPTIMAL

    def run(self) -> Outcome:
        """Solve as it stands, from the last basis; :attr:`outcome` keeps the answer.

        "Infeasible" is believed when the solver's weights prove it (or, where it has none, when
        two cold starts say so), "unbounded" when its direction keeps all bounds. Otherwise the
        programme is solved again from a cold start, by another simplex method; so it is where an
        optimum does not meet its bounds. What is still not known then exact pivots tell, if the
        programme is not too large for them.
        """
        self._found = None
        verdicts: list[Outcome] = []
        for strategy, tolerance in _ATTEMPTS:
            if verdicts:
                self._highs.clearSolver()
                self._set_method(strategy, tolerance)
            outcome, sure = self._attempt()
            verdicts.append(outcome)
            if (self.is_exact and len(verdicts) == 1 and self._ask_exactly()) or sure:
                break
        else:
            if not self._ask_exactly():
                twice = verdicts[1:].count(Outcome.INFEASIBLE) > 1
                outcome = Outcome.INFEASIBLE if twice else Outcome.FAILED
        if self._found is not None:
            outcome = outcome_of(self._found)
        if len(verdicts) > 1:
            self._set_method(*_ATTEMPTS[0])
        self.outcome = outcome
        return outcome

    def value(self) -> float:
        """The cost of the last optimum."""
        if self._found is not None:
            return float(self._found.objective)
        return float(self._highs.getInfo().objective_function_value) / self._cost_scale

    def fluxes(self) -> Vector:
        """The fluxes of the last optimum; :attr:`residual` is their worst violation."""
        return self._fluxes

    def dual_ray(self) -> Vector | None:
        """After INFEASIBLE: weights of the rows whose sum no fluxes can meet (Farkas)."""
        if self._found is not None:
            return np.array([float(w) for w in self._found.weights])
        _, exists, ray = self._highs.getDualRay()
        return np.array(ray) * self._row_scale if exists else None

    def primal_ray(self) -> Vector | None:
        """After UNBOUNDED: a direction of the fluxes that can be followed for ever."""
        if self._found is not None:
            return np.array([float(v) for v in self._found.ray])
        _, exists, ray = self._highs.getPrimalRay()
        return np.array(ray) * self._column_scale if exists else None

    def places(self) -> tuple[Place, ...]:
        """Where each flux, then each row, stands in the last basis (the rows' own without one)."""
        if self._found is not None:
            return self._found.places
        return basis_places(self._highs, *self.problem.matrix.shape)

    # --- inside ----------------------------------------------------------------------

    def _solve(self, cost: Vector, sign: float) -> LinearSolution:
        cost = np.asarray(cost, dtype=np.float64)
        self.set_costs(sign * cost)
        outcome = self.run()
        rows, columns = self.problem.matrix.shape
        if outcome is not Outcome.OPTIMAL:
            worth = {Outcome.UNBOUNDED: -np.inf, Outcome.INFEASIBLE: np.inf}.get(outcome, 0.0)
            nothing = np.zeros(columns)
            return LinearSolution(
                outcome, sign * worth, nothing, np.zeros(rows), np.zeros(columns), 0.0
            )
        cost_of, found = float(cost @ self._fluxes), self._found
        if found is not None:
            prices, gains = (np.array([float(p) for p in ps]) for ps in (found.prices, found.gains))
            cost_of = float(sign * found.objective)
        else:
            solution = self._highs.getSolution()
            prices = np.array(solution.row_dual) * self._row_scale / self._cost_scale
            gains = np.array(solution.col_dual) / self._column_scale / self._cost_scale
        return LinearSolution(
            outcome, cost_of, self._fluxes, sign * prices, sign * gains, self.residual
        )

    def _bounds(self) -> tuple[Pair, Pair]:
        return (self._row_low, self._row_high), (self._column_low, self._column_high)

    def _set_method(self, strategy: int, tolerance: float) -> None:
        self._highs.setOptionValue("simplex_strategy", strategy)
        self._highs.setOptionValue("primal_feasibility_tolerance", tolerance)
        self._highs.setOptionValue("dual_feasibility_tolerance", tolerance)

    def _attempt(self) -> tuple[Outcome, bool]:
        """What the solver says, and whether that is sure."""
        self._highs.run()
        outcome = _MEANINGS.get(self._highs.getModelStatus().name, Outcome.FAILED)
        problem, bounds = self.problem, self._bounds()
        if outcome is Outcome.INFEASIBLE:
            weights = self.dual_ray()
            return outcome, weights is not None and is_contradiction(
                self._entries, weights, *bounds
            )
        if outcome is Outcome.UNBOUNDED:
            ray = self.primal_ray()
            if ray is None:  # it has none for a problem without rows
                return outcome, not problem.rows
            gain = float(self._costs @ (ray / self._column_scale))
            return outcome, gain < 0 and is_ray(self._entries, ray, *bounds)
        if outcome is Outcome.OPTIMAL:
            self._fluxes = np.array(self._highs.getSolution().col_value) * self._column_scale
            self.residual = violation_of(self._entries, self._fluxes, *bounds)
            doubtful = self._is_spread and not self.is_exact
            return outcome, self.residual < 1e-7 and (not doubtful or self._is_best())
        return outcome, False

    def _ask_exactly(self) -> bool:
        """Whether exact pivots from the solver's basis lead to an answer."""
        costs = self._costs / self._column_scale / self._cost_scale
        self._found = found = self._exactly.solve(costs, self.places())
        if found is not None:
            self._fluxes = np.array([float(v) for v in found.fluxes])
            self.residual = violation_of(self._entries, self._fluxes, *self._bounds())
        return found is not None

    def _is_best(self) -> bool:
        """Whether the solver's basis is the best, in exact arithmetic."""
        from fluxnet.exact.simplex import Place

        places = np.array(self.places())
        open_ = np.append(self._column_low < self._column_high, self._row_low < self._row_high)
        rise = open_ & ((places == Place.LOW) | (places == Place.FREE))
        fall = open_ & ((places == Place.HIGH) | (places == Place.FREE))
        costs = self._costs / self._column_scale
        return is_best(self.problem.matrix, costs, Basis(places == Place.BASIC, rise, fall))

    @staticmethod
    def _refuse_nan(*values: float | Vector) -> None:
        if any(np.isnan(value).any() for value in values):
            raise MisuseError("NaN is no bound and no cost")
