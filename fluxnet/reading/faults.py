"""Why a line could not be read: labelled patterns of what people write, tried one by one.

The grammar says only where it stopped. Here a line that it refused is read once more for what
it was meant to be, and each slip in it is told with its place and its mend. A mend is certain
where the line can be read once all changes are made.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterable

from fluxnet.ground.names import Name
from fluxnet.reading.fault_declarations import declaration_faults, list_faults
from fluxnet.reading.fault_numbers import limit_faults, parameter_faults
from fluxnet.reading.fault_others import (
    acceptance_faults,
    block_faults,
    head_faults,
    use_faults,
)
from fluxnet.reading.fault_reactions import has_arrow, reaction_faults
from fluxnet.reading.fault_record import NAME, Change, Fault, Known, unreadable
from fluxnet.reading.findings import Findings, nearest_names
from fluxnet.reading.lines import LogicalLine
from fluxnet.reading.parsing import Unparsed, expected_terminals, parse_statement
from fluxnet.reading.syntax import Word

__all__ = ["explain_line"]

_ROLES = ("substrate", "product", "exchange", "biomass", "carrier", "inside")
_WORDS = (
    "model", "basis", *_ROLES, "parameter", "compartment", "limit", "variant", "add", "set",
    "drop", "use", "free", "balance",
)
_MEANT = {
    "species": "inside", "metabolite": "inside", "metabolites": "inside",
    "intermediate": "inside", "intermediates": "inside", "internal": "inside",
    "cofactor": "carrier", "cofactors": "carrier", "feed": "substrate", "input": "substrate",
    "output": "product", "constraint": "limit", "bound": "limit", "constrain": "limit",
    "const": "parameter", "constant": "parameter", "let": "parameter", "param": "parameter",
    "cell": "biomass", "cells": "biomass", "title": "model", "name": "model", "unit": "basis",
    "units": "basis", "pathway": "compartment", "module": "compartment", "scenario": "variant",
    "case": "variant", "include": "use", "import": "use", "remove": "drop", "delete": "drop",
    "extend": "add to",
}
_ACCEPT = re.compile(r"\s+accept\s+[\w-]+\s*:\s*\S")
_FIRST = re.compile(r"\S+")
_ARROW = re.compile(r"[-=]+>|→|⇌|<-")


def explain_line(
    line: LogicalLine, failure: Unparsed, known: Known, findings: Findings
) -> None:
    """Tell what is wrong with a line that could not be read.

    Parameters
    ----------
    line
        The logical line, for places.
    failure
        How far the parser came.
    known
        The species and parameters that readable lines declare.
    findings
        Takes what is wrong.
    """
    faults = acceptance_faults(line.text) or _faults(line.text, known)
    if not faults:
        faults = [_where_it_stopped(line.text, failure)]
    changes = [c for f in faults for c in f.changes]
    certain = bool(changes) and _is_mended(line.text, changes)
    for fault in faults:
        place = Word("", fault.start, max(fault.end, fault.start + 1))
        edits = [(Word("", c.start, c.end), c.text) for c in fault.changes] if certain else []
        findings.add(fault.name, fault.message, line, place, because=fault.because,
                     mend=fault.mend, certain=edits)


def _is_mended(text: str, changes: Iterable[Change]) -> bool:
    for change in sorted(changes, reverse=True):
        text = text[: change.start] + change.text + text[change.end :]
    return not isinstance(parse_statement(text.strip()), Unparsed)


def _faults(text: str, known: Known) -> list[Fault]:
    accept = _ACCEPT.search(text)
    end = accept.start() if accept else len(text)
    end = len(text[:end].rstrip())
    unfinished = re.compile(r"\s(\+|,|->|→|⇌)$").search(text, 0, end)
    first = _FIRST.match(text)
    if first is None:
        return []
    word = first[0].rstrip(":,=")
    named = re.compile(rf"{NAME}\s*:").match(text) and (
        word not in _WORDS or _ARROW.search(text) is not None
    )
    if word in _WORDS and not named:
        if unfinished is None or word not in _ROLES:
            return _statement_faults(word, text, len(word), end)
        return [_unfinished(unfinished)]
    if not named and not (has_arrow(text[:end]) or word.startswith(":")):
        return [_unknown_word(text, Word(word, 0, len(word)), end)]
    if unfinished:
        return [_unfinished(unfinished)]
    return reaction_faults(text, end, known)


def _unfinished(sign: re.Match[str]) -> Fault:
    return unreadable(f"the line ends in `{sign[1]}`, but no line carries it on",
                      sign.start(1), sign.end(1), "finish the line")


def _statement_faults(word: str, text: str, start: int, end: int) -> list[Fault]:
    colon = re.compile(r"\s*(:)").match(text, start)
    if colon:
        return [unreadable(f"no colon stands behind `{word}`", colon.start(1), colon.end(1),
                           "take the colon out", Change(start, colon.end(1), " "))]
    if word in _ROLES:
        return declaration_faults(word, text, start, end)
    if word == "limit":
        return limit_faults(text, start, end)
    if word == "use":
        return use_faults(text, start, end)
    special: dict[str, Callable[[str, str, int, int], list[Fault]]] = {
        "parameter": parameter_faults, "set": parameter_faults,
        "compartment": block_faults, "variant": block_faults, "add": block_faults,
        "drop": list_faults, "free": list_faults, "balance": list_faults,
        "model": head_faults, "basis": head_faults,
    }
    return special[word](word, text, start, end)


def _unknown_word(text: str, word: Word, end: int) -> Fault:
    """A line whose first word starts no statement."""
    lower = word.text.casefold()
    message = f"`{word.text}` starts no statement"
    near = nearest_names(lower, _WORDS, 1)
    meant = lower if lower in _WORDS else _MEANT.get(lower) or (near[0] if near else None)
    if meant is None:
        if re.compile(rf"{NAME}(?:\s*[+,]\s*|\s+){NAME}").match(text, 0, end):
            mend = "a reaction is written `name : A + B -> C`"
        else:
            mend = "begin the line with one of: " + ", ".join(_WORDS)
        return Fault(Name.UNKNOWN_STATEMENT, message, word.start, word.end, mend)
    change = Change(word.start, word.end, meant)
    spelling = lower in _WORDS or lower not in _MEANT
    return Fault(Name.UNKNOWN_STATEMENT, message, word.start, word.end, f"write `{meant}`",
                 (change,) if spelling else ())


_PLAIN = {
    "NAME": "a name", "DECLARED_NAME": "a name", "PARAMETER_NAME": "a parameter",
    "COEFFICIENT": "a number", "NUMBER": "a number", "FORMULA": "a formula",
    "QUOTED": "words in quotation marks", "TEXT": "words", "REASON": "a reason",
    "DIAGNOSTIC_NAME": "the name of a diagnostic", "ONE_WAY": "->", "BOTH_WAYS": "<->",
    "PLUS_OR_MINUS": "±", "AT_MOST": "<=", "AT_LEAST": ">=", "COLON": "a colon",
    "COMMA": "a comma", "RANGE_COMMA": "a comma", "PLUS": "+", "MINUS": "-", "TIMES": "*",
    "OVER": "/", "EQUALS": "=", "PER_CENT": "%", "UNKNOWN": "?", "OPEN": "(", "CLOSE": ")",
    "OPEN_RANGE": "[", "CLOSE_RANGE": "]", "ACCEPT": "`accept`", "$END": "the line's end",
    "NOTHING": "`nothing`", "ELECTRONS": "`electrons`",
}


def _where_it_stopped(text: str, failure: Unparsed) -> Fault:
    """What the grammar itself can say."""
    place = min(failure.position, len(text))
    word = re.compile(r"\w[\w-]*|\S").match(text, place)
    stop = word.end() if word else place
    expected = expected_terminals(text)
    words = dict.fromkeys(_PLAIN.get(t, f"`{t.lower()}`") for t in expected)
    mend = f"here could stand {', '.join(words)}" if 0 < len(words) <= 8 else None
    if place >= len(text):
        return unreadable("the line ends too early", max(len(text) - 1, 0), len(text), mend)
    return unreadable(f"`{word[0] if word else text[place]}` cannot stand here", place,
                      max(stop, place + 1), mend)
