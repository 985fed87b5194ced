"""What an optimum is worth: the limits that hold it back, prices, the proof and its bill."""

from __future__ import annotations

from math import isinf

from fluxnet.ground.table import Align, Column, Table
from fluxnet.presenting.numbers import format_number, format_range
from fluxnet.presenting.screen import Block, Mood, Sentence
from fluxnet.studies.solution import FluxSolution, SolveStatus

__all__ = [
    "doubt_blocks", "limits_table", "price_notes", "price_words", "prices_table", "proof_blocks",
]  # fmt: skip

_DIGITS = 5  # one more than the optimum is told with
_IMPOSSIBLE = "impossible"


def limits_table(run: FluxSolution) -> Table:
    """Each limit that holds the aim, and what the aim changes by when it moves either way."""
    columns = (
        Column("what holds it back", "name", wrap=24),
        Column("one more gives", "", align=Align.RIGHT),
        Column("one less", "", align=Align.RIGHT),
        Column("in", "unit", wrap=24),
        Column("", "worth"),
        Column("", "worth_up"),
        Column("", "worth_down"),
        Column("", "value"),
    )
    rows = tuple(
        (
            limit.name,
            _change(limit.worth_up),
            _change(-limit.worth_down),
            limit.unit,
            limit.worth,
            limit.worth_up,
            limit.worth_down,
            limit.value,
        )
        for limit in run.limits
    )
    notes = [
        "change of the aim per unit by which the bound is raised (lowered), for a small change"
    ]
    if any(isinf(limit.worth_up) or isinf(limit.worth_down) for limit in run.limits):
        notes.append(f"{_IMPOSSIBLE}: nothing is feasible beyond it")
    return Table("limits", "What holds the aim back", columns, rows, tuple(notes))


def _change(value: float) -> str:
    """A change with its sign."""
    if isinf(value):
        return _IMPOSSIBLE
    return f"+{format_number(value)}" if value > 0 else format_number(value + 0.0)


def prices_table(run: FluxSolution) -> Table:
    """The prices of all balanced species, as data: on screen they stand in the ledger."""
    keys = ("species", "price", "price_low", "price_high", "unit")
    rows = tuple((p.species, p.price, p.price_low, p.price_high, run.unit) for p in run.prices)
    return Table("prices", "", tuple(Column("", key) for key in keys), rows)


def price_words(run: FluxSolution, species: str) -> str:
    """What one more of a species is worth; a range where the optimum leaves it free."""
    for price in run.prices:
        if price.species == species:
            if price.price_low == price.price_high:
                return format_number(price.price)
            return format_range(price.price_low, price.price_high)
    return ""


def price_notes(run: FluxSolution, carriers: tuple[str, ...]) -> tuple[str, ...]:
    """What the prices in the ledger mean."""
    prices = [p for p in run.prices if p.species in carriers]
    if not prices:
        return ()
    better = "lower" if run.aim is not None and run.aim.sense.value == "minimise" else "raise"
    notes = [f"one is worth: by how much one more, as a gift, would {better} the aim"]
    below = [p.species for p in prices if p.price_low < 0]
    if below:
        notes.append(
            f"below zero ({', '.join(below)}): a surplus that has to be got rid of, at a cost"
        )
    if any(p.price_low != p.price_high for p in prices):
        notes.append("a range: the first bit more is worth the low end, the first less the high")
    return tuple(notes)


def doubt_blocks(run: FluxSolution) -> tuple[Block, ...]:
    """That a result is not proven, and how far off it is."""
    if run.proof is None or run.proof.verified:
        return ()
    return (Sentence(f"{run.proof.words}.", Mood.BAD),)


def proof_blocks(run: FluxSolution, *, with_bill: bool) -> tuple[Block, ...]:
    """That a result is proven; at an optimum its bill, where it is asked for."""
    if run.proof is None or not run.proof.verified:
        return ()
    if run.status is not SolveStatus.OPTIMAL or run.bill is None:
        if any(told.bill is not None for told in run.conflicts):
            return ()  # they say so themselves
        return (Sentence(f"{run.proof.words}.", Mood.QUIET),)
    if not with_bill:
        return (Sentence(f"{run.proof.words}; --proof shows the bill.", Mood.QUIET),)
    bill = run.bill
    if not bill.verified:
        return (Sentence("The bill does not add up in exact arithmetic.", Mood.BAD),)
    title = f"Bill of the optimum [{bill.unit.strip('()')}]"
    from fluxnet.presenting.bill_table import BillTitles, bill_tables

    titles = BillTitles("what has to be paid", "supplied by", "left over")
    tables = bill_tables(bill, title, titles, _DIGITS) if bill.lines else ()
    told = (
        f"{run.proof.words}: {bill.words[:1].lower()}{bill.words[1:]} As fractions the two sides "
        "are equal; their difference is 0."
    )
    return (*tables, Sentence(told, Mood.GOOD))
