"""A bill's numbers as they are printed, so that its columns add up by hand."""

from __future__ import annotations

import math
from decimal import Decimal

from fluxnet.ground.record import record
from fluxnet.studies.bill import Bill, BillLine, BillSide

__all__ = ["PrintedBill", "print_bill"]

_MOST_DIGITS = 12
_TRIES = 4


@record
class PrintedBill:
    """Texts of a bill: ``lines`` hold (amount, price, worth) in the order of the bill's.

    The shortfall is the difference of the sums as printed. ``adds_up``: the worths as printed
    add up to the sums as printed; otherwise a last digit is off by rounding.
    """

    lines: tuple[tuple[str, str, str], ...]
    supply: str
    demand: str
    shortfall: str
    adds_up: bool


def print_bill(bill: Bill) -> PrintedBill:
    """Round a bill: three digits of its sums and two of what is missing, at the least.

    Up to three decimals more are taken where the columns add up with them and without do not.
    Amount and price keep as many digits as it takes for their product to be the worth.

    Examples
    --------
    >>> lines = (BillLine(BillSide.DEMAND, "upkeep", 3.2, "mmol/g/h", 1.0, 3.2),
    ...     BillLine(BillSide.SUPPLY, "oxygen in", 1.2, "mmol/g/h", 2.4, 2.88))
    >>> printed = print_bill(Bill("mmol ATP/g/h", lines, 2.88, 3.2, 0.32, "", True))
    >>> printed.lines, printed.shortfall
    ((('3.2', '1', '3.20'), ('1.2', '2.4', '2.88')), '0.32')
    """
    least = _decimals(bill)
    decimals = next((d for d in range(least, least + _TRIES) if _adds_up(bill, d)), least)
    supply, demand = _rounded(bill.supply, decimals), _rounded(bill.demand, decimals)
    return PrintedBill(
        lines=tuple(_line(line, decimals) for line in bill.lines),
        supply=f"{supply:f}",
        demand=f"{demand:f}",
        shortfall=f"{demand - supply:f}",
        adds_up=_adds_up(bill, decimals),
    )


def _decimals(bill: Bill) -> int:
    """Behind the point: three digits of the larger sum, two of the shortfall."""
    largest = max(abs(bill.supply), abs(bill.demand))
    needed = [2 - math.floor(math.log10(largest))] if largest > 0 else [2]
    if abs(bill.shortfall) > 1e-9 * largest:
        needed.append(1 - math.floor(math.log10(abs(bill.shortfall))))
    return max(0, *needed)


def _adds_up(bill: Bill, decimals: int) -> bool:
    """Whether rounded worths add up to the rounded sum, on both sides."""
    sums = {BillSide.SUPPLY: bill.supply, BillSide.DEMAND: bill.demand}
    return all(
        sum((_rounded(x.worth, decimals) for x in bill.lines if x.side is side), Decimal(0))
        == _rounded(total, decimals)
        for side, total in sums.items()
    )


def _line(line: BillLine, decimals: int) -> tuple[str, str, str]:
    worth = _rounded(line.worth, decimals)
    for digits in range(4, _MOST_DIGITS + 1):
        amount, price = _significant(line.amount, digits), _significant(line.price, digits)
        if _rounded(float(amount * price), decimals) == worth:
            break
    return f"{_plain(amount)}", f"{_plain(price)}", f"{worth:f}"


def _significant(value: float, digits: int) -> Decimal:
    return Decimal(f"{value:.{digits - 1}e}")


def _plain(value: Decimal) -> str:
    """Without superfluous zeros; with an exponent where the number is very small or large."""
    if not value:
        return "0"
    short = value.normalize()
    if -5 <= short.adjusted() < 7:
        return f"{short:f}"
    mantissa, _, exponent = f"{short:e}".partition("e")
    return f"{mantissa}e{int(exponent)}"


def _rounded(value: float, decimals: int) -> Decimal:
    return round(Decimal(repr(value)), decimals) + Decimal(0)
