"""What is wrong with a line that means to declare species."""

from __future__ import annotations

import re
from itertools import pairwise

from fluxnet.chemistry.catalogue import load_catalogue
from fluxnet.chemistry.reader import FormulaError, read_formula
from fluxnet.ground.names import Name
from fluxnet.reading.fault_record import (
    NAME,
    Change,
    Fault,
    decimal_commas,
    put_in,
    replace_by,
    unreadable,
)

__all__ = ["declaration_faults", "list_faults"]

_NAME = re.compile(NAME)
_LOCANT = re.compile(r"(?<=[^\W\d]),(?=\d+(?:[,']\d+)*-\w)")
_ENTRY = re.compile(r"(?:[^,\[(]|,(?=\d)|\([^)]*\)|\[[^\]]*\]|[(\[])+")
_CARRIES = re.compile(r"\bcarr(?:y|ies|ied|ying)\b")
_CARGO = re.compile(r"(?P<n>\d+(?:\.\d+)?)?\s*(?P<word>e-?|el\w*|electrons?|energy)\b")


def declaration_faults(word: str, text: str, start: int, end: int) -> list[Fault]:
    """All faults of a declaration; its first word ends at ``start``.

    Parameters
    ----------
    word
        The first word of the line.
    text
        The whole logical line.
    start, end
        The stretch of it to look at: one past the first word, and one past the last character.

    Examples
    --------
    >>> text = "product lactate; CO2"
    >>> for fault in declaration_faults("product", text, 7, len(text)):
    ...     print(text[fault.start : fault.end], "|", fault.message)
    ; | `;` cannot stand in a name
    """
    body = text[start:end]
    if not body.strip():
        return [unreadable(f"`{word}` names nothing", 0, start, f"write a name behind `{word}`")]
    sign = re.compile(r"\s*(?<![<>])([:=])").match(text, start, end)
    if sign:
        return [_no_sign(sign, f"behind `{word}`")]
    blanks = [
        unreadable("a comma before a digit needs a blank: 2,3- is part of a name",
                   m.start(), m.end(), "put a blank behind the comma", put_in(m.end(), " "))
        for m in _LOCANT.finditer(text, start, end)
    ]
    if blanks:
        return blanks
    commas = decimal_commas(text, start, end) or _formula_commas(text, start, end)
    if commas:
        return commas
    found: list[Fault] = []
    place = start
    while place <= end:
        entry = _ENTRY.match(text, place, end)
        if entry is None or not entry[0].strip():
            found.append(_empty_entry(text, place, start, end))
            place = (entry.end() if entry else place) + 1
            continue
        found.extend(_entry_faults(word, text, entry.start(), entry.end()))
        place = entry.end() + 1
    return found


def _formula_commas(text: str, start: int, end: int) -> list[Fault]:
    """Decimal commas inside a formula: ``CH1,8O0,5N0,2``."""
    found: list[Fault] = []
    for word in re.compile(r"(?<!\S)[A-Z][A-Za-z0-9.]*\d,\d\S*").finditer(text, start, end):
        point = re.sub(r"(?<=\d),(?=\d)", ".", word[0])
        found.append(
            Fault(Name.DECIMAL_COMMA, f"{word[0]} holds a decimal comma", word.start(),
                  word.end(), f"write {point}", (replace_by(word, point),))
        )
    return found


def _no_sign(sign: re.Match[str], where: str) -> Fault:
    said = sign[1].strip()
    return unreadable(f"no `{said}` stands {where}", sign.start(1), sign.start(1) + len(said),
                      f"take `{said}` out", replace_by(sign, "", 1))


def _empty_entry(text: str, place: int, start: int, end: int) -> Fault:
    last = not text[place:end].strip()
    comma = text.rfind(",", start, place) if last else text.find(",", place, end)
    if comma < 0:
        comma = max(place - 1, start)
    change = (Change(comma, comma + 1, ""),)
    return unreadable("a name is missing beside this comma", comma, comma + 1,
                      "take the comma out, or write the name", *change)


