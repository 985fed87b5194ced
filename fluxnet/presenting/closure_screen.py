"""What a closure shows: the world, the verdict, balances, reconciled rates; and as data."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from typing import Any

from fluxnet.ground.table import Align, Cell, Column, Table
from fluxnet.presenting.numbers import format_number, format_p
from fluxnet.presenting.screen import Block, Heading, Mood, Sentence, blocks_of_run
from fluxnet.rates.kinds import RateKind
from fluxnet.studies.closure_result import Closure, RunClosure

__all__ = ["closure_record", "closure_screen"]

# With more runs than this only the overview is shown.
_MOST_RUNS = 12

_IN_OVERVIEW = ("carbon", "nitrogen", "electrons")
_CLOSES = {True: "yes", False: "no", None: "no test"}
_VERDICTS = {True: "closes", False: "does not close", None: "no test"}

_MEANING = {
    RateKind.BALANCEABLE: "the others test it",
    RateKind.NOT_BALANCEABLE: "nothing tests it",
    RateKind.CALCULABLE: "not measured, but fixed by the others",
    RateKind.NOT_CALCULABLE: "not measured, and fixed by nothing",
}
_NO_PROOF = (
    "A closed balance is no proof: two errors can cancel, and what no balance tests can be wrong "
    "by any amount."
)


def closure_screen(closure: Closure) -> tuple[Block, ...]:
    """Everything that is shown of a closure: an overview of several runs, then each.

    The assumed world stands first, once where all runs share it.
    """
    if not closure.runs:
        return ()
    worlds = {_world(run) for run in closure.runs}
    shared = len(worlds) == 1 and len(closure.runs) > 1
    blocks: list[Block] = [Sentence(world) for world in worlds if shared]
    blocks.append(_overview(closure))
    if len(closure.runs) > _MOST_RUNS:
        return (*blocks, Sentence("One run in full: --run NAME."))
    for run in closure.runs:
        blocks += blocks_of_run(_run_blocks(run, tells_world=not shared), run.run)
    return (*blocks, Sentence(_how_to_read(closure), Mood.QUIET), Sentence(_NO_PROOF, Mood.QUIET))


def _how_to_read(closure: Closure) -> str:
    """What the signs and the kinds that are shown mean."""
    shown = {rate.kind for run in closure.runs for rate in run.rates}
    kinds = [f"{_kind(kind)}: {words}" for kind, words in _MEANING.items() if kind in shown]
    return (
        "± is one standard deviation (sd); z of a balance is its gap in sds, z of a rate its "
        f"change in sds, positive where it was raised. {_capital('; '.join(kinds))}."
    )


def _kind(kind: RateKind) -> str:
    return kind.value.replace("_", " ")


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]


def _overview(closure: Closure) -> Table:
    """All runs, one a row; data only where there is but one."""
    several = len(closure.runs) > 1
    names = [n for n in _IN_OVERVIEW if any(run.find_balance(n) for run in closure.runs)]
    extras = list(dict.fromkeys(key for run in closure.runs for key, _ in run.extras))
    columns = [
        Column("run", "run"),
        Column("closes", "closes"),
        Column("h", "h", align=Align.RIGHT, digits=3),
        Column("dof", "dof", align=Align.RIGHT),
        Column("p", "", align=Align.RIGHT),
        Column("", "p"),
        Column("", "limit"),
    ]
    for name in names:
        columns += [
            Column(name, name, "%", Align.RIGHT),
            Column("", f"{name}_sd", sd_of=name, says_exact=False),
        ]
    columns += [Column("", "or_index"), *(Column("", key) for key in extras)]
    rows: list[tuple[Cell, ...]] = []
    for run in closure.runs:
        test, carried = run.test, dict(run.extras)
        recoveries: list[Cell] = []
        for name in names:
            balance = run.find_balance(name)
            told = (None, None) if balance is None else (balance.recovery, balance.recovery_sd)
            recoveries += told
        rows.append((
            run.run, _CLOSES[test.closes], test.h, test.dof, format_p(test.p), test.p, test.limit,
            *recoveries, run.or_index, *(carried.get(key) for key in extras),
        ))  # fmt: skip
    if not several:
        columns = [replace(column, title="") for column in columns]
    return Table("overview", f"{len(rows)} runs" if several else "", tuple(columns), tuple(rows))


def _run_blocks(run: RunClosure, *, tells_world: bool) -> tuple[Block, ...]:
    mood = {True: Mood.GOOD, False: Mood.BAD, None: Mood.DOUBTFUL}[run.test.closes]
    return (
        Heading(f"run {run.run}: {_VERDICTS[run.test.closes]}"),
        *((Sentence(_world(run)),) if tells_world else ()),
        Sentence(run.words, mood, verdict=True),
        *(Sentence(f"Note: {note}.") for note in run.notes),
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


def closure_record(closure: Closure) -> dict[str, Any]:
    """The body of a ``closure/1`` document."""
    return {"runs": [_run_record(run) for run in closure.runs]}


def _run_record(run: RunClosure) -> dict[str, Any]:
    test = run.test
    return {
        "run": run.run,
        "words": run.words,
        "unit": run.unit,
        "balances": [
            {
                "name": b.name,
                "unit": b.unit,
                "in": b.taken,
                "out": b.released,
                "gap": b.gap,
                "sd": b.sd,
                "z": b.z,
                "recovery": b.recovery,
                "recovery_sd": b.recovery_sd,
                "missing": list(b.missing),
            }
            for b in run.balances
        ],
        "or_index": run.or_index,
        "test": {
            "h": test.h,
            "dof": test.dof,
            "p": test.p,
            "limit": test.limit,
            "closes": test.closes,
        },
        "world": {
            "free": list(run.world.free),
            "not_exchanged": list(run.world.not_exchanged),
            "nitrogen_reference": run.reference,
        },
        "rates": [
            {
                "species": r.species,
                "direction": r.direction.value if r.direction else None,
                "unit": r.unit,
                "measured": r.measured,
                "sd": r.sd,
                "reconciled": r.reconciled,
                "reconciled_sd": r.reconciled_sd,
                "z": r.z,
                "kind": r.kind.value,
                "reversed": r.is_reversed,
            }
            for r in run.rates
        ],
        "suspects": list(run.suspects),
        "contradictions": [list(names) for names in run.contradictions],
        "left_out": list(run.left_out),
        "notes": list(run.notes),
        "residual": run.residual,
        "extras": dict(run.extras),
    }
