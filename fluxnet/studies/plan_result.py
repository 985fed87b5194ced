"""What to measure next, as data."""

from __future__ import annotations

from enum import Enum

from fluxnet.ground.record import record
from fluxnet.studies.shares import Share

__all__ = ["How", "Option", "Plan", "Step", "TypedLimit"]


class How(Enum):
    """How a quantity would be known better."""

    NEW = "new"
    BETTER = "half its sd"


@record
class Step:
    """One thing to do: measure something new, or something known with half its error.

    ``sd`` is the error it is then known with, in ``unit``; ``value`` what it is expected to
    be; ``kind`` says what it is: a rate, a flux, a parameter, a shared error.
    """

    name: str
    how: How
    sd: float
    unit: str
    value: float | None
    kind: str


@record
class Option:
    """One step, or two together, and the ``sd`` that the wanted quantity has after them.

    None where they do not determine it. ``of_today`` is that sd as a fraction of today's.
    """

    steps: tuple[Step, ...]
    sd: float | None
    of_today: float | None


@record
class TypedLimit:
    """A measured limit that the wanted quantity comes from, and the plan without it.

    ``limit`` is in words, ``share`` its part of the variance.
    """

    limit: str
    share: float
    without: Plan


@record
class Plan:
    """What would tell the wanted quantity better, the best first.

    ``value`` and ``sd`` are today's; the sd is None where nothing determines it. ``options``
    are single steps across the boundary and with what is measured already, ``inside`` those
    that measure a flux inside, ``pair`` the best two of the former. ``needed`` is an
    irreducible set that determines a quantity which no one or two steps do. ``error`` is the
    relative error of what is new. ``without_bounds``: bounds press on this fit, which the
    formula does not know. ``typed`` is told where nearly all of the error is that of a limit
    as typed: to know that one better would be to know the answer already.
    """

    quantity: str
    unit: str
    error: float
    words: str
    value: float | None = None
    sd: float | None = None
    shares: tuple[Share, ...] = ()
    options: tuple[Option, ...] = ()
    inside: tuple[Option, ...] = ()
    pair: Option | None = None
    needed: tuple[str, ...] = ()
    without_bounds: bool = False
    typed: TypedLimit | None = None