def _entry_faults(word: str, text: str, start: int, end: int) -> list[Fault]:
    start += len(text[start:end]) - len(text[start:end].lstrip())
    end = start + len(text[start:end].rstrip())
    name = _NAME.match(text, start, end)
    if name is None:
        return [unreadable("this is no name: letters, digits, `_` and inner `-` make one",
                           start, end)]
    rest = text[name.end() : end]
    if not rest:
        return []
    if not rest[0].isspace() and rest[0] not in ":=":
        bad = name.end()
        return [unreadable(f"`{text[bad]}` cannot stand in a name", bad, bad + 1)]
    behind = name.end() + len(rest) - len(rest.lstrip())
    sign = re.compile(r"[:=]\s*").match(text, behind, end)
    if sign:
        return [unreadable(f"no `{sign[0].strip()}` stands between name and formula",
                           sign.start(), sign.start() + 1, "take it out",
                           replace_by(sign, " "))]
    if word == "carrier":
        return _cargo_faults(text, name, behind, end)
    if _CARRIES.match(text, behind, end):
        return [unreadable("only a carrier carries something", behind, end,
                           "declare it in a `carrier` line")]
    return _second_word(word, text, name, behind, end)


def _second_word(
    word: str, text: str, name: re.Match[str], behind: int, end: int
) -> list[Fault]:
    """What stands behind a name where a formula may stand."""
    ash = re.compile(r"(?:^|(?<=\s))ash\b").search(text, behind, end)
    if ash and word != "biomass":
        return [unreadable("only biomass holds ash", ash.start(), end)]
    if ash:
        return _ash_faults(text, ash, end) or _second_word("", text, name, behind, ash.start())
    words = list(re.compile(r"\S+").finditer(text, behind, end))
    catalogue = load_catalogue()
    whole = text[name.start() : end]
    compound = catalogue.find(whole)
    if compound is not None and words:
        return [unreadable(f"a name has no blanks; the catalogue calls this {compound.name}",
                           name.start(), end, f"write {compound.name}",
                           Change(name.start(), end, compound.name))]
    if not words:
        return []
    formula = words[0]
    if _is_lower_formula(formula[0]):
        upper = formula[0].upper()
        return [Fault(Name.BAD_FORMULA, f"the symbols of {formula[0]} begin with a small letter",
                      formula.start(), formula.end(), f"write {upper}")]
    if len(words) == 1 and not _NAME.fullmatch(formula[0]):
        return [Fault(Name.BAD_FORMULA, f"{formula[0]} is no formula", formula.start(),
                      formula.end(), "write elements with counts, for example C6H12O6")]
    if _is_formula(formula[0]):
        words = words[1:]
        if not words:
            return []
        if words[0][0] == "charge":
            return [Fault(Name.BAD_FORMULA, "the charge cannot be read", words[0].start(), end,
                          "write `charge -1`")]
    return _missing_commas(text, name, [w for w in words if _NAME.fullmatch(w[0])])


def _missing_commas(
    text: str, name: re.Match[str], words: list[re.Match[str]]
) -> list[Fault]:
    found: list[Fault] = []
    before = name.start()
    for word in words:
        gap = len(text[: word.start()].rstrip())
        first = text[before:gap]
        found.append(
            Fault(Name.MISSING_COMMA, f"no comma stands between {first} and {word[0]}",
                  before, word.end(), f"write {first}, {word[0]}", (put_in(gap, ","),))
        )
        before = word.start()
    return found


def _is_formula(word: str) -> bool:
    try:
        read_formula(word)
    except FormulaError:
        return False
    return True


def _is_lower_formula(word: str) -> bool:
    return bool(re.fullmatch(r"(?:[chonps]\d*(?:\.\d+)?){2,}", word)) and any(
        letter.isdigit() for letter in word
    )


