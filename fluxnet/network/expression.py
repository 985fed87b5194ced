"""Expressions in the parameters: quotients of polynomials with exact coefficients.

A coefficient such as ``(2*PO)`` or ``(1 - a)`` is kept as a quotient of two polynomials over
the rationals, so that a line can be tested to balance *for every value* of its parameters,
and a solved ``?`` passes the parameters' errors on.
"""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from typing import TypeVar

from fluxnet.ground.record import record

__all__ = ["ONE", "ZERO", "Expression", "constant", "parameter"]

_Power = tuple[tuple[str, int], ...]
_Number = TypeVar("_Number", Fraction, float)


@record
class _Polynomial:
    """A sum of monomials: pairs (powers by parameter, coefficient), sorted, without zeros."""

    terms: tuple[tuple[_Power, Fraction], ...] = ()

    @classmethod
    def of(cls, terms: Mapping[_Power, Fraction]) -> _Polynomial:
        return cls(tuple(sorted((p, c) for p, c in terms.items() if c != 0)))

    def __add__(self, other: _Polynomial) -> _Polynomial:
        total = dict(self.terms)
        for power, coefficient in other.terms:
            total[power] = total.get(power, Fraction(0)) + coefficient
        return _Polynomial.of(total)

    def __mul__(self, other: _Polynomial) -> _Polynomial:
        total: dict[_Power, Fraction] = {}
        for left, a in self.terms:
            for right, b in other.terms:
                powers = dict(left)
                for name, exponent in right:
                    powers[name] = powers.get(name, 0) + exponent
                key = tuple(sorted(powers.items()))
                total[key] = total.get(key, Fraction(0)) + a * b
        return _Polynomial.of(total)

    def scaled(self, factor: Fraction) -> _Polynomial:
        return _Polynomial.of({p: c * factor for p, c in self.terms})

    def value(self, values: Mapping[str, _Number], zero: _Number) -> _Number:
        total = zero
        for power, coefficient in self.terms:
            product = type(zero)(coefficient)
            for name, exponent in power:
                product *= values[name] ** exponent
            total += product
        return total

    def derivative(self, name: str) -> _Polynomial:
        terms: dict[_Power, Fraction] = {}
        for power, coefficient in self.terms:
            powers = dict(power)
            exponent = powers.get(name, 0)
            if exponent:
                powers[name] = exponent - 1
                key = tuple(sorted((n, e) for n, e in powers.items() if e))
                terms[key] = terms.get(key, Fraction(0)) + coefficient * exponent
        return _Polynomial.of(terms)

    @property
    def number(self) -> Fraction | None:
        """Its value where it holds no parameter."""
        if not self.terms:
            return Fraction(0)
        if len(self.terms) == 1 and not self.terms[0][0]:
            return self.terms[0][1]
        return None


_UNIT = _Polynomial((((), Fraction(1)),))


