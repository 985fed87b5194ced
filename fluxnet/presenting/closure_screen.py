"""What a closure shows: the world, the verdict, balances, reconciled rates."""

from __future__ import annotations

from collections.abc import Sequence

from fluxnet.ground.table import Align, Cell, Column, Table
from fluxnet.presenting.closure_overview import (
    closed_share,
    overview,
    sorted_out,
    spread_of_recoveries,
    worst_runs,
)
from fluxnet.presenting.numbers import format_number
from fluxnet.presenting.screen import Block, Data, Heading, Mood, Sentence, blocks_of_run
from fluxnet.presenting.suspect_blocks import suspect_blocks
from fluxnet.rates.kinds import RateKind
from fluxnet.studies.closure_result import Closure, RunClosure

__all__ = ["closure_screen"]

# With more runs than the first only an overview is shown, with more than the second their spread.
_MOST_IN_FULL = 12
_MOST_IN_OVERVIEW = 30

_VERDICTS = {True: "closes", False: "does not close", None: "no test"}

_MEANING = {
    RateKind.BALANCEABLE: "the others test it",
    RateKind.NOT_BALANCEABLE: "nothing tests it",
    RateKind.CALCULABLE: "not measured, but fixed by the others",
    RateKind.NOT_CALCULABLE: "not measured, and fixed by nothing",
}
_ONE = "One run in full: --run NAME"
_MORE = "`fluxnet solve` with a model tests more: carriers balance too, and tell suspects apart."
_NO_PROOF = (
    "A closed balance is no proof: two errors can cancel, and what no balance tests can be wrong "
    "by any amount."
)


def closure_screen(closure: Closure, *, everything: bool = False) -> tuple[Block, ...]:
    """Everything that is shown of a closure: an overview of several runs, then each.

    The assumed world stands first, once where all runs share it. Of many runs the overview is
    shown alone, of very many how their balances spread and the ones that close least; the
    tables of all runs are there as data. ``everything`` shows all suspects, rare ones too.
    """
    if not closure.runs:
        return ()
    worlds = {_world(run) for run in closure.runs}
    shared = len(worlds) == 1 and len(closure.runs) > 1
    blocks: list[Block] = [Sentence(world) for world in worlds if shared]
    if len(closure.runs) > _MOST_IN_FULL:
        return (*blocks, *_many_runs(closure))
    blocks.append(overview(closure.runs))
    for run in closure.runs:
        of_run = _run_blocks(run, tells_world=not shared, everything=everything)
        blocks += blocks_of_run(of_run, run.run)
    return (*blocks, Sentence(_how_to_read(closure), Mood.QUIET), Sentence(_NO_PROOF, Mood.QUIET))


def _many_runs(closure: Closure) -> tuple[Block, ...]:
    """What is shown of more runs than anybody reads, and the tables of all of them as data."""
    words, mood = closed_share(closure.runs)
    share = Sentence(words, mood, verdict=True)

    def each() -> tuple[Table, ...]:
        return tuple(
            table
            for run in closure.runs
            for table in blocks_of_run((_balances(run), _rates(run)), run.run)
            if isinstance(table, Table)
        )

    if len(closure.runs) <= _MOST_IN_OVERVIEW:
        return (overview(closure.runs), share, Sentence(f"{_ONE}."), Data(each))
    return (
        share,
        spread_of_recoveries(closure.runs),
        *worst_runs(closure.runs),
        Sentence(f"{_ONE}; all of them as tables: --csv DIR."),
        Data(lambda: (sorted_out(closure.runs), *each())),
    )


def _how_to_read(closure: Closure) -> str:
    """What the signs and the kinds that are shown mean."""
    shown = {rate.kind for run in closure.runs for rate in run.rates}
    meaning = dict(_MEANING)
    if all(run.test.h is None for run in closure.runs):
        meaning[RateKind.BALANCEABLE] = "the others fix it"
    kinds = [f"{_kind(kind)}: {words}" for kind, words in meaning.items() if kind in shown]
    return (
        "± is one standard deviation (sd); z of a balance is its gap over its sd, z of a rate its "
        f"change over its own sd, positive where it was raised. {_capital('; '.join(kinds))}."
    )


def _kind(kind: RateKind) -> str:
    return kind.value.replace("_", " ")


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]


