"""Units as they stand in a rates table: what they are divided by decides the basis of a run."""

from __future__ import annotations

from enum import Enum
from fractions import Fraction

from fluxnet.chemistry.unit_words import MARKS, WORDS, Dimension
from fluxnet.chemistry.units import Unit, UnitError, UnitFault, parse_unit
from fluxnet.ground.names import Name
from fluxnet.ground.pattern import pattern_of
from fluxnet.ground.record import record

__all__ = ["BadUnit", "RateUnit", "UnitKind", "is_rate_unit", "is_unit", "read_rate_unit"]


class UnitKind(Enum):
    """What a unit says of a rate: what it is divided by."""

    SPECIFIC = "per gram of biomass and hour"
    CARBON = "per C-mol of biomass and hour"
    VOLUMETRIC = "per litre and hour"
    WHOLE = "per hour"
    AMOUNT = "an amount"
    GROWTH = "1/h"
    NUMBER = "a plain number"


_AMOUNT = {
    (): "mmol", (Dimension.VOLUME,): "mmol/L", (Dimension.MASS,): "mmol/g",
    (Dimension.MOLES,): "mol/mol", (Dimension.CARBON,): "mol/C-mol",
    (Dimension.ELECTRONS,): "mol/e-mol", (Dimension.CARBON_MASS,): "mmol/gC",
}  # fmt: skip
_TIMED = {
    (Dimension.MASS,): (UnitKind.SPECIFIC, "mmol/g/h"),
    (Dimension.CARBON,): (UnitKind.CARBON, "mol/C-mol/h"),
    (Dimension.VOLUME,): (UnitKind.VOLUMETRIC, "mmol/L/h"),
    (): (UnitKind.WHOLE, "mmol/h"),
}
_COUNT = pattern_of(r"(?:/|\bper\b)\s*\(?\s*(\d+)\s*(?=[A-Za-zµμ])")
_WORD = pattern_of(r"(?:[CeN]-)?[A-Za-zµμ]+3?")


@record
class RateUnit:
    """A unit of a rates table.

    ``base`` is the unit that its values are brought to, ``count`` the number below the line
    that is kept as written (the 100 of mmol per 100 mmol), ``shown`` both together.
    """

    unit: Unit | None
    kind: UnitKind
    base: str
    count: Fraction = Fraction(1)

    @property
    def shown(self) -> str:
        """The unit as it is told behind values brought to it."""
        if self.count == 1:
            return self.base
        above, _, below = self.base.partition("/")
        return f"{above}/{self.count} {below}"


@record
class BadUnit:
    """Why a unit cannot be used."""

    name: Name
    words: str
    mend: str | None = None


def read_rate_unit(text: str) -> RateUnit | BadUnit:
    """The unit of a rate, an amount, a growth rate or a ratio.

    Examples
    --------
    >>> read_rate_unit("mmol per 100 mmol").shown, read_rate_unit("g/L/d").kind.name
    ('mol/100 mol', 'VOLUMETRIC')
    """
    if text.strip() in ("", "-", "%", "1"):
        scale = Fraction(1, 100) if text.strip() == "%" else Fraction(1)
        return RateUnit(None, UnitKind.NUMBER, "", scale)
    try:
        unit = parse_unit(text)
    except UnitError as fault:
        name = Name.UNKNOWN_UNIT if fault.kind is UnitFault.UNKNOWN else Name.WRONG_UNIT
        return BadUnit(name, str(fault))
    if unit.is_growth:
        return RateUnit(unit, UnitKind.GROWTH, "1/h")
    below = tuple(d for d in unit.per if d is not Dimension.TIME)
    if unit.is_rate and below == (Dimension.MOLES,):
        return RateUnit(unit, UnitKind.CARBON, "mol/C-mol/h")
    if unit.is_rate and below in _TIMED:
        return RateUnit(unit, *_TIMED[below])
    if not unit.is_rate and below in _AMOUNT:
        found = _COUNT.search(unit.text)
        return RateUnit(
            unit, UnitKind.AMOUNT, _AMOUNT[below], Fraction(found[1]) if found else Fraction(1)
        )
    return BadUnit(Name.WRONG_UNIT, f"`{text}` is no unit of a rate or an amount")


def is_unit(text: str) -> bool:
    """Whether a text is a unit in words of practice (no other word is looked up)."""
    words = _WORD.findall(text.replace("per", " "))
    if not words or any(w not in WORDS and w.lower() not in MARKS for w in words):
        return False
    try:
        parse_unit(text)
    except UnitError:
        return False
    return True


def is_rate_unit(text: str) -> bool:
    """Whether a text is, in words of practice, a unit that a rate or an amount can have."""
    return is_unit(text) and isinstance(read_rate_unit(text), RateUnit)
