"""What the title of a column says: a fixed column, or a quantity with direction and unit."""

from __future__ import annotations

import re
from dataclasses import replace
from enum import Enum

from fluxnet.ground.pattern import pattern_of
from fluxnet.ground.record import record
from fluxnet.tables.grid import Cell
from fluxnet.tables.rate_units import is_unit
from fluxnet.tables.vocabulary import is_growth_rate, read_direction, split_direction

__all__ = [
    "SD_END", "SD_START", "Key", "Title", "is_header_part", "is_like_unit", "read_title",
    "settle_keys",
]  # fmt: skip


class Key(Enum):
    """The columns that a table may have beside its quantities."""

    RUN = "run"
    SPECIES = "species"
    DIRECTION = "direction"
    RATE = "rate"
    SD = "sd"
    UNIT = "unit"
    SHARED = "shared error biomass"
    CONCENTRATION = "biomass concentration"


_WORDS = {
    **dict.fromkeys((
        "run", "run id", "sample", "sample id", "experiment", "experiment id", "cultivation",
        "fermentation", "batch", "reactor", "vessel", "versuch", "probe", "ansatz", "charge",
        "lauf",
    ), Key.RUN),
    **dict.fromkeys((
        "species", "quantity", "compound", "substance", "metabolite", "analyte", "stoff",
        "substanz", "verbindung", "größe", "komponente",
    ), Key.SPECIES),
    **dict.fromkeys(("direction", "in/out", "in or out", "richtung"), Key.DIRECTION),
    **dict.fromkeys((
        "rate", "value", "amount", "measured", "specific rate", "q", "mean", "average", "wert",
        "messwert", "menge", "mittelwert",
    ), Key.RATE),
    **dict.fromkeys((
        "sd", "s.d.", "±", "+-", "+/-", "stdev", "std", "std dev", "standard deviation", "error",
        "stabw", "standardabweichung", "fehler",
    ), Key.SD),
    **dict.fromkeys(("unit", "units", "einheit", "einheiten"), Key.UNIT),
    **dict.fromkeys(("shared error", "shared error biomass"), Key.SHARED),
    "biomass concentration": Key.CONCENTRATION,
}  # fmt: skip
_MEANS = frozenset({"mean", "average", "mittelwert"})
_BRACKETS = pattern_of(r"(?P<name>.*?)\s*(?:\[(?P<square>[^\[\]]*)\]|\((?P<round>[^()]*)\))\s*")
SD_END = pattern_of(
    r"(?P<name>.*\S)[\s_]+(?:sd|s\.d\.|stdev|std|±|\+/?-|standard deviation|error)", re.I
)
SD_START = pattern_of(
    r"(?:sd|s\.d\.|stdev|std|±|\+/?-|standard deviation)(?:[\s_]+of)?[\s_]+(?P<name>.+)", re.I
)
_LIKE_UNIT = pattern_of(
    r"[^\W\d]{2,}[\w-]*(?:\s*/\s*\(?[\w-]+\)?)+|[^\W\d]+(?:[ *·][^\W\d]+\^?[-\u2212]\d)+"
)


@record
class Title:
    """A title taken apart.

    ``name`` and ``direction`` are those of a quantity (``glucose``, ``in``); ``key`` says
    that the whole title is a fixed column. ``is_sd`` marks the sd of a quantity (with an
    empty name: of the column to the left). ``unit`` is the text in brackets, ``bracketed``
    whether there were any.
    """

    cell: Cell
    name: str
    direction: str = ""
    unit: str = ""
    bracketed: bool = False
    key: Key | None = None
    is_sd: bool = False


def read_title(cell: Cell, below: tuple[str, ...] = ()) -> Title:
    """Take the title of a column apart.

    ``below`` are the cells of further header rows in the column: a unit, a direction, ``sd``.
    """
    text = " ".join(cell.text.split())
    unit, bracketed = "", False
    found = _BRACKETS.fullmatch(text)
    if found is not None:
        inside = found["square"] if found["square"] is not None else found["round"]
        if found["square"] is not None or is_unit(inside) or inside.strip() == "%":
            text, unit, bracketed = found["name"], inside.strip(), True
    words = []
    for part in below:
        bare = part.strip().strip("[]()").strip()
        if not bare or bare in "-–" or (is_growth_rate(bare) and is_growth_rate(text)):
            continue
        if read_direction(bare) or _WORDS.get(bare.lower()) in (Key.SD, Key.RATE):
            words.append(bare)
        else:
            unit, bracketed = bare, True
    words = [w for w in words if _WORDS.get(w.lower()) is not Key.RATE]
    text = " ".join([text, *words]).strip()
    key = _WORDS.get(text.lower().replace("_", " "))
    if key is Key.SD:
        return Title(cell, "", unit=unit, bracketed=bracketed, key=key, is_sd=True)
    if key is not None:
        return Title(cell, text, unit=unit, bracketed=bracketed, key=key)
    sd = SD_END.fullmatch(text) or SD_START.fullmatch(text)
    if sd is not None and _WORDS.get(sd["name"].lower()) is Key.CONCENTRATION:
        return Title(cell, sd["name"], "", unit, bracketed, Key.CONCENTRATION, is_sd=True)
    name, direction = split_direction(sd["name"] if sd else text)
    return Title(cell, name, direction, unit, bracketed, is_sd=sd is not None)


def settle_keys(titles: tuple[Title, ...]) -> tuple[Title, ...]:
    """Titles of which only one is the run and one the rate, whatever else is called like them.

    A column ``run`` goes before ``batch`` and ``sample``, a column ``rate`` before ``mean``; the
    others are carried through. Two columns with one title stay a fault.
    """
    chosen: dict[Key, str] = {}
    for key, weak in ((Key.RUN, frozenset(_WORDS) - {"run"}), (Key.RATE, _MEANS)):
        words = [_word(t) for t in titles if t.key is key and not t.is_sd]
        strong = [w for w in words if w not in weak]
        if words:
            chosen[key] = (strong or words)[0]
    return tuple(
        replace(t, key=None, name="")
        if t.key in chosen
        and _word(t) != chosen[t.key]
        and (t.key is Key.RUN or _word(t) in _MEANS)
        else t
        for t in titles
    )


def _word(title: Title) -> str:
    return title.name.lower().replace("_", " ")


def is_header_part(text: str) -> bool:
    """Whether a cell below a title can belong to the header: a unit, a direction, ``sd``."""
    bare = text.strip()
    if bare.startswith("[") and bare.endswith("]"):
        return True
    bare = bare.strip("()").strip()
    if bare in ("", "-", "–", "%") or read_direction(bare):
        return True
    if _WORDS.get(bare.lower()) in (Key.SD, Key.RATE) or is_growth_rate(bare):
        return True
    return is_unit(bare)


def is_like_unit(text: str) -> bool:
    """Whether a cell below a title is built like a unit, known or not: ``kibbles/g/h``.

    Examples
    --------
    >>> is_like_unit("mmol/gTM/h"), is_like_unit("n/a"), is_like_unit("1.5")
    (True, False, False)
    """
    return _LIKE_UNIT.fullmatch(text.strip("[]() ")) is not None
