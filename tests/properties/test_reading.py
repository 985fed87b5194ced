"""Reading, writing and laying out models: what holds for every text."""

from __future__ import annotations

import dataclasses
import random
from typing import Any

from hypothesis import example, given, settings
from hypothesis import strategies as st

from fluxnet.ground.diagnostic import Acceptance
from fluxnet.ground.source import Span
from fluxnet.reading.lines import logical_lines
from fluxnet.reading.model import ModelReading, read_model_text
from fluxnet.reading.source import source_of_text
from fluxnet.reading.tidy import tidy_text
from fluxnet.reading.writer import write_model

LINES = [
    "model Some bacterium, lumped  # title",
    "basis mmol/g/h",
    "substrate glucose, ammonia",
    "substrate xylose C5H10O5 accept unused-species: kept for later",
    "substrate oxygen",
    "product ethanol, lactate, 2,3-butanediol",
    "product aroma C8H10O",
    "exchange CO2, H+",
    "biomass X CH1.8O0.5N0.2 ash 8 ± 1 %",
    "carrier ATP carries energy",
    "carrier NADH carries 2 electrons, NADPH",
    "carrier acetylP carries C2H2O",
    "inside pyruvate, acetyl-CoA, G6P",
    "parameter PO = 1.4 ± 0.2 in [0.5, 2.5]",
    "parameter K_X = 2.1 +- 10 %",
    "free sulfate",
    "compartment catabolism",
    "    kinase : glucose + ATP -> G6P",
    "    glycolysis : G6P -> 2 pyruvate + 3 ATP + 2 NADH",
    "\tadh : acetyl-CoA + 2 NADH <-> ethanol",
    "    oxphos : NADH + 0.5 oxygen → (PO) ATP",
    "    growth : ? G6P + ? ammonia + (K_X + 1/2) ATP -> X + 0.1 CO2 + ? NADH",
    "compartment maintenance",
    "    upkeep : ATP -> nothing accept dead-end: said, by hand",
    "limit oxygen <= 8",
    "limit CO2 between in 1 and out 5",
    "limit CO2 / oxygen = 1.05 ± 0.03",
    "limit mu >= 0.1",
    'variant th "exchanges the carriers"',
    "    add to catabolism",
    "        th1 : NADH ⇌ NADPH",
    "    set PO = 1.0",
    "variant lean from th",
    "    drop oxphos, limit mu",
    'use "other.flux"',
    "balance phosphate",
]
PIECES = [
    "A", "glucose", "2", "0.5", "0,5", "1/2", "2*PO", "+", "->", "<->", "=>", "<=", "=", "±",
    "(", ")", "[", "]", "?", ":", ",", "%", "nothing", "mu", "in", "out", "between", "and",
    "limit", "compartment", "variant", "set", "drop", "use", '"', "#", "accept", "dead-end:",
    "CH1.8O0.5N0.2", "ash", "carries", "electrons", "3PG", "NAD+", "H+", "2,3-butanediol",
    "½", "CO₂", "−", "é", "\t", "    ", "1e400", "1e3", "-", ".", "9" * 30, "a-b", "\u200b",
    "charge", "-1", "×", "⇌", "from", "add to", "parameter", "carrier", "'", "A+",
]  # fmt: skip

fragments = st.lists(st.sampled_from(PIECES), max_size=8).map(" ".join)
glued = st.lists(st.sampled_from(PIECES), max_size=6).map("".join)
wild = st.text(max_size=40)
lines = st.one_of(st.sampled_from(LINES), fragments, glued, wild)


@st.composite
def damaged(draw: st.DrawFn) -> str:
    """A line of the language with one place cut out, doubled or replaced."""
    line = draw(st.sampled_from(LINES))
    start = draw(st.integers(0, len(line)))
    end = draw(st.integers(start, min(len(line), start + 4)))
    return line[:start] + draw(st.one_of(st.sampled_from(PIECES), st.just(""))) + line[end:]


texts = st.lists(st.one_of(lines, damaged()), max_size=12).map("\n".join)


def plain(value: Any) -> Any:
    """A value without its places, for comparison."""
    if isinstance(value, Span):
        return None
    if isinstance(value, Acceptance):
        return value.name, value.reason
    if dataclasses.is_dataclass(value) and not isinstance(value, type):
        fields = [f.name for f in dataclasses.fields(value) if f.init]
        return type(value).__name__, *(plain(getattr(value, name)) for name in fields)
    return tuple(plain(v) for v in value) if isinstance(value, tuple) else value


def by_name(reading: ModelReading) -> Any:
    """A network without the order of its parts."""
    network = reading.network
    assert network is not None, reading.diagnostics
    parts = {}
    for part in ("species", "parameters", "reactions", "limits", "variants", "compartments"):
        parts[part] = sorted((plain(v) for v in getattr(network, part)), key=repr)
    return parts


