"""How a solve of a programme ended."""

from __future__ import annotations

from enum import Enum

__all__ = ["Outcome"]


class Outcome(Enum):
    """How a solve ended. ``FAILED``: the solver gave up; nothing may be concluded."""

    OPTIMAL = "optimal"
    INFEASIBLE = "infeasible"
    UNBOUNDED = "unbounded"
    FAILED = "failed"
