"""The least change of the measured values that lets them hold together with the hard part."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.network.model import Quantity, QuantityKind
from fluxnet.solving.alter import hard_part
from fluxnet.solving.linear import Outcome, Programme
from fluxnet.solving.problem import Problem, Row, RowKind
from fluxnet.solving.quadratic import solve_quadratic
from fluxnet.solving.scaling import median_of
from fluxnet.solving.violations import same_way

__all__ = ["Change", "LeastChange", "least_change", "quantity_in"]

Vector = NDArray[np.float64]
_PASSES = 30
_STEEP = 1e6
_ROUNDING = 1e-9


@record
class Change:
    """One measured value and what it would have to be.

    Both in the quantity's own unit and direction (a ratio's as a ratio); ``in_sd`` is the
    signed change in its own sds.
    """

    name: str
    quantity: Quantity
    measured: float
    changed: float
    in_sd: float


@record
class LeastChange:
    """The least change, or ``possible`` False: no change of measured values helps.

    ``changes`` has every measured value with an sd, in the order of the rows; ``total`` is the
    sum of (change/sd)^2; ``common_k`` the smallest number of sd within which all measured
    values can hold together. Both are None where it is not possible.
    """

    possible: bool
    changes: tuple[Change, ...]
    total: float | None
    common_k: float | None


def least_change(problem: Problem) -> LeastChange:
    """The smallest change of measured values that meets everything else.

    min sum ((A v - y) / sd)^2 over the measured rows, subject to all other bounds; limits and
    exact values do not give way. Bounds on measured rows (within K sd) are lifted. A measured
    ratio counts as the ratio it is: Gauss-Newton, of at most 30 passes the best.

    Returns
    -------
    LeastChange

    Raises
    ------
    ArithmeticError
        Where a solver failed.
    """
    hard = hard_part(problem)
    if not Programme(hard).is_feasible():
        return LeastChange(False, (), None, None)
    soft = _soft_rows(problem)
    if not soft.values.size:
        return LeastChange(True, (), 0.0, 0.0)
    total, fluxes = _least_squares(hard, soft)
    changes = _changes(problem, soft, fluxes)
    enough = max(abs(change.in_sd) for change in changes)
    return LeastChange(True, changes, total, _common_k(hard, soft, enough))


def _least_squares(hard: Problem, soft: _Soft) -> tuple[float, Vector]:
    """The smallest sum of squares, and the fluxes that have it."""
    matrix, count = hard.matrix, len(hard.columns)
    bounded = np.isfinite(hard.row_low) | np.isfinite(hard.row_high)
    rows = np.vstack([matrix[bounded], np.eye(count)])
    low = np.append(hard.row_low[bounded], hard.column_low)
    high = np.append(hard.row_high[bounded], hard.column_high)
    pieces = (soft.rows, soft.values, soft.sds)
    best, least, total = np.zeros(count), np.inf, np.inf
    usual = 0.0
    unit = median_of(soft.sds)  # tiny sds would make weights beyond the solver's tolerances
    for _ in range(_PASSES):
        sds = pieces[2] / unit
        weighted, target = pieces[0] / sds[:, None], pieces[1] / sds
        steepness = float(np.abs(weighted).max(initial=0.0))
        if steepness > _STEEP * (usual := usual or steepness):
            break  # the denominator of a ratio goes to nothing: no step tells more
        answer = solve_quadratic(
            weighted.T @ weighted, -weighted.T @ target, rows, low, high
        )
        if answer.x is None:
            raise ArithmeticError(f"the least change could not be found: {answer.outcome.value}")
        before, total = total, float((soft.in_sds(answer.x) ** 2).sum())
        if total <= least:
            best, least = answer.x, total
        if not soft.below or abs(before - total) <= 1e-11 * (1 + total):
            break
        pieces = soft.linearised(answer.x)
    return least, best


def _common_k(hard: Problem, soft: _Soft, enough: float) -> float:
    """The smallest K within which all hold: one programme, or bisection where ratios take part.

    ``enough`` is a K that is known to do.
    """
    if not soft.below:
        count, width = len(soft.values), len(hard.columns)
        rows = tuple(Row(RowKind.MEASUREMENT, str(i)) for i in range(2 * count))
        both = np.vstack([soft.rows, soft.rows])
        slack = np.append(soft.sds, -soft.sds)
        problem = Problem(
            columns=(*hard.columns, "K"),
            rows=hard.rows + rows,
            matrix=np.vstack(
                [
                    np.hstack([hard.matrix, np.zeros((len(hard.rows), 1))]),
                    np.hstack([both, slack[:, None]]),
                ]
            ),
            row_low=np.concatenate(
                [hard.row_low, soft.values, np.full(count, -np.inf)]
            ),
            row_high=np.concatenate(
                [hard.row_high, np.full(count, np.inf), soft.values]
            ),
            column_low=np.append(hard.column_low, 0.0),
            column_high=np.append(hard.column_high, np.inf),
        )
        solution = Programme(problem).minimise(np.append(np.zeros(width), 1.0))
        if solution.outcome is not Outcome.OPTIMAL:
            raise ArithmeticError("the smallest common number of sd could not be found")
        return max(0.0, solution.objective)
    low, high = 0.0, enough
    if soft.holds_within(hard, 0.0):
        return 0.0
    while high - low > 1e-10 * max(1.0, high):
        middle = (low + high) / 2
        if soft.holds_within(hard, middle):
            high = middle
        else:
            low = middle
    return high


@record
class _Soft:
    """The measured rows.

    ``own`` are the sds of the quantities themselves, ``ratios`` the ratios as measured (NaN for
    other quantities); ``below`` holds the row of each ratio's denominator, by place.
    """

    rows: Vector
    values: Vector
    sds: Vector
    own: Vector
    ratios: Vector
    below: dict[int, Vector]

    def values_at(self, fluxes: Vector) -> Vector:
        """The quantities' own values: of a ratio A / B, not of its row A - r B."""
        values: Vector = self.rows @ fluxes
        for k, row in self.below.items():
            under = self._under(row, fluxes)
            values[k] = self.ratios[k] + (values[k] / under if under else 0.0)
        return values

    def in_sds(self, fluxes: Vector) -> Vector:
        """The change of each measured value in its own sds."""
        changes: Vector = (self.values_at(fluxes) - self.measured) / self.own
        return changes

    @property
    def measured(self) -> Vector:
        """The quantities' measured values."""
        return np.where(np.isnan(self.ratios), self.values, self.ratios)

    def linearised(self, fluxes: Vector) -> tuple[Vector, Vector, Vector]:
        """Rows, values and sds that stand for the quantities around some fluxes.

        A / B is about (A - R B) / B0 + R with R = A0 / B0.
        """
        rows, values, sds = self.rows.copy(), self.values.copy(), self.sds.copy()
        now = self.values_at(fluxes)
        for k, row in self.below.items():
            under = self._under(row, fluxes)
            if under:
                rows[k] = rows[k] + (self.ratios[k] - now[k]) * row
                values[k] = (self.ratios[k] - now[k]) * under
                sds[k] = self.own[k] * abs(under)
        return rows, values, sds

    def _under(self, row: Vector, fluxes: Vector) -> float:
        """The value of a denominator, 0 where it is the rounding of what it is found with."""
        total = float(row @ fluxes)
        size = float(np.abs(row) @ np.abs(fluxes) + np.abs(fluxes).max(initial=0.0))
        return total if abs(total) > _ROUNDING * (size + np.abs(self.values).max()) else 0.0

    def holds_within(self, hard: Problem, k: float) -> bool:
        """Whether all can hold within k sd; a ratio's bounds are exact, not linearised."""
        matrix, low, high = self.rows.copy(), self.values - k * self.sds, self.values + k * self.sds
        extra = []
        for place, row in self.below.items():
            half = k * self.own[place]
            extra.append(matrix[place] + half * row)
            matrix[place] = matrix[place] - half * row
            low[place], high[place] = -np.inf, 0.0
        more = len(extra)
        names = tuple(
            Row(RowKind.MEASUREMENT, str(i)) for i in range(len(self.values) + more)
        )
        problem = replace(
            hard,
            rows=hard.rows + names,
            matrix=np.vstack([hard.matrix, matrix, *extra]),
            row_low=np.concatenate([hard.row_low, low, np.zeros(more)]),
            row_high=np.concatenate([hard.row_high, high, np.full(more, np.inf)]),
        )
        return Programme(problem).is_feasible()


