"""What the title of a column says: a fixed column, or a quantity with direction and unit."""

from __future__ import annotations

import re
from enum import Enum

from fluxnet.ground.record import record
from fluxnet.tables.grid import Cell
from fluxnet.tables.rate_units import is_unit
from fluxnet.tables.vocabulary import read_direction, split_direction

__all__ = ["Key", "Title", "read_title"]


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
    "run": Key.RUN, "sample": Key.RUN, "experiment": Key.RUN, "cultivation": Key.RUN,
    "species": Key.SPECIES, "quantity": Key.SPECIES, "compound": Key.SPECIES,
    "substance": Key.SPECIES,
    "direction": Key.DIRECTION,
    "rate": Key.RATE, "value": Key.RATE, "amount": Key.RATE, "measured": Key.RATE,
    "specific rate": Key.RATE, "q": Key.RATE,
    "sd": Key.SD, "s.d.": Key.SD, "±": Key.SD, "+-": Key.SD, "stdev": Key.SD, "std": Key.SD,
    "standard deviation": Key.SD, "error": Key.SD,
    "unit": Key.UNIT, "units": Key.UNIT,
    "shared error": Key.SHARED, "shared error biomass": Key.SHARED,
    "biomass concentration": Key.CONCENTRATION,
}  # fmt: skip
_BRACKETS = re.compile(r"(?P<name>.*?)\s*(?:\[(?P<square>[^\[\]]*)\]|\((?P<round>[^()]*)\))\s*")
_SD_END = re.compile(
    r"(?P<name>.*\S)[\s_]+(?:sd|s\.d\.|stdev|std|±|\+-|standard deviation|error)", re.I
)
_SD_START = re.compile(
    r"(?:sd|s\.d\.|stdev|std|±|\+-|standard deviation)(?:[\s_]+of)?[\s_]+(?P<name>.+)", re.I
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
        if not bare or bare in "-–":
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
    sd = _SD_END.fullmatch(text) or _SD_START.fullmatch(text)
    if sd is not None and _WORDS.get(sd["name"].lower()) is Key.CONCENTRATION:
        return Title(cell, sd["name"], "", unit, bracketed, Key.CONCENTRATION, is_sd=True)
    name, direction = split_direction(sd["name"] if sd else text)
    return Title(cell, name, direction, unit, bracketed, is_sd=sd is not None)


def is_header_part(text: str) -> bool:
    """Whether a cell below a title can belong to the header: a unit, a direction, ``sd``."""
    bare = text.strip()
    if bare.startswith("[") and bare.endswith("]"):
        return True
    bare = bare.strip("()").strip()
    if bare in ("", "-", "–", "%") or read_direction(bare):
        return True
    return _WORDS.get(bare.lower()) in (Key.SD, Key.RATE) or is_unit(bare)