@given(texts)
@example("compartment c\n a : " + "(" * 200 + "1" + ")" * 200 + " A -> B")
@example("compartment c\n a : (" + "1+" * 5000 + "1) A -> B")
@example("product " + "9" * 10000 + " ethanol")
@example("parameter a = 1e999999999")
@settings(max_examples=300, deadline=None)
def test_no_text_raises_and_every_finding_lies_in_it(text: str) -> None:
    reading = read_model_text(text)

    listed = reading.sources[0].lines if reading.sources else ()
    for found in reading.diagnostics:
        assert found.message
        if found.span.line:
            line = listed[found.span.line - 1]
            assert 1 <= found.span.column <= len(line) + 1, found
            assert found.span.column <= found.span.end_column <= len(line) + 1, found
        for edit in found.edits:
            assert 1 <= edit.span.column <= edit.span.end_column
            assert edit.span.end_column <= len(listed[edit.span.line - 1]) + 1


@given(texts)
@settings(max_examples=300, deadline=None)
def test_laying_out_twice_changes_nothing_more(text: str) -> None:
    once = tidy_text(text)

    assert tidy_text(once) == once


@given(texts)
@settings(max_examples=200, deadline=None)
def test_laying_out_keeps_comments_and_meaning(text: str) -> None:
    tidied = tidy_text(text)

    before, after = read_model_text(text), read_model_text(tidied)
    if before.network is not None:
        assert plain(after.network) == plain(before.network)
    source, _ = source_of_text(text, "a")
    if source is not None and not any("#" in line.text for line in logical_lines(source)):
        comments = [line[line.index("#") :].strip() for line in source.lines if "#" in line]
        assert all(comment in tidied for comment in comments)


MODEL = """\
model {title}
substrate glucose
substrate ammonia, oxygen
product ethanol, glycerol
exchange CO2
biomass X CH1.8O0.5N0.2 ash {ash} %
carrier ATP carries energy
carrier NADH carries 2 electrons
inside pyruvate, acetaldehyde
parameter PO = {po} ± 0.2 in [0.1, 2.5]
compartment catabolism
    glycolysis : glucose -> 2 pyruvate + {atp} ATP + 2 NADH
    pdc : pyruvate -> acetaldehyde + CO2
    adh : acetaldehyde + NADH {arrow} ethanol
    gly : 0.5 glucose + NADH + ATP -> glycerol
    tca : pyruvate -> 3 CO2 + ? NADH
    oxphos : NADH + 0.5 oxygen -> ({factor}*PO) ATP
compartment anabolism
    growth : ? glucose + 0.2 ammonia + {kx} ATP -> X + {co2} CO2 + ? NADH
    upkeep : ATP -> nothing
limit oxygen <= {limit}
limit CO2 between in 1 and out {limit}
limit upkeep = 1.2 ± 0.3
limit CO2 / oxygen >= 0.5
variant anaerobic "no air"
    limit oxygen <= 0
variant lean from anaerobic
    drop oxphos
    set PO = 1.0
"""
decimals = st.decimals("0.1", "2.5", places=2).map(str)
models = st.builds(
    lambda **kw: MODEL.format(**kw),
    title=st.sampled_from(["Yeast", "Some yeast, \"lumped\"", "µ, a test"]),
    ash=st.sampled_from(["0", "8", "7.5 ± 0.5"]),
    po=decimals, atp=st.sampled_from(["2", "2.5", "(1 + PO)", "PO"]),
    arrow=st.sampled_from(["->", "<->", "→", "⇌"]), factor=st.sampled_from(["1", "2", "1/2"]),
    kx=decimals, co2=st.sampled_from(["0.1", "0.05", ".2"]), limit=decimals,
)  # fmt: skip


@given(models)
@settings(max_examples=40, deadline=None)
def test_a_network_that_is_written_and_read_is_the_same_network(text: str) -> None:
    reading = read_model_text(text)
    assert reading.network is not None, reading.diagnostics

    again = read_model_text(write_model(reading.network))

    assert plain(again.network) == plain(reading.network)


@given(models)
@settings(max_examples=40, deadline=None)
def test_a_written_network_is_laid_out_as_it_stands(text: str) -> None:
    network = read_model_text(text).network
    assert network is not None

    written = write_model(network)

    assert tidy_text(written) == written


def blocks_of(text: str) -> list[list[str]]:
    """Statements with what is indented under them."""
    blocks: list[list[str]] = []
    for line in text.splitlines():
        if line.startswith(" "):
            blocks[-1].append(line)
        else:
            blocks.append([line])
    return blocks


@given(models, st.randoms(use_true_random=False))
@settings(max_examples=40, deadline=None)
def test_the_order_of_lines_changes_no_value(text: str, shuffled: random.Random) -> None:
    blocks = blocks_of(text)
    for block in blocks:
        inner = block[1:]
        shuffled.shuffle(inner)
        block[1:] = inner
    shuffled.shuffle(blocks)

    other = read_model_text("\n".join(line for block in blocks for line in block))

    assert by_name(other) == by_name(read_model_text(text))
