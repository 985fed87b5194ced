"""Numbers as people write them: decimal point or comma, thousands signs, per cent, ±.

Nothing is guessed by a factor of a thousand: a text that can be read in two ways is told
apart by the other numbers of the table, and refused where they do not help.
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from enum import Enum

from fluxnet.ground.record import record
from fluxnet.tables.grid import Cell

__all__ = [
    "Decimal",
    "Numeral",
    "decide_decimal",
    "possible_decimals",
    "read_number",
    "split_numeral",
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
    d: re.compile(
        rf"[+-]?(?:(?P<whole>\d+)|(?P<grouped>[1-9]\d{{0,2}}(?:(?P<sign>[{re.escape(d.thousands)}{_BLANKS}])\d{{3}})"
        rf"(?:(?P=sign)\d{{3}})*))?(?:{re.escape(d.value)}(?P<fraction>\d*))?(?:[eE][+-]?\d+)?",
        re.ASCII,
    )
    for d in Decimal
}
_INFINITE = re.compile(r"[+-]?(nan|inf|infinity|∞)", re.IGNORECASE)


@record
class Numeral:
    """The parts of a cell: ``4.2 ± 5 %`` has a value, an error, and the error in per cent."""

    value: str
    error: str = ""
    percent: bool = False
    error_percent: bool = False


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


def read_number(text: str, decimal: Decimal) -> float | None:
    """The number a text stands for, or None.

    Examples
    --------
    >>> read_number("1.234,5", Decimal.COMMA), read_number("1.234,5", Decimal.POINT)
    (1234.5, None)
    """
    text = text.replace("\u2212", "-").strip()
    found = _PATTERNS[decimal].fullmatch(text)
    if found is None or not (found["whole"] or found["grouped"] or found["fraction"]):
        return None
    for sign in _BLANKS + decimal.thousands:
        text = text.replace(sign, "")
    number = float(text.replace(decimal.value, "."))
    return number if abs(number) < float("inf") else None


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
    values = {d: read_number(text, d) for d in Decimal}
    readable = {d: v for d, v in values.items() if v is not None}
    if len(readable) == 2 and len(set(readable.values())) == 1:
        return frozenset()
    return frozenset(readable)


@record
class DecimalChoice:
    """The decimal sign of a table; ``said`` where the table shows it, ``doubtful`` the cells.

    ``doubtful`` cells can be read in two ways and nothing decides; ``contrary`` ones are
    written with the other sign than the rest.
    """

    decimal: Decimal
    said: bool
    doubtful: tuple[Cell, ...] = ()
    contrary: tuple[Cell, ...] = ()


def decide_decimal(cells: Iterable[Cell], separator: str | None) -> DecimalChoice:
    """Find the decimal sign of a table from all its numbers.

    In a comma-separated file a single point is a decimal point: who writes decimal commas
    separates by semicolon or tab.
    """
    votes: dict[Decimal, list[Cell]] = {d: [] for d in Decimal}
    doubtful: list[Cell] = []
    for cell in cells:
        if cell.number is not None:
            continue
        parts = split_numeral(cell.text)
        for text in filter(None, (parts.value, parts.error)):
            possible = possible_decimals(text)
            if len(possible) == 1:
                votes[next(iter(possible))].append(cell)
            elif possible:
                is_point = separator == "," and "," not in text
                (votes[Decimal.POINT] if is_point else doubtful).append(cell)
    point, comma = votes[Decimal.POINT], votes[Decimal.COMMA]
    if point or comma:
        chosen = Decimal.COMMA if len(comma) > len(point) else Decimal.POINT
        other = point if chosen is Decimal.COMMA else comma
        return DecimalChoice(chosen, True, contrary=tuple(dict.fromkeys(other)))
    return DecimalChoice(Decimal.POINT, False, doubtful=tuple(dict.fromkeys(doubtful)))
