"""What a solve shows of more runs than anybody reads: one a line, or how they spread."""

from __future__ import annotations

from collections.abc import Sequence
from statistics import median

from fluxnet.ground.table import Align, Cell, Column, Table
from fluxnet.presenting.numbers import format_p
from fluxnet.presenting.screen import Block, Mood, Sentence
from fluxnet.studies.solution import FluxEstimate, FluxKind, FluxSolution, SolveStatus

__all__ = ["blocks_of_many"]

_MOST_IN_OVERVIEW = 30
"""With more runs than this the overview is of the worst."""
_WORST = 20
_MAIN = 3
_ONE = "One run in full: --run NAME; all of them as tables: --csv DIR."

_ORDER = (
    SolveStatus.INFEASIBLE, SolveStatus.UNBOUNDED, SolveStatus.INCONSISTENT, SolveStatus.SOLVED,
    SolveStatus.OPTIMAL,
)  # fmt: skip


def blocks_of_many(runs: Sequence[FluxSolution]) -> tuple[Block, ...]:
    """The verdict on many runs with their overview; of very many how they spread and the worst."""
    share = _share(runs)
    main = _main_fluxes(runs)
    if len(runs) <= _MOST_IN_OVERVIEW:
        return (share, _lines(runs, main, f"{len(runs)} runs"), Sentence(_ONE))
    failing = sorted((r for r in runs if not r.status.is_sound), key=_badness)
    blocks: list[Block] = [share, *_spread(runs, main)]
    if failing:
        title = "Runs that fail"
        if len(failing) > _WORST:
            title += f", the worst {_WORST} of {len(failing):,}"
        blocks.append(_lines(failing[:_WORST], main, title))
    return (*blocks, Sentence(_ONE))


def _badness(run: FluxSolution) -> tuple[int, float, float]:
    test = run.test
    chances = [p for p in (test.p, test.bound_p) if p is not None] if test else []
    size = (test.h or 0.0) + test.bound_h if test else 0.0
    return _ORDER.index(run.status), min(chances, default=1.0), -size


def _share(runs: Sequence[FluxSolution]) -> Sentence:
    """How many runs ended how."""
    counts = {status: sum(run.status is status for run in runs) for status in SolveStatus}
    told = [f"{n:,} {status.value}" for status, n in counts.items() if n]
    text = f"{len(runs):,} runs: {', '.join(told)}"
    tested = sum(run.test is not None and run.test.h is not None for run in runs)
    rejected = counts[SolveStatus.INCONSISTENT]
    if rejected and tested:
        text += (
            f" ({100 * rejected / len(runs):.2g} %; of sound runs chance alone rejects 5 %)"
        )
    mood = Mood.GOOD if all(run.status.is_sound for run in runs) else Mood.BAD
    return Sentence(f"{text}.", mood, verdict=True)


def _main_fluxes(runs: Sequence[FluxSolution]) -> tuple[str, ...]:
    """The largest of the fluxes that are determined in at least half of the sound runs."""
    sizes: dict[str, list[float]] = {}
    sound = [run for run in runs if run.status.is_sound]
    for run in sound:
        for flux in run.fluxes:
            if flux.kind is FluxKind.DETERMINED:
                sizes.setdefault(flux.reaction, []).append(abs(flux.value))
    often = {name: median(found) for name, found in sizes.items() if 2 * len(found) >= len(sound)}
    return tuple(sorted(often, key=lambda name: -often[name])[:_MAIN])


def _flux(run: FluxSolution, name: str) -> FluxEstimate | None:
    found = next((flux for flux in run.fluxes if flux.reaction == name), None)
    return found if found is not None and found.kind is FluxKind.DETERMINED else None


def _lines(runs: Sequence[FluxSolution], main: Sequence[str], title: str) -> Table:
    """Runs, one a line: how it ended, the test or the optimum, the main fluxes."""
    is_aimed = any(run.aim is not None for run in runs)
    columns = [Column("run", ""), Column("status", "")]
    if is_aimed:
        columns.append(Column("optimum", "", align=Align.RIGHT))
    else:
        columns += [
            Column("h", "", align=Align.RIGHT, digits=3), Column("p", "", align=Align.RIGHT),
            Column("bounds add", "", align=Align.RIGHT, digits=3),
        ]  # fmt: skip
    columns += [Column(name, "", align=Align.RIGHT, digits=3) for name in main]
    rows: list[tuple[Cell, ...]] = []
    for run in runs:
        test, told = run.test, [_flux(run, name) for name in main]
        how: tuple[Cell, ...] = (run.optimum,) if is_aimed else (
            test.h if test else None, format_p(test.p) if test else "",
            test.bound_h if test and test.bound_h else None,
        )  # fmt: skip
        rows.append((
            run.run, run.status.value, *how, *(flux.value if flux else None for flux in told),
        ))  # fmt: skip
    return Table("", title, tuple(columns), tuple(rows), _units(runs, main, is_aimed=is_aimed))


def _units(runs: Sequence[FluxSolution], main: Sequence[str], *, is_aimed: bool) -> tuple[str, ...]:
    units = dict.fromkeys(run.unit for run in runs)
    notes = [f"fluxes of {', '.join(main)} in {' or '.join(units)}"] if main else []
    if not is_aimed and any(run.test and run.test.bound_h for run in runs):
        notes.append("bounds add: what limits and directions add to h")
    return tuple(notes)


def _spread(runs: Sequence[FluxSolution], main: Sequence[str]) -> tuple[Table, ...]:
    """The median of each main flux over the sound runs, and where nine in ten of them lie."""
    rows: list[tuple[Cell, ...]] = []
    for name in main:
        found = [_flux(run, name) for run in runs if run.status.is_sound]
        values = sorted(flux.value for flux in found if flux is not None)
        tail = len(values) // 20
        rows.append((name, len(values), median(values), values[tail], values[-1 - tail]))
    if not rows:
        return ()
    columns = (
        Column("flux", "flux"),
        Column("runs", "runs", align=Align.RIGHT, digits=9),
        Column("median", "median", align=Align.RIGHT, digits=4),
        Column("5 %", "low", align=Align.RIGHT, digits=4),
        Column("95 %", "high", align=Align.RIGHT, digits=4),
    )
    units = dict.fromkeys(run.unit for run in runs)
    title = f"Main fluxes of the runs that do not fail [{' or '.join(units)}]"
    notes = ("nine runs in ten lie between 5 % and 95 %",)
    return (Table("spread", title, columns, tuple(rows), notes),)
