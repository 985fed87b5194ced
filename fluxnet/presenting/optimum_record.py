"""Prices, limits and the proof of a result as data."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from fluxnet.studies.bill import Bill
    from fluxnet.studies.solution import FluxSolution

__all__ = ["bill_lines", "limits_record", "prices_record", "proof_record"]

Record = dict[str, Any]


def prices_record(run: FluxSolution) -> list[Record]:
    """What one unit of each balanced species is worth."""
    return [
        {
            "species": p.species,
            "price": p.price,
            "price_low": p.price_low,
            "price_high": p.price_high,
        }
        for p in run.prices
    ]


def limits_record(run: FluxSolution) -> list[Record]:
    """The limits that hold an aim back, with what they are worth either way."""
    return [
        {
            "name": x.name,
            "value": x.value,
            "worth": x.worth,
            "worth_up": x.worth_up,
            "worth_down": x.worth_down,
            "unit": x.unit,
        }
        for x in run.limits
    ]


def proof_record(run: FluxSolution) -> Record:
    """Whether exact arithmetic proves the result, how far off it is else, and the bill.

    Where nothing was to be proven (a fit) it is not verified, and the gap is null.
    """
    proof, bill = run.proof, run.bill
    return {
        "verified": proof is not None and proof.verified,
        "residual": run.residual,
        "gap": None if proof is None else proof.gap,
        "words": None if proof is None else proof.words,
        "bill": [] if bill is None else bill_lines(bill),
        "bill_unit": None if bill is None else bill.unit,
        "supply": None if bill is None else bill.supply,
        "demand": None if bill is None else bill.demand,
        "shortfall": None if bill is None else bill.shortfall,
    }


def bill_lines(bill: Bill) -> list[Record]:
    """The lines of a bill."""
    return [
        {
            "side": line.side.value,
            "name": line.name,
            "amount": line.amount,
            "unit": line.unit,
            "price": line.price,
            "worth": line.worth,
        }
        for line in bill.lines
    ]
