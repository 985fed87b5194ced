"""Routes of a cone in the order of their yield, one after another.

On the routes that take up one mol of substrate the yield is linear, and the corners of these
fluxes are the routes. So the best route is the optimum of a linear programme, proven in exact
arithmetic. Any other route lacks a reaction of each one found. A set of reactions taken out
bounds from above what routes without them yield; the most promising set is looked at first,
and split, wherever its best is a route known already, by which of that route's reactions goes
too (as in the ranking of assignments by Murty 1968, from memory).
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from fractions import Fraction
from heapq import heappop, heappush
from itertools import count

import numpy as np

from fluxnet.exact.programme import make_programme
from fluxnet.exact.simplex import End, ExactSolution, solve_from
from fluxnet.exact.sparse import SparseRow
from fluxnet.ground.record import record
from fluxnet.modes.compression import SmallCone, compress
from fluxnet.modes.cone import Cone
from fluxnet.solving.linear import Programme
from fluxnet.solving.problem import Problem, Row, RowKind

__all__ = ["Search"]

_ZERO, _ONE = Fraction(0), Fraction(1)
Fluxes = tuple[Fraction, ...]


@record
class _Node:
    """Groups taken out, as bits; a bound on the yield of what is left; its best route if known."""

    out: int
    bound: Fraction
    route: Fluxes | None = None


class Search:
    """Sets of groups of reactions taken out, the most promising first.

    Parameters
    ----------
    taken, made
        Substrate taken up, and product released, as forms of the cone's columns.

    Examples
    --------
    >>> rows = ({0: _ONE, 1: -_ONE, 2: -_ONE},)
    >>> cone = Cone(("in", "a", "b"), (False,) * 3, rows)
    >>> search = Search(cone, {0: _ONE}, {1: _ONE, 2: _ONE / 2})
    >>> [[int(v) for v in route] for route in search.routes()]
    [[1, 1, 0], [1, 0, 1]]
    """

    def __init__(self, cone: Cone, taken: SparseRow, made: SparseRow) -> None:
        self.small = compress(cone)
        self.columns = len(cone.columns)
        self.made = _by_group(self.small, made)
        taken = _by_group(self.small, taken)
        self.rows = (*_balances(self.small), taken)
        self.low = [None if group.both_ways else _ZERO for group in self.small.groups]
        self.programme = _programme(self.rows, self.low) if taken and self.made else None
        self.cost = np.array([float(self.made.get(g, 0)) for g in range(len(self.low))])
        self.waiting: list[tuple[Fraction, bool, int, _Node]] = []
        self.numbers = count()
        self.seen: set[int] = set()
        self.dead: list[int] = []
        self.solved = 0
        self.endless = False

    def routes(self) -> Iterator[Fluxes]:
        """Routes that make the product, the best first, as fluxes of the cone's columns."""
        if self.programme is None:
            return
        found: list[int] = []
        self._solve(_Node(0, _ZERO), self.programme)
        while self.waiting:
            node = heappop(self.waiting)[-1]
            known = next((support for support in found if not support & node.out), None)
            if known is not None:
                self._split(node, known)
            elif node.route is None:
                self._solve(node, self.programme)
            else:
                found.append(sum(1 << g for g, v in enumerate(node.route) if v))
                yield self._lifted(node.route)
                self._split(node, found[-1])

    def _push(self, node: _Node) -> None:
        key = (-node.bound, node.route is None, next(self.numbers))
        heappush(self.waiting, (*key, node))

    def _split(self, node: _Node, known: int) -> None:
        """One of the known route's groups goes as well."""
        for g in range(known.bit_length()):
            out = node.out | 1 << g
            if known >> g & 1 and out not in self.seen:
                self.seen.add(out)
                self._push(_Node(out, node.bound))

    def _solve(self, node: _Node, programme: Programme) -> None:
        """The best of what is left: a corner, proven exactly; nothing where none is good."""
        if any(not dead & ~node.out for dead in self.dead):
            return
        self.solved += 1
        found = self._optimum(node.out, programme)
        if found.end is End.UNBOUNDED:
            self.endless = True
            self.waiting.clear()
        elif found.end is End.OPTIMAL and found.objective < 0:
            self._push(_Node(node.out, -found.objective, found.fluxes))
        elif found.end is End.OPEN:
            raise ArithmeticError("the best of a set of routes could not be proven")
        else:
            self.dead.append(node.out)

    def _optimum(self, out: int, programme: Programme) -> ExactSolution:
        """The optimum without some groups, from the floating-point solver's basis."""
        bounds: list[tuple[Fraction | None, Fraction | None]] = []
        for g, low in enumerate(self.low):
            gone = bool(out >> g & 1)
            bounds.append((_ZERO, _ZERO) if gone else (low, None))
            least = 0.0 if low is not None or gone else -np.inf
            programme.set_column_bounds(g, least, 0.0 if gone else np.inf)
        programme.maximise(self.cost)
        rights = [(_ZERO, _ZERO)] * (len(self.rows) - 1) + [(_ONE, _ONE)]
        costs = {g: -a for g, a in self.made.items()}
        exact = make_programme(len(self.low), self.rows, rights, bounds, costs)
        return solve_from(exact, programme.places(), None)

    def _lifted(self, fluxes: Sequence[Fraction]) -> Fluxes:
        """The fluxes of the cone's own columns."""
        lifted = [_ZERO] * self.columns
        for group, flux in zip(self.small.groups, fluxes, strict=True):
            for j, factor in group.members:
                lifted[j] = factor * flux
        return tuple(lifted)


def _by_group(small: SmallCone, form: SparseRow) -> SparseRow:
    """A form of the cone's columns as one of the groups."""
    found: dict[int, Fraction] = {}
    for g, group in enumerate(small.groups):
        total = sum((form[j] * factor for j, factor in group.members if j in form), _ZERO)
        if total:
            found[g] = total
    return found


def _balances(small: SmallCone) -> tuple[SparseRow, ...]:
    """For each group that is not free its flux less that of the free ones."""
    return tuple(
        {g: _ONE, **{small.free[t]: -a for t, a in form.items()}}
        for g, form in enumerate(small.forms)
        if g not in small.free
    )


def _programme(rows: Sequence[SparseRow], low: Sequence[Fraction | None]) -> Programme:
    """The warm programme of one mol of substrate."""
    matrix = np.zeros((len(rows), len(low)))
    for i, row in enumerate(rows):
        for g, a in row.items():
            matrix[i, g] = float(a)
    right = np.zeros(len(rows))
    right[-1] = 1.0
    names = tuple(Row(RowKind.BALANCE, str(i)) for i in range(len(rows)))
    least = np.array([0.0 if end is not None else -np.inf for end in low])
    columns = tuple(str(g) for g in range(len(low)))
    return Programme(
        Problem(columns, names, matrix, right, right.copy(), least, np.full(len(low), np.inf))
    )
