"""A plan, shares and correlations as data."""

from __future__ import annotations

from collections.abc import Iterable
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from fluxnet.studies.plan_result import Option, Plan
    from fluxnet.studies.shares import Correlated, Share

__all__ = ["correlated_record", "plan_record", "shares_record"]

Record = dict[str, Any]


def plan_record(plan: Plan) -> Record:
    """What to measure next: ``of_today`` is in per cent."""
    return {
        "quantity": plan.quantity,
        "unit": plan.unit,
        "value": plan.value,
        "sd": plan.sd,
        "error": plan.error,
        "words": plan.words,
        "shares": shares_record(plan.shares),
        "options": [_option(option) for option in plan.options],
        "inside": [_option(option) for option in plan.inside],
        "pair": None if plan.pair is None else _option(plan.pair),
        "needed": list(plan.needed),
        "without_bounds": plan.without_bounds,
        "typed": None
        if plan.typed is None
        else {
            "limit": plan.typed.limit,
            "share": plan.typed.share,
            "without": plan_record(plan.typed.without),
        },
    }


def shares_record(shares: Iterable[Share]) -> list[Record]:
    """Which part of a variance comes from which source."""
    return [{"source": share.source, "share": share.share} for share in shares]


def correlated_record(groups: Iterable[Correlated]) -> list[Record]:
    """Groups of numbers that the data tell only together."""
    return [
        {
            "members": [{"name": name, "r": r} for name, r in group.members],
            "least": group.least,
        }
        for group in groups
    ]


def _option(option: Option) -> Record:
    return {
        "steps": [
            {
                "name": step.name,
                "kind": step.kind,
                "how": step.how.value,
                "sd": step.sd,
                "unit": step.unit,
                "value": step.value,
            }
            for step in option.steps
        ],
        "sd": option.sd,
        "of_today": None if option.of_today is None else 100 * option.of_today,
    }
