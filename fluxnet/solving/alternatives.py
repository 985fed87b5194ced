"""Which limit or measured value could give way alone, and by how much."""

from __future__ import annotations

from collections.abc import Iterable

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.network.model import Quantity
from fluxnet.solving.alter import without_bounds
from fluxnet.solving.least_change import quantity_in
from fluxnet.solving.linear import Outcome, Programme
from fluxnet.solving.members import Member
from fluxnet.solving.problem import Problem, Row, RowKind

__all__ = ["Alternative", "find_alternatives"]

Vector = NDArray[np.float64]


@record
class Alternative:
    """A member that mends everything by itself, where all others stand.

    The ``quantity`` would have to be at most ``needed`` (``is_ceiling``) or at least; a ratio's
    value is the ratio. ``stated`` is the measured value, or the bound of a limit that is in
    the way; ``in_sd`` the change in sds of a measured value (None without an sd).
    """

    member: Member
    quantity: Quantity
    is_ceiling: bool
    needed: float
    stated: float
    in_sd: float | None

    @property
    def ease(self) -> tuple[bool, float]:
        """A key to sort by: the fewest sds first, what has none behind."""
        return self.in_sd is None, abs(self.in_sd or 0.0)


def find_alternatives(problem: Problem, members: Iterable[Member]) -> tuple[Alternative, ...]:
    """Each of some members that could give way alone, by as little as is possible.

    All else holds as it stands, in the whole problem: a member is left out where others still
    contradict one another without it. The order is the members'.

    Examples
    --------
    >>> from fluxnet.network.model import QuantityKind
    >>> from fluxnet.solving.conflict import find_conflict
    >>> a, b = (Quantity(QuantityKind.FLUX, name) for name in "ab")
    >>> rows = (Row(RowKind.LIMIT, "limit a <= 1", a), Row(RowKind.LIMIT, "limit b >= 3", b),
    ...     Row(RowKind.BALANCE, "s"))
    >>> problem = Problem(("a", "b"), rows, np.array([[1.0, 0], [0, 1], [2, -1]]),
    ...     np.array([-np.inf, 3, 0]), np.array([1, np.inf, 0]), np.zeros(2), np.full(2, np.inf))
    >>> [(str(x.quantity), x.is_ceiling, x.needed)
    ...     for x in find_alternatives(problem, find_conflict(problem).given)]
    [('flux a', False, 1.5), ('flux b', True, 2.0)]
    """
    found = (_alternative(problem, member) for member in members if member.rows)
    return tuple(one for one in found if one is not None)


def _alternative(problem: Problem, member: Member) -> Alternative | None:
    own = [i for i, row in enumerate(problem.rows) if _is_of(row, member)]
    rest = without_bounds(problem, own)
    programme = Programme(rest)
    if not programme.is_feasible():
        return None
    label = next((problem.rows[i] for i in own if problem.rows[i].sd is not None), None)
    place = member.rows[0]
    row = label or problem.rows[place]
    quantity = row.quantity
    if quantity is None:
        return None
    if row.ratio is not None:
        span = _ratio_span(problem, rest, place)
    else:
        span = _span(programme, problem.matrix[place])
    low, high = _bounds(problem, own, row)
    if span is None:
        return None
    is_ceiling = span[1] < low
    if not is_ceiling and span[0] <= high:
        return None
    needed = span[1] if is_ceiling else span[0]
    stated, sd = _stated(row)
    if stated is None:
        stated = low if is_ceiling else high
    in_sd = (needed - stated) / sd if sd else None
    return Alternative(member, quantity, is_ceiling, needed, stated, in_sd)


def _is_of(row: Row, member: Member) -> bool:
    same = row.name == member.name and row.span == member.span
    return same and row.kind.value == member.kind.value


def _stated(row: Row) -> tuple[float | None, float | None]:
    """The value and sd of a measured quantity: of a ratio, the ratio's own."""
    if row.sd is None:
        return None, None
    if row.ratio is not None:
        return row.ratio, row.sd / (row.denominator or 1.0)
    return row.value, row.sd


def _bounds(problem: Problem, own: list[int], row: Row) -> tuple[float, float]:
    """The ends between which the member holds its quantity."""
    if row.ratio is None:
        lows, highs = problem.row_low[own], problem.row_high[own]
        return float(lows.max()), float(highs.min())
    low, high = -np.inf, np.inf
    for i in own:
        ratio = problem.rows[i].ratio
        if ratio is not None and np.isfinite(problem.row_low[i]):
            low = max(low, ratio)
        if ratio is not None and np.isfinite(problem.row_high[i]):
            high = min(high, ratio)
    return low, high


def _span(programme: Programme, row: Vector) -> tuple[float, float] | None:
    """The ends of a linear quantity over all that is feasible."""
    least, most = programme.minimise(row), programme.maximise(row)
    if Outcome.FAILED in (least.outcome, most.outcome):
        return None
    return least.objective, most.objective


def _ratio_span(problem: Problem, rest: Problem, place: int) -> tuple[float, float] | None:
    """The ends of a ratio over all that is feasible; None where its denominator has no row.

    With w = t v and t = 1 / denominator it is linear: bounds are multiplied by t, and the
    denominator of w is 1 (Charnes & Cooper 1962, from memory).
    """
    label = problem.rows[place]
    below = label.quantity.denominator if label.quantity is not None else None
    under = quantity_in(problem, below) if below is not None else None
    if under is None or label.ratio is None:
        return None
    under = under / label.per_mole
    above = problem.matrix[place] + label.ratio * under
    programme = Programme(_per_denominator(rest, under))
    return _span(programme, np.append(above, 0.0))


def _per_denominator(problem: Problem, under: Vector) -> Problem:
    """The problem for w = t v, with the column t behind the others, and the denominator at 1."""
    columns = np.eye(len(problem.columns))
    both = np.vstack([problem.matrix, columns])
    lows = np.append(problem.row_low, problem.column_low)
    highs = np.append(problem.row_high, problem.column_high)
    parts = [
        np.hstack([sign * both[kept], -sign * ends[kept, None]])
        for sign, ends, kept in ((1, lows, np.isfinite(lows)), (-1, highs, np.isfinite(highs)))
    ]
    matrix = np.vstack([*parts, np.append(under, 0.0)])
    count = len(matrix)
    return Problem(
        columns=(*problem.columns, "1 / denominator"),
        rows=tuple(Row(RowKind.LIMIT, str(i)) for i in range(count)),
        matrix=matrix,
        row_low=np.append(np.zeros(count - 1), 1.0),
        row_high=np.append(np.full(count - 1, np.inf), 1.0),
        column_low=np.append(np.full(len(problem.columns), -np.inf), 0.0),
        column_high=np.full(len(problem.columns) + 1, np.inf),
    )
