"""Units of quantities and of gains beside the unit of the rates."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from fractions import Fraction

from fluxnet.network.model import Quantity, QuantityKind

__all__ = ["gain_unit", "rate_unit", "sum_unit", "unusual_words"]

_UNUSUAL = 100.0  # mmol/g/h; few pass 50 (common practice)


def rate_unit(quantity: Quantity, unit: str) -> str:
    """The unit of a quantity: 1/h for mu, none for a ratio, else that of the rates.

    Examples
    --------
    >>> rate_unit(Quantity(QuantityKind.MU), "mmol/g/h")
    '1/h'
    """
    if quantity.kind is QuantityKind.MU:
        return "1/h"
    return "" if quantity.kind is QuantityKind.RATIO else unit


def sum_unit(terms: Sequence[tuple[Fraction, Quantity]], unit: str) -> str:
    """The unit of a weighted sum; of terms in different ones how each of them is counted.

    Examples
    --------
    >>> ethanol = Quantity(QuantityKind.RATE, "ethanol")
    >>> mu = Quantity(QuantityKind.MU)
    >>> sum_unit([(Fraction(1), mu)], "mmol/g/h")
    '1/h'
    >>> sum_unit([(Fraction(2), ethanol), (Fraction(1), mu)], "mmol/g/h")
    '(ethanol in mmol/g/h, mu in 1/h)'
    """
    units = {str(quantity): rate_unit(quantity, unit) for _, quantity in terms}
    if len(set(units.values())) == 1:
        return next(iter(units.values()))
    return f"({', '.join(f'{name} in {own}' for name, own in units.items())})"


def gain_unit(terms: Sequence[tuple[Fraction, Quantity]], limited: Quantity, unit: str) -> str:
    """What a weighted sum gains per unit of a limit, in units.

    The time and what rates are given per cancel, except where one of the two is mu.

    Examples
    --------
    >>> ethanol = Quantity(QuantityKind.RATE, "ethanol")
    >>> oxygen, mu = Quantity(QuantityKind.RATE, "oxygen"), Quantity(QuantityKind.MU)
    >>> gain_unit([(Fraction(1), ethanol)], oxygen, "mmol/g/h")
    'mmol ethanol per mmol oxygen'
    >>> gain_unit([(Fraction(1), mu)], oxygen, "mmol/g/h")
    '1/h per mmol/g/h oxygen'
    """
    below = limited if limited.numerator is None else limited.numerator
    quantities = [quantity for _, quantity in terms]
    cancels = all(rate_unit(quantity, unit) == unit for quantity in (*quantities, below))
    shown = unit.partition("/")[0] if cancels else unit
    if len(terms) == 1 and abs(terms[0][0]) == 1:
        gain = _part(quantities[0], shown)
    else:
        mixed = len({rate_unit(quantity, unit) for quantity in quantities}) > 1
        gain = "of the sum" if mixed else f"{shown} of the sum"
    return f"{gain} per {_part(below, shown)}"


def unusual_words(rates: Iterable[tuple[str, float | None]], unit: str) -> str:
    """A sentence on specific rates that are larger than cells usually have; "" without any.

    Parameters
    ----------
    rates
        Names and measured values, in ``unit``.

    Examples
    --------
    >>> unusual_words([("glucose in", 10200.0), ("mu", 0.2)], "mmol/g/h")[:33]
    'glucose in is above 100 mmol/g/h,'
    """
    names = [name for name, value in rates if value is not None and abs(value) > _UNUSUAL]
    if unit != "mmol/g/h" or not names:
        return ""
    verb = "is" if len(names) == 1 else "are"
    return (
        f"{', '.join(names)} {verb} above {_UNUSUAL:g} mmol/g/h, where 50 is rarely passed (common "
        "practice): is mmol typed as mol, or a time or a mass mistaken?"
    )


def _part(quantity: Quantity, unit: str) -> str:
    return "1/h" if quantity.kind is QuantityKind.MU else f"{unit} {quantity.name}"
