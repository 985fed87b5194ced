"""Where an expression divides by zero within the ranges of its parameters, decided exactly.

A denominator in one parameter is a polynomial whose real roots in an interval are counted by
Sturm's theorem (from memory). One in several parameters is tried at the corners of smaller and
smaller boxes: two signs, or a zero, prove a root between them; boxes over which the sum of the
terms' bounds excludes zero hold none. What is left when the boxes run out is told as not
ruled out.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction
from itertools import pairwise, product

from fluxnet.ground.record import record
from fluxnet.network.expression import Expression

__all__ = ["Pole", "find_pole"]

Range = tuple[Fraction, Fraction]
_Box = dict[str, Range]
_Coefficients = list[Fraction]
_Terms = tuple[tuple[tuple[tuple[str, int], ...], Fraction], ...]

_BOXES = 2000
_NEAR = Fraction(1, 10**6)


@record
class Pole:
    """A place where an expression divides by zero.

    ``place`` holds the parameters' values there, ``exact`` whether it is this very place or one
    within a millionth of the range. ``proven`` is False where a root could not be ruled out.
    """

    place: Mapping[str, Fraction]
    exact: bool = True
    proven: bool = True


def find_pole(expression: Expression, ranges: Mapping[str, Range]) -> Pole | None:
    """A place within the ranges, ends included, where an expression divides by zero.

    Parameters
    ----------
    ranges
        Low and high end of each parameter of the expression; equal ends hold it.

    Examples
    --------
    >>> from fluxnet.network.expression import ONE, constant, parameter
    >>> b = parameter("b")
    >>> pole = find_pole(ONE / (constant(Fraction(1, 2)) - b), {"b": (Fraction(0), Fraction(1))})
    >>> pole.place, pole.exact
    ({'b': Fraction(1, 2)}, True)
    >>> find_pole(ONE / (ONE + b * b), {"b": (Fraction(-9), Fraction(9))}) is None
    True
    """
    terms = expression.denominator.terms
    held = {n: low for n, (low, high) in ranges.items() if low == high}
    moving = sorted({n for power, _ in terms for n, _ in power} - set(held))
    if not moving:
        zero = expression.denominator.value(held, Fraction(0)) == 0
        return Pole(held) if zero else None
    if len(moving) > 1:
        return _in_boxes(expression, {name: ranges[name] for name in moving}, held)
    name = moving[0]
    found = _root(_in_one(expression, name, held), ranges[name])
    return None if found is None else Pole({**held, name: found[0]}, found[1])


def _in_one(expression: Expression, name: str, held: Mapping[str, Fraction]) -> _Coefficients:
    """The denominator by powers of one parameter, less what the numerator cancels."""
    bottom = _by_powers(expression.denominator.terms, name, held)
    if not expression.parameters <= {name, *held}:
        return bottom
    common, top = bottom, _by_powers(expression.numerator.terms, name, held)
    while top:
        common, top = top, _divided(common, top)[1]
    return bottom if len(common) < 2 else _divided(bottom, common)[0]


def _by_powers(terms: _Terms, name: str, held: Mapping[str, Fraction]) -> _Coefficients:
    """A polynomial by powers of one parameter, the others held."""
    total: dict[int, Fraction] = {}
    for power, coefficient in terms:
        value = coefficient
        for other, exponent in power:
            value *= held[other] ** exponent if other != name else 1
        at = dict(power).get(name, 0)
        total[at] = total.get(at, Fraction(0)) + value
    return _trimmed([total.get(k, Fraction(0)) for k in range(max(total, default=0) + 1)])


def _root(coefficients: _Coefficients, within: Range) -> tuple[Fraction, bool] | None:
    """A root of a polynomial in an interval, ends included, and whether it is exactly there."""
    low, high = within
    if not coefficients:
        return low, True
    if len(coefficients) == 1:
        return None
    for end in within:
        if _value(coefficients, end) == 0:
            return end, True
    if len(coefficients) == 2:
        root = -coefficients[0] / coefficients[1]
        return (root, True) if low < root < high else None
    chain = _sturm(coefficients)
    if _changes(chain, low) == _changes(chain, high):
        return None
    width = (high - low) * _NEAR
    while high - low > width:
        middle = (low + high) / 2
        if _value(coefficients, middle) == 0:
            return middle, True
        if _changes(chain, low) != _changes(chain, middle):
            high = middle
        else:
            low = middle
    near = ((low + high) / 2).limit_denominator(1000)
    if low <= near <= high and _value(coefficients, near) == 0:
        return near, True
    return (low + high) / 2, False


def _sturm(coefficients: _Coefficients) -> list[_Coefficients]:
    chain = [coefficients, [k * c for k, c in enumerate(coefficients)][1:]]
    while rest := _divided(chain[-2], chain[-1])[1]:
        chain.append([-c for c in rest])
    return chain


def _changes(chain: Sequence[_Coefficients], at: Fraction) -> int:
    """The changes of sign along Sturm's chain at a place."""
    signs = [value > 0 for p in chain if (value := _value(p, at))]
    return sum(a != b for a, b in pairwise(signs))


