"""The unit of a quantity beside the unit of the rates."""

from __future__ import annotations

from fluxnet.network.model import Quantity, QuantityKind

__all__ = ["rate_unit"]


def rate_unit(quantity: Quantity, unit: str) -> str:
    """The unit of a quantity: 1/h for mu, none for a ratio, else that of the rates.

    Examples
    --------
    >>> rate_unit(Quantity(QuantityKind.MU), "mmol/g/h")
    '1/h'
    """
    if quantity.kind is QuantityKind.MU:
        return "1/h"
    return "" if quantity.kind is QuantityKind.RATIO else unit
