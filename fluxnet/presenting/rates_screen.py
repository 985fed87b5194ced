"""What raw data show: how they were read, rates with their errors, and what these rest on."""

from __future__ import annotations

import re
from itertools import groupby

from fluxnet.cultivation.result import CultivationRates, PhaseRates
from fluxnet.ground.table import Align, Cell, Column, Table
from fluxnet.network.model import QuantityKind
from fluxnet.presenting.numbers import format_number
from fluxnet.presenting.rates_accounts import account_tables, time_tables
from fluxnet.presenting.rates_ways import ways_tables
from fluxnet.presenting.screen import Block, Data, Heading, Mood, Sentence, blocks_of_run
from fluxnet.rates.cultivation import Cultivation, Mode
from fluxnet.studies.rates import FoundRates

__all__ = ["rates_screen"]

_MOST_ASSUMED = 40


def rates_screen(result: FoundRates) -> tuple[Block, ...]:
    """Everything that is shown of raw data: each cultivation in turn."""
    blocks: list[Block] = []
    for raw, found in zip(result.raw, result.found, strict=True):
        blocks += blocks_of_run(_cultivation(raw, found), found.name)
    cautions = dict.fromkeys(one.caution for one in result.found if one.caution)
    blocks += [Sentence(words, Mood.QUIET) for words in cautions]
    if any(one.phases for one in result.found):
        blocks.append(Sentence(
            "± is one standard deviation (sd). Rates of one phase share errors: the table that "
            "-o writes comes with their correlations, and closure and solve read both.",
            Mood.QUIET,
        ))  # fmt: skip
    return tuple(blocks)


def _cultivation(raw: Cultivation, found: CultivationRates) -> tuple[Block, ...]:
    return (
        Heading(f"{found.name}: {found.mode.value}"),
        *(Sentence(words) for words in raw.understood),
        *_doubtful(raw),
        _verdict(found),
        *(block for phase in found.phases for block in _phase(phase, found.mode)),
        *_rates_data(found),
        *ways_tables(found),
        *account_tables(found),
        *_assumptions(found),
        Data(lambda: time_tables(found)),
    )


def _verdict(found: CultivationRates) -> Sentence:
    if not found.phases:
        return Sentence(f"{found.name}: no rates.", Mood.BAD, verdict=True)
    told = [
        f"{p.phase.name} ({p.phase.start:g} to {p.phase.end:g} h, {p.samples} samples)"
        for p in found.phases
    ]
    several = f"{len(told)} phases" if len(told) > 1 else "one phase"
    doubts = sum(not s.steady for p in found.phases for s in p.steadiness)
    words = f"{found.name}: rates of {several}: {', '.join(told)}."
    if doubts:
        words += " Not all of it is steady."
    return Sentence(words, Mood.DOUBTFUL if doubts else Mood.GOOD, verdict=True)


def _doubtful(raw: Cultivation) -> tuple[Block, ...]:
    if not raw.doubtful:
        return ()
    columns = (
        Column("cell", "place", wrap=24), Column("held", "text", wrap=14),
        Column("what was done", "what_was_done", wrap=24),
    )  # fmt: skip
    alike = groupby(
        raw.doubtful, key=lambda d: (re.sub(r"\d+", "", d.place), d.text, d.what_was_done)
    )
    shown = tuple(
        (_places([d.place for d in cells]), text, done) for (_, text, done), cells in alike
    )
    rows = tuple((d.place, d.text, d.what_was_done) for d in raw.doubtful)
    data = Table("doubtful", "", columns, rows, run=raw.name)
    return (Table("", "Doubtful cells", columns, shown), Data(lambda: (data,)))


def _places(places: list[str]) -> str:
    """One cell, or the first and the last of several of one column."""
    if len(places) == 1:
        return places[0]
    return f"{places[0]} to {places[-1].split(' ', 1)[-1]} ({len(places)} cells)"


