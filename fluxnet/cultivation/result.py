"""What comes out of raw data: rates with covariance, and all that a reader needs to judge them."""

from __future__ import annotations

from dataclasses import field
from enum import Enum

import numpy as np
from numpy.typing import NDArray

from fluxnet.cultivation.gas import RatioInterval
from fluxnet.cultivation.volumes import Account
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.record import record
from fluxnet.network.model import Quantity
from fluxnet.rates.cultivation import Mode, Phase
from fluxnet.rates.measured import RatesTable, Run

__all__ = [
    "Assumption",
    "Course",
    "CultivationRates",
    "Method",
    "Origin",
    "PhaseRates",
    "RateLine",
    "Steadiness",
    "WayRates",
]  # fmt: skip

Array = NDArray[np.float64]


class Origin(Enum):
    """Where a number of the reckoning came from."""

    GIVEN = "given"
    FOUND = "found in the data"
    ASSUMED = "assumed"
    MEMORY = "from memory"


@record
class Assumption:
    """One number or choice that the rates rest on. ``value`` is written with its unit."""

    what: str
    value: str
    basis: Origin
    why: str = ""


class Method(Enum):
    """How rates of a phase were found beside the one that is used."""

    SPLINE = "smoothing spline"
    NAIVE = "without the account of the broth"
    UNSTRIPPED = "without losses with the gas"
    UNHELD = "without CO2 held in the broth"


@record
class WayRates:
    """A rate by another way, signed as the release, and how far it is from the one used.

    ``difference_sd`` is that of the difference, so that it can be judged; None where the way
    was only reckoned at the values themselves.
    """

    method: Method
    value: float
    sd: float | None
    difference: float
    difference_sd: float | None


@record
class RateLine:
    """One rate of a phase, signed: positive out of the cell; mmol/g/h, mu in 1/h.

    ``shares`` are those of the errors in its variance. ``h`` with ``dof`` tests whether the
    samples scatter about one rate by no more than their errors; ``widened`` is the factor on
    the samples' own sds where they did. ``total`` is the amount made in the phase [mmol; g].
    """

    quantity: Quantity
    value: float
    sd: float
    total: float
    h: float | None
    dof: int
    widened: float
    shares: tuple[tuple[str, float], ...]
    ways: tuple[WayRates, ...] = ()

    def way(self, method: Method) -> WayRates | None:
        """The rate by another way, where it was found."""
        return next((w for w in self.ways if w.method is method), None)


@record
class Steadiness:
    """The trend of one quantity: change per residence time, over its mean, with its sd."""

    name: str
    change: float
    sd: float
    p: float
    steady: bool


@record
class Course:
    """A rate over time with its band (one sd), signed as the release. ``unit`` is that of value."""

    name: str
    unit: str
    time: Array
    value: Array
    sd: Array


@record
class PhaseRates:
    """The rates of one phase. ``covariance`` is square over ``lines``, signed as they are."""

    phase: Phase
    run: Run
    lines: tuple[RateLine, ...]
    covariance: Array
    samples: int
    curve: str
    """How ln(X V) was described: ``straight line``, ``parabola``, ``points``, ``mean``."""

    rq: RatioInterval | None = None
    steadiness: tuple[Steadiness, ...] = ()

    def find(self, name: str) -> RateLine | None:
        """The rate of a species, or of ``mu``."""
        return next((r for r in self.lines if (r.quantity.name or "mu") == name), None)

    def ratio(self, above: str, below: str) -> tuple[float, float]:
        """|rate| over |rate| with its sd, their covariance kept: a yield.

        Raises
        ------
        KeyError
            Where one of the two has no rate.
        """
        names = [r.quantity.name or "mu" for r in self.lines]
        if above not in names or below not in names:
            raise KeyError(f"{above} / {below}: rates are {', '.join(names)}")
        i, j = names.index(above), names.index(below)
        a, b = self.lines[i].value, self.lines[j].value
        part = np.array([1 / a, -1 / b])
        pair = self.covariance[np.ix_([i, j], [i, j])]
        return abs(a / b), abs(a / b) * float(np.sqrt(part @ pair @ part))


@record
class CultivationRates:
    """All that was found from one cultivation's raw data.

    ``phases`` are empty where ``diagnostics`` hold an error. ``courses`` are q(t), mu(t) and
    gas rates over the whole time; ``accounts`` broth and carbon. ``caution`` is to be shown
    once where there are gas numbers; empty otherwise.
    """

    name: str
    mode: Mode
    table: RatesTable
    phases: tuple[PhaseRates, ...]
    accounts: tuple[Account, ...]
    courses: tuple[Course, ...]
    assumptions: tuple[Assumption, ...]
    diagnostics: tuple[Diagnostic, ...] = field(default=())
    caution: str = ""

    @property
    def runs(self) -> tuple[Run, ...]:
        """One run a phase: what ``closure`` and ``solve`` read."""
        return tuple(p.run for p in self.phases)
