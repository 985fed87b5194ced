"""The best value of one quantity as another one is moved: all break points, without a grid.

With the value x of one row held, the largest (least) y is a concave (convex) function of x, in
straight pieces: a basis stays the best until some variable meets a bound, and one dual pivot
leads to the basis of the next piece (parametric linear programming, Gass & Saaty 1955; from
memory). The path is followed in floats, from a basis of the warm solver. Then it is proven in
exact numbers (:mod:`fluxnet.solving.parametric_proof`).
"""

from __future__ import annotations

from collections.abc import Sequence
from enum import Enum
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.solving.alter import with_row
from fluxnet.solving.linear import Outcome, Programme
from fluxnet.solving.parametric_table import BasisTable
from fluxnet.solving.problem import Problem, Row, RowKind

if TYPE_CHECKING:
    from fluxnet.exact.simplex import Place
    from fluxnet.exact.sparse import SparseRow
    from fluxnet.solving.parametric_proof import Break

__all__ = ["Extreme", "Path", "PathEnd", "Piece", "follow", "trace"]

Vector = NDArray[np.float64]

_SAME = 1e-9
_PIVOTS = 20
"""So many pivots a row and column are far more than any path needs; Bland's rule ends each
crowded corner by itself, but for rounding."""


class Extreme(Enum):
    """Which end of y is followed."""

    MOST = "most"
    LEAST = "least"

    @property
    def sign(self) -> int:
        """The sign that makes a cost of it."""
        return -1 if self is Extreme.MOST else 1


class PathEnd(Enum):
    """How the search for a path ended.

    ``POINT``: x has a single value. ``X_ENDLESS``, ``Y_ENDLESS``: one has no end, and no bound
    was given. ``INFEASIBLE``: no fluxes meet all bounds.
    """

    TRACED = "traced"
    POINT = "point"
    X_ENDLESS = "x endless"
    Y_ENDLESS = "y endless"
    INFEASIBLE = "infeasible"


@record
class Piece:
    """A straight piece: y at its two ends, its slope, and the bases that it passes through.

    ``first`` and ``last`` are the places (fluxes, then rows, then the moved row; numbers of
    :class:`fluxnet.exact.simplex.Place`) where it begins and where it ends.
    """

    start: float
    stop: float
    y_start: float
    slope: float
    first: tuple[int, ...]
    last: tuple[int, ...]


@record
class Path:
    """The pieces from the least to the most x, in floats.

    ``low_places`` and ``high_places`` are the bases of the least and the most x (None where
    that end was given). A single point has one piece without length. ``upwards`` tells at
    which end of it x or y is endless. ``problem`` has the moved row as its last.
    """

    end: PathEnd
    problem: Problem
    extreme: Extreme
    pieces: tuple[Piece, ...] = ()
    low_places: tuple[Place, ...] | None = None
    high_places: tuple[Place, ...] | None = None
    upwards: bool = True

    @property
    def points(self) -> tuple[tuple[float, float], ...]:
        """The break points (x, y), both ends among them."""
        found = [(p.start, p.y_start) for p in self.pieces]
        if self.pieces and self.end is PathEnd.TRACED:
            last = self.pieces[-1]
            found.append((last.stop, last.y_start + last.slope * (last.stop - last.start)))
        return tuple(found)


