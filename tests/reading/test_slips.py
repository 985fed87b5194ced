"""Slips in a line: each is told by its own words, at the words at fault, with its mend.

A line stands in a small model that is sound but for it. Of each slip the name is given, the words
that are underlined, and the line as a certain mend leaves it (None: the mend needs a decision).
"""

from __future__ import annotations

import pytest

from fluxnet.ground.names import Severity
from fluxnet.ground.source import Source
from fluxnet.reading.model import read_model_text

MODEL = """\
substrate glucose, oxygen
product ethanol, CO2
exchange xylose, butanol C4H10O
inside acetyl-CoA, G6P
carrier ATP, NADH
parameter p = 2
compartment c
    all : p glucose -> (2*p) ethanol + (2*p) CO2
"""

REACTIONS = [
    ("1,5 G6P -> ethanol", "decimal-comma", "1,5", "1.5 G6P -> ethanol"),
    ("0,5glucose -> ethanol", "decimal-comma", "0,5", "0.5 glucose -> ethanol"),
    ("(0,5*p) glucose -> ethanol", "decimal-comma", "0,5", "(0.5*p) glucose -> ethanol"),
    ("2glucose -> ethanol", "glued-number", "2glucose", "2 glucose -> ethanol"),
    (".5glucose -> ethanol", "glued-number", ".5glucose", ".5 glucose -> ethanol"),
    ("(2p) glucose -> ethanol", "glued-number", "2", "(2*p) glucose -> ethanol"),
    ("(2 p) glucose -> ethanol", "glued-number", "2 ", "(2*p) glucose -> ethanol"),
    ("1/2 glucose -> ethanol", "fraction-coefficient", "1/2", "(1/2) glucose -> ethanol"),
    ("p/2 glucose -> ethanol", "fraction-coefficient", "p/2", "(p/2) glucose -> ethanol"),
    ("1/2glucose -> ethanol", "fraction-coefficient", "1/2", "(1/2) glucose -> ethanol"),
    ("2*p glucose -> ethanol", "starred-coefficient", "2*p", "(2*p) glucose -> ethanol"),
    ("2·p glucose -> ethanol", "starred-coefficient", "2·p", "(2*p) glucose -> ethanol"),
    ("2 p glucose -> ethanol", "starred-coefficient", "2 p", "(2*p) glucose -> ethanol"),
    ("2 * glucose -> ethanol", "starred-coefficient", "2 * glucose", "2 glucose -> ethanol"),
    ("2 × glucose -> ethanol", "starred-coefficient", "2 × glucose", "2 glucose -> ethanol"),
    ("glucose*p -> ethanol", "starred-coefficient", "glucose*p", "p glucose -> ethanol"),
    ("2*p*glucose -> ethanol", "starred-coefficient", "2*p", "(2*p) glucose -> ethanol"),
    ("glucose => ethanol", "wrong-arrow", "=>", "glucose -> ethanol"),
    ("glucose ---> ethanol", "wrong-arrow", "--->", "glucose -> ethanol"),
    ("glucose <=> ethanol", "wrong-arrow", "<=>", "glucose <-> ethanol"),
    ("glucose <--> ethanol", "wrong-arrow", "<-->", "glucose <-> ethanol"),
    ("glucose ⇄ ethanol", "wrong-arrow", "⇄", "glucose <-> ethanol"),
    ("glucose > ethanol", "wrong-arrow", ">", "glucose -> ethanol"),
    ("glucose = ethanol", "wrong-arrow", "=", None),
    ("glucose <- ethanol", "wrong-arrow", "<-", None),
    ("glucose - ethanol", "wrong-arrow", "-", None),
    ("glucose ATP -> G6P", "missing-plus", "glucose ATP", "glucose + ATP -> G6P"),
    ("2 glucose ATP -> G6P", "missing-plus", "glucose ATP", "2 glucose + ATP -> G6P"),
    ("glucose 2 ATP -> G6P", "missing-plus", "glucose 2 ATP", "glucose + 2 ATP -> G6P"),
    ("glucose, ATP -> G6P", "missing-plus", ",", "glucose + ATP -> G6P"),
    ("glucose p ATP -> G6P", "missing-plus", "glucose p ATP", "glucose + p ATP -> G6P"),
    ("acetyl CoA -> ethanol", "unreadable-line", "acetyl CoA", "acetyl-CoA -> ethanol"),
    ("2 acetyl CoA -> ethanol", "unreadable-line", "acetyl CoA", "2 acetyl-CoA -> ethanol"),
    ("-2 glucose -> ethanol", "coefficient-not-positive", "-2 glucose", None),
    ("1e5000 glucose -> ethanol", "unreadable-line", "1e5000", None),
    ("1e200 glucose -> ethanol", "unreadable-line", "1e200", None),
    ("1.5.2 glucose -> ethanol", "unreadable-line", "1.5.2", None),
    ("1 000 glucose -> ethanol", "unreadable-line", "1 000", None),
    ("(p^2) glucose -> ethanol", "unreadable-line", "^", None),
    ("() glucose -> ethanol", "unreadable-line", "()", None),
    ("(2*p glucose -> ethanol", "unreadable-line", "(", None),
    ("2*p) glucose -> ethanol", "unreadable-line", ")", None),
    ("(p + ATP) glucose -> ethanol", "unknown-parameter", "ATP", None),
    ("(q) glucose -> ethanol", "unknown-parameter", "q", None),
    ("glucose -> ethanol[c]", "unreadable-line", "[", None),
    ("glucose -> ethanol;", "unreadable-line", ";", None),
    ("glucose -> D.ethanol", "unreadable-line", ".", None),
    ("glucose + -> ethanol", "unreadable-line", "+", None),
    ("+ glucose -> ethanol", "unreadable-line", "+", None),
    ("glucose + + ATP -> ethanol", "unreadable-line", "+", None),
    ("glucose -> 2", "unreadable-line", "2", None),
    ("glucose", "unreadable-line", "glucose", None),
    ("glucose -> 1,3-bisphospho-2,5-x", "unreadable-line", "1,3-bisphospho-2,5-x", None),
    ("glucose -> ethanol -> CO2", "unreadable-line", "->", None),
    ("glucose -> ethanol + nothing", "reserved-name", "nothing", None),
    ("glucose -> ethanol + mu", "reserved-name", "mu", None),
    ("glucose -> ethanl", "unknown-species", "ethanl", None),
    ("glucose + ADP -> ethanol", "unknown-species", "ADP", None),
    ("glucose -> p", "unknown-species", "p", None),
    ("Glucose -> ethanol", "case-differs", "Glucose", "glucose -> ethanol"),
    ("P glucose -> ethanol", "case-differs", "P", "p glucose -> ethanol"),
    ("glucose -> ethanol accept dead-end", "unreadable-line", "accept dead-end", None),
    ("glucose -> ethanol accept dead-end so it is", "unreadable-line", "dead-end",
     "glucose -> ethanol accept dead-end: so it is"),
    ("glucose -> ethanol accept a-b, c-d: why", "unreadable-line", "a-b, c-d", None),
    ("glucose -> ethanol accept dead-edn: why", "accept-unknown", "dead-edn", None),
]  # fmt: skip

