"""A bill's numbers as they are printed, so that its columns add up by hand."""

from __future__ import annotations

import math
from collections.abc import Sequence
from decimal import ROUND_FLOOR, Decimal

from fluxnet.ground.record import record
from fluxnet.studies.bill import Bill, BillLine, BillSide

__all__ = ["PrintedBill", "print_bill"]

_MOST_DIGITS = 12
_MORE_DECIMALS = 1


@record
class PrintedBill:
    """Texts of a bill: ``lines`` hold (amount, price, worth) in the order of the bill's.

    The worths add up to the sums, and the shortfall is the difference of these.
    ``multiplies``: each worth is the rounded product of its amount and price as printed;
    otherwise a last digit was changed to make the column add up.
    """

    lines: tuple[tuple[str, str, str], ...]
    supply: str
    demand: str
    shortfall: str
    multiplies: bool


def print_bill(bill: Bill, digits: int = 3) -> PrintedBill:
    """Round a bill: some digits of its sums and two of what is missing, at the least.

    Where the rounded worths do not add up to the rounded sums, or these do not differ by the
    rounded shortfall, one decimal more is tried; then those nearest to the next number are
    rounded the other way. Amount and price keep as many digits as it takes for their product
    to be the worth.

    Examples
    --------
    >>> lines = (BillLine(BillSide.DEMAND, "upkeep", 3.2, "mmol/g/h", 1.0, 3.2),
    ...     BillLine(BillSide.SUPPLY, "oxygen in", 1.2, "mmol/g/h", 2.4, 2.88))
    >>> printed = print_bill(Bill("mmol ATP/g/h", lines, 2.88, 3.2, 0.32, "", True))
    >>> printed.lines, printed.shortfall
    ((('3.2', '1', '3.20'), ('1.2', '2.4', '2.88')), '0.32')
    """
    least = _decimals(bill, digits)
    tried = range(least, least + 1 + _MORE_DECIMALS)
    agreeing = [more for more in tried if _differ_by_shortfall(bill, more)] or [least]
    decimals = next((more for more in agreeing if _adds_up(bill, more)), agreeing[0])
    supply, demand = _rounded(bill.supply, decimals), _rounded(bill.demand, decimals)
    worths = _worths(bill, decimals)
    lines = [_line(x, w, decimals) for x, w in zip(bill.lines, worths, strict=True)]
    return PrintedBill(
        lines=tuple(texts for texts, _ in lines),
        supply=f"{supply:f}",
        demand=f"{demand:f}",
        shortfall=f"{demand - supply:f}",
        multiplies=all(fits for _, fits in lines),
    )


def _decimals(bill: Bill, digits: int) -> int:
    """Behind the point: so many digits of the larger sum, two of the shortfall."""
    largest = max(abs(bill.supply), abs(bill.demand))
    needed = [digits - 1 - math.floor(math.log10(largest))] if largest > 0 else [digits - 1]
    if abs(bill.shortfall) > 1e-9 * largest:
        needed.append(1 - math.floor(math.log10(abs(bill.shortfall))))
    return max(0, *needed)


def _sums(bill: Bill) -> dict[BillSide, float]:
    return {BillSide.SUPPLY: bill.supply, BillSide.DEMAND: bill.demand}


def _differ_by_shortfall(bill: Bill, decimals: int) -> bool:
    """Whether the rounded sums differ by the rounded shortfall."""
    supply, demand = _rounded(bill.supply, decimals), _rounded(bill.demand, decimals)
    return demand - supply == _rounded(bill.shortfall, decimals)


def _adds_up(bill: Bill, decimals: int) -> bool:
    """Whether rounded worths add up to the rounded sum, on both sides."""
    return all(
        sum((_rounded(x.worth, decimals) for x in bill.lines if x.side is side), Decimal(0))
        == _rounded(total, decimals)
        for side, total in _sums(bill).items()
    )


def _worths(bill: Bill, decimals: int) -> list[Decimal]:
    """The worths rounded so that they add up: the largest remainders are rounded up."""
    worths = [_rounded(x.worth, decimals) for x in bill.lines]
    if _adds_up(bill, decimals):
        return worths
    step = Decimal(1).scaleb(-decimals)
    for side, total in _sums(bill).items():
        places = [k for k, x in enumerate(bill.lines) if x.side is side]
        exact = {k: Decimal(repr(bill.lines[k].worth)) for k in places}
        for k in places:
            worths[k] = exact[k].quantize(step, ROUND_FLOOR)
        left = int((_rounded(total, decimals) - sum(worths[k] for k in places)) / step)
        for k in sorted(places, key=lambda k: worths[k] - exact[k])[: max(0, left)]:
            worths[k] += step
    return worths


def _line(line: BillLine, worth: Decimal, decimals: int) -> tuple[tuple[str, str, str], bool]:
    """The texts of a line, and whether the product is the worth."""
    texts: Sequence[Decimal] = ()
    step = Decimal(1).scaleb(-decimals)
    for digits in range(4, _MOST_DIGITS + 1):
        amount, price = _significant(line.amount, digits), _significant(line.price, digits)
        fits = _rounded(float(amount * price), decimals) == worth
        off = abs(_rounded(float(amount * price), decimals) - worth)
        if not texts and (off <= step or digits == _MOST_DIGITS):
            texts = amount, price
        if fits:
            return (_plain(amount), _plain(price), f"{worth:f}"), True
    return (_plain(texts[0]), _plain(texts[1]), f"{worth:f}"), False


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
