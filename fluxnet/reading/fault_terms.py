"""What is wrong with one term of a reaction, between two plus signs."""

from __future__ import annotations

import re
from itertools import pairwise
from typing import NamedTuple

from fluxnet.ground.names import Name
from fluxnet.reading.fault_record import Change, Fault, Known, decimal_commas, put_in, unreadable

__all__ = ["Token", "split_terms", "term_faults", "tokens_of"]

_TOKEN = re.compile(
    r"""(?P<b>\((?:[^()]|\((?:[^()]|\((?:[^()]|\([^()]*\))*\))*\))*\))
    |(?P<w>(?:\d+(?:[,']\d+)+-)?(?=(?:\w+-)*\w*[^\W\d_])\w+(?:-\w+)*(?:\+(?=\s*(?:\+|$)))?)
    |(?P<n>(?:\d+(?:[.,]\d+)?|\.\d+)(?:[eE][+-]?\d+(?!\w))?)
    |(?P<plus>\+)|(?P<u>\?)|(?P<times>[*·×])|(?P<over>[/\u2044])|(?P<comma>,)|(?P<minus>-)
    |(?P<other>\S)""",
    re.VERBOSE,
)
_SHORT = {"times": "*", "over": "/", "comma": ",", "minus": "-", "other": "o", "plus": "+"}
_OPERATED = re.compile(r"[nwb](?:[*/][nwb])*[*/][nwb]?w")
_STRANGE = {
    "[": "a name holds letters, digits, `_` and inner `-`; a place is part of it, as in NADH-mit",
    "]": "a bracket closes that was never opened",
    "(": "a bracket is not closed",
    ")": "a bracket closes that was never opened",
    ".": "a name holds no point",
    ":": "a reaction has one colon, behind its name",
    ";": "one line holds one statement",
    "=": "an equals sign has no place in a reaction",
    "^": "there are no powers: write a product in brackets, (a*a)",
}


class Token(NamedTuple):
    """A piece of one side of a reaction; ``kind`` is one letter."""

    kind: str
    text: str
    start: int
    end: int


def tokens_of(text: str, start: int, end: int) -> list[Token]:
    """The pieces of a stretch.

    Examples
    --------
    >>> [(token.kind, token.text) for token in tokens_of("2 NADH + ? CO2", 0, 14)]
    [('n', '2'), ('w', 'NADH'), ('+', '+'), ('u', '?'), ('w', 'CO2')]
    """
    found: list[Token] = []
    for match in _TOKEN.finditer(text, start, end):
        kind = match.lastgroup or "o"
        found.append(Token(_SHORT.get(kind, kind), match[0], match.start(), match.end()))
    return found


def split_terms(tokens: list[Token]) -> list[list[Token]]:
    """The tokens between plus signs.

    Examples
    --------
    >>> [[t.text for t in run] for run in split_terms(tokens_of("2 NADH + ? CO2", 0, 14))]
    [['2', 'NADH'], ['?', 'CO2']]
    """
    runs: list[list[Token]] = [[]]
    for token in tokens:
        if token.kind == "+":
            runs.append([])
        else:
            runs[-1].append(token)
    return runs


def term_faults(text: str, run: list[Token], known: Known) -> list[Fault]:
    """What is wrong with one term; an empty list where it is sound.

    Parameters
    ----------
    text
        The whole logical line.
    run
        The tokens of one term.
    known
        The species and parameters that readable lines declare.

    Examples
    --------
    >>> from fluxnet.reading.fault_record import Known
    >>> text = "2*a CO2"
    >>> for fault in term_faults(text, tokens_of(text, 0, 7), Known(parameters=frozenset({"a"}))):
    ...     print(text[fault.start : fault.end], "|", fault.message, "|", fault.mend)
    2*a | a product as a coefficient stands in brackets | write (2*a) CO2
    """
    kinds = "".join(t.kind for t in run)
    strange = next((t for t in run if t.kind == "o"), None)
    if strange is not None:
        reason = _STRANGE.get(strange.text, f"`{strange.text}` has no place in a reaction")
        return [unreadable(reason, strange.start, strange.end)]
    inside = [f for t in run if t.kind == "b" for f in _bracket_faults(text, t)]
    if inside:
        return inside
    commas = _comma_numbers(run)
    if commas:
        return commas
    if "," in kinds:
        return _commas_between(run)
    if "-" in kinds:
        return [_minus(run, kinds)]
    if "*" in kinds or "/" in kinds:
        return [_product(text, run, kinds, known)]
    return _side_by_side(run, kinds, known)


