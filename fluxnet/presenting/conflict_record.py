"""Conflicts as data: members, bill, least change, alternatives."""

from __future__ import annotations

from typing import Any

from fluxnet.presenting.conflict_blocks import alternative_words
from fluxnet.presenting.optimum_record import bill_lines
from fluxnet.presenting.quantity_record import quantity_record
from fluxnet.studies.conflicts import ToldConflict
from fluxnet.studies.solution import FluxSolution

__all__ = ["conflict_record"]

Record = dict[str, Any]


def conflict_record(run: FluxSolution) -> Record | None:
    """The first conflict of a run with the least change, and the others; None without any."""
    if not run.conflicts:
        return None
    change = run.least_change
    first, *others = run.conflicts
    return {
        **_told(first),
        "least_change": []
        if change is None
        else [
            {
                **quantity_record(c.quantity),
                "measured": c.measured,
                "changed": c.changed,
                "in_sd": c.in_sd,
            }
            for c in change.changes
        ],
        "possible": None if change is None else change.possible,
        "total": None if change is None else change.total,
        "smallest_common_sd": None if change is None else change.common_k,
        "words": run.words,
        "others": [_told(told) for told in others],
    }


def _told(told: ToldConflict) -> Record:
    """One conflict with its bill; without a bill its sums are null."""
    bill = told.bill
    return {
        "members": [
            {"kind": m.kind.value, "name": m.name, "words": m.words}
            for m in told.conflict.members
        ],
        "irreducible": told.conflict.verified,
        "bill": [] if bill is None else bill_lines(bill),
        "bill_unit": None if bill is None else bill.unit,
        "supply": None if bill is None else bill.supply,
        "demand": None if bill is None else bill.demand,
        "shortfall": None if bill is None else bill.shortfall,
        "bill_words": None if bill is None else bill.words,
        "verified": bill is not None and bill.verified,
        "prices": [{"species": p.species, "price": p.price} for p in told.prices],
        "alternatives": [
            {
                **quantity_record(a.quantity),
                "bound": "at most" if a.is_ceiling else "at least",
                "needed": a.needed,
                "stated": a.stated,
                "in_sd": a.in_sd,
                "words": alternative_words(a),
            }
            for a in told.alternatives
        ],
    }