@record
class Expression:
    """A quotient of polynomials in the parameters.

    Two expressions are equal when they are equal for every value of the parameters.

    Examples
    --------
    >>> po = parameter("PO")
    >>> twice = (po + po) / constant(4)
    >>> twice == po / constant(2), str(twice), twice.exact({"PO": Fraction(7, 5)})
    (True, '1/2*PO', Fraction(7, 10))
    """

    numerator: _Polynomial
    denominator: _Polynomial = _UNIT

    def __post_init__(self) -> None:
        if not self.denominator.terms:
            raise ZeroDivisionError("an expression divides by zero")
        divisor = self.denominator.number
        if divisor is not None and divisor != 1:
            object.__setattr__(self, "numerator", self.numerator.scaled(1 / divisor))
            object.__setattr__(self, "denominator", _UNIT)

    def __add__(self, other: Expression) -> Expression:
        if self.denominator == other.denominator:
            return Expression(self.numerator + other.numerator, self.denominator)
        return Expression(
            self.numerator * other.denominator + other.numerator * self.denominator,
            self.denominator * other.denominator,
        )

    def __neg__(self) -> Expression:
        return Expression(self.numerator.scaled(Fraction(-1)), self.denominator)

    def __sub__(self, other: Expression) -> Expression:
        return self + (-other)

    def __mul__(self, other: Expression) -> Expression:
        return Expression(
            self.numerator * other.numerator, self.denominator * other.denominator
        )

    def __truediv__(self, other: Expression) -> Expression:
        """Quotient.

        Raises
        ------
        ZeroDivisionError
            Where ``other`` is zero for every value of its parameters.
        """
        return Expression(
            self.numerator * other.denominator, self.denominator * other.numerator
        )

    def scaled(self, factor: Fraction) -> Expression:
        """The expression times an exact number."""
        return Expression(self.numerator.scaled(factor), self.denominator)

    def __eq__(self, other: object) -> bool:
        if not isinstance(other, Expression):
            return NotImplemented
        return not (self - other).numerator.terms

    def __hash__(self) -> int:
        return hash(self.number) if self.number is not None else hash(self.parameters)

    @property
    def is_zero(self) -> bool:
        """Whether it is zero for every value of its parameters."""
        return not self.numerator.terms

    @property
    def number(self) -> Fraction | None:
        """Its value where it holds no parameter, else None."""
        return self.numerator.number if self.denominator == _UNIT else None

    @property
    def constant_value(self) -> Fraction | None:
        """The number that it is for every value of its parameters, else None.

        Examples
        --------
        >>> a = parameter("a")
        >>> (a / (a + a)).constant_value
        Fraction(1, 2)
        """
        number = self.number
        if number is None and self.numerator.terms:
            quotient = self.numerator.terms[0][1] / self.denominator.terms[0][1]
            number = quotient if self == constant(quotient) else None
        return Fraction(0) if self.is_zero else number

    @property
    def parameters(self) -> frozenset[str]:
        """The names of the parameters in it."""
        polynomials = (self.numerator, self.denominator)
        return frozenset(n for p in polynomials for power, _ in p.terms for n, _ in power)

    def exact(self, values: Mapping[str, Fraction]) -> Fraction:
        """Its value at exact values of the parameters.

        Raises
        ------
        ZeroDivisionError
            Where it has no value there.
        """
        zero = Fraction(0)
        return self.numerator.value(values, zero) / self.denominator.value(values, zero)

    def at(self, values: Mapping[str, float]) -> float:
        """Its value at floating-point values of the parameters."""
        return self.numerator.value(values, 0.0) / self.denominator.value(values, 0.0)

    def derivative(self, name: str) -> Expression:
        """The derivative by one parameter."""
        top, bottom = self.numerator, self.denominator
        return Expression(
            top.derivative(name) * bottom + (top * bottom.derivative(name)).scaled(Fraction(-1)),
            bottom * bottom,
        )

    def __str__(self) -> str:
        top = _text(self.numerator)
        if self.denominator == _UNIT:
            return top
        return f"({top})/({_text(self.denominator)})"


ZERO = Expression(_Polynomial())
ONE = Expression(_UNIT)


def constant(value: Fraction | int) -> Expression:
    """The expression that is one exact number.

    Examples
    --------
    >>> constant(Fraction(1, 4)).number
    Fraction(1, 4)
    """
    return Expression(_Polynomial.of({(): Fraction(value)}))


def parameter(name: str) -> Expression:
    """The expression that is one parameter.

    Examples
    --------
    >>> str(constant(2) * parameter("PO"))
    '2*PO'
    """
    return Expression(_Polynomial((((((name, 1),)), Fraction(1)),)))


def _text(polynomial: _Polynomial) -> str:
    """The polynomial as text of the language, which its reader takes back.

    A positive term stands first where there is one.
    """
    parts: list[str] = []
    lead = next((t for t in polynomial.terms if t[1] > 0), None)
    others = [t for t in polynomial.terms if t is not lead]
    for power, coefficient in others if lead is None else [lead, *others]:
        factors = [name for name, exponent in power for _ in range(exponent)]
        size = abs(coefficient)
        if size != 1 or not factors:
            factors.insert(0, str(size))
        sign = "-" if coefficient < 0 else "+" if parts else ""
        parts.append(f" {sign} " if parts else "0 - " if coefficient < 0 else "")
        parts.append("*".join(factors))
    return "".join(parts) or "0"
