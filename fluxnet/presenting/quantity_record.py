"""A quantity as data."""

from __future__ import annotations

from typing import Any

from fluxnet.network.model import Quantity, QuantityKind

__all__ = ["quantity_record"]


def quantity_record(quantity: Quantity) -> dict[str, Any]:
    """A quantity: the species (or reaction, or ratio) and the direction."""
    is_rate = quantity.kind is QuantityKind.RATE
    return {
        "species": quantity.name if is_rate else str(quantity),
        "direction": quantity.direction.value if is_rate and quantity.direction else None,
    }
