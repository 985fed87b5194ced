"""A bill as a table that can be added up by hand, and its lines as data."""

from __future__ import annotations

from fluxnet.ground.record import record
from fluxnet.ground.table import Align, Cell, Column, Table
from fluxnet.studies.bill import Bill, BillSide
from fluxnet.studies.bill_rounding import print_bill

__all__ = ["NEEDS", "SURPLUS", "BillTitles", "bill_tables"]


@record
class BillTitles:
    """What the sides of a bill are called, and what is left between them."""

    demand: str
    supply: str
    between: str


NEEDS = BillTitles("needed", "can come from", "missing")
SURPLUS = BillTitles("has to go somewhere", "can go to", "left over")


def bill_tables(
    bill: Bill, title: str, titles: BillTitles = NEEDS, digits: int = 3, note: str = ""
) -> tuple[Table, Table]:
    """The bill for the screen, and for files.

    On the screen the column of worths adds up, and every worth is the product of its amount
    and price as printed; a note says so where a last digit is not. ``note`` stands before it.
    """
    columns: tuple[Column, ...] = (
        Column(titles.demand, "", wrap=42),
        Column("amount", "", align=Align.RIGHT),
        Column("unit", ""),
        Column("x price", "", align=Align.RIGHT),
        Column("= worth", "", align=Align.RIGHT),
    )
    printed = print_bill(bill, digits)
    texts = list(zip(bill.lines, printed.lines, strict=True))
    units = {line.unit for line in bill.lines}
    shown = {BillSide.DEMAND: printed.demand, BillSide.SUPPLY: printed.supply}
    rows: list[tuple[Cell, ...]] = []
    for side in (BillSide.DEMAND, BillSide.SUPPLY):
        if side is BillSide.SUPPLY:
            rows.append((titles.supply, "", "", "", ""))
        rows += [
            (f"  {line.name}", amount, line.unit, price, worth)
            for line, (amount, price, worth) in texts
            if line.side is side
        ]
        rows.append(("  together", "", "", "", shown[side]))
    rows.append((titles.between, "", "", "", printed.shortfall))
    notes = (note,) if note else ()
    if not printed.multiplies:
        notes = (*notes, "a last digit is rounded so that the column adds up")
    if len(units) == 1:
        columns = (*columns[:2], *columns[3:])
        rows = [(*row[:2], *row[3:]) for row in rows]
    keys = ("side", "name", "amount", "unit", "price", "worth", "worth_unit")
    plain = tuple(
        (x.side.value, x.name, x.amount, x.unit, x.price, x.worth, bill.unit) for x in bill.lines
    )
    return (
        Table("", title, columns, tuple(rows), notes),
        Table("bill", title, tuple(Column("", key) for key in keys), plain),
    )