def _phase(phase: PhaseRates, mode: Mode) -> tuple[Block, ...]:
    columns = (
        Column("species", ""),
        Column("way", ""),
        Column("rate", "value", align=Align.RIGHT),
        Column("", "sd", sd_of="value"),
        Column("in all, mmol", "total", align=Align.RIGHT, digits=3),
        Column("most of its error comes from", "", wrap=20),
    )
    rows: list[tuple[Cell, ...]] = []
    for line in phase.lines:
        quantity = line.quantity
        is_mu = quantity.kind is QuantityKind.MU
        sign = 1 if quantity.direction is None else quantity.direction.sign
        total = None if is_mu else sign * line.total
        rows.append((
            "mu [1/h]" if is_mu else quantity.name,
            "" if quantity.direction is None else quantity.direction.value,
            sign * line.value, line.sd, total, _sources(line.shares),
        ))  # fmt: skip
    notes: list[str] = []
    if mode is not Mode.CHEMOSTAT:
        notes.append(f"ln(biomass) as a {phase.curve} over time")
    if phase.run.shared_error is not None:
        notes.append(
            f"all but mu share the biomass and its error of {100 * phase.run.shared_error:.2g} %"
        )
    title = f"Rates of {phase.phase.name} [mmol/g/h]"
    table = Table("", title, columns, tuple(rows), tuple(notes))
    return (table, *_quotient(phase), *_steadiness(phase))


def _sources(shares: tuple[tuple[str, float], ...]) -> str:
    told = [
        f"{name.removesuffix(', each value')} {100 * share:.0f} %"
        for name, share in shares[:2]
        if share >= 0.1
    ]
    return ", ".join(told)


def _quotient(phase: PhaseRates) -> tuple[Sentence, ...]:
    rq = phase.rq
    if rq is None:
        return ()
    if not rq.usable:
        return (Sentence(
            f"RQ {format_number(rq.value, 3)}: unusable, for the oxygen taken up is below three "
            "of its sds.", Mood.DOUBTFUL,
        ),)  # fmt: skip
    return (Sentence(
        f"RQ {rq.value:.3f} (95 %: {format_number(rq.low, 4)} to {format_number(rq.high, 4)})."
    ),)  # fmt: skip


def _steadiness(phase: PhaseRates) -> tuple[Block, ...]:
    if not phase.steadiness:
        return ()
    columns = (
        Column("phase", "phase"), Column("quantity", "name"),
        Column("change in a residence time", "change", "%", Align.RIGHT),
        Column("", "change_sd", sd_of="change"), Column("p", "p", align=Align.RIGHT, decimals=3),
        Column("steady", "steady"),
    )  # fmt: skip
    rows = tuple(
        (phase.phase.name, s.name, 100 * s.change, 100 * s.sd, s.p, s.steady)
        for s in phase.steadiness
    )
    return (Table("steadiness", "Steadiness over the last residence times", columns, rows),)


def _rates_data(found: CultivationRates) -> tuple[Block, ...]:
    """All phases in one table, for files."""
    if not found.phases:
        return ()
    columns = tuple(
        Column("", key)
        for key in ("phase", "start", "end", "species", "direction", "rate", "sd", "unit",
                    "total", "h", "dof", "widened")
    )  # fmt: skip
    rows: list[tuple[Cell, ...]] = []
    for phase in found.phases:
        for line in phase.lines:
            quantity = line.quantity
            sign = 1 if quantity.direction is None else quantity.direction.sign
            is_mu = quantity.kind is QuantityKind.MU
            rows.append((
                phase.phase.name, phase.phase.start, phase.phase.end,
                "mu" if is_mu else quantity.name,
                None if quantity.direction is None else quantity.direction.value,
                sign * line.value, line.sd, "1/h" if is_mu else "mmol/g/h",
                None if is_mu else sign * line.total, line.h, line.dof, line.widened,
            ))  # fmt: skip
    table = Table("rates", "", columns, tuple(rows), run=found.name)
    return (Data(lambda: (table,)),)


def _assumptions(found: CultivationRates) -> tuple[Block, ...]:
    if not found.assumptions:
        return ()
    columns = (
        Column("what", "what", wrap=22), Column("value", "value", wrap=20),
        Column("basis", "basis", wrap=9), Column("why", "why", wrap=22),
    )  # fmt: skip
    rows = tuple((a.what, a.value, a.basis.value, a.why) for a in found.assumptions)
    return (Table("assumptions", "What the rates rest on", columns, rows[:_MOST_ASSUMED]),)
