"""Of all irreducible sets that hold the same thing in conflict, the one that leaves it least."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from fluxnet.solving.alter import without_bounds
from fluxnet.solving.alternatives import Alternative
from fluxnet.solving.conflict import Conflict, is_irreducible
from fluxnet.solving.linear import Outcome, Programme
from fluxnet.solving.members import list_members
from fluxnet.solving.problem import Problem

__all__ = ["tightest_conflict"]

_ROUNDING = 1e-9


def tightest_conflict(
    problem: Problem, conflict: Conflict, ways: Sequence[Alternative], unit: str = ""
) -> Conflict:
    """The conflict whose members alone hold the easiest way out to what it would have to be.

    A thing that mends everything by giving way alone is in each irreducible set. The optimum of
    its quantity without it has multipliers, a corner of the dual programme; what they weigh is
    irreducible with it (Gleeson and Ryan 1990, from memory), and no other set proves more of it.

    Parameters
    ----------
    conflict
        One of the problem; it is returned where no other set could be verified.
    ways
        Those of :func:`fluxnet.solving.alternatives.find_alternatives`, of the same problem; ratios
        are passed over.

    Examples
    --------
    >>> from fluxnet.network.model import Quantity, QuantityKind
    >>> from fluxnet.solving.alternatives import find_alternatives
    >>> from fluxnet.solving.conflict import find_conflict
    >>> from fluxnet.solving.problem import Row, RowKind
    >>> b = Quantity(QuantityKind.FLUX, "b")
    >>> texts = ("limit b >= 3", "limit b - a <= 2.5", "limit a + b <= 2")
    >>> rows = tuple(Row(RowKind.LIMIT, text, b) for text in texts)
    >>> problem = Problem(("a", "b"), rows, np.array([[0.0, 1], [-1, 1], [1, 1]]),
    ...     np.array([3, -np.inf, -np.inf]), np.array([np.inf, 2.5, 2]), np.zeros(2),
    ...     np.array([0.25, np.inf]))
    >>> conflict = find_conflict(problem)
    >>> ways = find_alternatives(problem, conflict.given[:1])
    >>> ways[0].needed, [m.words for m in tightest_conflict(problem, conflict, ways).members]
    (2.0, ['limit b >= 3', 'limit a + b <= 2', 'flux a is at least 0 and at most 0.25'])
    """
    linear = [w for w in ways if w.quantity.denominator is None]
    if conflict.is_hard or not linear:
        return conflict
    way = min(linear, key=lambda w: w.ease)
    rest = without_bounds(problem, way.member.rows)
    programme, row = Programme(rest), problem.matrix[way.member.rows[0]]
    best = programme.maximise(row) if way.is_ceiling else programme.minimise(row)
    if best.outcome is not Outcome.OPTIMAL:
        return conflict
    pulls = np.abs(best.row_prices) * np.abs(problem.matrix).max(axis=1, initial=0.0)
    least = _ROUNDING * float(np.abs(row).max(initial=0.0))
    members = tuple(
        m
        for m in list_members(problem, unit)
        if m.rows == way.member.rows
        or any(pulls[i] > least for i in m.rows)
        or (m.column is not None and abs(best.column_prices[m.column]) > least)
    )
    if not is_irreducible(problem, members):
        return conflict
    return Conflict(members, conflict.is_hard, True)