STATEMENTS = [
    ("Substrate xylitol", "unknown-statement", "Substrate", "substrate xylitol"),
    ("subtrate xylitol", "unknown-statement", "subtrate", "substrate xylitol"),
    ("cofactor Fd carries energy", "unknown-statement", "cofactor", None),
    ("frobnicate", "unknown-statement", "frobnicate", None),
    ("substrate: xylitol", "unreadable-line", ":", "substrate  xylitol"),
    ("substrate", "unreadable-line", "substrate", None),
    ("product lactate formate", "missing-comma", "lactate formate", "product lactate, formate"),
    ("product lactate H2", "missing-comma", "lactate H2", "product lactate, H2"),
    ("product acetic acid", "unreadable-line", "acetic acid", "product acetate"),
    ("product lactate; formate", "unreadable-line", ";", None),
    ("product lactate,, formate", "unreadable-line", ",", "product lactate, formate"),
    ("product lactate,", "unreadable-line", ",", "product lactate"),
    ("product lactate,2,3-butanediol", "unreadable-line", ",", "product lactate, 2,3-butanediol"),
    ("product flavour = C4H8O", "unreadable-line", "=", "product flavour  C4H8O"),
    ("product flavour: C4H8O", "unreadable-line", ":", "product flavour C4H8O"),
    ("product flavour c4h8o", "bad-formula", "c4h8o", None),
    ("product flavour C4H8(O", "bad-formula", "(", None),
    ("product flavour C4H8Ox", "unknown-element", "Ox", None),
    ("product flavour C4H8,5O", "decimal-comma", "C4H8,5O", "product flavour C4H8.5O"),
    ("product flavour", "formula-needed", "flavour", None),
    ("product lactate C3H8O3", "formula-differs", "C3H8O3", None),
    ("product lactate ash 8 %", "unreadable-line", "ash 8 %", None),
    ("product lactate carries energy", "unreadable-line", "carries energy", None),
    ("biomass X: CH1.8O0.5N0.2 ash 8 %", "unreadable-line", ":",
     "biomass X CH1.8O0.5N0.2 ash 8 %"),
    ("biomass X CH1.8O0.5N0.2 ash: 8 %", "unreadable-line", ":",
     "biomass X CH1.8O0.5N0.2 ash8 %"),
    ("biomass X CH1,8O0,5N0,2 ash 8 %", "decimal-comma", "CH1,8O0,5N0,2",
     "biomass X CH1.8O0.5N0.2 ash 8 %"),
    ("biomass X CH1.8O0.5N0.2 ash 8,5 %", "decimal-comma", "8,5",
     "biomass X CH1.8O0.5N0.2 ash 8.5 %"),
    ("biomass X CH1.8O0.5N0.2 ash 8", "bad-ash", "8", "biomass X CH1.8O0.5N0.2 ash 8 %"),
    ("biomass X CH1.8O0.5N0.2 ash much", "bad-ash", "ash much", None),
    ("carrier Fd", "bad-cargo", "Fd", None),
    ("carrier Fd 2 electrons", "bad-cargo", "2 electrons", "carrier Fd carries 2 electrons"),
    ("carrier Fd carries 2 e", "bad-cargo", "carries 2 e", "carrier Fd carries 2 electrons"),
    ("carrier Fd carries electrons", "bad-cargo", "electrons", None),
    ("carrier Fd C8H8", "bad-cargo", "C8H8", None),
    ("carrier Fd energy", "bad-cargo", "energy", "carrier Fd carries energy"),
    ("parameter q 1.4", "bad-parameter", "q", "parameter q = 1.4"),
    ("parameter q: 1.4", "bad-parameter", ":", "parameter q= 1.4"),
    ("parameter q = 1,4", "decimal-comma", "1,4", "parameter q = 1.4"),
    ("parameter q = 3/2", "bad-parameter", "3/2", "parameter q = 1.5"),
    ("parameter q = 1/3", "bad-parameter", "1/3", None),
    ("parameter q = 2*p", "bad-parameter", "2*p", None),
    ("parameter q =", "bad-parameter", "=", None),
    ("parameter", "bad-parameter", "parameter", None),
    ("parameter q = 1.4 mmol/g/h", "bad-parameter", "mmol/g/h", "parameter q = 1.4"),
    ("parameter q = 1.4 (0.2)", "bad-parameter", " (0.2)", "parameter q = 1.4 ± 0.2"),
    ("parameter q = 1.4 ± -0.2", "bad-parameter", "-0.2", None),
    ("parameter q = 1.4 in (0.5, 2.5)", "bad-parameter", "in (0.5, 2.5)",
     "parameter q = 1.4 in [0.5, 2.5]"),
    ("parameter q = 1.4 in 0.5 to 2.5", "bad-parameter", "in 0.5 to 2.5",
     "parameter q = 1.4 in [0.5, 2.5]"),
    ("parameter q = 1.4 [0.5, 2.5]", "bad-parameter", "[0.5, 2.5]",
     "parameter q = 1.4 in [0.5, 2.5]"),
    ("parameter q = 1.4 in [2.5, 0.5]", "bad-parameter", "2.5, 0.5",
     "parameter q = 1.4 in [0.5, 2.5]"),
    ("parameter q = 1.4 in [1,5, 2,5]", "decimal-comma", "1,5",
     "parameter q = 1.4 in [1.5, 2,5]"),
    ("parameter q-x = 1.4", "bad-parameter", "q-x", None),
    ("parameter 7q = 1.4", "bad-parameter", "7q", None),
    ("limit glucose < 3", "bad-limit", "<", "limit glucose <= 3"),
    ("limit glucose < = 3", "bad-limit", "< =", "limit glucose <= 3"),
    ("limit glucose =< 3", "bad-limit", "=<", "limit glucose <= 3"),
    ("limit glucose == 3", "bad-limit", "==", "limit glucose = 3"),
    ("limit glucose 3", "bad-limit", "glucose 3", None),
    ("limit glucose at least 3", "bad-limit", "at least", "limit glucose >= 3"),
    ("limit glucose max 3", "bad-limit", "max", "limit glucose <= 3"),
    ("limit glucose <= -3", "bad-limit", "-3", None),
    ("limit glucose <= 3 mmol/g/h", "bad-limit", "mmol/g/h", "limit glucose <= 3"),
    ("limit glucose <= three", "bad-limit", "three", None),
    ("limit glucose <=", "bad-limit", "<=", None),
    ("limit <= 3", "bad-limit", " <=", None),
    ("limit", "bad-limit", "limit", None),
    ("limit glucose <= 3,5", "decimal-comma", "3,5", "limit glucose <= 3.5"),
    ("limit 3 >= glucose", "bad-limit", "3 >= glucose", "limit glucose <= 3"),
    ("limit 1 <= glucose <= 3", "bad-limit", "1 <= glucose <= 3", "limit glucose between 1 and 3"),
    ("limit glucose uptake <= 3", "bad-limit", "uptake", "limit glucose in <= 3"),
    ("limit glucose + oxygen <= 3", "bad-limit", "glucose + oxygen ", None),
    ("limit glucose between 1 to 3", "bad-limit", "to", "limit glucose between 1 and 3"),
    ("limit glucose between 1, 3", "bad-limit", ",", "limit glucose between 1 and 3"),
    ("limit glucose between 1 and", "bad-limit", "between 1 and", None),
    ("limit: glucose <= 3", "unreadable-line", ":", "limit glucose <= 3"),
    ("limit glucose: 3", "bad-limit", ":", None),
    ("compartment", "unreadable-line", "compartment", None),
    ("compartment d:\n    d1 : glucose -> 2 ethanol + 2 CO2", "unreadable-line", ":",
     "compartment d"),
    ("compartment d e\n    d1 : glucose -> 2 ethanol + 2 CO2", "unreadable-line", "d e",
     "compartment d-e"),
    ("free", "unreadable-line", "free", None),
    ("free sulfate nitrate", "missing-comma", "sulfate nitrate", "free sulfate, nitrate"),
    ("balance phosphat", "unreadable-line", "phosphat", "balance phosphate"),
    ("balance nitrogen", "unreadable-line", "nitrogen", None),
    ("basis", "unknown-basis", "basis", None),
    ("basis mol/kg/day", "unknown-basis", "mol/kg/day", None),
    ("basis = mmol/g/h", "unknown-basis", "= mmol/g/h", "basis mmol/g/h"),
    ("use", "unreadable-line", "use", None),
    ("use 'x.flux'", "unreadable-line", "'x.flux'", 'use "x.flux"'),
    ("variant v: w\n    limit glucose <= 1", "unreadable-line", ":", None),
    ("variant v some words\n    limit glucose <= 1", "unreadable-line", "some words",
     'variant v "some words"'),
    ('variant v "some words\n    limit glucose <= 1', "unreadable-line", '"some words',
     'variant v "some words"'),
    ("variant v\n    set p 1", "bad-parameter", "p", "    set p = 1"),
    ("variant v\n    drop reaction all", "unreadable-line", "reaction", "    drop all"),
    ("variant v\n    add c\n        w : glucose -> 2 ethanol + 2 CO2", "unreadable-line", "add",
     "    add to c"),
    ("variant v\n    add to: c\n        w : glucose -> 2 ethanol + 2 CO2", "unreadable-line", ":",
     "    add to c"),
]  # fmt: skip


