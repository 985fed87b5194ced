"""Which gaps the rounding of the written numbers can explain, worked out exactly.

A coefficient c written with half unit h stands for any number in [c - h, c + h], a content e
with half unit g for any in [e - g, e + g]; their product then lies between the smallest and
the largest of the four products of the ends. The terms of a line vary independently, a species
that stands on both sides once.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from fractions import Fraction

from fluxnet.ground.record import record
from fluxnet.network.expression import Expression

__all__ = ["Reach", "explains", "reach_of"]

_ZERO = Fraction(0)
_CONSTANT: tuple[tuple[str, int], ...] = ()
_Monomial = tuple[tuple[str, int], ...]


@record
class Reach:
    """How far rounding can move a sum, by monomial in the parameters: (down, up)."""

    by_monomial: Mapping[_Monomial, tuple[Fraction, Fraction]]

    @property
    def down(self) -> Fraction:
        """The largest shift downwards of the part without parameters; not positive."""
        return self.by_monomial.get(_CONSTANT, (_ZERO, _ZERO))[0]

    @property
    def up(self) -> Fraction:
        """The largest shift upwards of the part without parameters; not negative."""
        return self.by_monomial.get(_CONSTANT, (_ZERO, _ZERO))[1]


def reach_of(
    products: Iterable[tuple[Expression, Fraction, Fraction, Fraction]],
) -> Reach:
    """The reach of a sum of products.

    Parameters
    ----------
    products
        For each: coefficient, its half unit, content, its half unit. A coefficient with
        parameters is exact; only its content can be rounded.

    Examples
    --------
    >>> from fluxnet.network.expression import constant
    >>> half = Fraction(1, 20)
    >>> reach_of([(constant(2), half, Fraction(3), Fraction(0))]).up
    Fraction(3, 20)
    """
    total: dict[_Monomial, tuple[Fraction, Fraction]] = {}
    for coefficient, half, content, half_content in products:
        if not half and not half_content:
            continue
        if coefficient.denominator.number is None:
            continue
        monomials = dict(coefficient.numerator.terms)
        number = monomials.pop(_CONSTANT, _ZERO)
        ends = [
            (number + s * half) * (content + t * half_content)
            for s in (-1, 1)
            for t in (-1, 1)
        ]
        _widen(total, _CONSTANT, min(ends) - number * content, max(ends) - number * content)
        for monomial, factor in monomials.items():
            _widen(total, monomial, -abs(factor) * half_content, abs(factor) * half_content)
    return Reach(total)


def _widen(
    total: dict[_Monomial, tuple[Fraction, Fraction]],
    monomial: _Monomial,
    down: Fraction,
    up: Fraction,
) -> None:
    before = total.get(monomial, (_ZERO, _ZERO))
    total[monomial] = (before[0] + down, before[1] + up)


def explains(reach: Reach, gap: Expression) -> bool:
    """Whether numbers within the reach exist that close a gap for every parameter value.

    Each power of the parameters has to close by itself. A gap with a parameter in a
    denominator is explained only where it is one number.
    """
    if gap.denominator.number is not None:
        monomials = dict(gap.numerator.terms)
    else:
        number = gap.constant_value
        if number is None:
            return False
        monomials = {_CONSTANT: number}
    for monomial, size in monomials.items():
        down, up = reach.by_monomial.get(monomial, (_ZERO, _ZERO))
        if not down <= -size <= up:
            return False
    return True