def _comma_numbers(run: list[Token]) -> list[Fault]:
    found: list[Fault] = []
    for at, token in enumerate(run):
        if token.kind != "n" or "," not in token.text:
            continue
        comma = token.start + token.text.index(",")
        changes = [Change(comma, comma + 1, ".")]
        if at + 1 < len(run) and run[at + 1].kind == "w" and run[at + 1].start == token.end:
            changes.append(put_in(token.end, " "))
        found.append(
            Fault(Name.DECIMAL_COMMA, f"{token.text} is written with a decimal comma",
                  token.start, token.end, f"write {token.text.replace(',', '.')}",
                  tuple(changes))
        )
    return found


def _commas_between(run: list[Token]) -> list[Fault]:
    at = next(i for i, t in enumerate(run) if t.kind == ",")
    comma = run[at]
    before = run[at - 1] if at else None
    behind = run[at + 1] if at + 1 < len(run) else None
    glued = before and behind and before.end == comma.start and behind.start == comma.end
    if before and behind and glued and before.text[-1].isdigit() and behind.text[0].isdigit():
        whole = f"{before.text},{behind.text}"
        plain = whole.replace(",", "-")
        return [
            unreadable(f"{whole} cannot be a name: a comma stands only in a leading locant",
                       before.start, behind.end, f"write it without the comma: {plain}")
        ]
    return [
        Fault(Name.MISSING_PLUS, "species of a reaction are joined by +, not by a comma",
              comma.start, comma.end, "write + for the comma",
              (Change(comma.start, comma.end, " +"),))
    ]


def _minus(run: list[Token], kinds: str) -> Fault:
    at = kinds.index("-")
    token = run[at]
    if at == 0:
        last = run[-1]
        return Fault(
            Name.COEFFICIENT_NOT_POSITIVE, "a coefficient is negative", token.start, last.end,
            f"move {last.text} to the other side of the arrow",
        )
    return unreadable(
        "a minus stands between two species: a reaction only adds", token.start, token.end,
        "move what is taken off to the other side of the arrow",
    )


def _product(text: str, run: list[Token], kinds: str, known: Known) -> Fault:
    """A coefficient with ``*`` or ``/`` outside brackets."""
    starred = "*" in kinds
    name = Name.STARRED_COEFFICIENT if starred else Name.FRACTION_COEFFICIENT
    what = "a product" if starred else "a fraction"
    start, end = run[0].start, run[-1].end
    said = f"{what} as a coefficient stands in brackets"
    if not _OPERATED.fullmatch(kinds):
        return Fault(name, said, start, end, "write it as (2*PO) ATP or (1/2) A")
    species = run[-1]
    last_sign = max(kinds.rfind("*"), kinds.rfind("/"))
    lead = re.match(r"\d+(?=[^\W\d])", species.text)
    if last_sign == len(run) - 2 and kinds[last_sign] == "*" and len(run) == 3:
        whole = f"{run[0].text} {species.text}"
        if species.text in known.parameters and run[0].text not in known.parameters:
            whole = f"{species.text} {run[0].text}"
        return Fault(
            name, "a coefficient stands before its species without `*`", start, end,
            f"write {whole}", (Change(start, end, whole),),
        )
    cut = species.start
    if last_sign == len(run) - 2:
        if lead is None and kinds[last_sign] == "/":
            return Fault(name, f"{said}; the species is missing behind it", start, end)
        cut = species.start + lead.end() if lead else run[-2].start
    coefficient = _plain(text[start:cut].strip())
    rest = text[cut:end].lstrip(" *·×")
    whole = f"({coefficient}) {rest}"
    stop = start + len(text[start:cut].rstrip())
    return Fault(name, said, start, stop, f"write {whole}", (Change(start, end, whole),))


def _plain(text: str) -> str:
    return text.replace("·", "*").replace("×", "*").replace("\u2044", "/")


