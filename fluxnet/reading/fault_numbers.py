"""What is wrong with a line that means to give a number: parameters, settings, limits."""

from __future__ import annotations

import re
from fractions import Fraction

from fluxnet.ground.names import Name
from fluxnet.reading.fault_record import (
    NAME,
    NUMBER,
    Change,
    Fault,
    decimal_commas,
    put_in,
    replace_by,
)

__all__ = ["limit_faults", "parameter_faults"]

_UNIT = re.compile(
    rf"{NUMBER}\s*(?P<unit>(?:[A-Za-zµμ%°][\w.%-]*|1/h|h-1)(?:[/*·]\S+)*)\s*$"
)
_FORM = "write: parameter PO = 1.4 ± 0.2 in [0.5, 2.5]"


def parameter_faults(word: str, text: str, start: int, end: int) -> list[Fault]:
    """All faults of a ``parameter`` or ``set`` line; its first word ends at ``start``.

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
    >>> text = "parameter PO : 1.4"
    >>> for fault in parameter_faults("parameter", text, 9, len(text)):
    ...     print(text[fault.start : fault.end], "|", fault.message)
    : | `:` stands for =
    """
    commas = _range_commas(text, start, end)
    if commas:
        return commas
    name = re.compile(rf"\s*({NAME})\s*").match(text, start, end)
    if name is None:
        return [_bad("the parameter has no name", 0, start, _FORM)]
    sign = re.compile(r":=|=:|==|[:=]").match(text, name.end(), end)
    if sign is None:
        number = re.compile(NUMBER).match(text, name.end(), end)
        change = (put_in(name.end(1), " ="),) if number else ()
        return [_bad(f"no = stands behind {name[1]}", name.start(1), max(name.end(1), 1),
                     f"write {name[1]} =", *change)]
    if sign[0] != "=":
        return [_bad(f"`{sign[0]}` stands for =", sign.start(), sign.end(), "write =",
                     replace_by(sign, "="))]
    return _value_faults(name[1], text, sign.end(), end)


def _bad(message: str, start: int, end: int, mend: str | None, *changes: Change) -> Fault:
    return Fault(Name.BAD_PARAMETER, message, start, max(end, start + 1), mend, changes)


def _range_commas(text: str, start: int, end: int) -> list[Fault]:
    """Decimal commas, where the comma of a range is none."""
    bracket = text.find("[", start, end)
    found = decimal_commas(text, start, end if bracket < 0 else bracket)
    if bracket >= 0 and text.count(",", bracket, end) > 1:
        found += decimal_commas(text, bracket, end, re.compile(r"\d+,\d+(?=\s*[,;\]])"))
    return found


def _value_faults(name: str, text: str, start: int, end: int) -> list[Fault]:
    start += len(text[start:end]) - len(text[start:end].lstrip())
    said = text[start:end].rstrip()
    end = start + len(said)
    if not said:
        return [_bad(f"{name} has no value", start - 1, start, _FORM)]
    fraction = re.compile(r"(\d{1,9})\s*/\s*(\d{1,9})(?=\s|$)").match(text, start, end)
    if fraction and int(fraction[2]):
        value = Fraction(int(fraction[1]), int(fraction[2]))
        exact = f"{float(value):.12g}"
        changes = (replace_by(fraction, exact),) if Fraction(exact) == value else ()
        return [_bad(f"the value of {name} is written as a fraction", start, fraction.end(),
                     f"write the decimal number {exact}", *changes)]
    number = re.compile(rf"-?\s*{NUMBER}").match(text, start, end)
    if number is None:
        return [_bad(f"the value of {name} is no number", start, end, _FORM)]
    negative = re.compile(r"(?:±|\+/?-)\s*(-\s*\d\S*)").search(text, number.end(), end)
    if negative:
        return [_bad("an sd is never negative", negative.start(1), negative.end(1),
                     "write it without the minus")]
    shaped = _range_or_error(text, number.end(), end)
    if shaped is not None:
        return [shaped]
    operator = re.compile(r"\s*[*/+]").match(text, number.end(), end)
    if operator:
        return [_bad(f"the value of {name} is one number", start, end,
                     "write the number; products stand in brackets as coefficients")]
    bare = re.compile(r"(?<!in)(?<!in\s)\[").search(text, number.end(), end)
    if bare:
        return [_bad("no `in` stands before the range", bare.start(), end, "write in [low, high]",
                     put_in(bare.start(), "in "))]
    unit = _UNIT.search(text, number.start(), end)
    if unit and unit["unit"] not in ("in",):
        return [_bad(f"a unit stands behind the value of {name}", unit.start("unit"),
                     unit.end("unit"), "take it out: a comment can tell it",
                     Change(len(text[: unit.start("unit")].rstrip()), unit.end("unit"), ""))]
    rest = number.end() + len(text[number.end() : end]) - len(text[number.end() : end].lstrip())
    return [_bad(f"what stands behind the value of {name} cannot be read",
                 rest if rest < end else start, end, _FORM)]


