"""The trade-off between two quantities, as found."""

from __future__ import annotations

from enum import Enum

from fluxnet.ground.record import record
from fluxnet.solving.parametric import Extreme
from fluxnet.solving.proof import Proof
from fluxnet.studies.frontier_axis import Axis

__all__ = ["Curve", "CurveStatus", "Frontier", "FrontierPoint", "OverKind", "Setting", "Stretch"]


class CurveStatus(Enum):
    """How one curve ended."""

    TRACED = "traced"
    POINT = "point"
    INFEASIBLE = "infeasible"
    UNBOUNDED = "unbounded"
    ABSENT = "absent"


class OverKind(Enum):
    """What is moved: a limit, or a parameter."""

    LIMIT = "limit"
    PARAMETER = "parameter"


@record
class Setting:
    """What ``--over`` moves, its unit, and the range."""

    kind: OverKind
    name: str
    unit: str
    start: float
    stop: float
    is_oxygen: bool = False


@record
class FrontierPoint:
    """A break point: x, the best y there, and the slope on either side (None at an end).

    ``x_exact`` and ``y_exact`` are fractions as text, None where not proven. ``changes`` are
    told as x grows.
    """

    x: float
    y: float
    slope_before: float | None
    slope_after: float | None
    changes: tuple[str, ...] = ()
    x_exact: str | None = None
    y_exact: str | None = None


@record
class Curve:
    """One curve: that of a variant, or at one value of what is moved.

    ``drawn`` are points of a curve that is not straight between its break points. ``words``
    say what trading costs, or why there is no curve.
    """

    variant: str
    label: str
    status: CurveStatus
    points: tuple[FrontierPoint, ...]
    words: str
    proof: Proof | None = None
    drawn: tuple[tuple[float, float], ...] = ()

    @property
    def line(self) -> tuple[tuple[float, float], ...]:
        """The points through which it is drawn."""
        return self.drawn or tuple((p.x, p.y) for p in self.points)

    @property
    def best(self) -> int:
        """The place of the point with the largest y, the first of several."""
        ys = [p.y for p in self.points]
        return ys.index(max(ys))


@record
class Stretch:
    """A part of x on which the same curves are the best; ``alone`` where no other goes there."""

    low: float
    high: float
    labels: tuple[str, ...]
    alone: bool
    low_exact: str | None = None
    high_exact: str | None = None


@record
class Frontier:
    """The trade-off, variant by variant.

    ``skipped`` are combinations of variants that make no network, and why. ``common`` are the
    variants that all curves have, ``stretches`` tell which curve is the best where, and
    ``choice`` says so; ``notes`` are what is to be known beside it.
    """

    x: Axis
    y: Axis
    extreme: Extreme
    over: Setting | None
    curves: tuple[Curve, ...]
    slope_unit: str
    words: str
    skipped: tuple[tuple[str, str], ...] = ()
    common: tuple[str, ...] = ()
    stretches: tuple[Stretch, ...] = ()
    choice: str = ""
    notes: tuple[str, ...] = ()

    @property
    def sizes_oxygen(self) -> bool:
        """Whether an axis, or what is moved, is what a supply of oxygen is sized by."""
        moved = self.over is not None and self.over.is_oxygen
        return self.x.is_oxygen or self.y.is_oxygen or moved

    @property
    def is_sound(self) -> bool:
        """Whether some curve was found, and all that were are proven."""
        found = [c for c in self.curves if c.points]
        return bool(found) and all(c.proof is not None and c.proof.verified for c in found)
