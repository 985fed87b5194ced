"""What is wrong with a line that means to be a reaction."""

from __future__ import annotations

import re

from fluxnet.ground.names import Name
from fluxnet.reading.fault_record import (
    NAME,
    Change,
    Fault,
    Known,
    put_in,
    replace_by,
    unreadable,
)
from fluxnet.reading.fault_terms import split_terms, term_faults, tokens_of

__all__ = ["has_arrow", "reaction_faults"]

_ARROW = re.compile(r"(?:<\s?)?[-=~]+\s?>+|<[-=~]+|[→⇌↔⇄⇆⟶⟷⇒⇔]|={1,2}|(?<!\S)>(?!\S)")
_GOOD = {"->", "<->", "→", "⇌"}
_LABEL = re.compile(rf"\s*({NAME})\s*:")


def has_arrow(text: str) -> bool:
    """Whether anything in a text looks like an arrow.

    Examples
    --------
    >>> has_arrow("pdh : pyruvate => CO2"), has_arrow("product CO2")
    (True, False)
    """
    return _ARROW.search(text) is not None


def reaction_faults(text: str, end: int, known: Known) -> list[Fault]:
    """All faults of a reaction that can be told apart; ``end`` is where its text ends.

    Parameters
    ----------
    end
        One past the last character of the reaction in ``text``.
    known
        The species and parameters that readable lines declare.

    Examples
    --------
    >>> from fluxnet.reading.fault_record import Known
    >>> text = "pdh : pyruvate => CO2 NADH"
    >>> for fault in reaction_faults(text, len(text), Known(frozenset({"CO2", "NADH"}))):
    ...     print(text[fault.start : fault.end], "|", fault.message, "|", fault.mend)
    => | `=>` is no arrow | write ->
    CO2 NADH | no + stands between CO2 and NADH | write CO2 + NADH
    """
    found, start = _label_faults(text, end, known)
    arrows = list(_ARROW.finditer(text, start, end))
    good = [a for a in arrows if a[0] in _GOOD]
    if not arrows:
        return [*found, _no_arrow(text, start, end)]
    if len(arrows) > 1:
        first = (good or arrows)[0]
        second = good[1] if len(good) > 1 else next(a for a in arrows if a is not first)
        return [
            *found,
            unreadable("a reaction has one arrow", second.start(), second.end(),
                       "make two reactions of it"),
        ]
    arrow = arrows[0]
    if not good:
        found.append(_wrong_arrow(arrow))
    found.extend(_side_faults(text, start, arrow.start(), "left", known))
    found.extend(_side_faults(text, arrow.end(), end, "right", known))
    return found


def _label_faults(text: str, end: int, known: Known) -> tuple[list[Fault], int]:
    """What is wrong with the name of the reaction, and where the left side starts."""
    good = _LABEL.match(text, 0, end)
    if good:
        return [], good.end()
    colon = text.find(":", 0, end)
    if colon < 0:
        return [_no_colon(text, end, known)], _first_side(text, end, known)
    label = text[:colon].strip()
    if not label:
        return [unreadable("the reaction has no name", 0, colon + 1,
                           "write a name before the colon")], colon + 1
    if " " in label or "\t" in label:
        joined = "-".join(label.split())
        return [
            unreadable("a reaction's name holds a blank", 0, len(label), f"write {joined}")
        ], colon + 1
    return [
        unreadable(f"`{label}` is no name: letters, digits, `_` and inner `-` make one",
                   0, len(label))
    ], colon + 1


def _no_colon(text: str, end: int, known: Known) -> Fault:
    start = _first_side(text, end, known)
    if not start:
        first = re.compile(NAME).match(text)
        return unreadable(
            "the reaction has no name", 0, first.end() if first else min(1, end),
            "write a name and a colon before it: name : A -> B",
        )
    word = text[:start].rstrip()
    return unreadable(f"no colon stands behind the reaction's name {word}", 0, len(word),
                      f"write {word} :", put_in(len(word), " :"))


def _first_side(text: str, end: int, known: Known) -> int:
    """Where the left side starts in a line without a colon: 0 where the name is missing too."""
    match = re.compile(rf"({NAME})\s+(?=[\w(?.])").match(text, 0, end)
    if match is None or match[1] in known.species or match[1] in known.parameters:
        return 0
    return match.end()


def _no_arrow(text: str, start: int, end: int) -> Fault:
    lone = re.compile(r"\s([-<>~])\s").search(text, start, end)
    if lone:
        return Fault(Name.WRONG_ARROW, f"`{lone[1]}` is no arrow", lone.start(1), lone.end(1),
                     "write -> (one way) or <-> (both ways)")
    stripped = len(text[:end].rstrip())
    first = start + len(text[start:end]) - len(text[start:end].lstrip())
    first = first if first < stripped else 0
    return unreadable("the reaction has no arrow", first, max(stripped, first + 1),
                      "write -> (one way) or <-> (both ways) between its sides")


def _wrong_arrow(arrow: re.Match[str]) -> Fault:
    sign = arrow[0].strip()
    plain = sign.replace(" ", "")
    both = ("<" in plain and ">" in plain) or plain in "↔⇄⇆⟷⇔"
    message = f"`{sign}` is no arrow"
    if both:
        return Fault(Name.WRONG_ARROW, message, arrow.start(), arrow.end(), "write <->",
                     (_arrow_for(arrow, "<->"),))
    if plain.startswith("<"):
        return Fault(Name.WRONG_ARROW, "an arrow points to the left", arrow.start(), arrow.end(),
                     "change the sides and write ->, or write <-> for both ways")
    if plain in ("=", "=="):
        return Fault(Name.WRONG_ARROW, message, arrow.start(), arrow.end(),
                     "write -> (one way) or <-> (both ways)")
    return Fault(Name.WRONG_ARROW, message, arrow.start(), arrow.end(), "write ->",
                 (_arrow_for(arrow, "->"),))


def _arrow_for(arrow: re.Match[str], sign: str) -> Change:
    return replace_by(arrow, sign)


def _side_faults(text: str, start: int, end: int, side: str, known: Known) -> list[Fault]:
    tokens = tokens_of(text, start, end)
    if not tokens:
        return [unreadable(f"the {side} side is empty", max(start - 1, 0), max(end, start),
                           "write nothing, or what the reaction uses and makes",
                           put_in(start, " nothing" if side == "right" else " nothing "))]
    runs = split_terms(tokens)
    found: list[Fault] = []
    pluses = [t for t in tokens if t.kind == "+"]
    for at, run in enumerate(runs):
        if not run:
            plus = pluses[min(at, len(pluses) - 1)] if at else pluses[0]
            found.append(_loose_plus(plus.start, plus.end, last=at == len(runs) - 1))
        elif len(tokens) > 1 and any(t.text == "nothing" for t in run):
            word = next(t for t in run if t.text == "nothing")
            found.append(
                unreadable("`nothing` is an empty side: it stands alone", word.start, word.end,
                           "take `nothing` out")
            )
        else:
            found.extend(term_faults(text, run, known))
    return found


def _loose_plus(start: int, end: int, *, last: bool) -> Fault:
    where = "behind" if last else "before"
    return unreadable(f"no species stands {where} this +", start, end,
                      "write the species, or take the + out")
