"""Why nothing is feasible, in full: each conflict with its bill and what would end it."""

from __future__ import annotations

from collections.abc import Sequence
from math import inf

from fluxnet.ground.record import record
from fluxnet.solving.alternatives import Alternative, find_alternatives
from fluxnet.solving.build import Built
from fluxnet.solving.conflict import Conflict, find_conflicts, without_members
from fluxnet.solving.farkas import Contradiction, find_contradiction
from fluxnet.solving.problem import Problem
from fluxnet.solving.proof import Proof, exact_programme, exact_sums
from fluxnet.solving.tightest import tightest_conflict
from fluxnet.studies.bill import Bill
from fluxnet.studies.bill_conflict import BillPrice, make_bill, price_species
from fluxnet.studies.bill_unit import choose_coin

__all__ = ["MOST_CONFLICTS", "ToldConflict", "explain_conflicts", "proof_of"]

MOST_CONFLICTS = 3
"""So many conflicts at most are looked for."""

_SAME = 1e-6


@record
class ToldConflict:
    """A conflict with the bill that proves it.

    ``bill`` is None where no exact proof was found. ``is_surplus``: what it counts is too much,
    and has to go somewhere. ``prices`` are those of the balanced species in the bill's unit.
    ``alternatives`` are the limits and measurements each of which, giving way alone, ends this
    conflict: of several conflicts, where the others are mended. ``beyond`` are those among
    them that have to give way by more than makes good what is missing in the bill.
    """

    conflict: Conflict
    bill: Bill | None
    is_surplus: bool
    prices: tuple[BillPrice, ...]
    alternatives: tuple[Alternative, ...]
    beyond: tuple[Alternative, ...] = ()


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
    found = list(conflicts)
    for place, conflict in enumerate(conflicts):
        alone = _with_others_mended(problem, found, place)
        ways = find_alternatives(alone, conflict.given)
        tightest = tightest_conflict(alone, conflict, ways, unit)
        if find_contradiction(problem, exact, tightest.members) is not None:
            found[place] = tightest
    for place, conflict in enumerate(found):
        proof = find_contradiction(problem, exact, conflict.members)
        if len(found) > 1:
            alone = _with_others_mended(problem, found, place)
            ways = find_alternatives(alone, conflict.given)
        if proof is None:
            told.append(ToldConflict(conflict, None, False, (), ways))
            continue
        coin = choose_coin(built, proof, unit)
        bill, prices = make_bill(built, proof, coin, unit), price_species(built, proof, coin)
        beyond = tuple(way for way in ways if _is_beyond(way, proof))
        told.append(ToldConflict(conflict, bill, coin.is_surplus, prices, ways, beyond))
    return tuple(told)


def _with_others_mended(problem: Problem, found: Sequence[Conflict], place: int) -> Problem:
    """The problem without what is given in all conflicts but one."""
    others = [m for k, other in enumerate(found) if k != place for m in other.given]
    return without_members(problem, others)


def _is_beyond(way: Alternative, proof: Contradiction) -> bool:
    """Whether moving its bound by what is missing at its price is not enough; a ratio may be."""
    for weight in proof.weights:
        if weight.row is not None and weight.row in way.member.rows:
            enough = float(weight.end + proof.gap / weight.factor)
            size = max(abs(way.needed), abs(float(weight.end)))
            return way.quantity.denominator is None and abs(way.needed - enough) > _SAME * size
    return True


def proof_of(conflicts: Sequence[ToldConflict]) -> Proof:
    """Whether conflicts prove in exact arithmetic that nothing is feasible: one bill is enough."""
    if any(told.bill is not None and told.bill.verified for told in conflicts):
        return Proof(True, 0.0, "Proven in exact arithmetic")
    words = "Not proven: no combination of what is in conflict excludes all fluxes"
    return Proof(False, inf, words)
