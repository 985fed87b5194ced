"""Numbers as people write them: decimal point or comma, thousands signs, per cent, ±.

Nothing is guessed by a factor of a thousand: a text that can be read in two ways is told
apart by the other numbers of the table, and refused where they do not help.
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from enum import Enum
from functools import lru_cache

from fluxnet.ground.pattern import pattern_of
from fluxnet.ground.record import record
from fluxnet.tables.grid import Cell

__all__ = [
    "Decimal",
    "Numeral",
    "decide_decimal",
    "possible_decimals",
    "read_number",
    "split_numeral",
    "two_readings",
]


class Decimal(Enum):
    """The sign between whole and fraction."""

    POINT = "."
    COMMA = ","

    @property
    def thousands(self) -> str:
        """The sign that the other convention uses, here between thousands."""
        return "," if self is Decimal.POINT else "."


_BLANKS = " \u00a0\u2009\u202f'\u2019"
_PATTERNS = {
    d: pattern_of(
        rf"[+-]?(?:(?P<whole>\d+)|(?P<grouped>[1-9]\d{{0,2}}(?:(?P<sign>[{re.escape(d.thousands)}{_BLANKS}])\d{{3}})"
        rf"(?:(?P=sign)\d{{3}})*))?(?:{re.escape(d.value)}(?P<fraction>\d*))?(?:[eE][+-]?\d+)?",
        re.ASCII,
    )
    for d in Decimal
}
_PLAIN = pattern_of(r"[+-]?(?P<whole>\d+)(?:\.(?P<fraction>\d+))?", re.ASCII)
_LONGEST_PLAIN = 300  # more digits may be beyond what a float holds
_MOST_KEPT = 1 << 16
_INFINITE = pattern_of(r"[+-]?(nan|inf|infinity|∞)", re.IGNORECASE)


@record
class Numeral:
    """The parts of a cell: ``4.2 ± 5 %`` has a value, an error, and the error in per cent."""

    value: str
    error: str = ""
    percent: bool = False
    error_percent: bool = False


@lru_cache(_MOST_KEPT)
def split_numeral(text: str) -> Numeral:
    """Take a cell apart at ``±`` (or ``+-``) and at ``%``.

    Examples
    --------
    >>> split_numeral("4,2 ± 5 %")
    Numeral(value='4,2', error='5', percent=False, error_percent=True)
    """
    value, _, error = text.replace("+/-", "±").replace("+-", "±").partition("±")
    value, error = value.strip(), error.strip()
    return Numeral(
        value.rstrip("%").strip(),
        error.rstrip("%").strip(),
        value.endswith("%"),
        error.endswith("%"),
    )


@lru_cache(_MOST_KEPT)
def read_number(text: str, decimal: Decimal) -> float | None:
    """The number a text stands for, or None.

    Examples
    --------
    >>> read_number("1.234,5", Decimal.COMMA), read_number("1.234,5", Decimal.POINT)
    (1234.5, None)
    """
    if decimal is Decimal.POINT and len(text) < _LONGEST_PLAIN and _PLAIN.fullmatch(text):
        return float(text)
    text = text.replace("\u2212", "-").strip()
    found = _PATTERNS[decimal].fullmatch(text)
    if found is None or not (found["whole"] or found["grouped"] or found["fraction"]):
        return None
    for sign in _BLANKS + decimal.thousands:
        text = text.replace(sign, "")
    number = float(text.replace(decimal.value, "."))
    return number if abs(number) < float("inf") else None


_POINT_ALONE = frozenset({Decimal.POINT})
_EITHER = frozenset(Decimal)
_NEITHER: frozenset[Decimal] = frozenset()


def is_infinite(text: str) -> bool:
    """Whether the text says NaN or infinity."""
    return _INFINITE.fullmatch(text.strip()) is not None


def possible_decimals(text: str) -> frozenset[Decimal]:
    """The decimal signs that a number tells of: none where it can be read with either alike.

    Examples
    --------
    >>> sorted(d.name for d in possible_decimals("1.234"))
    ['COMMA', 'POINT']
    >>> [d.name for d in possible_decimals("0,123")], possible_decimals("12")
    (['COMMA'], frozenset())
    """
    plain = _PLAIN.fullmatch(text)
    if plain is not None and len(text) < _LONGEST_PLAIN:
        whole, fraction = plain["whole"], plain["fraction"]
        if fraction is None:
            return _NEITHER
        # a sign between thousands has three digits behind it, and one to three before it
        grouped = len(fraction) == 3 and len(whole) <= 3 and whole[0] != "0"
        return _EITHER if grouped else _POINT_ALONE
    values = {d: read_number(text, d) for d in Decimal}
    readable = {d: v for d, v in values.items() if v is not None}
    if len(readable) == 2 and len(set(readable.values())) == 1:
        return frozenset()
    return frozenset(readable)


@record
class DecimalChoice:
    """The decimal sign of a table; ``said`` where the table shows it, by the cell ``evidence``.

    ``doubtful`` cells can be read in two ways and nothing decides; ``disputed`` ones too, and
    with the sign that the other numbers show they would be a thousand times what they are with
    the other, which no number proves; ``contrary`` ones are written with the other sign.
    """

    decimal: Decimal
    said: bool
    evidence: Cell | None = None
    doubtful: tuple[Cell, ...] = ()
    disputed: tuple[Cell, ...] = ()
    contrary: tuple[Cell, ...] = ()

    @property
    def refused(self) -> tuple[Cell, ...]:
        """All cells whose number is not taken."""
        return self.doubtful + self.disputed + self.contrary


def two_readings(text: str) -> tuple[str, str]:
    """The numbers that a cell with one sign and three digits behind it may stand for.

    Examples
    --------
    >>> two_readings("1,234 %")
    ('1.234', '1234')
    """
    parts = split_numeral(text)
    numeral = next((t for t in (parts.value, parts.error) if len(possible_decimals(t)) == 2), "")
    return numeral.replace(",", "."), numeral.replace(",", "").replace(".", "")


def decide_decimal(cells: Iterable[Cell], separator: str | None) -> DecimalChoice:
    """Find the decimal sign of a table from all its numbers.

    In a comma-separated file a single point is a decimal point: who writes decimal commas
    separates by semicolon or tab. A sign before three digits is taken as a thousands sign only
    where another number proves that thousands are marked (``1.234,5``, ``1.234.567``).
    """
    # cells by their id: hashing what they hold takes longer than reading it
    votes: dict[Decimal, dict[int, Cell]] = {d: {} for d in Decimal}
    open_cells: dict[str, dict[int, Cell]] = {d.value: {} for d in Decimal}
    marked: set[Decimal] = set()
    for cell in cells:
        if cell.number is not None:
            continue
        parts = split_numeral(cell.text)
        for text in filter(None, (parts.value, parts.error)):
            possible = possible_decimals(text)
            if len(possible) == 1:
                sign = next(iter(possible))
                votes[sign][id(cell)] = cell
                if sign.thousands in text:
                    marked.add(sign)
            elif possible and separator == "," and "," not in text:
                votes[Decimal.POINT][id(cell)] = cell
            elif possible:
                open_cells["," if "," in text else "."][id(cell)] = cell
    point, comma = votes[Decimal.POINT], votes[Decimal.COMMA]
    if not point and not comma:
        doubtful = tuple({**open_cells["."], **open_cells[","]}.values())
        return DecimalChoice(Decimal.POINT, False, doubtful=doubtful)
    chosen = Decimal.COMMA if len(comma) > len(point) else Decimal.POINT
    contrary = point if chosen is Decimal.COMMA else comma
    disputed = {} if chosen in marked else open_cells[chosen.thousands]
    return DecimalChoice(
        chosen,
        True,
        next(iter(votes[chosen].values())),
        disputed=tuple(c for k, c in disputed.items() if k not in contrary),
        contrary=tuple(contrary.values()),
    )
