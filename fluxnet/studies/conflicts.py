"""Why nothing is feasible, in full: each conflict with its bill and what would end it."""

from __future__ import annotations

from collections.abc import Sequence
from math import inf

from fluxnet.ground.record import record
from fluxnet.solving.alternatives import Alternative, find_alternatives
from fluxnet.solving.build import Built
from fluxnet.solving.conflict import Conflict, find_conflicts, without_members
from fluxnet.solving.farkas import find_contradiction
from fluxnet.solving.problem import Problem
from fluxnet.solving.proof import Proof, exact_programme, exact_sums
from fluxnet.studies.bill import Bill
from fluxnet.studies.bill_conflict import BillPrice, make_bill, price_species
from fluxnet.studies.bill_unit import choose_coin

__all__ = ["MOST_CONFLICTS", "ToldConflict", "explain_conflicts", "proof_of"]

MOST_CONFLICTS = 3
"""So many conflicts at most are looked for."""


@record
class ToldConflict:
    """A conflict with the bill that proves it.

    ``bill`` is None where no exact proof was found. ``is_surplus``: what it counts is too much,
    and has to go somewhere. ``prices`` are those of the balanced species in the bill's unit.
    ``alternatives`` are the limits and measurements each of which, giving way alone, ends this
    conflict: of several conflicts, where the others are mended.
    """

    conflict: Conflict
    bill: Bill | None
    is_surplus: bool
    prices: tuple[BillPrice, ...]
    alternatives: tuple[Alternative, ...]


def explain_conflicts(
    built: Built, problem: Problem, unit: str, within: float | None = None
) -> tuple[ToldConflict, ...]:
    """The conflicts of a problem without a solution, at most :data:`MOST_CONFLICTS`.

    Parameters
    ----------
    built
        Where the problem comes from: its rows are the same, its bounds may differ.
    unit
        That of the rates.
    within
        The number of sds that measured values are held within.

    Returns
    -------
    tuple of ToldConflict
        Empty where the problem has a solution. No two share a limit or measurement.
    """
    conflicts = find_conflicts(problem, most=MOST_CONFLICTS, unit=unit)
    if not conflicts:
        return ()
    rows, _ = exact_sums(built, ())
    exact = exact_programme(problem, rows, within=within)
    told: list[ToldConflict] = []
    for conflict in conflicts:
        proof = find_contradiction(problem, exact, conflict.members)
        others = [m for other in conflicts if other is not conflict for m in other.given]
        ways = find_alternatives(without_members(problem, others), conflict.given)
        if proof is None:
            told.append(ToldConflict(conflict, None, False, (), ways))
            continue
        coin = choose_coin(built, proof, unit)
        bill, prices = make_bill(built, proof, coin, unit), price_species(built, proof, coin)
        told.append(ToldConflict(conflict, bill, coin.is_surplus, prices, ways))
    return tuple(told)


def proof_of(conflicts: Sequence[ToldConflict]) -> Proof:
    """Whether conflicts prove in exact arithmetic that nothing is feasible: one bill is enough."""
    if any(told.bill is not None and told.bill.verified for told in conflicts):
        return Proof(True, 0.0, "Proven in exact arithmetic")
    words = "Not proven: no combination of what is in conflict excludes all fluxes"
    return Proof(False, inf, words)