def check(text: str, line: int, name: str, words: str, mended: str | None) -> None:
    lines = text.split("\n")
    reading = read_model_text(text)
    found = [d for d in reading.diagnostics if d.severity is Severity.ERROR
             and d.span.line == line and d.name.value == name]
    assert found, [(d.span.line, d.name.value, d.message) for d in reading.diagnostics]
    spans = [lines[line - 1][d.span.column - 1 : d.span.end_column - 1] for d in found]
    assert words in spans
    chosen = found[spans.index(words)]
    assert chosen.message
    if mended is None:
        assert chosen.edits == ()
    else:
        after = apply(Source("m", tuple(lines)), chosen.edits, line)
        assert " ".join(after.split()) == " ".join(mended.split())


def apply(source: Source, edits: object, line: int) -> str:
    text = source.line(line)
    for edit in sorted(edits, key=lambda e: e.span, reverse=True):  # type: ignore[call-overload]
        if edit.span.line == line:
            text = text[: edit.span.column - 1] + edit.text + text[edit.span.end_column - 1 :]
    return text


@pytest.mark.parametrize(("line", "name", "words", "mended"), REACTIONS)
def test_a_slip_in_a_reaction(line: str, name: str, words: str, mended: str | None) -> None:
    text = MODEL + f"    slip : {line}\n"

    check(text, 9, name, words, None if mended is None else f"slip : {mended}")


@pytest.mark.parametrize(("lines", "name", "words", "mended"), STATEMENTS)
def test_a_slip_in_a_statement(lines: str, name: str, words: str, mended: str | None) -> None:
    text = MODEL + lines + "\n"
    at = 10 if lines.startswith("variant v\n") else 9

    check(text, at, name, words, mended)
