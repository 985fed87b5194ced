"""Units of amounts and rates: ``mmol/g/h``, ``g L-1 h-1``, ``C-mol/C-mol``, ``g as sodium salt``.

A unit is an amount of a species over any of: grams (of dry weight in a specific rate), litres,
C-mol, moles, time. The few dozen words of practice are read here; only a word that is not among
them is looked up with pint, which is imported then and not before. All factors are exact.
"""

from __future__ import annotations

import re
import unicodedata
from enum import Enum
from fractions import Fraction

from fluxnet.chemistry.unit_words import CONCENTRATIONS, MARKS, WORDS, Dimension, Word, look_up
from fluxnet.chemistry.weighed import FREE, WeighedForm, split_form
from fluxnet.ground.pattern import pattern_of
from fluxnet.ground.record import record

__all__ = ["Dimension", "Factor", "Unit", "UnitError", "UnitFault", "parse_unit", "read_factors"]


class UnitFault(Enum):
    """What is wrong with a unit."""

    UNKNOWN = "unknown"
    WRONG = "wrong"


class UnitError(ValueError):
    """A unit that cannot be read, or that cannot measure this species.

    ``words`` is what could not be used, for underlining.
    """

    def __init__(self, kind: UnitFault, message: str, words: str = "") -> None:
        super().__init__(message)
        self.kind = kind
        self.words = words


@record
class Unit:
    """An amount over other amounts, volume and time.

    ``amount`` is what is counted above the line, None for a pure rate (1/h). ``scale`` is the
    size in base units: mmol, g, C-mmol, g of carbon, e-mmol above the line; g, L, C-mmol,
    mmol, h below it. ``per`` are the dimensions below the line, in the order written.
    ``form`` is the form in which grams were weighed.
    """

    text: str
    amount: Dimension | None
    scale: Fraction
    per: tuple[Dimension, ...]
    form: WeighedForm = FREE

    @property
    def is_rate(self) -> bool:
        """Whether it is per time."""
        return Dimension.TIME in self.per

    @property
    def is_growth(self) -> bool:
        """Whether it is a growth rate's: nothing but per time."""
        return self.amount is None and self.per == (Dimension.TIME,)


_TOKEN = pattern_of(
    r"(?P<number>\d+(?:\.\d+)?)|(?P<slash>/)|(?P<times>[*·×])|(?P<open>\()|(?P<close>\))"
    r"|(?P<word>(?:[kmunµμ]?[Ce]-)?[A-Za-zµμ]+)(?P<power>\^?[+-]?\d+)?|(?P<blank>\s+)"
)


_LONGEST = 100
_LARGEST = 10**9
"""No larger number stands in a unit, and none smaller than one by it."""

_JOINS = ("slash", "times")


@record
class Factor:
    """A word of a unit with its power, as it was written."""

    word: Word
    power: int
    written: str


def parse_unit(text: str) -> Unit:
    """Read a unit.

    Accepts ``mmol/g/h``, ``mmol/(g h)``, ``mmol g-1 h-1``, ``mmol per g per h``, ``mM``,
    ``mmol per 100 mmol``, ``C-mol/C-mol/h``, ``gC/L``, ``g/gDW/h``, ``1/h``, ``h-1``; behind it
    ``as ion``, ``as sodium salt``, ``as hydrochloride``, ``monohydrate``.

    Raises
    ------
    UnitError
        UNKNOWN where a word cannot be read; WRONG where it is no amount or rate.

    Examples
    --------
    >>> unit = parse_unit("mg/L/min")
    >>> unit.amount.value, unit.scale, [d.value for d in unit.per]
    ('g', Fraction(3, 50), ['L', 'h'])
    """
    plain = unicodedata.normalize("NFKC", text).replace("\u2212", "-").strip()
    if len(plain) > _LONGEST:
        raise UnitError(UnitFault.UNKNOWN, f"`{plain[:20]}...` is too long for a unit", plain)
    body, form = split_form(plain)
    body = re.sub(r"\bper\b", "/", body)
    if not body.strip():
        raise UnitError(UnitFault.UNKNOWN, "there is no unit", text)
    scale, factors = read_factors(body)
    amount: Dimension | None = None
    below: list[Dimension] = []
    for factor in factors:
        dimension = factor.word.dimension
        scale *= factor.word.scale**factor.power
        if dimension is Dimension.OTHER:
            raise UnitError(UnitFault.WRONG,
                            f"`{factor.written}` measures no amount, volume or time",
                            factor.written)  # fmt: skip
        if factor.power < 0:
            below.extend([dimension] * -factor.power)
            continue
        if factor.power > 1 or not dimension.is_amount:
            where = f"{factor.written} stands above the line"
            hint = " (write mmol/g/h, with a / before each word)" if below else ""
            raise UnitError(UnitFault.WRONG, f"{where}: this is no amount or rate{hint}",
                            factor.written)  # fmt: skip
        if amount is not None:
            raise UnitError(UnitFault.WRONG, "two amounts stand above the line", factor.written)
        amount = dimension
    if len(set(below)) < len(below):
        raise UnitError(UnitFault.WRONG, f"`{plain}` divides twice by the same thing", plain)
    if amount is None and below != [Dimension.TIME]:
        raise UnitError(UnitFault.WRONG, f"`{plain}` counts no amount of anything", plain)
    if form != FREE and amount is not Dimension.MASS:
        raise UnitError(UnitFault.WRONG, f"`{form.words}` can be said of grams only", form.words)
    return Unit(plain, amount, scale, tuple(below), form)


