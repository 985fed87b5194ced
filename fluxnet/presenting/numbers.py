"""Numbers as text: rounded on screen to what their error allows, and nowhere else."""

from __future__ import annotations

import math

__all__ = [
    "format_measured", "format_number", "format_p", "format_range",
]


def format_number(value: float | None, digits: int = 4) -> str:
    """A number with some significant digits, without trailing zeros after a point.

    Examples
    --------
    >>> format_number(1234.5678), format_number(0.00012346), format_number(2.0)
    ('1235', '0.0001235', '2')
    >>> format_number(None), format_number(float("inf"))
    ('–', 'no limit')
    """
    if value is None:
        return "–"
    if math.isinf(value):
        return "no limit" if value > 0 else "-no limit"
    if value == 0:
        return "0"
    exponent = math.floor(math.log10(abs(value)))
    if -5 <= exponent < 7:
        text = f"{value:.{max(0, digits - 1 - exponent)}f}"
        return text.rstrip("0").rstrip(".") if "." in text else text
    return f"{value:.{digits - 1}e}"


def format_measured(value: float | None, sd: float | None) -> str:
    """A value with its standard deviation, both to the decimals that the sd allows.

    The sd keeps two digits where they are 35 or less, else one (the rounding rule of the
    Particle Data Group, from memory). An sd of None shows the value alone, of 0 ``exact``.

    Examples
    --------
    >>> format_measured(12.3456, 0.123), format_measured(12.3456, 0.567)
    ('12.35 ± 0.12', '12.3 ± 0.6')
    >>> format_measured(1234.5, 98.7), format_measured(2.0, 0.0), format_measured(None, None)
    ('1230 ± 100', '2 exact', '–')
    """
    if value is None:
        return "–"
    if sd is None or math.isinf(sd):
        return format_number(value)
    if sd == 0:
        return f"{format_number(value)} exact"
    decimals = _decimals(sd)
    if decimals < -6 or decimals > 8:
        return f"{value:.3e} ± {sd:.1e}"
    return f"{_fixed(value, decimals)} ± {_fixed(sd, decimals)}"


def format_range(low: float | None, high: float | None) -> str:
    """A range, its ends to the same decimals; two digits of the width are kept.

    Examples
    --------
    >>> format_range(0.0, 1.23456), format_range(2.0, float("inf")), format_range(3.0, 3.0)
    ('0 to 1.2', '2 or more', '3')
    """
    if low is None or high is None:
        return "–"
    if math.isinf(low) and math.isinf(high):
        return "any"
    if math.isinf(high):
        return f"{format_number(low)} or more"
    if math.isinf(low):
        return f"{format_number(high)} or less"
    width = high - low
    scale = max(abs(low), abs(high))
    if width <= 1e-9 * max(scale, 1e-12):
        return format_number((low + high) / 2)
    decimals = max(0, 1 - math.floor(math.log10(width)))
    if decimals > 8:
        return f"{low:.4g} to {high:.4g}"
    ends = ("0" if end == 0 else _fixed(end, decimals) for end in (low, high))
    return " to ".join(ends)


def format_p(p: float | None) -> str:
    """A probability: three decimals, or below which power of ten it lies.

    Examples
    --------
    >>> format_p(0.0387), format_p(0.00002), format_p(None)
    ('0.039', '< 0.001', '–')
    """
    if p is None:
        return "–"
    return "< 0.001" if p < 0.001 else f"{p:.3f}" if p < 0.1 else f"{p:.2f}"


def _decimals(sd: float) -> int:
    exponent = math.floor(math.log10(sd))
    leading = sd / 10.0 ** (exponent - 1)
    return 1 - exponent if leading <= 35.5 else -exponent


def _fixed(value: float, decimals: int) -> str:
    rounded = round(value, decimals)
    if rounded == 0:
        rounded = 0.0  # no minus zero
    return f"{rounded:.{max(0, decimals)}f}"
