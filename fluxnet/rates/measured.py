"""Measured rates as data: one run holds quantities with values, sds and a covariance."""

from __future__ import annotations

from dataclasses import dataclass, field
from enum import Enum

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.source import NOWHERE, Span
from fluxnet.network.model import Basis, Quantity

__all__ = ["MeasuredRate", "RatesTable", "Run", "SdSource"]


class SdSource(Enum):
    """Where a standard deviation came from."""

    GIVEN = "given"
    RELATIVE = "relative"
    ASSUMED = "assumed"


@dataclass(frozen=True, slots=True)
class MeasuredRate:
    """One quantity of one run, already in the unit of the run's basis.

    ``value`` is None where the quantity was exchanged but not measured; then ``sd`` is None.
    ``sd`` is absolute; 0 is exact. ``relative`` is the fraction where the sd was given in %
    (it is then taken of the reconciled value in one more pass). ``written`` and ``unit`` are
    the cell as it stood.
    """

    quantity: Quantity
    value: float | None
    sd: float | None
    relative: float | None = None
    sd_source: SdSource = SdSource.GIVEN
    written: str = ""
    unit: str = ""
    span: Span = NOWHERE


@dataclass(frozen=True, slots=True)
class Run:
    """One cultivation, or one steady state of it.

    ``rates`` keep the table's order. ``covariance`` is square over those of ``rates`` that
    have a value, in their order, in units of the basis squared; its diagonal is ``sd**2``;
    None is a diagonal covariance. ``extras`` are the columns carried through.
    ``basis`` AMOUNT has no time. ``unit`` is the text shown behind every rate (``mmol/g/h``).
    """

    name: str
    basis: Basis
    rates: tuple[MeasuredRate, ...]
    covariance: NDArray[np.float64] | None = None
    extras: tuple[tuple[str, str], ...] = ()
    unit: str = "mmol/g/h"
    shared_error: float | None = None
    span: Span = NOWHERE

    def find(self, quantity: Quantity) -> MeasuredRate | None:
        """The rate of that quantity, or None."""
        return next((r for r in self.rates if r.quantity == quantity), None)

    @property
    def measured(self) -> tuple[MeasuredRate, ...]:
        """The rates that have a value."""
        return tuple(r for r in self.rates if r.value is not None)


@dataclass(frozen=True, slots=True)
class RatesTable:
    """All runs of one table, and the formulas of species that only the table declares."""

    runs: tuple[Run, ...]
    understood: tuple[str, ...] = field(default=())
