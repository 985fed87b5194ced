"""Limits and measured values as they are written in a model: the names of rows."""

from __future__ import annotations

from decimal import Decimal
from fractions import Fraction

from fluxnet.network.model import Direction, Limit, Network, Quantity, QuantityKind, Relation, Role

__all__ = ["limit_words", "measured_words", "number_words", "quantity_words"]


def number_words(value: Fraction | float) -> str:
    """A number as one would type it: a decimal with no superfluous zeros.

    Examples
    --------
    >>> number_words(Fraction(8)), number_words(Fraction(1, 20)), number_words(Fraction(1, 3))
    ('8', '0.05', '0.333333')
    >>> number_words(1e-9), number_words(12345.0), number_words(-0.5)
    ('1e-9', '12345', '-0.5')
    """
    number = float(value)
    for digits in (6, 9, 12, 15):
        text = f"{number:.{digits}g}"
        if isinstance(value, Fraction) and Fraction(text) == value:
            break
    else:
        text = f"{number:.6g}"
    decimal = Decimal(text)
    if decimal and not -5 < decimal.adjusted() < 15:
        mantissa, _, exponent = f"{decimal.normalize():e}".partition("e")
        return f"{mantissa}e{int(exponent)}"
    return f"{decimal:f}"


def quantity_words(quantity: Quantity, network: Network | None = None) -> str:
    """The quantity as it is written in a limit: direction only where the role leaves it open.

    A reaction that shares no name with a species needs no word ``flux`` before it.
    """
    if quantity.kind is QuantityKind.RATIO and quantity.numerator and quantity.denominator:
        parts = (quantity.numerator, quantity.denominator)
        return " / ".join(quantity_words(part, network) for part in parts)
    if quantity.kind is QuantityKind.MU:
        return "mu"
    species = network.find_species(quantity.name) if network else None
    if quantity.kind is QuantityKind.RATE and quantity.direction is not None:
        if species is not None and species.role is not Role.EXCHANGE:
            return quantity.name
        return f"{quantity.name} {quantity.direction.value}"
    return quantity.name


def limit_words(limit: Limit, network: Network | None = None) -> str:
    """A limit as a line of the language writes it.

    Examples
    --------
    >>> oxygen = Quantity(QuantityKind.RATE, "CO2", Direction.OUT)
    >>> limit_words(Limit(oxygen, Relation.AT_MOST, None, Fraction(8)))
    'limit CO2 out <= 8'
    >>> limit_words(Limit(oxygen, Relation.BETWEEN, Fraction(-1), Fraction(5)))
    'limit CO2 between in 1 and out 5'
    """
    what = quantity_words(limit.quantity, network)
    low, high = limit.low, limit.high
    if limit.relation is Relation.BETWEEN and low is not None and high is not None:
        way = limit.quantity.direction
        if low < 0 and way is not None:
            back = Direction.IN if way is Direction.OUT else Direction.OUT
            span = f"{back.value} {number_words(-low)} and {way.value} {number_words(high)}"
            return f"limit {limit.quantity.name} between {span}"
        return f"limit {what} between {number_words(low)} and {number_words(high)}"
    bound = high if low is None else low
    if bound is None:
        return f"limit {what}"
    text = f"limit {what} {limit.relation.value} {number_words(bound)}"
    return text if limit.sd is None else f"{text} ± {number_words(limit.sd)}"


def measured_words(quantity: Quantity, value: float, sd: float, unit: str = "") -> str:
    """A measured value as it is told: the quantity with its direction, value and sd.

    Examples
    --------
    >>> rate = Quantity(QuantityKind.RATE, "glucose", Direction.IN)
    >>> measured_words(rate, 2.0, 0.1, "mmol/g/h")
    'glucose in, measured 2 ± 0.1 mmol/g/h'
    >>> measured_words(Quantity(QuantityKind.MU), 0.1, 0.0)
    'mu, exactly 0.1 1/h'
    """
    if quantity.kind is QuantityKind.MU:
        unit = "1/h"
    elif quantity.kind is QuantityKind.RATIO:
        unit = ""
    told = f"measured {number_words(value)} ± {sd:.2g}" if sd else (
        f"exactly {number_words(value)}"
    )
    return f"{quantity}, {told} {unit}".rstrip()
