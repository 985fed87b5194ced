"""What is wrong with lines that name a block, a file or the model, and with acceptances."""

from __future__ import annotations

import re

from fluxnet.ground.names import Name
from fluxnet.reading.fault_record import (
    NAME,
    Change,
    Fault,
    put_in,
    replace_by,
    unreadable,
)

__all__ = ["acceptance_faults", "block_faults", "head_faults", "use_faults"]


def block_faults(word: str, text: str, start: int, end: int) -> list[Fault]:
    """What is wrong with a ``compartment``, ``variant`` or ``add to`` line.

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
    >>> text = "add catabolism"
    >>> for fault in block_faults("add", text, 3, len(text)):
    ...     print(text[fault.start : fault.end], "|", fault.message)
    add | `to` is missing behind `add`
    """
    found: list[Fault] = []
    if word == "add":
        to = re.compile(r"\s+to\b").match(text, start, end)
        if to is None:
            known = re.compile(rf"\s+({NAME})\s*").fullmatch(text, start, end)
            change = (put_in(start, " to"),) if known else ()
            return [unreadable("`to` is missing behind `add`", 0, start,
                               "write: add to COMPARTMENT", *change)]
        start = to.end()
        colon = re.compile(r"\s*:").match(text, start, end)
        if colon:
            return [unreadable("no colon stands behind `add to`", colon.start(), colon.end(),
                               "take the colon out", replace_by(colon, ""))]
    name = re.compile(rf"\s*({NAME})").match(text, start, end)
    if name is None:
        return [unreadable(f"`{text[:start].strip()}` has no name", 0, start,
                           f"write a name behind `{text[:start].strip()}`")]
    colon = re.compile(r"\s*:\s*").fullmatch(text, name.end(), end)
    if colon:
        return [unreadable("no colon stands behind a block's name", colon.start(), colon.end(),
                           "take the colon out", replace_by(colon, ""))]
    rest = text[name.end() : end].strip()
    if word == "variant":
        return _variant_faults(text, name, end)
    if re.fullmatch(r"[\w\s'-]+", rest):
        joined = "-".join(text[name.start(1) : end].split())
        found.append(unreadable("a name holds a blank", name.start(1), end, f"write {joined}",
                                Change(name.start(1), end, joined)))
    return found


def _variant_faults(text: str, name: re.Match[str], end: int) -> list[Fault]:
    start = name.end() + len(text[name.end() : end]) - len(text[name.end() : end].lstrip())
    rest = text[start:end]
    other = re.compile(rf"(of|based\s+on|builds\s+on|extends|:|<|like)\s*(?={NAME}\s*$)").match(
        text, start, end
    )
    if other:
        return [unreadable(f"`{other[1]}` stands for `from`", other.start(1), other.end(1),
                           "write `from`", replace_by(other, "from ", 0))]
    if rest and '"' not in rest and not rest.startswith("from"):
        said = rest.strip("'")
        return [unreadable("the words behind a variant's name stand in quotation marks", start,
                           end, f'write "{said}"', Change(start, end, f'"{said}"'))]
    if rest.count('"') % 2:
        quote = text.rindex('"', start, end)
        return [unreadable("a quotation mark is not closed", quote, end, 'write " at the end',
                           put_in(end, '"'))]
    gap = re.compile(rf"from\s+{NAME}(\s+)(?={NAME})").match(text, start, end)
    if gap:
        return [Fault(Name.MISSING_COMMA, "no comma stands between two variants", start, end,
                      "write a comma between them", (Change(gap.start(1), gap.end(1), ", "),))]
    return []


def use_faults(text: str, start: int, end: int) -> list[Fault]:
    """What is wrong with a ``use`` line.

    Parameters
    ----------
    text
        The whole logical line.
    start, end
        The stretch of it to look at: one past its first word, and one past the last character.

    Examples
    --------
    >>> text = "use core.flux"
    >>> for fault in use_faults(text, 3, len(text)):
    ...     print(text[fault.start : fault.end], "|", fault.message)
    core.flux | the path of a used file stands in quotation marks
    """
    begin = start + len(text[start:end]) - len(text[start:end].lstrip())
    path = text[begin:end].strip("'\" ")
    if not path:
        return [unreadable("`use` names no file", 0, start, 'write: use "other.flux"')]
    return [unreadable("the path of a used file stands in quotation marks", begin, end,
                       f'write "{path}"', Change(begin, end, f'"{path}"'))]


def head_faults(word: str, text: str, start: int, end: int) -> list[Fault]:
    """What is wrong with a ``model`` or ``basis`` line.

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
    >>> text = "basis : mmol/g/h"
    >>> for fault in head_faults("basis", text, 5, len(text)):
    ...     print(text[fault.start : fault.end], "|", fault.message)
    : | no `:` stands behind `basis`
    """
    sign = re.compile(r"\s*([:=])\s*").match(text, start, end)
    if sign:
        return [unreadable(f"no `{sign[1]}` stands behind `{word}`", sign.start(1), sign.end(1),
                           f"take `{sign[1]}` out", replace_by(sign, " "))]
    if word == "basis":
        return [Fault(Name.UNKNOWN_BASIS, "`basis` names no unit", 0, start,
                      "write: basis mmol/g/h")]
    return []


def acceptance_faults(text: str) -> list[Fault]:
    """What is wrong with an ``accept`` at the end of a line.

    Examples
    --------
    >>> text = "inside citrate accept dead-end"
    >>> for fault in acceptance_faults(text):
    ...     print(text[fault.start : fault.end], "|", fault.message)
    accept dead-end | an acceptance gives its reason
    """
    bare = re.compile(r"(?<=\s)accept(?:\s+([\w-]+))?\s*:?\s*$").search(text)
    if bare is None:
        comma = re.compile(r"(?<=\s)accept\s+([\w-]+(?:\s*,\s*[\w-]+)+)\s*:").search(text)
        if comma:
            return [unreadable("one `accept` silences one diagnostic", comma.start(1),
                               comma.end(1), "write one `accept NAME: REASON` for each")]
        blank = re.compile(r"(?<=\s)accept\s+([a-z]+-[a-z-]+)\s+(?=[^\s:+<>-])").search(text)
        if blank:
            return [unreadable("no colon stands behind the accepted name", blank.start(1),
                               blank.end(1), f"write {blank[1]}:", put_in(blank.end(1), ":"))]
        return []
    return [unreadable("an acceptance gives its reason", bare.start(), len(text.rstrip()),
                       f"write accept {bare[1] or 'NAME'}: REASON")]
