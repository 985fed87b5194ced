"""Measured rates as data: one run holds quantities with values, sds and a covariance."""

from __future__ import annotations

from dataclasses import field
from enum import Enum

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.record import record
from fluxnet.ground.source import NOWHERE, Span
from fluxnet.network.model import Basis, Quantity, Species

__all__ = ["MeasuredRate", "RatesTable", "Run", "SdSource"]


class SdSource(Enum):
    """Where a standard deviation came from."""

    GIVEN = "given"
    RELATIVE = "relative"
    ASSUMED = "assumed"


@record
class MeasuredRate:
    """One quantity of one run, already in the unit of the run's basis.

    ``value`` is None where the quantity was exchanged but not measured; then ``sd`` is None.
    ``sd`` is absolute; 0 is exact. ``relative`` is the fraction where the sd was given in %
    (it is then taken of the reconciled value in one more pass:
    :func:`fluxnet.rates.covariance.covariance_at`). ``own_sd`` is given where the rate has a
    part in the run's shared error: its sd without that part, so that ``sd**2 == own_sd**2 +
    (shared_error * value)**2``. ``written`` and ``unit`` are the cell as it stood.
    """

    quantity: Quantity
    value: float | None
    sd: float | None
    relative: float | None = None
    sd_source: SdSource = SdSource.GIVEN
    written: str = ""
    unit: str = ""
    span: Span = NOWHERE
    own_sd: float | None = None


@record
class Run:
    """One cultivation, or one steady state of it.

    ``rates`` keep the table's order. ``covariance`` is square over those of ``rates`` that
    have a value, in their order, in units of the basis squared; its diagonal is ``sd**2``;
    None is a diagonal covariance. ``extras`` are the columns carried through.
    ``shared_error`` is the relative error of the biomass by which all specific rates were
    divided; it is in the covariance already.

    Rates count moles: mmol/g/h, mmol/L/h, or an amount in ``unit`` (``mmol``, ``mmol/L``,
    ``mol/100 mol``, ``mol/C-mol``). In the basis CARBON they count C-mol where the species
    holds carbon, and moles elsewhere. mu is in 1/h, a ratio counts moles in every basis.
    ``basis`` AMOUNT has no time. ``unit`` is the text shown behind every rate.
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


@record
class RatesTable:
    """All runs of one table.

    ``species`` are those that the rates name, each once, with formulas: the model's own, then
    what the table declares, then what the catalogue knows (``entry``), as typed. With a
    growth rate the biomass species are among them. ``nitrogen`` is the nitrogen source that
    the table names. ``understood`` tells how the table was read. ``sd_rule`` is what an
    assumed sd is: a fraction of the value, and at least a fraction of the run's largest rate.
    """

    runs: tuple[Run, ...]
    understood: tuple[str, ...] = field(default=())
    species: tuple[Species, ...] = field(default=())
    nitrogen: str | None = None
    sd_rule: tuple[float, float] = (0.05, 0.005)

    def find_species(self, name: str) -> Species | None:
        """The species of that name, or None."""
        return next((s for s in self.species if s.name == name), None)
