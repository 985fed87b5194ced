"""Formulas as text: ``C6H12O6``, ``CH1.8O0.5N0.2``, ``C2H3O2(-)``, ``(NH4)2SO4``."""

from __future__ import annotations

import unicodedata
from dataclasses import dataclass
from enum import Enum
from fractions import Fraction

from fluxnet.chemistry.elements import ATOMIC_WEIGHT
from fluxnet.chemistry.formula import Formula
from fluxnet.ground.pattern import pattern_of

__all__ = ["FormulaError", "FormulaFault", "read_formula"]


class FormulaFault(Enum):
    """What is wrong with the text of a formula."""

    BAD = "bad"
    UNKNOWN_ELEMENT = "unknown element"


class FormulaError(ValueError):
    """A text that is no formula.

    ``position`` and ``end`` count characters of the text (as normalised) from 0: the place
    that cannot be read. ``kind`` tells a mistake of form from a letter that is no element.
    """

    def __init__(self, kind: FormulaFault, message: str, position: int, end: int) -> None:
        super().__init__(message)
        self.kind = kind
        self.position = position
        self.end = max(end, position + 1)


_NUMBER = pattern_of(r"\d+(?:\.\d+)?|\.\d+")
_PLAIN = pattern_of(r"(?:[A-Z][a-z]?[0-9]{0,9})+")
_ELEMENT = pattern_of(r"([A-Z][a-z]?)([0-9]*)")
_SYMBOL = pattern_of(r"[A-Z][a-z]?")
_WORD = pattern_of(r"[A-Za-z]+")
_CHARGE_WORD = pattern_of(r"\s+charge(?:\s+|(?=[+-]))([+-]?)\s*(\d+(?:\.\d+)?|\.\d+)\s*$")
_CHARGE_BRACKET = pattern_of(r"\s*\((?:(\d*\.?\d*)([+-])|([+-])(\d+\.?\d*))\)\s*$")
_ZERO = Fraction(0)


@dataclass(slots=True, eq=False, repr=False)
class _Amount:
    """A count with half a unit of its last written decimal."""

    count: Fraction = _ZERO
    half: Fraction = _ZERO

    def times(self, factor: _Amount) -> _Amount:
        # the largest deviation of the product, so its last term too
        half = self.half * factor.count + self.count * factor.half + self.half * factor.half
        return _Amount(self.count * factor.count, half)


_Counts = dict[str, _Amount]


def read_formula(text: str) -> Formula:
    """The composition that a text states.

    Elements with whole or decimal counts, brackets with a count behind them, a crystal water
    behind a middle dot (``MgSO4·7H2O``), and a charge written ``charge -1``, ``(-)``,
    ``(2-)`` or ``(-2)``. Half a unit of each last written decimal is kept; whole numbers are
    exact. An element written twice is added up.

    Raises
    ------
    FormulaError
        Where the text cannot be read, with the place.

    Examples
    --------
    >>> read_formula("CH1.8O0.5N0.2").counts[1]
    ('H', Fraction(9, 5))
    >>> read_formula("C4H4O4(2-)").charge, read_formula("C2H3O2 charge -1").charge
    (Fraction(-2, 1), Fraction(-1, 1))
    >>> read_formula("CH1.8").half_unit("H")
    Fraction(1, 20)
    """
    written = text.strip()
    plain = _read_plain(written)
    if plain is not None:
        return plain
    normal = unicodedata.normalize("NFKC", text).replace("\u2212", "-").replace("\u00d7", "*")
    body, charge = _take_charge(normal)
    lead = len(body) - len(body.lstrip())
    body = body.rstrip()
    if not body.strip():
        raise FormulaError(FormulaFault.BAD, "there is no formula", 0, max(len(normal), 1))
    total: _Counts = {}
    for part in _split_at_dots(body, lead):
        _read_part(body, part, total)
    counts = tuple((e, a.count) for e, a in total.items() if a.count)
    if not counts:
        raise FormulaError(FormulaFault.BAD, "every count is zero", lead, len(body))
    halves = tuple((e, a.half) for e, a in total.items() if a.count and a.half)
    return Formula(counts, charge, halves, written)