def follow(
    problem: Problem,
    along: Vector,
    cost: Vector,
    extreme: Extreme,
    low: float | None = None,
    high: float | None = None,
) -> Path:
    """Follow the best y from the least to the most x, in floats.

    Parameters
    ----------
    problem
        What the fluxes must meet.
    along, cost
        x and y as rows over the fluxes.
    low, high
        The part of x that is asked for; else all that the bounds allow.

    Raises
    ------
    ArithmeticError
        Where the solver could not tell, or the pivots have no end.

    Examples
    --------
    >>> rows = (Row(RowKind.LIMIT, "limit a <= 2"), Row(RowKind.LIMIT, "limit a + b <= 3"))
    >>> problem = Problem(("a", "b"), rows, np.array([[1.0, 0.0], [1.0, 1.0]]),
    ...     np.full(2, -np.inf), np.array([2.0, 3.0]), np.zeros(2), np.full(2, np.inf))
    >>> follow(problem, np.array([0.0, 1.0]), np.array([1.0, 0.0]), Extreme.MOST).points
    ((0.0, 2.0), (1.0, 2.0), (3.0, 0.0))
    """
    held = with_row(problem, Row(RowKind.LIMIT, "the moved quantity"), along, -np.inf, np.inf)
    programme = Programme(held)
    frame = Path(PathEnd.INFEASIBLE, held, extreme)
    ends: list[float] = []
    bases: list[tuple[Place, ...] | None] = []
    for sign, given in ((1, low), (-1, high)):
        found = programme.minimise(sign * along)
        if found.outcome is Outcome.INFEASIBLE:
            return frame
        if found.outcome is Outcome.FAILED:
            raise ArithmeticError("the solver could not tell how far the quantity reaches")
        reach = found.objective  # the least, or minus the most
        limit = -np.inf if given is None else sign * given
        if np.isinf(reach) and np.isinf(limit):
            return Path(PathEnd.X_ENDLESS, held, extreme, upwards=sign < 0)
        bases.append(programme.places() if reach >= limit else None)
        ends.append(sign * max(reach, limit))
    start, stop = ends
    near = _SAME * max(1.0, abs(start), abs(stop))
    if start > stop + near:
        return frame
    moved = len(held.rows) - 1
    programme.set_row_bounds(moved, start, start)
    best = programme.minimise(extreme.sign * cost)
    if best.outcome is Outcome.UNBOUNDED:
        return Path(PathEnd.Y_ENDLESS, held, extreme, upwards=extreme is Extreme.MOST)
    if best.outcome is not Outcome.OPTIMAL:
        raise ArithmeticError("the solver could not tell what is best at the end of the range")
    places = programme.places()
    pieces: tuple[Piece, ...] = ()
    if stop > start + near:
        table = BasisTable(held, extreme.sign * cost, moved, places, start)
        pieces = _pieces(table, start, stop, extreme.sign)
    end = PathEnd.TRACED if pieces else PathEnd.POINT
    if not pieces:
        y = extreme.sign * best.objective + 0.0
        pieces = (Piece(start, start, y, 0.0, places, places),)
    return Path(end, held, extreme, pieces, low_places=bases[0], high_places=bases[1])


def _pieces(table: BasisTable, start: float, stop: float, sign: int) -> tuple[Piece, ...]:
    """From basis to basis; those of one slope are one piece."""
    pieces: list[Piece] = []
    if not table.enter_moved():
        return ()
    at, most = start, _PIVOTS * len(table.places)
    for _ in range(most):
        passed = table.stopped()
        if passed is not None:
            if not table.leave(passed[0], upwards=passed[1]):
                break
            continue
        column = table.column
        assert column is not None
        slope = sign * float(table.worth[column]) + 0.0
        step = min(table.room(), stop - at)
        _add(pieces, at, at + step, sign * table.cost + 0.0, slope, table.places)
        if at + step >= stop:
            break
        table.rise(step)
        at += step
    else:
        raise ArithmeticError(f"no end of the frontier was found in {most} pivots")
    return tuple(pieces)


def _add(
    pieces: list[Piece], start: float, stop: float, y: float, slope: float, held: NDArray[np.int_]
) -> None:
    places = tuple(held.tolist())
    before = pieces[-1] if pieces else None
    if before is not None and abs(before.slope - slope) <= _SAME * max(1.0, abs(slope)):
        pieces[-1] = Piece(before.start, stop, before.y_start, before.slope, before.first, places)
        return
    pieces.append(Piece(start, stop, y, slope, places, places))


def trace(
    problem: Problem,
    along: Vector,
    cost: Vector,
    extreme: Extreme,
    low: float | None = None,
    high: float | None = None,
    *,
    rows: Sequence[SparseRow] | None = None,
    exact_along: SparseRow | None = None,
    exact_cost: SparseRow | None = None,
) -> tuple[Break, ...]:
    """The break points of the best y over x, each proven in exact arithmetic.

    Parameters
    ----------
    problem, along, cost, low, high
        As for :func:`follow`.
    rows, exact_along, exact_cost
        The problem's rows, x and y from the decimals as written
        (:func:`fluxnet.solving.proof.exact_sums`); else those that the floats stand for.

    Returns
    -------
    tuple of Break
        From the least to the most x; none where there is no curve (:attr:`Path.end` of
        :func:`follow` tells why).

    Examples
    --------
    >>> rows = (Row(RowKind.LIMIT, "limit a <= 2"), Row(RowKind.LIMIT, "limit a + 3 b <= 3"))
    >>> problem = Problem(("a", "b"), rows, np.array([[1.0, 0.0], [1.0, 3.0]]),
    ...     np.full(2, -np.inf), np.array([2.0, 3.0]), np.zeros(2), np.full(2, np.inf))
    >>> found = trace(problem, np.array([0.0, 1.0]), np.array([1.0, 0.0]), Extreme.MOST)
    >>> [(str(b.exact.x), str(b.exact.y), b.slope_after) for b in found]
    [('0', '2', 0.0), ('1/3', '2', -3.0), ('1', '0', None)]
    """
    from fluxnet.solving.parametric_proof import prove_path

    path = follow(problem, along, cost, extreme, low, high)
    if not path.pieces:
        return ()
    return prove_path(path, rows, exact_along, exact_cost, along, cost, low, high).breaks
