"""What a fit of fluxes to measured rates finds, as data."""

from __future__ import annotations

from dataclasses import field
from enum import Enum

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.ground.source import NOWHERE, Span
from fluxnet.network.model import Quantity
from fluxnet.rates.kinds import RateKind
from fluxnet.solving.build import Built
from fluxnet.solving.region import Region
from fluxnet.solving.task import Task

__all__ = [
    "BoundKind", "FitStatus", "FittedRow", "FluxFit", "FluxKind", "FluxRelation",
    "ParameterMove", "PressingBound", "RateKind",
]

Vector = NDArray[np.float64]


class FitStatus(Enum):
    """How a fit ended.

    ``SOLVED``: h does not reject at 5 % (or there is nothing to test). ``INCONSISTENT``:
    solved, and h rejects. ``INFEASIBLE``: the hard part alone, balances, directions, limits
    and exact values, has no solution.
    """

    SOLVED = "solved"
    INCONSISTENT = "inconsistent"
    INFEASIBLE = "infeasible"


class FluxKind(Enum):
    """Whether the balances and the measured values fix a flux."""

    DETERMINED = "determined"
    UNDETERMINED = "undetermined"


class BoundKind(Enum):
    """Where a bound that presses comes from."""

    ROLE = "role"
    LIMIT = "limit"
    DIRECTION = "direction"
    RANGE = "range"


@record
class FittedRow:
    """One rate, flux or ratio, measured or not, after the fit.

    ``measured`` and ``sd`` are None where it was not measured; ``sd`` is the one that the fit
    used (a relative sd is taken of the reconciled value). ``value`` stands in the direction of
    ``quantity``: below zero it is reversed. ``value_sd`` is None where nothing determines the
    value: then ``value`` is a representative, and the ranges tell what is known. ``z`` is
    measured less ``value`` over the sd of that difference, bounds that press being held as
    equalities are; None where no difference is possible. ``low``
    and ``high`` hold all values with h - h_min <= 3.84, ``best_low`` and ``best_high`` those
    at h_min; infinite where nothing bounds them. ``of_model`` marks a measured limit of the
    model.
    """

    quantity: Quantity
    name: str
    kind: RateKind
    value: float
    value_sd: float | None
    low: float
    high: float
    best_low: float
    best_high: float
    measured: float | None = None
    sd: float | None = None
    z: float | None = None
    of_model: bool = False
    span: Span = NOWHERE


@record
class ParameterMove:
    """An uncertain parameter, or ash: as given and as the fit moved it."""

    name: str
    value: float
    sd: float
    moved: float
    moved_sd: float
    z: float | None


@record
class PressingBound:
    """A bound without which the fit would be better.

    ``name`` is the species of a role, the limit as written, the reaction of a direction, the
    parameter of a range. ``pulled`` is the flux that it shifts most, in units of that flux's
    sd, by ``pull``; ``is_strong`` where that is more than two sd. Both are None where no
    determined flux is shifted.
    """

    kind: BoundKind
    name: str
    value: float
    pulled: str | None
    pull: float | None
    span: Span = NOWHERE

    @property
    def is_strong(self) -> bool:
        """Whether it pulls a flux by more than two of its sd."""
        return self.pull is not None and abs(self.pull) > 2


@record
class FluxRelation:
    """A sum of undetermined fluxes that is itself determined.

    ``terms`` are pairs (reaction, coefficient). ``value`` and ``sd`` as those of a flux.
    """

    terms: tuple[tuple[str, float], ...]
    value: float
    sd: float
    low: float
    high: float

    @property
    def words(self) -> str:
        """The sum as text: ``a + 2 b``."""
        parts: list[str] = []
        for name, factor in self.terms:
            sign = "-" if factor < 0 else "+"
            size = "" if abs(factor) == 1 else f"{abs(factor):.6g} "
            parts.append(f"{sign} {size}{name}")
        text = " ".join(parts)
        return text[2:] if text.startswith("+ ") else text


@record
class FluxFit:
    """Fluxes fitted to measured rates by weighted least squares.

    Arrays over the reactions follow the file; units are those of the run's basis. ``fluxes``
    minimise h with all bounds kept: where several do, the ones with the least total flux
    among them (``is_unique`` is then false). ``flux_sd`` is that of the linear formula, NaN
    where a flux is not determined. ``low`` and ``high`` hold all values with
    h - h_min <= 3.84 with the bounds kept; ``best_low`` and ``best_high`` those at h_min;
    infinite where nothing bounds a flux.

    ``h`` is the test value with all bounds lifted, on ``dof`` degrees of freedom; ``p_value``,
    ``limit`` (at 5 %) and ``closes`` are None, as ``h``, where ``dof`` is 0. ``bound_h`` is
    what the bounds add to it, ``bound_p`` how often they add as much by chance (None where
    none presses), ``bounds`` those that press.

    ``covariance`` is that of the fluxes and, behind them, the uncertain numbers ``moved``
    (square over both): valid for every determined combination of them. ``free`` (reactions x
    directions, orthonormal) spans what no measurement sees. ``shares`` (reactions x sources)
    is the part of each flux's variance that comes from each of ``sources``, measured rows
    first, then uncertain numbers: rows add up to 1, NaN where a flux is not determined.
    ``residual`` is the largest imbalance relative to the sum of its absolute terms.

    Where ``status`` is INFEASIBLE arrays hold NaN, and ``contradictions`` are the names of
    exact values and limits that contradict one another, where that was seen at once. ``task``
    and ``region`` are what :func:`fluxnet.solving.spans.spans_of` asks.
    """

    status: FitStatus
    built: Built
    reactions: tuple[str, ...]
    fluxes: Vector
    flux_sd: Vector
    low: Vector
    high: Vector
    best_low: Vector
    best_high: Vector
    kinds: tuple[FluxKind, ...]
    is_unique: bool
    h: float | None
    dof: int
    p_value: float | None
    limit: float | None
    closes: bool | None
    bound_h: float
    bound_p: float | None
    bounds: tuple[PressingBound, ...]
    moved: tuple[ParameterMove, ...]
    rows: tuple[FittedRow, ...]
    rates: tuple[FittedRow, ...]
    relations: tuple[FluxRelation, ...]
    covariance: Vector
    free: Vector
    sources: tuple[str, ...]
    shares: Vector
    residual: float
    contradictions: tuple[tuple[str, ...], ...] = ()
    task: Task | None = field(default=None, repr=False)
    region: Region | None = field(default=None, repr=False)

    @property
    def numbers(self) -> dict[str, float]:
        """The parameters and ashes at the values that the fit moved them to."""
        return dict(self.built.values)
