"""What a solve shows: the verdict, what was assumed, why it cannot be, then the tables."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from math import ceil, log10
from typing import TYPE_CHECKING

from fluxnet.ground.table import Align, Column, Table
from fluxnet.presenting.heat_blocks import heat_caution
from fluxnet.presenting.numbers import format_number, format_p
from fluxnet.presenting.optimum_tables import doubt_blocks, proof_blocks
from fluxnet.presenting.screen import Block, Data, Heading, Mood, Sentence, blocks_of_run
from fluxnet.presenting.share_blocks import share_blocks
from fluxnet.presenting.solve_tables import solve_tables
from fluxnet.studies.solution import FluxSolution, FluxTest, Solution, SolveStatus
from fluxnet.studies.telling import agrees_exactly
from fluxnet.studies.units import unusual_words

if TYPE_CHECKING:
    from fluxnet.studies.plan_result import Plan

__all__ = ["solve_screen"]

_MOODS = {
    SolveStatus.SOLVED: Mood.GOOD,
    SolveStatus.OPTIMAL: Mood.GOOD,
    SolveStatus.INCONSISTENT: Mood.BAD,
    SolveStatus.INFEASIBLE: Mood.BAD,
    SolveStatus.UNBOUNDED: Mood.BAD,
}
_MOST_IN_FULL = 12
"""With more runs than this only an overview is shown."""


def solve_screen(
    solution: Solution, *, with_bill: bool = False, everything: bool = False, shares: bool = False
) -> tuple[Block, ...]:
    """Everything that is shown of a solve: an overview of several runs, then each.

    Of many runs the overview alone, of very many how they spread and the worst; the tables of
    all are there as data.

    Parameters
    ----------
    with_bill
        Show the bill that proves each optimum, too.
    everything
        Show all suspects, rare and impossible ones too.
    shares
        Show where the error of every flux comes from.
    """
    if len(solution.runs) > _MOST_IN_FULL:
        from fluxnet.presenting.solve_many import blocks_of_many

        data = replace(_overview(solution), title="")
        columns = tuple(replace(column, title="") for column in data.columns)

        def each() -> tuple[Table, ...]:
            return (replace(data, columns=columns), *_all_tables(solution.runs))

        return (*blocks_of_many(solution.runs), Data(each))
    blocks: list[Block] = [_overview(solution)]
    for run in solution.runs:
        blocks += blocks_of_run(_run_blocks(run, with_bill, everything, shares), run.run)
    return (*blocks, *heat_caution(solution.runs))


def _all_tables(runs: Sequence[FluxSolution]) -> tuple[Table, ...]:
    """The tables of all runs, as data."""
    return tuple(
        replace(table, run=run.run)
        for run in runs
        for block in _run_blocks(run, with_bill=False, everything=False, shares=False)
        for table in (block.make() if isinstance(block, Data) else (block,))
        if isinstance(table, Table)
    )


def _overview(solution: Solution) -> Table:
    """A line a run; of one run alone it is data only."""
    several = len(solution.runs) > 1
    titles = ["run", "status", "h", "dof", "p", "optimum"] if several else [""] * 6
    columns = (
        Column(titles[0], "name"),
        Column(titles[1], "status"),
        Column(titles[2], "h", align=Align.RIGHT, digits=3),
        Column(titles[3], "dof", align=Align.RIGHT),
        Column(titles[4], "p", align=Align.RIGHT, digits=2),
        Column(titles[5], "optimum", align=Align.RIGHT),
        Column("", "variant"),
        Column("", "aim"),
        Column("", "unit"),
        Column("", "words"),
    )
    rows = tuple(
        (
            run.run,
            run.status.value,
            run.test.h if run.test else None,
            run.test.dof if run.test else None,
            run.test.p if run.test else None,
            run.optimum,
            run.variant,
            str(run.aim) if run.aim else None,
            run.unit,
            run.words,
        )
        for run in solution.runs
    )
    return Table("overview", f"{len(rows)} runs", columns, rows)


def _run_blocks(
    run: FluxSolution, with_bill: bool, everything: bool, shares: bool
) -> tuple[Block, ...]:
    what = f"run {run.run}" if run.run is not None else "no measured rates"
    if run.extras:
        what += f" ({', '.join(f'{name} {value}' for name, value in run.extras)})"
    variant = "" if run.variant == "base" else f", variant {run.variant}"
    aim = f", {run.aim}" if run.aim is not None else ""
    heading = f"{what}{variant}{aim}: {run.status.value}"
    unproven = run.proof is not None and not run.proof.verified
    mood = Mood.BAD if unproven else _MOODS[run.status]
    blocks: list[Block] = [
        Heading(heading, is_run=run.run is not None),
        Sentence(run.words, mood, verdict=True),
        *doubt_blocks(run),
        *_assumptions(run),
        *_suspects(run, everything=everything),
        *_obstacles(run, prices=with_bill),
    ]
    if with_bill and run.aim is None and not run.conflicts:
        blocks.append(
            Sentence("No bill: there is no aim whose best value it could prove, and no conflict.")
        )
    if run.plan is not None:
        return (*blocks, *_planned(run, run.plan))
    if run.fluxes:
        blocks += solve_tables(run)
        blocks += share_blocks(run, shown=shares)
        blocks.append(
            Sentence(
                f"Every balance holds to {_as_good_as(run.residual)} of its terms (recomputed).",
                Mood.QUIET,
            )
        )
    blocks += proof_blocks(run, with_bill=with_bill)
    if not run.status.is_sound and run.fluxes:
        # The verdict has scrolled away by now; nobody should read the tables without it.
        blocks.append(Sentence(f"{heading[0].upper()}{heading[1:]}; not to be trusted.", mood))
    return tuple(blocks)


def _obstacles(run: FluxSolution, *, prices: bool) -> tuple[Block, ...]:
    """Why it cannot be, or what has no end."""
    if not run.conflicts and run.least_change is None and run.unbounded is None:
        return ()
    from fluxnet.presenting.conflict_blocks import conflict_blocks, unbounded_blocks

    return (*conflict_blocks(run, prices=prices), *unbounded_blocks(run))


def _planned(run: FluxSolution, plan: Plan) -> list[Block]:
    """The answer that was asked for; the fluxes stand behind it as data."""
    from fluxnet.presenting.plan_blocks import plan_blocks

    def tables() -> tuple[Table, ...]:
        blocks = (*solve_tables(run), *share_blocks(run, shown=False))
        return tuple(replace(b, run=run.run) for b in blocks if isinstance(b, Table))

    blocks: list[Block] = [Data(tables), *plan_blocks(plan)]
    if not run.status.is_sound:
        blocks.append(Sentence("It rests on a fit that is not to be trusted.", Mood.BAD))
    return blocks


def _as_good_as(residual: float) -> str:
    """The power of ten below which a residual lies; what is smaller than 1e-12 is rounding."""
    return f"1e{ceil(log10(max(residual, 1e-12)))}"


def _suspects(run: FluxSolution, *, everything: bool) -> list[Block]:
    """What could be wrong with the rates, where it was looked for."""
    if run.suspects is None:
        return []
    from fluxnet.presenting.suspect_blocks import suspect_blocks

    return suspect_blocks(run.suspects, run.run, everything=everything)


def _assumptions(run: FluxSolution) -> list[Block]:
    lines: list[Block] = []
    if run.test is not None:
        lines.append(_test(run.test, exact=agrees_exactly(run)))
    lines += [
        Sentence(f"Limit against measurement: {words}.", Mood.BAD) for words in run.violated_limits
    ]
    if run.test is not None:
        lines += [
            Sentence(f"Pulled by a bound: {words}.", Mood.DOUBTFUL) for words in run.test.pulling
        ]
    if run.smallest_within is not None and run.status is SolveStatus.OPTIMAL:
        lines.append(
            Sentence(
                f"Measured values are held within {run.within:g} sd; the least within which they "
                f"can hold together is {format_number(run.smallest_within, 3)}. The optimum lies "
                "at a corner of what these errors allow: the best case, no estimate."
            )
        )
    if run.left_free and run.run is not None:
        lines.append(Sentence(f"Not measured, left free: {', '.join(run.left_free)}."))
    lines += [Sentence(f"Note: {note.message} ({note.name.value}).") for note in run.notes]
    measured = ((str(r.quantity), r.measured) for r in run.rates if r.quantity.direction)
    if unusual := unusual_words(measured, run.unit):
        lines.append(Sentence(f"Note: {unusual}", Mood.DOUBTFUL))
    return lines


def _test(test: FluxTest, *, exact: bool) -> Sentence:
    if test.h is None and exact:
        return Sentence(
            "Only values without an error test one another: they agree, and h is not defined.",
            Mood.DOUBTFUL,
        )
    if test.h is None:
        return Sentence(
            "Nothing is redundant: no measured rate tests another, so h is not defined.",
            Mood.DOUBTFUL,
        )
    text = (
        f"Test: h = {format_number(test.h, 3)} on {test.dof} degrees of freedom "
        f"(5 % limit {format_number(test.limit, 3)}), {_chance(test.p)}"
    )
    if test.active:
        text += (
            f"; bounds add {format_number(test.bound_h, 3)} ({_chance(test.bound_p)}): "
            + ", ".join(test.active)
        )
    return Sentence(text + ".")


def _chance(p: float | None) -> str:
    shown = format_p(p)
    return f"p {shown}" if shown.startswith("<") else f"p = {shown}"