def read_factors(body: str) -> tuple[Fraction, list[Factor]]:
    """The number before a unit and its words with their powers, whatever they measure."""
    scale = Fraction(1)
    factors: list[Factor] = []
    sign, inside = 1, False  # below the line for the next factor, or for a whole bracket
    place, before = 0, ""
    while place < len(body):
        match = _TOKEN.match(body, place)
        if match is None:
            raise UnitError(UnitFault.UNKNOWN, f"`{body[place]}` stands in no unit", body[place])
        place, kind = match.end(), match.lastgroup or ""
        if kind == "blank":
            continue
        if not _may_follow(kind, before, inside=inside):
            raise UnitError(UnitFault.UNKNOWN, f"`{match[0]}` cannot stand there", match[0])
        before = kind
        if match["slash"]:
            sign = -1
        elif match["open"]:
            inside = True
        elif match["close"]:
            inside, sign = False, 1
        elif match["number"]:
            number = Fraction(match["number"])
            if not number:
                raise UnitError(UnitFault.WRONG, "a unit holds the number 0", match["number"])
            if not Fraction(1, _LARGEST) <= number <= _LARGEST:
                raise UnitError(UnitFault.WRONG, f"`{match[0]}` is out of reach", match[0])
            scale *= number**sign
        elif match["word"]:
            power = int((match["power"] or "1").lstrip("^")[:4])
            if not 0 < abs(power) < 10:
                raise UnitError(UnitFault.WRONG, f"`{match[0]}` is no amount or rate", match[0])
            if factors and match["word"].lower() in MARKS and factors[-1].power < 0:
                continue  # "g DW": tells what the grams are of
            if match["word"] in CONCENTRATIONS:
                amount = WORDS[CONCENTRATIONS[match["word"]]]
                factors.append(Factor(amount, sign * power, match[0]))
                factors.append(Factor(WORDS["L"], -sign * power, match[0]))
            else:
                word, power = _word(match["word"], power)
                factors.append(Factor(word, sign * power, match[0]))
            sign = sign if inside else 1
    if inside or before in _JOINS:
        raise UnitError(UnitFault.UNKNOWN, f"`{body.strip()}` is not finished", body)
    return scale, factors


def _may_follow(kind: str, before: str, *, inside: bool) -> bool:
    """Whether a part of a unit may stand behind another: no ``**``, no bracket in a bracket."""
    if kind in _JOINS:
        return before not in ("open", *_JOINS) and (bool(before) or kind == "slash")
    if kind == "open":
        return not inside
    if kind == "close":
        return inside and before not in ("open", *_JOINS)
    return kind != "number" or before in ("", "open", *_JOINS)


def _word(written: str, power: int) -> tuple[Word, int]:
    """A word of practice, else one that pint knows; a cube of a length is a volume."""
    cubed = WORDS.get(f"{written}{abs(power)}") if abs(power) == 3 else None
    if cubed is not None:
        return cubed, 1 if power > 0 else -1
    word = WORDS.get(written) or look_up(written)
    if word is None:
        raise UnitError(UnitFault.UNKNOWN, f"`{written}` is no unit that is known here", written)
    return word, power
