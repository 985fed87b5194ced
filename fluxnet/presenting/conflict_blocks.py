"""Why it cannot be: a conflict, the least change, or what lets an aim grow for ever."""

from __future__ import annotations

from fluxnet.ground.table import Align, Column, Table
from fluxnet.presenting.numbers import format_number
from fluxnet.presenting.screen import Block, Sentence
from fluxnet.studies.solution import FluxSolution

__all__ = ["conflict_blocks", "unbounded_blocks"]


def conflict_blocks(run: FluxSolution) -> tuple[Block, ...]:
    """The members that cannot hold together, and the least change that mends it."""
    blocks: list[Block] = []
    conflict, change = run.conflict, run.least_change
    if conflict is not None and conflict.members:
        within = f", each within {run.within:g} sd" if run.within is not None else ""
        given = conflict.given or conflict.members
        blocks.append(
            Table(
                "conflict",
                f"These cannot hold together{within}",
                (Column("cannot hold together", "words", wrap=56), Column("kind", "kind")),
                tuple((m.words, m.kind.value) for m in given),
            )
        )
        making = [m.words for m in conflict.members if m not in given]
        beside = f" It rests on {'; '.join(making)}." if making else ""
        checked = "without any one of them the others can (each was tried)."
        if not conflict.verified:
            checked = "whether each of them is needed could not be verified."
        blocks.append(Sentence(f"{checked[0].upper()}{checked[1:]}{beside}"))
    if change is not None and change.possible and change.changes:
        columns = (
            Column("measured value", "name"),
            Column("measured", "measured", align=Align.RIGHT),
            Column("would be", "changed", align=Align.RIGHT),
            Column("by [sd]", "in_sd", align=Align.RIGHT, decimals=1),
        )
        moved = [c for c in change.changes if abs(c.in_sd) >= 0.05]
        rounding = 1e-12 * max((abs(c.measured) for c in change.changes), default=0.0)
        changes = tuple(
            (
                str(c.quantity),
                c.measured,
                0.0 if abs(c.changed) < rounding else c.changed,
                c.in_sd,
            )
            for c in moved
        )
        notes = ["with parameters as written; limits and exact values do not give way"]
        if change.common_k is not None:
            notes.append(
                "all measured values can hold together within "
                f"{format_number(change.common_k, 3)} sd"
            )
        blocks.append(
            Table("least_change", "The least change that mends it", columns, changes, tuple(notes))
        )
    elif change is not None and not change.possible:
        blocks.append(
            Sentence(
                "No change of the measured rates mends it: limits and exact values contradict "
                "one another."
            )
        )
    return tuple(blocks)


def unbounded_blocks(run: FluxSolution) -> tuple[Block, ...]:
    """The loop or conversion that can grow without end."""
    if run.unbounded is None:
        return ()
    columns = (
        Column("reaction", "reaction"),
        Column("runs per unit", "coefficient", align=Align.RIGHT),
    )
    rows = tuple((step.reaction, step.coefficient) for step in run.unbounded.loop)
    return (Table("unbounded", "What can grow without end", columns, rows),)
