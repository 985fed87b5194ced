"""What a closure shows of several runs: one a line, or how many close and how they spread."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from statistics import median

from fluxnet.ground.table import Align, Cell, Column, Table
from fluxnet.presenting.numbers import format_p
from fluxnet.presenting.screen import Mood
from fluxnet.studies.closure_result import RunClosure

__all__ = ["closed_share", "overview", "sorted_out", "spread_of_recoveries", "worst_runs"]

_IN_OVERVIEW = ("carbon", "nitrogen", "electrons")
_CLOSES = {True: "yes", False: "no", None: "no test"}
_MOST_SHOWN = 20


def overview(runs: Sequence[RunClosure], title: str | None = None) -> Table:
    """Runs, one a row; data only where there is but one."""
    several = len(runs) > 1 or title is not None
    names = [n for n in _IN_OVERVIEW if any(run.find_balance(n) for run in runs)]
    extras = list(dict.fromkeys(key for run in runs for key, _ in run.extras))
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
    for run in runs:
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
    shown = title or (f"{len(rows)} runs" if several else "")
    return Table("overview", shown, tuple(columns), tuple(rows))


def sorted_out(runs: Sequence[RunClosure]) -> Table:
    """The overview of all runs, as data alone."""
    whole = overview(runs)
    return replace(whole, title="", columns=tuple(replace(c, title="") for c in whole.columns))


def closed_share(runs: Sequence[RunClosure]) -> tuple[str, Mood]:
    """How many runs close, beside how many sound ones chance alone would reject."""
    tested = [run.test.closes for run in runs if run.test.closes is not None]
    untested = len(runs) - len(tested)
    left = f"; {untested:,} have no test" if untested else ""
    if not tested:
        return f"None of the {len(runs):,} runs has a test: nothing is redundant.", Mood.DOUBTFUL
    failing = len(tested) - sum(tested)
    if not failing:
        return f"All {len(tested):,} tested runs close{left}.", Mood.GOOD
    verb = "does" if failing == 1 else "do"
    text = (
        f"{failing:,} of {len(tested):,} tested runs {verb} not close "
        f"({100 * failing / len(tested):.2g} %; of sound runs chance alone rejects 5 %){left}."
    )
    return text, Mood.BAD


def spread_of_recoveries(runs: Sequence[RunClosure]) -> Table:
    """The median recovery of each balance, where nine in ten runs lie, and the median sd."""
    columns = (
        Column("recovery", "balance"),
        Column("runs", "runs", align=Align.RIGHT, digits=9),
        Column("median", "median", "%", Align.RIGHT, decimals=1),
        Column("5 %", "low", "%", Align.RIGHT, decimals=1),
        Column("95 %", "high", "%", Align.RIGHT, decimals=1),
        Column("sd of one run", "sd", "%", Align.RIGHT, decimals=1),
    )
    rows: list[tuple[Cell, ...]] = []
    for name in _IN_OVERVIEW:
        told = [
            (b.recovery, b.recovery_sd or 0.0)
            for b in (run.find_balance(name) for run in runs)
            if b is not None and b.recovery is not None
        ]
        if not told:
            continue
        values = sorted(value for value, _ in told)
        tail = len(values) // 20
        rows.append((
            name, len(values), median(values), values[tail], values[-1 - tail],
            median(sd for _, sd in told),
        ))  # fmt: skip
    notes = (
        "nine runs in ten lie between 5 % and 95 %; a median that is clearly off 100 % is an error "
        "that the runs share",
    )
    return Table("spread", f"{len(runs):,} runs, as measured", columns, tuple(rows), notes)


def worst_runs(runs: Sequence[RunClosure]) -> tuple[Table, ...]:
    """The runs that close least, the worst first; nothing where all close."""
    failing = [run for run in runs if run.test.closes is False]
    if not failing:
        return ()
    # contradicting exact values have no p, and nothing is worse
    failing.sort(key=lambda run: (-1.0 if run.test.p is None else run.test.p, -(run.test.h or 0)))
    shown = failing[:_MOST_SHOWN]
    title = "Runs that do not close"
    if len(shown) < len(failing):
        title = f"Runs that do not close, the worst {len(shown)} of {len(failing):,}"
    return (replace(overview(shown, title), key=""),)  # as data the overview of all holds them
