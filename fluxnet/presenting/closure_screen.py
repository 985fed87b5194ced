"""What a closure shows: the world, the verdict, balances, reconciled rates; and as data."""

from __future__ import annotations

from typing import Any

from fluxnet.ground.table import Align, Cell, Column, Table
from fluxnet.presenting.numbers import format_number, format_p
from fluxnet.presenting.screen import Block, Heading, Mood, Sentence, blocks_of_run
from fluxnet.studies.closure_result import Closure, RunClosure

__all__ = ["closure_record", "closure_screen"]

# With more runs than this only the overview is shown.
_MOST_RUNS = 12


def closure_screen(closure: Closure) -> tuple[Block, ...]:
    """Everything that is shown of a closure: an overview of several runs, then each."""
    blocks: list[Block] = []
    if len(closure.runs) > 1:
        blocks.append(_overview(closure))
    if len(closure.runs) <= _MOST_RUNS:
        for run in closure.runs:
            blocks += blocks_of_run(_run_blocks(run), run.run)
        blocks.append(
            Sentence(
                "A closed balance is no proof: two errors can cancel, and what no balance tests "
                "can be wrong by any amount.",
                Mood.QUIET,
            )
        )
    else:
        blocks.append(Sentence("One run in full: --run NAME."))
    return tuple(blocks)


def _overview(closure: Closure) -> Table:
    columns = (
        Column("run", "name"),
        Column("verdict", "verdict"),
        Column("h", "h", align=Align.RIGHT, digits=3),
        Column("dof", "dof", align=Align.RIGHT),
        Column("p", "p_text", align=Align.RIGHT),
        Column("carbon", "carbon", "%", Align.RIGHT),
        Column("", "carbon_sd", sd_of="carbon"),
        Column("electrons", "electrons", "%", Align.RIGHT),
        Column("", "electrons_sd", sd_of="electrons"),
    )
    rows: list[tuple[Cell, ...]] = []
    for run in closure.runs:
        recoveries: list[Cell] = []
        for name in ("carbon", "electrons"):
            balance = run.find_balance(name)
            recoveries += [balance and balance.recovery, balance and balance.recovery_sd]
        test = run.test
        rows.append((run.run, _verdict(run), test.h, test.dof, format_p(test.p), *recoveries))
    return Table("overview", f"{len(rows)} runs", columns, tuple(rows))


def _verdict(run: RunClosure) -> str:
    if run.test.closes is None:
        return "no test"
    return "closes" if run.test.closes else "does not close"


def _run_blocks(run: RunClosure) -> tuple[Block, ...]:
    mood = {True: Mood.GOOD, False: Mood.BAD, None: Mood.DOUBTFUL}[run.test.closes]
    blocks: list[Block] = [
        Heading(f"run {run.run}: {_verdict(run)}"),
        Sentence(_world(run)),
        Sentence(run.words, mood, verdict=True),
    ]
    blocks += [
        Sentence(f"Exact values contradict one another: {', '.join(names)}.", Mood.BAD)
        for names in run.contradictions
    ]
    blocks += [Sentence(f"Note: {note}") for note in run.notes]
    blocks += [_balances(run), _rates(run)]
    return tuple(blocks)


def _world(run: RunClosure) -> str:
    text = f"Assumed: exchanged are the species with a row, and {', '.join(run.world.free)}"
    if run.world.not_exchanged:
        text += f"; not exchanged: {', '.join(run.world.not_exchanged)}"
    return text + "."


def _balances(run: RunClosure) -> Table:
    columns = (
        Column("balance", "name"),
        Column("unit", "unit"),
        Column("in", "in", align=Align.RIGHT),
        Column("out", "out", align=Align.RIGHT),
        Column("gap, out - in", "gap", align=Align.RIGHT),
        Column("", "sd", sd_of="gap"),
        Column("z", "z", align=Align.RIGHT, decimals=1),
        Column("recovery", "recovery", "%", Align.RIGHT),
        Column("", "recovery_sd", sd_of="recovery"),
    )
    rows = tuple(
        (b.name, b.unit, b.taken, b.released, b.gap, b.sd, b.z, b.recovery, b.recovery_sd)
        for b in run.balances
    )
    notes = [f"electrons are counted from {run.reference} upwards"]
    if run.or_index is not None:
        notes.append(f"O/R index {format_number(run.or_index, 4)}")
    missing = dict.fromkeys(name for b in run.balances for name in b.missing)
    if missing:
        notes.append(f"without what is not measured: {', '.join(missing)}")
    return Table("balances", "Balances, as measured", columns, rows, tuple(notes))


def _rates(run: RunClosure) -> Table:
    columns = (
        Column("species", "species"),
        Column("way", "direction"),
        Column("measured", "measured", align=Align.RIGHT),
        Column("", "measured_sd", sd_of="measured"),
        Column("reconciled", "reconciled", align=Align.RIGHT),
        Column("", "reconciled_sd", sd_of="reconciled"),
        Column("z", "z", align=Align.RIGHT, decimals=1),
        Column("kind", "kind"),
    )
    rows: list[tuple[Cell, ...]] = []
    for rate in run.rates:
        way = rate.direction.value if rate.direction else ""
        name = rate.species if rate.unit == run.unit else f"{rate.species} [{rate.unit}]"
        rows.append(
            (
                name,
                f"{way}, reversed" if rate.is_reversed else way,
                rate.measured,
                rate.sd,
                rate.reconciled,
                rate.reconciled_sd,
                rate.z,
                rate.kind.value.replace("_", " "),
            )
        )
    return Table(
        "rates",
        f"Rates [{run.unit}]",
        columns,
        tuple(rows),
        ("sd: one standard deviation; z: adjustment over its sd",),
    )


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
