"""Quantities of a network, and the limits on them: what can be measured, bounded or aimed at."""

from __future__ import annotations

from enum import Enum
from fractions import Fraction

from fluxnet.ground.record import record
from fluxnet.ground.source import NOWHERE, Span

__all__ = ["Direction", "Limit", "Quantity", "QuantityKind", "Relation"]


class Direction(Enum):
    """Which way a boundary species goes; never told by a sign alone."""

    IN = "in"
    OUT = "out"

    @property
    def sign(self) -> int:
        """The sign of a release: +1 out of the cell, -1 into it."""
        return 1 if self is Direction.OUT else -1


class QuantityKind(Enum):
    """What can be limited, measured or aimed at."""

    RATE = "rate"
    MU = "mu"
    FLUX = "flux"
    RATIO = "ratio"
    SURPLUS = "surplus"


@record
class Quantity:
    """A thing with a value: a boundary species' rate, mu, a reaction's flux, a ratio.

    ``name`` is the species or reaction. A rate is a magnitude in ``direction``. A ratio is
    ``numerator`` over ``denominator``. ``SURPLUS`` is a carrier's surplus (an aim only).
    """

    kind: QuantityKind
    name: str = ""
    direction: Direction | None = None
    numerator: Quantity | None = None
    denominator: Quantity | None = None

    @property
    def names(self) -> frozenset[str]:
        """The species and reactions that it is of; mu has none."""
        parts = [q.name for q in (self, self.numerator, self.denominator) if q is not None]
        return frozenset(name for name in parts if name)

    def __str__(self) -> str:
        if self.kind is QuantityKind.RATIO:
            return f"{self.numerator} / {self.denominator}"
        if self.kind is QuantityKind.MU:
            return "mu"
        if self.kind is QuantityKind.RATE and self.direction is not None:
            return f"{self.name} {self.direction.value}"
        return f"flux {self.name}" if self.kind is QuantityKind.FLUX else self.name


class Relation(Enum):
    """How a limit bounds its quantity."""

    AT_MOST = "<="
    AT_LEAST = ">="
    EQUAL = "="
    BETWEEN = "between"


@record
class Limit:
    """A bound on a quantity, or a measured value where ``sd`` is given.

    ``low`` and ``high`` in the unit of the basis (1/h for mu), in the quantity's direction:
    None is no bound; both equal for ``=``. ``between in 1 and out 5`` of an exchange species
    is stored in the direction OUT with ``low`` -1 and ``high`` 5.
    """

    quantity: Quantity
    relation: Relation
    low: Fraction | None
    high: Fraction | None
    sd: Fraction | None = None
    span: Span = NOWHERE

    @property
    def is_measured(self) -> bool:
        """Whether it is a measured value rather than a hard bound."""
        return self.sd is not None