def _run_blocks(
    run: RunClosure, *, tells_world: bool, everything: bool
) -> tuple[Block, ...]:
    mood = {True: Mood.GOOD, False: Mood.BAD, None: Mood.DOUBTFUL}[run.test.closes]
    suspects = run.suspects
    return (
        Heading(f"run {run.run}: {_VERDICTS[run.test.closes]}", is_run=True),
        *((Sentence(_world(run)),) if tells_world else ()),
        Sentence(run.words, mood, verdict=True),
        *(Sentence(f"Note: {note}.") for note in run.notes),
        *(suspect_blocks(suspects, run.run, more=_MORE, everything=everything) if suspects else ()),
        _balances(run),
        _rates(run),
    )


def _world(run: RunClosure) -> str:
    """What is assumed to be exchanged, for somebody who has not read the manual."""
    world = run.world
    text = "Assumed to be exchanged: what has a row, and in any amount "
    free = [name for name in world.free if name != world.nitrogen]
    if world.nitrogen in world.free:
        text += f"{', '.join(free)} and the nitrogen source, {world.nitrogen}."
    else:
        text += f"{_and(free)}; the nitrogen source, {world.nitrogen}, has a row."
    if not world.not_exchanged:
        return f"{text} Not exchanged: all else."
    return f"{text} Not exchanged: {', '.join(world.not_exchanged)}, and all else without a row."


def _and(names: Sequence[str]) -> str:
    return names[0] if len(names) == 1 else f"{', '.join(names[:-1])} and {names[-1]}"


def _balances(run: RunClosure) -> Table:
    columns = (
        Column("balance", "name"),
        Column("unit", "unit"),
        Column("in", "in", align=Align.RIGHT),
        Column("out", "out", align=Align.RIGHT),
        Column("gap, out - in", "gap", align=Align.RIGHT),
        Column("", "sd", sd_of="gap", says_exact=False),
        Column("z", "z", align=Align.RIGHT, decimals=1),
        Column("recovery", "recovery", "%", Align.RIGHT),
        Column("", "recovery_sd", sd_of="recovery", says_exact=False),
    )
    rows = tuple(
        (b.name, b.unit, b.taken, b.released, b.gap, b.sd, b.z, b.recovery, b.recovery_sd)
        for b in run.balances
    )
    lacking: dict[tuple[str, ...], list[str]] = {}
    for balance in run.balances:
        if balance.missing:
            lacking.setdefault(balance.missing, []).append(balance.name)
    notes = [
        f"{_and(names)}: without {_and(lacked)}, which {_was(lacked)} not measured"
        for lacked, names in lacking.items()
    ]
    if run.find_balance("electrons") is not None:
        notes.append(f"electrons: degrees of reduction, CO2, water and {run.reference} at 0")
    if run.find_balance("nitrogen") is None:
        notes.append(f"nitrogen is not balanced, since {run.world.nitrogen} has no row")
    if run.or_index is not None:
        notes.append(f"O/R index of the products {format_number(run.or_index, 4)}")
    return Table("balances", "Balances, as measured", columns, rows, tuple(notes))


def _was(names: tuple[str, ...]) -> str:
    return "were" if len(names) > 1 else "was"


def _rates(run: RunClosure) -> Table:
    columns = (
        Column("species", ""),
        Column("", "species"),
        Column("", "unit"),
        Column("way", "direction"),
        Column("measured", "measured", align=Align.RIGHT),
        Column("", "measured_sd", sd_of="measured"),
        Column("reconciled", "reconciled", align=Align.RIGHT),
        Column("", "reconciled_sd", sd_of="reconciled", says_exact=False),
        Column("z", "z", align=Align.RIGHT, decimals=1),
        Column("kind", "kind"),
    )
    rows: list[tuple[Cell, ...]] = []
    for rate in run.rates:
        way = rate.direction.value if rate.direction else ""
        shows_unit = rate.unit not in (run.unit, "mol/mol")
        rows.append((
            f"{rate.species} [{rate.unit}]" if shows_unit else rate.species, rate.species,
            rate.unit, f"{way}, reversed" if rate.is_reversed else way, rate.measured, rate.sd,
            rate.reconciled, rate.reconciled_sd, rate.z, _kind(rate.kind),
        ))  # fmt: skip
    notes = []
    if run.test.dof == 1 and run.test.h is not None:
        notes.append("one degree of freedom is one relation: every z tells the same")
    return Table("rates", f"Rates [{run.unit}]", columns, tuple(rows), tuple(notes))
