"""What sizes of oxygen and heat are good for: said once wherever they are told."""

from __future__ import annotations

__all__ = ["CAUTION"]

CAUTION = (
    "Oxygen and heat are estimates from a lumped model, good for planning only: oxygen "
    "enrichment, cooling, and off-gas that may burn or smother need the site's own safety "
    "review, local codes and licensed engineers."
)
