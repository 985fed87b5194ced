"""The words of units: those of practice, and the way to pint for the others."""

from __future__ import annotations

from collections.abc import Mapping
from enum import Enum
from fractions import Fraction
from functools import cache
from types import MappingProxyType
from typing import TYPE_CHECKING, Final

from fluxnet.ground.record import record

if TYPE_CHECKING:
    import pint

__all__ = ["CONCENTRATIONS", "MARKS", "WORDS", "Dimension", "Word", "look_up", "registry"]


class Dimension(Enum):
    """What a word measures; the value is the base unit."""

    MOLES = "mmol"
    MASS = "g"
    CARBON = "C-mmol"
    CARBON_MASS = "gC"
    ELECTRONS = "e-mmol"
    VOLUME = "L"
    TIME = "h"
    OTHER = "other"

    @property
    def is_amount(self) -> bool:
        """Whether it counts an amount of a species."""
        return self not in (Dimension.VOLUME, Dimension.TIME, Dimension.OTHER)


@record
class Word:
    """A word of a unit: how many base units of which dimension."""

    dimension: Dimension
    scale: Fraction


_PREFIX = {
    "k": Fraction(1000), "": Fraction(1), "m": Fraction(1, 1000), "u": Fraction(1, 10**6),
    "µ": Fraction(1, 10**6), "μ": Fraction(1, 10**6), "n": Fraction(1, 10**9),
}  # fmt: skip

MARKS: Final = frozenset({
    "dw", "cdw", "dcw", "dry", "weight", "biomass", "cells", "x", "ts", "bts", "btm",
})  # fmt: skip
"""Words behind the grams below a line that say what the grams are of."""


def _all_words() -> dict[str, Word]:
    words: dict[str, Word] = {}
    for prefix, size in _PREFIX.items():
        moles = size * 1000
        for name in (f"{prefix}mol", f"{prefix}mole", f"{prefix}moles"):
            words[name] = Word(Dimension.MOLES, moles)
        for carbon in (
            f"C-{prefix}mol", f"C{prefix}mol", f"{prefix}Cmol", f"{prefix}C-mol", f"{prefix}molC",
        ):  # fmt: skip
            words[carbon] = Word(Dimension.CARBON, moles)
        for electrons in (f"e-{prefix}mol", f"e{prefix}mol", f"{prefix}e-mol"):
            words[electrons] = Word(Dimension.ELECTRONS, moles)
        words[f"{prefix}g"] = Word(Dimension.MASS, size)
        words[f"{prefix}gC"] = Word(Dimension.CARBON_MASS, size)
        for dry in ("DW", "CDW", "DCW", "X", "dw", "cdw", "dcw", "TS", "BTS", "BTM"):
            words[f"{prefix}g{dry}"] = Word(Dimension.MASS, size)
        if prefix != "k":
            words[f"{prefix}L"] = words[f"{prefix}l"] = Word(Dimension.VOLUME, size)
    words["t"] = Word(Dimension.MASS, Fraction(10**6))
    for name in ("h", "hr", "hrs", "hour", "hours"):
        words[name] = Word(Dimension.TIME, Fraction(1))
    for name in ("min", "minute", "minutes"):
        words[name] = Word(Dimension.TIME, Fraction(1, 60))
    for name in ("s", "sec", "second", "seconds"):
        words[name] = Word(Dimension.TIME, Fraction(1, 3600))
    for name in ("d", "day", "days"):
        words[name] = Word(Dimension.TIME, Fraction(24))
    for name, litres in (("m3", 1000), ("dm3", 1), ("hL", 100)):
        words[name] = Word(Dimension.VOLUME, Fraction(litres))
    words["cm3"] = Word(Dimension.VOLUME, Fraction(1, 1000))
    for name in ("litre", "litres", "liter", "liters"):
        words[name] = Word(Dimension.VOLUME, Fraction(1))
    for name in ("gram", "grams"):
        words[name] = Word(Dimension.MASS, Fraction(1))
    return words


WORDS: Final[Mapping[str, Word]] = MappingProxyType(_all_words())
"""Every word of practice."""

CONCENTRATIONS: Final[Mapping[str, str]] = MappingProxyType(
    {f"{prefix}M": f"{prefix}mol" for prefix in _PREFIX if prefix != "k"}
)
"""Words for moles per litre, and the word of their amount."""

_PLACES = {
    Dimension.MASS: "gram", Dimension.VOLUME: "liter", Dimension.TIME: "hour",
    Dimension.MOLES: "millimole",
}  # fmt: skip


@cache
def registry() -> pint.UnitRegistry[float]:
    """All units that pint knows. Loaded once: it takes a third of a second."""
    import pint

    return pint.UnitRegistry()


def look_up(word: str) -> Word | None:
    """An unusual word, with pint: its dimension and size, None where pint has no such word.

    What is none of mass, volume, time and moles has the dimension OTHER.

    Examples
    --------
    >>> look_up("week").scale
    Fraction(168, 1)
    """
    if not word.isalpha():  # pint would take a sign for a sum
        return None
    units = registry()
    try:
        if word not in units:
            return None
        quantity = units.Quantity(1, word)
    except ValueError:  # a word for a number, such as nan
        return None
    for dimension, base in _PLACES.items():
        if quantity.check(units.Unit(base).dimensionality):
            # twelve digits: definitions have fewer, and the rest is noise of the conversion
            return Word(dimension, Fraction(f"{float(quantity.to(base).magnitude):.12g}"))
    return Word(Dimension.OTHER, Fraction(1))
