"""Linear programmes on a warm model: costs and bounds change, the model is never built again.

The only user of highspy (imported when the first programme is made).
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import Enum
from typing import Any

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.solving.problem import Problem

__all__ = ["LinearSolution", "Outcome", "Programme", "worst_violation"]

Vector = NDArray[np.float64]

TOLERANCE = 1e-9
"""How far the solver may leave a bound or a price, in the units of the problem."""


class Outcome(Enum):
    """How a solve ended. ``FAILED``: the solver gave up; nothing may be concluded."""

    OPTIMAL = "optimal"
    INFEASIBLE = "infeasible"
    UNBOUNDED = "unbounded"
    FAILED = "failed"


@dataclass(frozen=True, slots=True)
class LinearSolution:
    """The end of one solve.

    ``objective`` is NaN-free: the optimum, or ±inf where there is none. ``fluxes``,
    ``row_prices`` and ``column_prices`` are zero unless the outcome is OPTIMAL. A price is the
    change of the objective per unit by which the bound that holds the row (or column) is
    raised, whether one minimises or maximises: cost = A' row_prices + column_prices.
    ``residual`` is the worst violation of a bound or balance, as recomputed by
    :func:`worst_violation`.
    """

    outcome: Outcome
    objective: float
    fluxes: Vector
    row_prices: Vector
    column_prices: Vector
    residual: float


def worst_violation(problem: Problem, fluxes: Vector) -> float:
    """How far fluxes leave the bounds of a problem, relative to what is added up.

    The violation of each row is divided by the larger of 1 and the sum of the absolute values
    of its terms (never by their signed sum), that of a column by the larger of 1 and the
    flux itself.

    Returns
    -------
    float
        0 where nothing is violated.
    """
    return _violation(
        problem.matrix, np.abs(problem.matrix), fluxes,
        (problem.row_low, problem.row_high), (problem.column_low, problem.column_high),
    )


class Programme:
    """A warm linear programme: the one mutable object of the package.

    It starts with the bounds of a problem and remembers the last basis, so that a change of
    the costs or of a bound is a few pivots. Presolve is off: a warm start needs the whole
    model, and rays exist only there. Nothing is written anywhere.

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

    def __init__(self, problem: Problem) -> None:
        self.problem = problem
        self.outcome = Outcome.FAILED
        self._row_low, self._row_high = problem.row_low.copy(), problem.row_high.copy()
        self._column_low = problem.column_low.copy()
        self._column_high = problem.column_high.copy()
        self._sizes = np.abs(problem.matrix)
        self._costs = np.zeros(len(problem.columns))
        self._row_scale, self._column_scale = _scales(self._sizes)
        self._highs, self._meanings = self._load()

    # --- changes ---------------------------------------------------------------------

    def set_row_bounds(self, i: int, low: float, high: float) -> None:
        """Give row ``i`` other bounds; infinities lift them."""
        self._refuse_nan(low, high)
        self._row_low[i], self._row_high[i] = low, high
        scale = self._row_scale[i]
        self._highs.changeRowBounds(i, low * scale, high * scale)

    def set_column_bounds(self, j: int, low: float, high: float) -> None:
        """Give the flux of column ``j`` other bounds; infinities lift them."""
        self._refuse_nan(low, high)
        self._column_low[j], self._column_high[j] = low, high
        scale = self._column_scale[j]
        self._highs.changeColBounds(j, low / scale, high / scale)

    def set_costs(self, costs: Vector) -> None:
        """Give every flux its cost per unit, to be minimised by :meth:`run`."""
        costs = np.asarray(costs, dtype=np.float64)
        if costs.shape != self._costs.shape:
            raise MisuseError("one cost is needed for each column")
        self._refuse_nan(costs)
        changed = np.flatnonzero(costs != self._costs)
        self._costs[changed] = costs[changed]
        scaled = costs[changed] * self._column_scale[changed]
        self._highs.changeColsCost(len(changed), changed.astype(np.int32), scaled)

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

        "Infeasible" and a failure are confirmed from a cold start before they are believed.
        """
        outcome = self._attempt()
        if outcome in (Outcome.INFEASIBLE, Outcome.FAILED):
            self._highs.clearSolver()
            outcome = self._attempt()
        self.outcome = outcome
        return outcome

    def value(self) -> float:
        """The cost of the last optimum."""
        return float(self._highs.getInfo().objective_function_value)

    def fluxes(self) -> Vector:
        """The fluxes of the last optimum."""
        return np.array(self._highs.getSolution().col_value) * self._column_scale

    def violation(self, fluxes: Vector) -> float:
        """:func:`worst_violation` by the bounds as they stand now."""
        return _violation(
            self.problem.matrix, self._sizes, fluxes,
            (self._row_low, self._row_high), (self._column_low, self._column_high),
        )

    def dual_ray(self) -> Vector | None:
        """After INFEASIBLE: weights of the rows whose sum no fluxes can meet (Farkas)."""
        _, exists, ray = self._highs.getDualRay()
        return np.array(ray) * self._row_scale if exists else None

    def primal_ray(self) -> Vector | None:
        """After UNBOUNDED: a direction of the fluxes that can be followed for ever."""
        _, exists, ray = self._highs.getPrimalRay()
        return np.array(ray) * self._column_scale if exists else None

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
        solution = self._highs.getSolution()
        fluxes = np.array(solution.col_value) * self._column_scale
        return LinearSolution(
            outcome,
            float(cost @ fluxes),
            fluxes,
            sign * np.array(solution.row_dual) * self._row_scale,
            sign * np.array(solution.col_dual) / self._column_scale,
            self.violation(fluxes),
        )

    def _attempt(self) -> Outcome:
        self._highs.run()
        return self._meanings.get(self._highs.getModelStatus(), Outcome.FAILED)

    def _load(self) -> tuple[Any, dict[Any, Outcome]]:
        """The solver's model, and what its statuses mean (highspy has no types to lean on)."""
        import highspy

        status = highspy.HighsModelStatus
        meanings = {
            status.kOptimal: Outcome.OPTIMAL,
            status.kModelEmpty: Outcome.OPTIMAL,
            status.kInfeasible: Outcome.INFEASIBLE,
            status.kUnbounded: Outcome.UNBOUNDED,
        }
        problem = self.problem
        rows, columns = problem.matrix.shape
        make: Any = highspy.Highs
        highs = make()
        for option, value in (
            ("output_flag", False),
            ("presolve", "off"),
            ("solver", "simplex"),
            ("simplex_strategy", 0),
            ("threads", 1),
            ("primal_feasibility_tolerance", TOLERANCE),
            ("dual_feasibility_tolerance", TOLERANCE),
            ("small_matrix_value", 1e-12),
        ):
            highs.setOptionValue(option, value)
        scaled = problem.matrix * self._row_scale[:, None] * self._column_scale
        place_row, place_column = np.nonzero(scaled)
        model = highspy.HighsLp()
        model.num_row_, model.num_col_ = rows, columns
        model.col_cost_ = self._costs
        model.col_lower_ = self._column_low / self._column_scale
        model.col_upper_ = self._column_high / self._column_scale
        model.row_lower_ = self._row_low * self._row_scale
        model.row_upper_ = self._row_high * self._row_scale
        model.a_matrix_.format_ = highspy.MatrixFormat.kRowwise
        model.a_matrix_.start_ = np.searchsorted(place_row, np.arange(rows + 1)).astype(np.int32)
        model.a_matrix_.index_ = place_column.astype(np.int32)
        model.a_matrix_.value_ = scaled[place_row, place_column]
        if highs.passModel(model) is highspy.HighsStatus.kError:
            raise MisuseError("the problem is beyond what a linear programme can hold")
        return highs, meanings

    @staticmethod
    def _refuse_nan(*values: float | Vector) -> None:
        if any(np.isnan(value).any() for value in values):
            raise MisuseError("NaN is no bound and no cost")


