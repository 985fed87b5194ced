"""The order of what variants can do: by yield, ties exactly; and what nothing else betters."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from math import isclose

from fluxnet.studies.compare_result import Ability

__all__ = ["better_in_all", "rank"]


def rank(abilities: Sequence[Ability]) -> tuple[Ability, ...]:
    """The abilities with their ranks, the best first.

    Two yields are tied where they are the same fraction; then less oxygen, less heat and more
    energy left come first, and among equals the order asked for stays.
    """
    ordered = sorted(abilities, key=lambda a: (-a.worth, _besides(a)))
    found: list[Ability] = []
    for k, one in enumerate(ordered):
        place = found[-1].rank if k and ordered[k - 1].worth == one.worth else k + 1
        tied = tuple(o.name for o in ordered if o is not one and o.worth == one.worth)
        best = (one.final.moles or 0) > 0 and not any(
            better_in_all(other, one) for other in ordered if other is not one
        )
        found.append(replace(one, rank=place, tied=tied, is_best_of_all=best))
    return tuple(found)


def _besides(ability: Ability) -> tuple[float, ...]:
    """What decides between equal yields; rounded, for it is in floats."""
    return tuple(-float(f"{side or 0.0:.6g}") for side in _sides(ability))


def better_in_all(first: Ability, second: Ability) -> bool:
    """Whether one is no worse in yield, oxygen, heat and energy left, and better in one.

    Oxygen and heat are per mole of product; what is not known of either does not count.
    """
    if first.worth < second.worth:
        return False
    better = first.worth > second.worth
    for mine, others in zip(_sides(first), _sides(second), strict=True):
        if mine is None or others is None or isclose(mine, others, rel_tol=1e-9, abs_tol=1e-9):
            continue
        if mine < others:
            return False
        better = True
    return better


def _sides(ability: Ability) -> tuple[float | None, ...]:
    """What else counts, the more the better."""
    facts = ability.facts
    if facts is None:
        return None, None, None
    heat = facts.heat.value if facts.heat is not None else None
    energy = sum(amount for _, amount in facts.surplus) if facts.surplus else None
    return (
        None if facts.oxygen is None else -facts.oxygen,
        None if heat is None else -heat,
        energy,
    )
