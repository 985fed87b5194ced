"""What balances can do with a rate."""

from __future__ import annotations

from enum import Enum

__all__ = ["RateKind"]


class RateKind(Enum):
    """What the balances say of a rate, measured or not.

    ``BALANCEABLE``: measured, and tested by the others. ``NOT_BALANCEABLE``: measured, and
    tested by none. ``CALCULABLE``: not measured, but the others fix it. ``NOT_CALCULABLE``:
    neither measured nor fixed.
    """

    BALANCEABLE = "balanceable"
    NOT_BALANCEABLE = "not_balanceable"
    CALCULABLE = "calculable"
    NOT_CALCULABLE = "not_calculable"