def _scales(sizes: Vector) -> tuple[Vector, Vector]:
    """Powers of two for rows and columns that bring a badly spread matrix together.

    Powers of two change no digit. A matrix of ordinary coefficients is left alone.
    """
    rows, columns = np.ones(sizes.shape[0]), np.ones(sizes.shape[1])
    used = sizes > 0
    if not used.any() or sizes[used].max() / sizes[used].min() < 1e4:
        return rows, columns
    logs = np.where(used, np.log2(np.where(used, sizes, 1.0)), 0.0)
    in_row, in_column = np.maximum(used.sum(1), 1), np.maximum(used.sum(0), 1)
    r, c = np.zeros(len(rows)), np.zeros(len(columns))
    for _ in range(10):
        r = -((logs + c * used).sum(1)) / in_row
        c = -((logs + r[:, None] * used).sum(0)) / in_column
    return np.exp2(np.round(r)), np.exp2(np.round(c))


def _violation(
    matrix: Vector,
    sizes: Vector,
    fluxes: Vector,
    rows: tuple[Vector, Vector],
    columns: tuple[Vector, Vector],
) -> float:
    values = matrix @ fluxes
    magnitude = np.maximum(1.0, sizes @ np.abs(fluxes))
    row = np.maximum(rows[0] - values, values - rows[1]) / magnitude
    column = np.maximum(columns[0] - fluxes, fluxes - columns[1])
    column = column / np.maximum(1.0, np.abs(fluxes))
    return float(max(0.0, row.max(initial=0.0), column.max(initial=0.0)))
