"""A plan in one or two sentences."""

from __future__ import annotations

from dataclasses import replace

from fluxnet.studies.plan_result import How, Option, Plan, Step

__all__ = ["step_words", "tell_plan"]

_WORTH = 0.98
"""A step that leaves more than this part of the sd is not worth its work."""


def tell_plan(plan: Plan) -> Plan:
    """The plan with its sentence."""
    return replace(plan, words=_determined(plan) if plan.sd is not None else _undetermined(plan))


def step_words(step: Step, error: float) -> str:
    """A step as it is told: ``CO2 out at 5 %``, ``K_X at half its sd``."""
    return f"{step.name} at {_percent(error) if step.how is How.NEW else step.how.value}"


def _determined(plan: Plan) -> str:
    if not plan.sd:
        return f"Nothing need be measured for {plan.quantity}: it is known exactly."
    best = next((o for o in plan.options if o.of_today is not None), None)
    if best is None or best.of_today is None or best.of_today > _WORTH:
        return (
            f"No single step makes {plan.quantity} much surer: its error comes from many sources."
        )
    words = f"The best single step is {_told(best, plan)}"
    pair = plan.pair
    if pair is not None and pair.of_today is not None and pair.of_today < _WORTH * best.of_today:
        words += f"; the best two together are {_told(pair, plan)}"
    return f"{words}."


def _undetermined(plan: Plan) -> str:
    now = f"What is measured does not determine {plan.quantity}"
    best = next((o for o in (*plan.options, plan.pair) if o is not None and o.sd is not None), None)
    if best is not None:
        return f"{now}; {_told(best, plan)} would."
    if plan.needed:
        return f"{now}; it takes {_listed(plan.needed)} together."
    inside = next((o for o in plan.inside if o.sd is not None), None)
    if inside is not None:
        return f"{now}; only a flux inside would: {_told(inside, plan)}."
    return f"{now}, and nothing else that could be measured does."


def _told(option: Option, plan: Plan) -> str:
    steps = _listed([step_words(step, plan.error) for step in option.steps])
    left = "" if option.of_today is None else f", {option.of_today:.0%} of today's"
    return f"{steps} (± {option.sd:.2g}{left})"


def _percent(error: float) -> str:
    return f"{100 * error:.3g} %"


def _listed(words: list[str] | tuple[str, ...]) -> str:
    if len(words) <= 1:
        return "".join(words)
    return f"{', '.join(words[:-1])} and {words[-1]}"