def _side_by_side(run: list[Token], kinds: str, known: Known) -> list[Fault]:
    """Terms without anything between them, glued numbers, coefficients alone."""
    if kinds and "w" not in kinds:
        return [unreadable("a coefficient has no species behind it", run[0].start, run[-1].end)]
    if len(run) == 3 and kinds == "nww" and run[1].text in known.parameters:
        whole = f"({run[0].text}*{run[1].text})"
        return [
            Fault(Name.STARRED_COEFFICIENT, "a product as a coefficient stands in brackets",
                  run[0].start, run[1].end, f"write {whole} {run[2].text}",
                  (Change(run[0].start, run[1].end, whole),))
        ]
    found: list[Fault] = []
    for before, behind in pairwise(run):
        if before.kind == "n" and behind.kind == "w" and before.end == behind.start:
            found.append(
                Fault(Name.GLUED_NUMBER, f"the coefficient {before.text} touches {behind.text}",
                      before.start, behind.end, f"write {before.text} {behind.text}",
                      (put_in(before.end, " "),))
            )
    return found + _missing_plus(run, known)


def _missing_plus(run: list[Token], known: Known) -> list[Fault]:
    found: list[Fault] = []
    at, before = 0, None
    while at < len(run):
        start = at
        if run[at].kind in "nub" or _is_coefficient(run, at, known):
            at += 1
        if at >= len(run) or run[at].kind != "w":
            return [_no_species(run, start)]
        if before is not None and f"{before.text}-{run[at].text}" in known.species:
            whole = f"{before.text}-{run[at].text}"
            found.append(
                unreadable("a name has no blanks", before.start, run[at].end, f"write {whole}",
                           Change(before.start, run[at].end, whole))
            )
        elif before is not None:
            found.append(
                Fault(Name.MISSING_PLUS,
                      f"no + stands between {before.text} and {run[at].text}",
                      before.start, run[at].end, f"write {before.text} + {run[at].text}",
                      (put_in(before.end, " +"),))
            )
        before = run[at]
        at += 1
    return found


def _no_species(run: list[Token], start: int) -> Fault:
    """What stands where a coefficient stands, but is followed by no species."""
    first, behind = run[start], run[start + 1] if start + 1 < len(run) else run[start]
    if first.kind == behind.kind == "n" and first is not behind:
        what = f"{first.text}{behind.text} is no number"
        if first.end < behind.start:
            what = f"two numbers stand side by side: {first.text} and {behind.text}"
        return unreadable(what, first.start, behind.end, "write one number before each species")
    return unreadable("this cannot stand before a species", first.start, first.end)


def _is_coefficient(run: list[Token], at: int, known: Known) -> bool:
    name = run[at].text
    behind = run[at + 1].kind if at + 1 < len(run) else ""
    return name in known.parameters and name not in known.species and behind == "w"



def _bracket_faults(text: str, token: Token) -> list[Fault]:
    """What is wrong inside brackets."""
    start, end = token.start + 1, token.end - 1
    commas = decimal_commas(text, start, end)
    if commas:
        return commas
    if not text[start:end].strip():
        return [unreadable("the brackets hold nothing", token.start, token.end)]
    strange = re.compile(r"[^\w\s.+*/()-]").search(text, start, end)
    if strange:
        reason = _STRANGE.get(strange[0]) or (
            f"`{strange[0]}` cannot stand in brackets: they hold numbers, parameters and + - * /"
        )
        change = {"·": "*", "×": "*", "\u2044": "/"}.get(strange[0])
        changes = [Change(strange.start(), strange.end(), change)] if change else []
        return [unreadable(reason, strange.start(), strange.end(),
                           f"write {change}" if change else None, *changes)]
    found: list[Fault] = []
    for match in re.compile(r"(?<![\w.])(\d+\.?\d*|\.\d+)\s*(?=[A-Za-z_(])").finditer(
        text, start, end
    ):
        if re.compile(r"[\d.]+[eE][+-]?\d").match(text, match.start()):
            continue
        found.append(
            Fault(Name.GLUED_NUMBER, f"no `*` stands behind {match[1]} inside the brackets",
                  match.start(), match.end(), f"write {match[1]}*",
                  (Change(match.end(1), match.end(), "*"),))
        )
    return found
