"""Lists and amounts in sentences."""

from __future__ import annotations

from collections.abc import Collection, Sequence
from fractions import Fraction

from fluxnet.solving.words import number_words

__all__ = ["and_list", "equation", "names_list"]


def and_list(names: Collection[str]) -> str:
    """Names as a sentence lists them.

    Examples
    --------
    >>> and_list(["a", "b", "c"])
    'a, b and c'
    """
    words = list(names)
    if len(words) < 2:
        return "".join(words)
    return f"{', '.join(words[:-1])} and {words[-1]}"


def names_list(names: Sequence[str], most: int = 6) -> str:
    """Names as a sentence lists them, the rest of a long list counted.

    Examples
    --------
    >>> names_list(["a", "b", "c", "d"], most=3)
    'a, b and 2 more'
    """
    if len(names) <= most:
        return and_list(names)
    return f"{', '.join(names[: most - 1])} and {len(names) - most + 1} more"


def equation(
    used: Collection[tuple[str, Fraction]], made: Collection[tuple[str, Fraction]]
) -> str:
    """An overall reaction; a side without species is ``nothing``.

    Examples
    --------
    >>> equation([("glucose", Fraction(1))], [("ethanol", Fraction(2)), ("CO2", Fraction(2))])
    'glucose -> 2 ethanol + 2 CO2'
    """
    return f"{_side(used)} -> {_side(made)}"


def _side(terms: Collection[tuple[str, Fraction]]) -> str:
    parts = [name if n == 1 else f"{number_words(n)} {name}" for name, n in terms]
    return " + ".join(parts) or "nothing"
