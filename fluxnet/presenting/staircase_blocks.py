"""The staircase of a yield: what each demand costs, in a column that adds up."""

from __future__ import annotations

from fluxnet.ground.table import Align, Cell, Column, Table
from fluxnet.presenting.screen import Block, Mood, Sentence
from fluxnet.studies.compare_result import Ability
from fluxnet.studies.staircase import Step, StepKind

__all__ = ["staircase_blocks"]


def staircase_blocks(product: str, ability: Ability) -> tuple[Block, ...]:
    """Where the yield of one variant goes."""
    stairs = ability.staircase
    if stairs is None:
        return ()
    columns = (
        Column("step", "", wrap=16),
        Column("mol", "", align=Align.RIGHT, decimals=4),
        Column("C-mol", "", align=Align.RIGHT, decimals=4),
        Column("electrons", "", align=Align.RIGHT, decimals=3),
        Column("share", "", align=Align.RIGHT),
        Column("what it adds", "", wrap=16),
    )
    carbon = stairs.carbon
    ceiling = float(stairs.ceiling)

    def row(title: str, moles: float, words: str) -> tuple[Cell, ...]:
        return (
            title,
            moles,
            None if carbon is None else moles * float(carbon),
            moles * float(stairs.electrons),
            f"{100 * moles / ceiling:.1f} %",
            words,
        )

    rows = [row("electrons allow", ceiling, "every electron in the product")]
    rows += [row(_title(s), -float(s.lost) + 0.0, s.words) for s in stairs.steps]
    is_measured = bool(stairs.steps) and stairs.steps[-1].kind is StepKind.UNEXPLAINED
    rows.append(row("measured" if is_measured else "can be reached", float(stairs.reached), ""))
    notes = (
        f"mol {product} and its electrons per mol of {ability.substrate}, its C-mol per C-mol",
        "each step is a linear programme with its own demand and all above it: in another order "
        "the steps would differ, their sum would not",
    )
    told: list[Block] = [Table("", f"Where the yield goes: {ability.name}", columns, tuple(rows),
                               notes)]  # fmt: skip
    if stairs.adds_up:
        told.append(Sentence("As fractions the steps add up exactly.", Mood.QUIET))
    if is_measured and stairs.steps[-1].lost < 0:
        told.append(
            Sentence("What was measured is more than the model can reach: one of the two is "
                     "wrong.", Mood.BAD)
        )  # fmt: skip
    return tuple(told)


def _title(step: Step) -> str:
    """What a step is; one up can only be to a value that was measured."""
    if step.lost < 0:
        return "+ more than can be reached"
    return f"- {step.kind.value}"
