"""Exact numbers as text of the language: decimals where they end, fractions where not."""

from __future__ import annotations

from fractions import Fraction

from fluxnet.network.expression import Expression

__all__ = ["coefficient_text", "decimals_of", "number_text"]

_MOST_DECIMALS = 6
_LONGEST = 10**7


def decimals_of(value: Fraction) -> int | None:
    """How many decimals write a number exactly, or None where no finite number does.

    Examples
    --------
    >>> decimals_of(Fraction(1, 8)), decimals_of(Fraction(1, 3)), decimals_of(Fraction(4))
    (3, None, 0)
    """
    rest, twos, fives = value.denominator, 0, 0
    while rest % 2 == 0:
        rest, twos = rest // 2, twos + 1
    while rest % 5 == 0:
        rest, fives = rest // 5, fives + 1
    return max(twos, fives) if rest == 1 else None


def number_text(value: Fraction) -> str:
    """A number for people: a short decimal, else a fraction, else ``about`` six digits.

    Examples
    --------
    >>> number_text(Fraction(7, 4)), number_text(Fraction(-1, 3)), number_text(Fraction(2))
    ('1.75', '-1/3', '2')
    >>> number_text(Fraction(1, 98765432101))
    'about 1.0125e-11'
    """
    decimals = decimals_of(value)
    if decimals is not None and decimals <= _MOST_DECIMALS:
        return _decimal(value, decimals)
    if value.denominator < _LONGEST and abs(value.numerator) < _LONGEST:
        return str(value)
    return f"about {float(value):.6g}"


def coefficient_text(coefficient: Expression) -> str:
    """A coefficient as it stands in a reaction; a fraction or an expression in brackets.

    Examples
    --------
    >>> from fluxnet.network.expression import constant, parameter
    >>> coefficient_text(constant(Fraction(1, 3))), coefficient_text(parameter("PO"))
    ('(1/3)', 'PO')
    >>> coefficient_text(parameter("a") + constant(1))
    '(1 + a)'
    """
    number = coefficient.constant_value
    if number is None:
        text = str(coefficient)
        return text if text.isidentifier() else f"({text})"
    decimals = decimals_of(number)
    if decimals is not None and decimals <= _MOST_DECIMALS:
        return _decimal(number, decimals)
    return f"({number})"


def _decimal(value: Fraction, decimals: int) -> str:
    """The digits of a number that ends after some decimals."""
    digits = str(abs(int(value * 10**decimals))).rjust(decimals + 1, "0")
    whole, rest = digits[: len(digits) - decimals], digits[len(digits) - decimals :]
    return ("-" if value < 0 else "") + whole + (f".{rest}" if rest else "")
