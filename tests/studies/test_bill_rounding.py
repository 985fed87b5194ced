"""Printed bills add up by hand."""

from __future__ import annotations

from decimal import Decimal

from hypothesis import given, settings
from hypothesis import strategies as st

from fluxnet.studies.bill import Bill, BillLine, BillSide
from fluxnet.studies.bill_rounding import print_bill


def bill_of(demands: list[tuple[float, float]], supplies: list[tuple[float, float]]) -> Bill:
    lines = tuple(
        BillLine(side, "x", amount, "mmol/g/h", price, amount * price)
        for side, pairs in ((BillSide.DEMAND, demands), (BillSide.SUPPLY, supplies))
        for amount, price in pairs
    )
    demand = sum(x.worth for x in lines if x.side is BillSide.DEMAND)
    supply = sum(x.worth for x in lines if x.side is BillSide.SUPPLY)
    return Bill("mmol ATP/g/h", lines, supply, demand, demand - supply, "", True)


NUMBERS = st.floats(1e-3, 1e3) | st.just(0.0)
PAIRS = st.lists(st.tuples(NUMBERS, st.floats(1e-3, 1e3)), min_size=1, max_size=9)


@settings(max_examples=300, deadline=None)
@given(PAIRS, PAIRS)
def test_columns_add_up_and_lines_multiply(demands, supplies):
    bill = bill_of(demands, supplies)
    printed = print_bill(bill)
    sums = {BillSide.DEMAND: printed.demand, BillSide.SUPPLY: printed.supply}
    decimals = -Decimal(printed.demand).as_tuple().exponent
    step = Decimal(1).scaleb(-decimals)
    for side, total in sums.items():
        texts = [p for x, p in zip(bill.lines, printed.lines, strict=True) if x.side is side]
        assert sum(Decimal(worth) for _, _, worth in texts) == Decimal(total)
    assert Decimal(printed.demand) - Decimal(printed.supply) == Decimal(printed.shortfall)
    products = []
    for line, (amount, price, worth) in zip(bill.lines, printed.lines, strict=True):
        assert abs(Decimal(worth) - Decimal(repr(line.worth))) <= step
        products.append(round(Decimal(amount) * Decimal(price), decimals) == Decimal(worth))
    if printed.multiplies:
        assert all(products)
    assert abs(Decimal(printed.demand) - Decimal(repr(bill.demand))) <= step / 2


def test_what_is_missing_keeps_two_digits():
    printed = print_bill(bill_of([(100.0, 1.0)], [(99.9966, 1.0)]))
    assert (printed.demand, printed.supply, printed.shortfall) == ("100.0000", "99.9966", "0.0034")


def test_a_last_digit_gives_way_where_the_column_would_not_add_up():
    # 3 x 0.333 = 1.00, not 0.99; nor do three decimals help
    printed = print_bill(bill_of([(1 / 3, 1.0)] * 3, [(0.5, 1.0)]))
    assert printed.demand == "1.00"
    assert sorted(worth for _, _, worth in printed.lines[:3]) == ["0.33", "0.33", "0.34"]
    assert not printed.multiplies


def test_few_digits_are_enough_where_they_multiply():
    printed = print_bill(bill_of([(0.04940180000001, 90.0050)], [(1.26151, 2.4)]))
    assert printed.lines[0][:2] == ("0.0494", "90")


def test_the_sums_differ_by_what_is_missing_as_it_would_be_rounded_itself():
    # 7.5222 - 5.5162: with two decimals 7.52 - 5.52 is 2.00, and not 2.01
    printed = print_bill(bill_of([(7.5222, 1.0)], [(5.5162, 1.0)]))
    assert (printed.demand, printed.supply, printed.shortfall) == ("7.522", "5.516", "2.006")