def _ash_faults(text: str, ash: re.Match[str], end: int) -> list[Fault]:
    number = r"(?:\d+\.?\d*|\.\d+)"
    good = re.compile(rf"\s*([:=]\s*)?{number}\s*%?(?:\s*(?:±|\+/?-)\s*{number}\s*%?)?\s*")
    fits = good.fullmatch(text, ash.end(), end)
    if fits:
        return [_no_sign(fits, "behind `ash`")] if fits[1] else []
    return [Fault(Name.BAD_ASH, "the ash content cannot be read", ash.start(), end,
                  "write `ash 8 %` or `ash 8 ± 1 %`")]


def _cargo_faults(text: str, name: re.Match[str], behind: int, end: int) -> list[Fault]:
    """What stands behind the name of a carrier."""
    carries = _CARRIES.match(text, behind, end)
    carrier = name[0]
    start = carries.end() if carries else behind
    start += len(text[start:end]) - len(text[start:end].lstrip())
    said = text[start:end]
    advice = "write `carries energy`, `carries 2 electrons` or `carries` and a formula"
    if not said:
        return [Fault(Name.BAD_CARGO, f"it is not said what {carrier} carries", behind, end,
                      advice)]
    cargo = _CARGO.fullmatch(text, start, end)
    if cargo:
        word = "energy" if cargo["word"] == "energy" else "electrons"
        if word == "energy" and cargo["n"] is None:
            whole = "carries energy"
        elif word == "electrons" and cargo["n"] is not None:
            whole = f"carries {cargo['n']} electrons"
        else:
            return [Fault(Name.BAD_CARGO, f"what {carrier} carries cannot be read", start, end,
                          advice)]
        return [Fault(Name.BAD_CARGO, f"what {carrier} carries cannot be read", behind, end,
                      f"write `{whole}`", (Change(behind, end, whole),))]
    if carries is None and _is_formula(said):
        return [Fault(Name.BAD_CARGO, "a carrier has no formula: only its load counts",
                      start, end, f"say what {carrier} carries: {advice}")]
    if carries is None and _NAME.fullmatch(said):
        return _missing_commas(text, name, [m for m in [_NAME.match(text, start)] if m])
    return [Fault(Name.BAD_CARGO, f"what {carrier} carries cannot be read", start, end, advice)]


def list_faults(word: str, text: str, start: int, end: int) -> list[Fault]:
    """What is wrong with a list of names behind a word (``drop``, ``free``, ``balance``).

    Parameters
    ----------
    word
        The first word of the line.
    text
        The whole logical line.
    start, end
        The stretch of it to look at: one past the first word, and one past the last character.

    Examples
    --------
    >>> text = "free sulfate phosphate"
    >>> for fault in list_faults("free", text, 4, len(text)):
    ...     print(text[fault.start : fault.end], "|", fault.message)
    sulfate phosphate | no comma stands between sulfate and phosphate
    """
    if not text[start:end].strip():
        return [unreadable(f"`{word}` names nothing", 0, start, f"write a name behind `{word}`")]
    names = list(re.compile(NAME).finditer(text, start, end))
    if len(names) > 1 and names[0][0] in ("reaction", "species", "reactions"):
        kind = names[0]
        return [unreadable(f"`{word}` takes the name alone", kind.start(), kind.end(),
                           f"take `{kind[0]}` out", Change(kind.start(), names[1].start(), ""))]
    found: list[Fault] = []
    for before, behind in pairwise(names):
        between = text[before.end() : behind.start()]
        if between.strip() or before[0] in ("limit", "in", "out") or behind[0] in ("in", "out"):
            continue
        found.append(
            Fault(Name.MISSING_COMMA, f"no comma stands between {before[0]} and {behind[0]}",
                  before.start(), behind.end(), f"write {before[0]}, {behind[0]}",
                  (put_in(before.end(), ","),))
        )
    return found
