"""What stands in a cell that holds no number, and what the user can do about it."""

from __future__ import annotations

import re

from fluxnet.ground.pattern import pattern_of
from fluxnet.ground.record import record
from fluxnet.tables.numerals import Decimal, read_number

__all__ = ["ABSENT", "NoNumber", "explain_no_number"]

_BELOW = pattern_of(r"[<≤]\s*=?\s*(?P<limit>\S.*)")
ABSENT = frozenset({
    "-", "–", "—", "--", ".", "/", "?", "nd", "n.d", "n.d.", "n/d", "na", "n.a", "n.a.", "n/a",
    "nb", "n.b.", "nn", "n.n.", "k.a.", "bd", "b.d.", "bdl", "lod", "loq", "tr", "tr.", "trace",
    "traces", "none", "null", "nil", "missing", "blank", "<lod", "<loq", "nwg", "<nwg", "<bg",
})  # fmt: skip
_MONTHS = "jan|feb|m[aä]r|apr|ma[iy]|jun|jul|aug|sep|o[ck]t|nov|de[cz]"
_DATE = pattern_of(
    rf"\d{{4}}-\d\d-\d\d.*|\d{{1,2}}\.\s?\d{{1,2}}\.(?:\d{{2,4}})?|\d{{1,2}}/\d{{1,2}}/\d{{2,4}}"
    rf"|\d{{1,2}}[.\- ]+(?:{_MONTHS})\w*\.?(?:[\- ]\d{{2,4}})?|(?:{_MONTHS})\w*\.?[\- ]\d{{1,4}}",
    re.IGNORECASE,
)
_FAILED = pattern_of(r"#[\w/ÄÖÜ]+[!?]?", re.IGNORECASE)
_BRACKETED = pattern_of(r"(?P<value>[^()\s]+)\s*\((?P<error>[^()\s]+\s*%?)\)")
_WITH_WORDS = pattern_of(r"(?P<before>[~≈=]|ca\.?|approx\.?)?\s*(?P<value>[\d.,]+)\s*(?P<after>.*)")


@record
class NoNumber:
    """Why a text is no number, and the mend."""

    words: str
    mend: str


def explain_no_number(text: str, decimal: Decimal, *, is_sd: bool) -> NoNumber:
    """What a text that cannot be read as a number is, and what to write for it.

    Examples
    --------
    >>> explain_no_number("<0.1", Decimal.POINT, is_sd=False).mend
    'leave the cell blank (exchanged, not measured), or for below 0.1 write 0.05 with sd 0.05'
    """
    blank = "leave the cell blank" + (": an sd is assumed" if is_sd else ": not measured")
    below = _BELOW.fullmatch(text)
    if "".join(text.lower().split()) in ABSENT:
        return NoNumber(f"`{text}` is no number", blank if is_sd else _unseen(None, decimal))
    if below is not None and not is_sd:
        return NoNumber(f"`{text}` is a limit, no number", _unseen(below["limit"], decimal))
    if text and not text.strip("#"):
        mend = "make the column of the spreadsheet wider, and save the table again"
        return NoNumber(f"`{text}` stands where a column was too narrow for its number", mend)
    if _FAILED.fullmatch(text):
        return NoNumber(f"`{text}` is a fault of the spreadsheet", f"correct it, or {blank}")
    if _DATE.fullmatch(text):
        mend = "write the number again: spreadsheets turn 1.5 into the first of May"
        return NoNumber(f"`{text}` is a date", mend)
    return NoNumber(f"`{text}` is no number", _alone(text, decimal) or f"correct it, or {blank}")


def _unseen(limit: str | None, decimal: Decimal) -> str:
    """What to write for a rate that was too small to be seen."""
    size = None if limit is None else read_number(limit.split()[0], decimal)
    shown = "0.1" if limit is None or not size else limit.split()[0].replace(",", ".")
    half = f"{(size or 0.1) / 2:g}"
    told = [t.replace(".", decimal.value) for t in (shown, half)]
    blank = "leave the cell blank (exchanged, not measured)"
    return f"{blank}, or for below {told[0]} write {told[1]} with sd {told[1]}"


def _alone(text: str, decimal: Decimal) -> str | None:
    """How to write a number that stands among other signs."""
    found = _BRACKETED.fullmatch(text)
    if found is not None:
        parts = (found["value"], found["error"].rstrip("% "))
        if all(read_number(p, decimal) is not None for p in parts):
            return f"write {found['value']} ± {found['error']}"
    found = _WITH_WORDS.fullmatch(text)
    if found is None or read_number(found["value"], decimal) is None:
        return None
    if found["before"] or not re.match(r"[A-Za-z]\d", found["after"]):
        return f"write the number alone: {found['value']}"
    return None