_END = r"(-?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)"
_RANGE = re.compile(
    rf"\b(?:in|range|from|between)\s*[\[(]?\s*{_END}\s*(?:to|and|-|;|\.\.|,)\s*{_END}\s*[\])]?"
)


def _range_or_error(text: str, start: int, end: int) -> Fault | None:
    """A range or an sd behind a value that is written in another way."""
    error = re.compile(rf"\s*\(\s*({NUMBER})\s*\)").match(text, start, end)
    if error:
        return _bad("an sd stands behind ±", error.start(), error.end(), f"write ± {error[1]}",
                    replace_by(error, f" ± {error[1]}"))
    shaped = _RANGE.search(text, start, end)
    if shaped is None:
        return None
    good = f"in [{shaped[1]}, {shaped[2]}]"
    return _bad("a range is written with square brackets and a comma", shaped.start(),
                shaped.end(), f"write {good}", replace_by(shaped, good))


_SIGN = re.compile(r"=<|=>|==|≦|≧|<>|!=|≠|[<>]=?|[≤≥=]")
_RIGHT_SIGN = {"=<": "<=", "=>": ">=", "==": "=", "≦": "<=", "≧": ">=", "<": "<=", ">": ">="}
_LIMIT_FORM = "write: limit oxygen <= 8"
_WORDS = {"uptake": "in", "consumption": "in", "release": "out", "production": "out",
          "secretion": "out"}


def limit_faults(text: str, start: int, end: int) -> list[Fault]:
    """All faults of a ``limit`` line; the word ends at ``start``.

    Parameters
    ----------
    text
        The whole logical line.
    start, end
        The stretch of it to look at: one past its first word, and one past the last character.

    Examples
    --------
    >>> text = "limit oxygen at most 8"
    >>> for fault in limit_faults(text, 5, len(text)):
    ...     print(text[fault.start : fault.end], "|", fault.message)
    at most | `at most` is told by a sign
    """
    if not text[start:end].strip():
        return [_wrong("the limit says nothing", 0, start, _LIMIT_FORM)]
    commas = decimal_commas(text, start, end)
    if commas:
        return commas
    colon = re.compile(rf"\s*{NAME}\s*(:)").match(text, start, end)
    if colon:
        return [_wrong("no colon stands in a limit", colon.start(1), colon.end(1), _LIMIT_FORM)]
    between = re.compile(r"\bbetween\b").search(text, start, end)
    if between:
        return _between_faults(text, between, end)
    split = re.compile(r"([<>])\s+=").search(text, start, end)
    if split:
        return [_wrong(f"`{split[0]}` is one sign", split.start(), split.end(),
                       f"write {split[1]}=", replace_by(split, f"{split[1]}="))]
    signs = list(_SIGN.finditer(text, start, end))
    if len(signs) == 2:
        return [_two_sided(text, start, end)]
    if not signs:
        return [_no_sign(text, start, end)]
    sign = signs[0]
    if sign[0] in _RIGHT_SIGN:
        right = _RIGHT_SIGN[sign[0]]
        return [_wrong(f"`{sign[0]}` is no sign of a limit", sign.start(), sign.end(),
                       f"write {right}", replace_by(sign, right))]
    return _one_sign(text, start, sign, end)


