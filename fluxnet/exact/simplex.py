"""The optimum of an exact programme, from a basis that is nearly the best.

A basis out of a floating-point solver is right as a rule: then one factorisation gives fluxes
and prices, and the two prove one another. Else exact pivots mend it, dual ones where a bound is
broken and primal ones where a price has the wrong sign; the smallest index decides among
equals, so that they end (Bland 1977; from memory).
"""

from __future__ import annotations

from collections.abc import Sequence
from enum import Enum
from fractions import Fraction
from typing import Any

from flint import fmpq

from fluxnet.exact.pivoting import Pivoting, Place
from fluxnet.exact.programme import ExactProgramme, least_by, to_fraction, worst_break
from fluxnet.ground.record import record

__all__ = ["End", "ExactSolution", "Place", "solve_from"]

_ZERO = fmpq(0)
_MOST_PIVOTS = 200


class End(Enum):
    """What was proven. ``OPEN``: nothing, the pivots ran out."""

    OPTIMAL = "optimal"
    INFEASIBLE = "infeasible"
    UNBOUNDED = "unbounded"
    OPEN = "open"


@record
class ExactSolution:
    """How it ended, with what proves it.

    ``fluxes`` and ``prices`` (of the rows), ``gains`` (of the columns: costs less what the
    prices make of them) and ``places`` (columns, then rows) are those of the last basis.
    ``weights`` prove INFEASIBLE, ``ray`` UNBOUNDED. ``off`` is the largest violation of a bound,
    or of a price's sign, that was left: 0 unless the end is OPEN or INFEASIBLE.
    """

    end: End
    objective: Fraction
    fluxes: tuple[Fraction, ...]
    prices: tuple[Fraction, ...]
    gains: tuple[Fraction, ...]
    places: tuple[Place, ...]
    pivots: int
    off: Fraction
    weights: tuple[Fraction, ...] = ()
    ray: tuple[Fraction, ...] = ()


def solve_from(
    programme: ExactProgramme, places: Sequence[Place], most_pivots: int | None = _MOST_PIVOTS
) -> ExactSolution:
    """Prove the optimum at a basis, or pivot from it to one that can be proven.

    Parameters
    ----------
    places
        Of the columns first, then of the rows; one that makes no basis is mended.
    most_pivots
        None: until an end is proven.

    Examples
    --------
    >>> from fluxnet.exact.programme import make_programme
    >>> one = Fraction(1)
    >>> programme = make_programme(
    ...     2, [{0: one, 1: 3 * one}], [(one, None)], [(0 * one, None)] * 2, {0: one, 1: one})
    >>> found = solve_from(programme, [Place.BASIC, Place.LOW, Place.LOW])
    >>> found.end.value, found.objective, found.fluxes[1], found.prices[0], found.pivots
    ('optimal', Fraction(1, 3), Fraction(1, 3), Fraction(1, 3), 1)
    """
    simplex = Pivoting(programme, places)
    costs, pivots = programme.costs, 0
    simplex.refresh(costs)
    below = simplex.first_outside()
    while most_pivots is None or pivots < most_pivots:
        if below is not None:
            # Without costs every basis has prices of the right signs.
            held = costs if simplex.first_gain() is None else {}
            while below is not None and (most_pivots is None or pivots < most_pivots):
                weights = simplex.pull_inside(below, held)
                if weights is not None:
                    return _told(simplex, End.INFEASIBLE, pivots, weights=weights)
                pivots += 1
                below = simplex.first_outside()
            simplex.refresh(costs)
            continue
        entering = simplex.first_gain()
        if entering is None:
            return _told(simplex, End.OPTIMAL, pivots)
        ray = simplex.follow(entering, costs)
        if ray is not None:
            return _told(simplex, End.UNBOUNDED, pivots, ray=ray)
        pivots += 1
    if below is None and simplex.first_gain() is None:
        return _told(simplex, End.OPTIMAL, pivots)
    return _told(simplex, End.OPEN, pivots)


def _told(
    simplex: Pivoting, end: End, pivots: int, weights: Sequence[Any] = (), ray: Sequence[Any] = ()
) -> ExactSolution:
    """What was found; an optimum is looked at once more as a proof by itself."""
    programme, count = simplex.programme, simplex.programme.columns
    costs = programme.costs
    if end is not End.OPTIMAL:
        simplex.reprice(costs)
    total = _ZERO
    for j, c in costs.items():
        total += c * simplex.values[j]
    off = worst_break(programme, simplex.values[:count])
    if end is End.OPTIMAL and (off or least_by(programme, simplex.prices, costs) != total):
        end = End.OPEN
    if end in (End.OPEN, End.INFEASIBLE):
        signs = (
            abs(worth)
            for k, worth in enumerate(simplex.worth)
            if worth and simplex.may_go(k, -1 if worth > 0 else 1)
        )
        off = max(off, *signs, _ZERO)
    return ExactSolution(
        end,
        to_fraction(total),
        tuple(to_fraction(v) for v in simplex.values[:count]),
        tuple(to_fraction(p) for p in simplex.prices),
        tuple(to_fraction(w) for w in simplex.worth[:count]),
        tuple(simplex.places),
        pivots,
        to_fraction(off),
        tuple(to_fraction(w) for w in weights),
        tuple(to_fraction(v) for v in ray),
    )
