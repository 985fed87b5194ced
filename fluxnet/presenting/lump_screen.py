"""What a lumped model, and an overall reaction, show."""

from __future__ import annotations

import re
from collections.abc import Sequence
from functools import partial

from fluxnet.ground.table import Align, Cell, Column, Table
from fluxnet.presenting.numbers import format_number
from fluxnet.presenting.screen import Block, Data, Heading, Mood, Sentence
from fluxnet.presenting.table_lines import GLUE
from fluxnet.reading.writer import write_reaction
from fluxnet.studies.lump_build import weights_text
from fluxnet.studies.lump_overall import Overall, Overalls
from fluxnet.studies.lump_result import Fate, Lump, Lumped, Why

__all__ = ["equation_of", "lump_screen", "overall_screen"]

_WRAP = 30
_MOST = 6
_SIGN = re.compile(f"{GLUE}(\\+|-|->|<->){GLUE}")


def lump_screen(lumped: Lumped) -> tuple[Block, ...]:
    """The verdict, the proof, what each lumped reaction stands for, and why others stay."""
    before, after = len(lumped.original.reactions), len(lumped.network.reactions)
    blocks: list[Block] = []
    if lumped.eliminated:
        text = (
            f"{before} reactions have become {after}; {_many(lumped.eliminated, 'intermediate')} "
            f"taken out: {', '.join(lumped.eliminated)}."
        )
        blocks.append(Sentence(text, Mood.GOOD if lumped.is_sound else Mood.BAD, verdict=True))
    else:
        text = "No intermediate can be taken out exactly: the model stays as it is."
        blocks.append(Sentence(text, Mood.DOUBTFUL, verdict=True))
    for_variants = sum(k.why is Why.VARIANT for k in lumped.kept)
    mostly = for_variants > len(lumped.eliminated)
    if mostly:
        text = (
            f"The model's variants keep {_others(for_variants)} from being taken out: "
            "`--variant base` lumps the model without them, `--variant V` with V applied."
        )
        blocks.append(Sentence(text, Mood.DOUBTFUL))
    if lumped.eliminated:
        blocks.append(_proof(lumped))
    if lumped.lumps:
        blocks.append(_lines(lumped.lumps))
    blocks += _told(lumped)
    if lumped.kept:
        blocks.append(_kept(lumped))
    if for_variants and not mostly:
        text = (
            f"{for_variants} of these stay for variants: --variant base lumps the model without "
            "them, --variant V the model with V applied."
        )
        blocks.append(Sentence(text, Mood.QUIET))
    blocks.append(Data(partial(_data, lumped)))
    return tuple(blocks)


def equation_of(lump: Lump) -> str:
    """The equation of a lumped reaction, as the file has it.

    Examples
    --------
    >>> from fluxnet.network.expression import ONE
    >>> from fluxnet.network.model import Reaction, Term
    >>> equation_of(Lump(Reaction("a", "c", (Term("A", ONE),), (Term("B", ONE + ONE),)), ()))
    'A -> 2 B'
    """
    return write_reaction(lump.reaction).split(" : ", 1)[1]


def _proof(lumped: Lumped) -> Sentence:
    proof = lumped.proof
    if not proof.verified:
        return Sentence(f"It is NOT proven to do the same: {proof.fault}.", Mood.BAD)
    sums = f", {proof.sums} ways left out as sums of others" if proof.sums else ""
    return Sentence(
        "Nothing is lost, whatever the parameters: in each compartment the lumped reactions make "
        "just the net conversions of what is kept that the long list makes (double description, "
        f"reckoned again in exact numbers: {proof.steps} steps{sums}, {proof.lines} lines)."
    )


def _lines(lumps: Sequence[Lump]) -> Table:
    columns = (
        Column("lumped reaction", ""),
        Column("what it does, and its sum", "", wrap=_WRAP),
    )
    rows: list[tuple[Cell, ...]] = []
    for lump in lumps:
        rows.append((lump.reaction.name, _glued(equation_of(lump))))
        rows.append(("", _glued(f"= {weights_text(lump.weights)}")))
        rows += [("", _glued(f"or {weights_text(other)}")) for other in lump.others]
    notes: tuple[str, ...] = ()
    if any(" - " in f" {weights_text(lump.weights)}" for lump in lumps):
        notes = ("after a minus: the reaction runs from right to left",)
    return Table("", "Lumped reactions", columns, tuple(rows), notes)