def _wrong(message: str, start: int, end: int, mend: str | None, *changes: Change) -> Fault:
    return Fault(Name.BAD_LIMIT, message, start, max(end, start + 1), mend, changes)


def _one_sign(text: str, start: int, sign: re.Match[str], end: int) -> list[Fault]:
    """A limit with one sign of its own: the fault stands on one side of it."""
    left, right = text[start : sign.start()].strip(), text[sign.end() : end].strip()
    first = text.index(left, start) if left else start
    if re.fullmatch(NUMBER, left) and re.fullmatch(NAME, right):
        turned = {"<=": ">=", ">=": "<=", "≤": ">=", "≥": "<="}.get(sign[0], sign[0])
        whole = f"{right} {turned} {left}"
        return [_wrong("the limited thing stands first", first, end, f"write limit {whole}",
                       Change(first, end, whole))]
    word = re.compile(rf"\b({'|'.join(_WORDS)})\b").search(text, start, sign.start())
    if word and left != word[0]:
        way = _WORDS[word[0]]
        return [_wrong(f"`{word[0]}` is told by the word `{way}`", word.start(), word.end(),
                       f"write `{way}`", replace_by(word, way))]
    if re.search(r"[-+*]\s|\s[-+*]", left):
        return [_wrong("a limit bounds one quantity, or the ratio of two", first, sign.start(),
                       "limit each quantity by itself")]
    if not left:
        return [_wrong("it is not said what is limited", start, sign.end(), _LIMIT_FORM)]
    if not right:
        return [_wrong("the limit has no value", sign.start(), sign.end(), _LIMIT_FORM)]
    unit = _UNIT.search(text, sign.end(), end)
    if unit:
        cut = len(text[: unit.start("unit")].rstrip())
        return [_wrong("a unit stands behind the value", unit.start("unit"), unit.end("unit"),
                       "take it out: every rate is in the unit of the basis",
                       Change(cut, unit.end("unit"), ""))]
    at = text.index(right, sign.end())
    if not re.match(rf"-?\s*{NUMBER}", right):
        return [_wrong(f"`{right}` is no number", at, at + len(right), _LIMIT_FORM)]
    return []


def _two_sided(text: str, start: int, end: int) -> Fault:
    sign = r"\s*(?:<=?|≤)\s*"
    form = re.compile(rf"\s*({NUMBER}){sign}({NAME}(?:\s+(?:in|out))?){sign}({NUMBER})\s*")
    both = form.fullmatch(text, start, end)
    if both is None:
        return _wrong("a limit has one sign", start, end, "write: limit oxygen between 1 and 8")
    whole = f"{both[2]} between {both[1]} and {both[3]}"
    return _wrong("a limit has one sign", both.start(1), both.end(3), f"write limit {whole}",
                  Change(both.start(1), both.end(3), whole))


def _no_sign(text: str, start: int, end: int) -> Fault:
    words = re.compile(
        r"\b(at\s+most|at\s+least|max\w*|min\w*|is|below|above|under|over)\b"
    ).search(text, start, end)
    if words:
        sign = {"at most": "<=", "below": "<=", "under": "<=", "at least": ">=", "above": ">=",
                "over": ">=", "is": "="}.get(" ".join(words[0].split()))
        sign = sign or ("<=" if words[0].startswith("max") else ">=")
        return _wrong(f"`{words[0]}` is told by a sign", words.start(), words.end(),
                      f"write {sign}", replace_by(words, sign))
    at = start + len(text[start:end]) - len(text[start:end].lstrip())
    return _wrong("the limit has no sign", at, end, "write <=, >= or = before the number")


def _between_faults(text: str, between: re.Match[str], end: int) -> list[Fault]:
    joined = re.compile(
        rf"\s*((?:in|out)\s+)?{_END}\s*(,|to|-|\.\.|&|;)\s*((?:in|out)\s+)?{_END}\s*"
    ).fullmatch(text, between.end(), end)
    if joined:
        return [_wrong(f"`{joined[3]}` stands for `and`", joined.start(3), joined.end(3),
                       "write `and`", replace_by(joined, " and ", 3))]
    return [_wrong("the two ends of `between` cannot be read", between.start(), end,
                   "write: between 1 and 8")]
