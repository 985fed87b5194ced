"""A bill: what supplies and what is asked for, each at its price; its sums prove a result."""

from __future__ import annotations

from enum import Enum

from fluxnet.ground.record import record

__all__ = ["Bill", "BillLine", "BillSide"]


class BillSide(Enum):
    """On which side of a bill a line stands."""

    SUPPLY = "supply"
    DEMAND = "demand"


@record
class BillLine:
    """One thing that supplies or is asked for.

    ``name`` is the limit, measured value or role as the user wrote it; ``amount`` is in
    ``unit``, ``price`` what one unit of it is worth in the bill's unit, ``worth`` their product.
    """

    side: BillSide
    name: str
    amount: float
    unit: str
    price: float
    worth: float


@record
class Bill:
    """The lines, their sums and what is missing.

    ``unit`` is that of every worth ("mmol ATP/g/h", or that of an aim). ``supply`` and
    ``demand`` are the sums of the sides, ``shortfall`` is demand less supply: positive where
    things cannot hold together, 0 at an optimum. ``words`` tell it in one sentence.
    ``verified``: checked in exact arithmetic.
    """

    unit: str
    lines: tuple[BillLine, ...]
    supply: float
    demand: float
    shortfall: float
    words: str
    verified: bool