def _told(lumped: Lumped) -> list[Block]:
    """What is left out, and why nothing is lost by it."""
    blocks: list[Block] = []
    if lumped.loops:
        loops = [weights_text(loop) for loop in lumped.loops]
        text = f"Left out, since together they make nothing of nothing: {_some(loops)}."
        blocks.append(Sentence(text))
    spared = [
        f"{weights_text(one.weights)} (as {weights_text(one.same_as)})" for one in lumped.spared
    ]
    if spared:
        blocks.append(Sentence(f"Left out, since others do the same: {_some(spared)}."))
    dead = [gone.reaction for gone in lumped.gone if gone.fate is Fate.DEAD]
    if dead:
        text = (
            "Left out, since nothing takes up what they make, or makes what they use: "
            f"{', '.join(dead)}."
        )
        blocks.append(Sentence(text, Mood.DOUBTFUL))
    return blocks


def _some(texts: Sequence[str]) -> str:
    """The first of some texts, and how many more there are."""
    more = len(texts) - _MOST
    return "; ".join([*texts[:_MOST], *([f"and {more} more (--json)"] if more > 0 else [])])


def _kept(lumped: Lumped) -> Table:
    columns = (Column("intermediate", ""), Column("why it stays", "", wrap=_WRAP))
    rows = tuple((kept.species, kept.words) for kept in lumped.kept)
    return Table("", "Intermediates that stay", columns, rows)


def _data(lumped: Lumped) -> tuple[Table, ...]:
    lines = tuple(
        (lump.reaction.compartment, lump.reaction.name, equation_of(lump),
         weights_text(lump.weights))
        for lump in lumped.lumps
    )  # fmt: skip
    kept = tuple((k.species, k.why.value, k.words) for k in lumped.kept)
    gone = tuple((g.reaction, g.fate.value) for g in lumped.gone)
    return (
        Table("lumped", "Lumped reactions",
              _columns("compartment", "reaction", "equation", "stands_for"), lines),
        Table("kept", "Intermediates that stay", _columns("species", "why", "words"), kept),
        Table("gone", "Reactions in no line", _columns("reaction", "why"), gone),
    )  # fmt: skip


def overall_screen(overalls: Overalls) -> tuple[Block, ...]:
    """The overall reaction of a compartment in each run, as a line of the language."""
    blocks: list[Block] = []
    for run in overalls.runs:
        if len(overalls.runs) > 1 and run.run is not None:
            blocks.append(Heading(f"run {run.run}"))
        blocks += _overall(run, overalls)
    blocks.append(Data(partial(_overall_data, overalls)))
    return tuple(blocks)


def _overall(run: Overall, overalls: Overalls) -> list[Block]:
    mood = Mood.PLAIN if run.status.is_sound else Mood.BAD
    if run.line is None:
        words = "it does nothing" if run.status.is_sound else f"the run is {run.status.value}"
        text = f"{overalls.compartment} has no overall reaction: {words}."
        return [Sentence(text, Mood.BAD, verdict=True)]
    per = f"per mol of {run.per} taken up" if run.per else "in the unit of the rates"
    status = "" if run.status.is_sound else f" ({run.status.value})"
    blocks: list[Block] = [
        Sentence(f"{overalls.compartment} as one reaction, {per}{status}:", mood, verdict=True),
        Table("", "", (Column("as a line of the model", "", wrap=_WRAP),),
              ((_to_copy(run.text),),)),
    ]  # fmt: skip
    columns = (Column("reaction", ""), Column("times", "", align=Align.RIGHT))
    rows = tuple((name, format_number(float(weight), 6)) for name, weight in run.weights)
    blocks.append(Table("", "It is the sum of", columns, rows))
    if run.balances:
        blocks.append(Sentence("Its numbers are exact as written, and balance.", Mood.QUIET))
    else:
        text = "Its reactions balance only within their rounding, and so does it."
        blocks.append(Sentence(text, Mood.DOUBTFUL))
    if run.free:
        text = (
            f"Nothing determines {', '.join(run.free)}: the fluxes shown are one possibility, and "
            "so is the line."
        )
        blocks.append(Sentence(text, Mood.DOUBTFUL))
    return blocks


def _overall_data(overalls: Overalls) -> tuple[Table, ...]:
    rows = tuple(
        (run.run, overalls.compartment, run.status.value, run.per, run.text or None)
        for run in overalls.runs
    )
    keys = _columns("run", "compartment", "status", "per", "line")
    return (Table("overall", "Overall reactions", keys, rows),)


def _columns(*keys: str) -> tuple[Column, ...]:
    return tuple(Column("", key) for key in keys)


def _many(names: Sequence[str], word: str) -> str:
    return f"1 {word} is" if len(names) == 1 else f"{len(names)} {word}s are"


def _others(count: int) -> str:
    return "1 other" if count == 1 else f"{count} others"


def _to_copy(text: str) -> str:
    """A line of the language that is broken behind signs only, as a file may be."""
    return _SIGN.sub(rf"{GLUE}\1 ", text.replace(" ", GLUE))


def _glued(text: str) -> str:
    """A sum that can only be broken before a sign."""
    return _SIGN.sub(rf" \1{GLUE}", text.replace(" ", GLUE))
