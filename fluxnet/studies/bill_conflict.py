"""The bill of a conflict: what is asked for is worth more than all that can supply it."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

from fluxnet.ground.record import record
from fluxnet.solving.build import Built
from fluxnet.solving.farkas import Contradiction, Weight
from fluxnet.solving.problem import Problem
from fluxnet.solving.words import number_words
from fluxnet.studies.bill import Bill, BillLine, BillSide
from fluxnet.studies.bill_rounding import print_bill
from fluxnet.studies.bill_unit import Coin, species_prices
from fluxnet.studies.bill_words import BillPart, tell_bill
from fluxnet.studies.units import rate_unit

__all__ = ["BillPrice", "make_bill", "price_species"]


@record
class BillPrice:
    """What one unit of a balanced species or carrier is worth in a bill's unit."""

    species: str
    price: float


def make_bill(built: Built, contradiction: Contradiction, coin: Coin, unit: str) -> Bill:
    """The bill of a contradiction between limits and measured values.

    Every bound counts at the end that is best for a solution. A bound of zero is a line only
    where a limit or measured value sets it. Worths are reckoned exactly, then made floats.

    Parameters
    ----------
    built
        Its problem has the rows of the contradiction, in the same order.
    coin
        What worths count: :func:`fluxnet.studies.bill_unit.choose_coin`.
    unit
        That of the rates.
    """
    problem = built.problem
    weights = [w for w in contradiction.weights if w.member.kind.is_given or w.worth]
    sides = {side: [w for w in weights if _side(w) is side] for side in BillSide}
    sums = {s: sum((abs(w.worth) for w in found), Fraction(0)) for s, found in sides.items()}
    bill = Bill(
        unit=coin.unit,
        lines=tuple(
            _line(weight, side, problem, coin, unit)
            for side in (BillSide.DEMAND, BillSide.SUPPLY)
            for weight in sides[side]
        ),
        supply=float(sums[BillSide.SUPPLY] / coin.size),
        demand=float(sums[BillSide.DEMAND] / coin.size),
        shortfall=float(contradiction.gap / coin.size),
        words="",
        verified=True,
    )
    printed = print_bill(bill)
    demands, supplies = (
        [_part(weight, problem) for weight in sides[side]]
        for side in (BillSide.DEMAND, BillSide.SUPPLY)
    )
    amounts = (printed.demand, printed.supply)
    return replace(bill, words=tell_bill(built.network, coin, demands, supplies, amounts))


def price_species(
    built: Built, contradiction: Contradiction, coin: Coin
) -> tuple[BillPrice, ...]:
    """What each species and carrier of a conflict is worth in its bill's unit.

    A negative price is that of a surplus that has to be got rid of.
    """
    prices = species_prices(contradiction, built.problem)
    return tuple(BillPrice(name, float(price / coin.size)) for name, price in prices.items())


def _side(weight: Weight) -> BillSide:
    """Where a bound stands; at zero, where more of it would make the gap smaller or larger."""
    worth = weight.worth or weight.factor
    return BillSide.SUPPLY if worth > 0 else BillSide.DEMAND


def _line(weight: Weight, side: BillSide, problem: Problem, coin: Coin, unit: str) -> BillLine:
    row = problem.rows[weight.row] if weight.row is not None else None
    quantity = row.quantity if row is not None else None
    return BillLine(
        side=side,
        name=_name(weight, problem),
        amount=float(abs(weight.end)),
        unit=unit if quantity is None else rate_unit(quantity, unit),
        price=float(abs(weight.factor) / coin.size),
        worth=float(abs(weight.worth) / coin.size),
    )


def _name(weight: Weight, problem: Problem) -> str:
    """A bound with the end that counts, as the user wrote it."""
    row = problem.rows[weight.row] if weight.row is not None else None
    if row is None or row.quantity is None or not weight.member.kind.is_measured:
        return weight.member.words
    name = str(row.quantity).removeprefix("flux ")
    value, sd, end = row.value, row.sd, float(weight.end)
    if row.ratio is not None:
        label = next(r for r in problem.rows if r.quantity == row.quantity and r.sd is not None)
        value, sd, end = label.ratio, (label.sd or 0.0) / (label.denominator or 1.0), row.ratio
    if value is None or not sd:
        return f"{name}, exactly {number_words(end)}"
    away = (end - value) / sd
    if abs(away) < 1e-9:
        return f"{name}, measured {number_words(value)}"
    return f"{name}, {number_words(value)} {'+' if away > 0 else '-'} {abs(away):.3g} sd"


def _part(weight: Weight, problem: Problem) -> BillPart:
    row = problem.rows[weight.row] if weight.row is not None else None
    quantity = row.quantity if row is not None else None
    kind = weight.member.kind
    return BillPart(_name(weight, problem), quantity, kind.is_measured, not weight.worth)
