"""What a plan shows: one sentence, where today's error comes from, and the ranked steps."""

from __future__ import annotations

from collections.abc import Iterable
from math import inf

from fluxnet.ground.table import Align, Cell, Column, Table
from fluxnet.presenting.numbers import format_measured, format_number
from fluxnet.presenting.screen import Block, Mood, Sentence
from fluxnet.presenting.share_blocks import share_words
from fluxnet.studies.plan_result import How, Option, Plan, Step, TypedLimit

__all__ = ["plan_blocks"]

_WORTH = 0.97
_MOST_INSIDE = 3


def plan_blocks(plan: Plan) -> list[Block]:
    """The plan as shown, and all of its options as data."""
    typed = plan.typed
    if typed is not None:
        plan = typed.without
    blocks: list[Block] = [] if typed is None else [_typed(typed)]
    blocks.append(Sentence(f"What to measure next. {plan.words}", verdict=True))
    if plan.sd:
        when = "Today" if typed is None else "Without that limit"
        shares = f"; its error comes from {share_words(plan.shares)}" if plan.shares else ""
        blocks.append(Sentence(f"{when} {plan.quantity} is {_value(plan)}{shares}."))
    shown = _shown(plan)
    if shown:
        blocks.append(_table(plan, shown))
    idle = [o.steps[0].name for o in plan.options if not _helps(o)]
    if idle and shown:
        why = "Of little use for it (3 % or less)" if plan.sd else "None of these alone would"
        blocks.append(Sentence(f"{why}: {', '.join(idle)}."))
    blocks.append(_data(plan))
    return blocks


def _typed(typed: TypedLimit) -> Sentence:
    """That the answer is what was typed, and what the run itself says."""
    without = typed.without
    gives = f"gives {_value(without)}" if without.sd else "does not determine it"
    return Sentence(
        f"{100 * typed.share:.0f} % of the error of {without.quantity} is that of the limit "
        f"{typed.limit} as typed; without it this run {gives}. What follows is told without that "
        "limit.",
        Mood.DOUBTFUL,
    )


def _value(plan: Plan) -> str:
    return f"{format_measured(plan.value, plan.sd)} {plan.unit}".strip()


def _shown(plan: Plan) -> list[tuple[str, Option]]:
    """The options worth showing, with where they stand."""
    singles = [option for option in plan.options if _helps(option)]
    best = min((option.sd for option in singles if option.sd is not None), default=inf)
    rows: list[tuple[str, Option]] = []
    if plan.pair is not None and plan.pair.sd is not None and plan.pair.sd < _WORTH * best:
        rows.append(("two together", plan.pair))
    rows += [("", option) for option in singles]
    inside = [option for option in plan.inside if _helps(option)]
    return rows + [("inside", option) for option in inside[:_MOST_INSIDE]]


def _helps(option: Option) -> bool:
    if option.sd is None:
        return False
    return option.of_today is None or option.of_today < _WORTH


def _table(plan: Plan, shown: list[tuple[str, Option]]) -> Table:
    columns = (
        Column("what", ""),
        Column("how", ""),
        Column("with error", "", align=Align.RIGHT),
        Column(f"then ± [{plan.unit}]" if plan.unit else "then ±", "", align=Align.RIGHT),
        Column("of today's" if plan.sd else "", "", align=Align.RIGHT),
    )
    rows: list[tuple[Cell, ...]] = []
    for where, option in shown:
        for k, step in enumerate(option.steps):
            name = step.name if k == 0 else f"  and {step.name}"
            last = k == len(option.steps) - 1
            sd = format_number(option.sd, 2) if last else ""
            part = f"{option.of_today:.0%}" if last and option.of_today is not None else ""
            rows.append((name, _how(step, where), _error(step), sd, part))
    notes = ["predicted from the slopes of this fit, the new values being as expected"]
    if any(step.how is How.NEW for _, option in shown for step in option.steps):
        percent = f"{100 * plan.error:.3g} %"
        notes.insert(0, f"new: at {percent}, at least 0.5 % of the largest rate in C-mol")
    if plan.without_bounds:
        notes.append("bounds press on this fit, which the prediction does not know")
    title = f"What would make {plan.quantity} surer"
    return Table("", title, columns, tuple(rows), tuple(notes))


def _how(step: Step, where: str) -> str:
    how = "new" if step.how is How.NEW else "half its sd"
    return f"{how}, {where}" if where == "inside" else how


def _error(step: Step) -> str:
    if step.kind == "shared error":
        return f"± {format_number(100 * step.sd, 2)} %"
    unit = f" {step.unit}" if step.unit == "1/h" else ""
    return f"± {format_number(step.sd, 2)}{unit}"


def _data(plan: Plan) -> Table:
    """Every option as data: a line a step, those of a pair with one number."""
    keys = ("option", "place", "step", "kind", "how", "with_sd", "with_sd_unit", "sd", "unit",
            "of_today")  # fmt: skip
    rows: list[tuple[Cell, ...]] = []
    for number, (place, option) in enumerate(_every(plan), 1):
        for step in option.steps:
            part = None if option.of_today is None else 100 * option.of_today
            rows.append(
                (number, place, step.name, step.kind, step.how.value, step.sd, step.unit,
                 option.sd, plan.unit, part)
            )  # fmt: skip
    return Table("plan", "Plan", tuple(Column("", key) for key in keys), tuple(rows))


def _every(plan: Plan) -> Iterable[tuple[str, Option]]:
    yield from (("one step", option) for option in plan.options)
    yield from (("inside", option) for option in plan.inside)
    if plan.pair is not None:
        yield "two together", plan.pair
