"""Whether a conversion is a sum of others, for every value of the parameters."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

from fluxnet.exact.programme import make_programme
from fluxnet.exact.simplex import End, Place, solve_from
from fluxnet.network.expression import Expression
from fluxnet.studies.lump_bundle import Bundle, Net

__all__ = ["sum_of"]

_ZERO = Fraction(0)
Parts = tuple[tuple[Fraction, Bundle], ...]


def sum_of(bundle: Bundle, others: Sequence[Bundle]) -> Parts | None:
    """Numbers by which others add up to a bundle, not negative for those that run one way.

    None where there are none. Each product of parameters has to add up by itself, so that the
    sum holds for all their values. A bundle that runs both ways is a sum of others that do.

    Examples
    --------
    >>> from fluxnet.network.expression import constant
    >>> def way(**net):
    ...     return Bundle("c", {n: constant(a) for n, a in net.items()}, {}, False)
    >>> [int(n) for n, _ in sum_of(way(A=-2, C=2), [way(A=-1, B=1), way(B=-2, C=2)])]
    [2, 1]
    >>> sum_of(way(A=-1, C=1), [way(A=-1, B=1)]) is None
    True
    """
    if not bundle.net:
        return ()
    if bundle.reversible:
        others = [b for b in others if b.reversible]
    rows: dict[object, dict[int, Fraction]] = {}
    for j, other in enumerate(others):
        for key, amount in _atoms(other.net):
            rows.setdefault(key, {})[j] = amount
    right = dict(_atoms(bundle.net))
    if any(key not in rows for key in right):
        return None
    bounds = [(right.get(key, _ZERO),) * 2 for key in rows]
    columns = [(None if b.reversible else _ZERO, None) for b in others]
    programme = make_programme(len(others), list(rows.values()), bounds, columns, {})
    places = [*(Place.LOW for _ in others), *(Place.BASIC for _ in rows)]
    found = solve_from(programme, places, None)
    if found.end is not End.OPTIMAL:
        return None
    return tuple((n, b) for n, b in zip(found.fluxes, others, strict=True) if n)


def _atoms(net: Net) -> list[tuple[object, Fraction]]:
    """The numbers that a conversion holds: by species, divisor, and product of parameters."""
    return [
        ((species, divisor, power), number)
        for species, amount in net.items()
        for divisor, power, number in _monomials(amount)
    ]


def _monomials(amount: Expression) -> list[tuple[object, object, Fraction]]:
    return [(amount.denominator, power, number) for power, number in amount.numerator.terms]