def _soft_rows(problem: Problem) -> _Soft:
    places = [i for i, row in enumerate(problem.rows) if row.sd is not None and row.sd > 0]
    below: dict[int, Vector] = {}
    for k, i in enumerate(places):
        quantity = problem.rows[i].quantity
        if quantity is not None and quantity.denominator is not None:
            row = quantity_in(problem, quantity.denominator)
            if row is not None:
                below[k] = row / problem.rows[i].per_mole
    rows = [problem.rows[i] for i in places]
    sds = np.array([row.sd for row in rows], dtype=np.float64)
    sizes = np.array([row.denominator or 1.0 for row in rows])
    values = np.array([row.value for row in rows], dtype=np.float64)
    ratios = np.array(
        [np.nan if row.ratio is None or k not in below else row.ratio for k, row in enumerate(rows)]
    )
    own = np.where(np.isnan(ratios), sds, sds / sizes)
    return _Soft(problem.matrix[places], values, sds, own, ratios, below)


def quantity_in(problem: Problem, quantity: Quantity) -> Vector | None:
    """The row of a quantity that the problem itself holds, in any direction."""
    if quantity.kind is QuantityKind.FLUX:
        row = np.zeros(len(problem.columns))
        row[problem.column(quantity.name)] = 1.0
        return row
    for i, label in enumerate(problem.rows):
        sign = same_way(quantity, label.quantity) if label.quantity is not None else 0
        if sign:
            found: Vector = sign * problem.matrix[i]
            return found
    return None


def _changes(problem: Problem, soft: _Soft, fluxes: Vector) -> tuple[Change, ...]:
    labels = [row for row in problem.rows if row.sd is not None and row.sd > 0]
    now, in_sds = soft.values_at(fluxes), soft.in_sds(fluxes)
    return tuple(
        Change(label.name, label.quantity, float(was), _rounded(new, own), float(sds))
        for label, was, new, sds, own in zip(
            labels, soft.measured, now, in_sds, soft.own, strict=True
        )
        if label.quantity is not None
    )


def _rounded(value: float, sd: float) -> float:
    """The value, 0 where it is nothing beside its sd."""
    return float(value) if abs(value) > _ROUNDING * sd else 0.0