def _read_plain(written: str) -> Formula | None:
    """A formula of elements with whole numbers alone, as most are; None of any other text."""
    if not _PLAIN.fullmatch(written):
        return None
    counts: dict[str, int] = {}
    for symbol, number in _ELEMENT.findall(written):
        if symbol not in ATOMIC_WEIGHT:
            return None
        counts[symbol] = counts.get(symbol, 0) + int(number or 1)
    if not all(counts.values()):
        return None
    return Formula(tuple((e, Fraction(n)) for e, n in counts.items()), _ZERO, (), written)


def _take_charge(text: str) -> tuple[str, Fraction]:
    """The text before a charge, and the charge."""
    match = _CHARGE_WORD.search(text)
    if match:
        sign = -1 if match[1] == "-" else 1
        return text[: match.start()], sign * Fraction(match[2])
    match = _CHARGE_BRACKET.search(text)
    if match and match[1] != ".":
        sign = -1 if (match[2] or match[3]) == "-" else 1
        return text[: match.start()], sign * Fraction(match[1] or match[4] or 1)
    return text, _ZERO


def _split_at_dots(body: str, lead: int) -> list[tuple[int, int]]:
    """Start and end of the parts between middle dots."""
    parts: list[tuple[int, int]] = []
    start = lead
    for place, letter in enumerate(body):
        if letter in "·*":
            parts.append((start, place))
            start = place + 1
    parts.append((start, len(body)))
    return parts


def _read_part(body: str, part: tuple[int, int], total: _Counts) -> None:
    """Add one part of the formula, with the number before it, to the total."""
    start, end = part
    factor = _Amount(Fraction(1))
    if start > 0 and body[start - 1] in "·*":
        factor, start = _read_count(body, start, end)
    counts, place = _read_group(body, start, end, depth=0)
    if not counts:
        raise FormulaError(FormulaFault.BAD, "a formula ends where an element should stand",
                           max(place - 1, 0), place)  # fmt: skip
    _add(total, counts, factor)


def _read_group(body: str, place: int, end: int, depth: int) -> tuple[_Counts, int]:
    """Elements and brackets up to the closing bracket or the end."""
    counts: _Counts = {}
    while place < end:
        letter = body[place]
        if letter == ")":
            if depth == 0:
                raise FormulaError(FormulaFault.BAD, "a bracket closes that was never opened",
                                   place, place + 1)  # fmt: skip
            return counts, place
        if letter == "(":
            inner, closing = _read_group(body, place + 1, end, depth + 1)
            if closing >= end:
                raise FormulaError(FormulaFault.BAD, "a bracket is not closed", place, place + 1)
            if not inner:
                raise FormulaError(FormulaFault.BAD, "the brackets hold nothing", place, closing)
            factor, place = _read_count(body, closing + 1, end)
            _add(counts, inner, factor)
            continue
        symbol, place = _read_symbol(body, place, end)
        amount, place = _read_count(body, place, end)
        _add(counts, {symbol: _Amount(Fraction(1))}, amount)
    return counts, place


def _read_symbol(body: str, place: int, end: int) -> tuple[str, int]:
    """The element at a place."""
    match = _SYMBOL.match(body, place, end)
    if match is None:
        word = _WORD.match(body, place, end)
        if word:
            raise FormulaError(FormulaFault.UNKNOWN_ELEMENT,
                               f"`{word[0]}` is no element: symbols begin with a capital",
                               place, word.end())  # fmt: skip
        letter = body[place]
        reason = {
            ",": "a comma stands in a formula: decimals are written with a point",
            " ": "a blank stands inside a formula",
        }.get(letter, f"`{letter}` cannot stand here")
        raise FormulaError(FormulaFault.BAD, reason, place, place + 1)
    if match[0] in ATOMIC_WEIGHT:
        return match[0], match.end()
    raise FormulaError(FormulaFault.UNKNOWN_ELEMENT, f"`{match[0]}` is no element",
                       place, match.end())  # fmt: skip


def _read_count(body: str, place: int, end: int) -> tuple[_Amount, int]:
    """The number at a place, 1 where there is none."""
    match = _NUMBER.match(body, place, end)
    if match is None:
        return _Amount(Fraction(1)), place
    digits = match[0].partition(".")[2]
    half = Fraction(1, 2 * 10 ** len(digits)) if digits else _ZERO
    return _Amount(Fraction(match[0]), half), match.end()


def _add(total: _Counts, counts: _Counts, factor: _Amount) -> None:
    for element, amount in counts.items():
        more = amount.times(factor)
        before = total.get(element, _Amount())
        total[element] = _Amount(before.count + more.count, before.half + more.half)