def _value(coefficients: _Coefficients, at: Fraction) -> Fraction:
    total = Fraction(0)
    for coefficient in reversed(coefficients):
        total = total * at + coefficient
    return total


def _divided(top: _Coefficients, bottom: _Coefficients) -> tuple[_Coefficients, _Coefficients]:
    """The quotient of two polynomials, and the rest."""
    quotient = [Fraction(0)] * max(len(top) - len(bottom) + 1, 0)
    rest = list(top)
    for k in reversed(range(len(quotient))):
        quotient[k] = rest[k + len(bottom) - 1] / bottom[-1]
        for i, coefficient in enumerate(bottom):
            rest[k + i] -= quotient[k] * coefficient
    return quotient, _trimmed(rest)


def _trimmed(coefficients: _Coefficients) -> _Coefficients:
    while coefficients and coefficients[-1] == 0:
        coefficients = coefficients[:-1]
    return coefficients


def _in_boxes(
    expression: Expression, whole: _Box, held: Mapping[str, Fraction]
) -> Pole | None:
    """A root of a denominator in several parameters, by ever smaller boxes."""
    terms = expression.denominator.terms
    signs: dict[bool, dict[str, Fraction]] = {}
    boxes = [whole]
    for box in boxes:
        for corner in product(*box.values()):
            place = {**held, **dict(zip(box, corner, strict=True))}
            value = expression.denominator.value(place, Fraction(0))
            if value == 0:
                return Pole(place)
            signs.setdefault(value > 0, place)
        if len(signs) == 2:
            return Pole(_between(expression, signs[False], signs[True]), exact=False)
        fixed = {name: (value, value) for name, value in held.items()}
        low, high = _bounds(terms, {**fixed, **box})
        if low <= 0 <= high:
            if len(boxes) >= _BOXES:
                middle = {name: (a + b) / 2 for name, (a, b) in box.items()}
                return Pole({**held, **middle}, exact=False, proven=False)
            name = max(box, key=lambda n: (box[n][1] - box[n][0]) / (whole[n][1] - whole[n][0]))
            a, b = box[name]
            boxes += [{**box, name: (a, (a + b) / 2)}, {**box, name: ((a + b) / 2, b)}]
    return None


def _between(
    expression: Expression, below: Mapping[str, Fraction], above: Mapping[str, Fraction]
) -> dict[str, Fraction]:
    """A place near a root on the line between a negative and a positive value."""
    low, high = dict(below), dict(above)
    for _ in range(20):
        middle = {name: (low[name] + high[name]) / 2 for name in low}
        if expression.denominator.value(middle, Fraction(0)) <= 0:
            low = middle
        else:
            high = middle
    return low


def _bounds(terms: _Terms, box: Mapping[str, Range]) -> Range:
    """Numbers between which a sum of terms lies over a box."""
    low = high = Fraction(0)
    for power, coefficient in terms:
        ends = [coefficient, coefficient]
        for name, exponent in power:
            factors = [end**exponent for end in box[name]]
            if exponent % 2 == 0 and box[name][0] < 0 < box[name][1]:
                factors.append(Fraction(0))
            ends = [end * factor for end in ends for factor in (min(factors), max(factors))]
            ends = [min(ends), max(ends)]
        low, high = low + ends[0], high + ends[1]
    return low, high
