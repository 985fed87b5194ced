"""Titles of raw columns taken apart: name, unit, what further header rows say."""

from __future__ import annotations

import re
from collections.abc import Sequence
from functools import lru_cache

from fluxnet.chemistry.units import UnitError
from fluxnet.chemistry.units_measured import MeasuredUnit, read_measured_unit
from fluxnet.ground.record import record
from fluxnet.tables.raw_grid import RawValue, shown
from fluxnet.tables.titles import SD_END, SD_START

__all__ = ["RawTitle", "is_header_row_below", "read_raw_title", "try_unit"]

_BRACKETS = re.compile(r"(?P<name>.*?)\s*[\[(](?P<unit>(?:[^\[\]()]|\([^()]*\))*)[\])]\s*")
_OVER = re.compile(r"(?P<name>.*\S)\s+/\s+\(?(?P<unit>[^()]+?)\)?\s*")
_TAIL = re.compile(r"(?P<name>.*[^\s,_])(?:,\s*|\s+|_)(?P<unit>\S+(?:\s?(?:v/v|w/v|w/w))?)")
_SET = frozenset({"set point", "setpoint", "set", "sp", "sollwert", "soll", "target", "set value"})
_VALUE = frozenset({
    "value", "pv", "actual", "istwert", "ist", "mean", "average", "measured", "mw", "mittelwert",
    "wert", "process value", "reading", "messwert", "online", "offline", "on-line", "off-line",
})  # fmt: skip
_SDS = frozenset({
    "sd", "s.d.", "±", "+-", "+/-", "stdev", "std", "std dev", "standard deviation", "error",
    "stabw", "standardabweichung", "fehler",
})  # fmt: skip
_ALONE = frozenset({
    "mM", "µM", "uM", "ppm", "ppb", "vvm", "rpm", "bar", "mbar", "mL", "kg", "barg",
})  # fmt: skip


@record
class RawTitle:
    """One column's title.

    ``is_sd`` marks the errors of a quantity (with an empty name: of the column to the left),
    ``is_set`` what a controller was told to hold, which nobody measured.
    """

    column: int
    shown: str
    name: str
    unit: str = ""
    is_sd: bool = False
    is_set: bool = False


@lru_cache(4096)
def try_unit(text: str) -> MeasuredUnit | None:
    """A unit, or None where the text is none that raw data hold.

    Examples
    --------
    >>> try_unit("g/L").measure.value, try_unit("operator")
    ('mmol/L', None)
    """
    try:
        return read_measured_unit(text)
    except UnitError:
        return None


def read_raw_title(column: int, cells: Sequence[RawValue]) -> RawTitle:
    """Take the title of a column apart; ``cells`` are its one to three header rows.

    Examples
    --------
    >>> read_raw_title(0, ["Glucose", "value", "[g/L]"])
    RawTitle(column=0, shown='Glucose [g/L]', name='Glucose', unit='g/L', is_sd=False, is_set=False)
    >>> read_raw_title(0, ["O2 out / %"]).unit, read_raw_title(0, ["glucose sd (g/L)"]).is_sd
    ('%', True)
    """
    texts = [" ".join(shown(c).split()) for c in cells]
    name, unit = _split_unit(texts[0])
    is_sd = is_set = False
    for text in texts[1:]:
        bare = text.strip("[]").strip()
        bare = bare[1:-1].strip() if bare.startswith("(") and bare.endswith(")") else bare
        if not bare or bare in "-–":
            continue
        if bare.lower() in _SET:
            is_set = True
        elif bare.lower() in _SDS:
            is_sd = True
        elif bare.lower() in _VALUE:
            continue
        elif not unit and (try_unit(bare) is not None or text != bare):
            unit = bare
        elif not name:
            name, unit = _split_unit(text)
        elif not unit:
            unit = bare
    if name.lower() in _SDS:
        name, is_sd = "", True
    told = SD_END.fullmatch(name) or SD_START.fullmatch(name)
    if told is not None:
        name, is_sd = told["name"], True
    words = name.lower()
    for word in _SET:
        if words.endswith((f" {word}", f"_{word}", f".{word}")):
            name, is_set = name[: -len(word) - 1], True
            break
    for word in ("pv", "value", "istwert"):
        if words.endswith((f" {word}", f"_{word}", f".{word}")):
            name = name[: -len(word) - 1]
    label = texts[0] if not unit or unit in texts[0] else f"{texts[0]} [{unit}]"
    return RawTitle(column, label, name.strip(), unit, is_sd, is_set)


def _split_unit(text: str) -> tuple[str, str]:
    """Name and unit of a title: in brackets, over a line, or as its last word."""
    found = _BRACKETS.fullmatch(text)
    if found is not None and found["name"]:
        inside = found["unit"].strip()
        if "[" in text or try_unit(inside) is not None:
            return found["name"], inside
    found = _OVER.fullmatch(text)
    if found is not None and try_unit(found["unit"]) is not None:
        return found["name"], found["unit"]
    found = _TAIL.fullmatch(text)
    if found is not None:
        last = found["unit"]
        marked = last in _ALONE or any(sign in last for sign in "/%°")
        if marked and (last == "rpm" or try_unit(last) is not None):
            return found["name"], last
    return text, ""


def is_header_row_below(cells: Sequence[RawValue]) -> bool:
    """Whether a row under titles belongs to them: units, ``value``, ``set point``, ``sd``."""
    texts = [shown(c).strip() for c in cells if c != ""]
    if not texts or any(not isinstance(c, str) for c in cells):
        return False

    def belongs(text: str) -> bool:
        bare = text.strip("[]()").strip()
        in_brackets = text[0] in "[(" and text[-1] in "])"
        known = bare.lower() in _SET | _VALUE | _SDS or bare in ("", "-", "–", "rpm")
        return in_brackets or known or (not bare[0].isdigit() and try_unit(bare) is not None)

    fitting = sum(belongs(t) for t in texts)
    return fitting == len(texts) or (fitting >= 2 and 2 * fitting > len(texts) and all(
        belongs(t) or not any(c.isdigit() for c in t) for t in texts
    ))  # fmt: skip
