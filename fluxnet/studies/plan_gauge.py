"""Any quantity at a fit: its value, its slopes, and what of it no measurement sees."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from fluxnet.exact.sparse import SparseRow
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.network.model import Network, Quantity, QuantityKind
from fluxnet.rates.measured import Run
from fluxnet.solving.build import Built, build_problem
from fluxnet.solving.chart import flux_scale
from fluxnet.solving.classify import Structure, classify
from fluxnet.solving.equalities import find_equalities
from fluxnet.solving.flux_fit import FluxFit
from fluxnet.solving.forms import as_fraction, exact_numbers, exact_row, exact_species, form_of
from fluxnet.solving.quantities import Frame, counts_moles, derivative_frame, frame_at
from fluxnet.solving.region import Region
from fluxnet.studies.ledger import LedgerPlace, ledger_rows

__all__ = ["Gauge", "Reading", "gauge_at"]

Vector = NDArray[np.float64]
_Row = dict[int, Fraction]

_NOTHING = 1e-9
"""A denominator below this part of the largest flux is rounding."""


@record
class Reading:
    """One quantity at a fit.

    ``seen`` and ``unseen`` are its slopes by the fit's coordinates (u, t). ``hidden`` is its
    exact form in what no measurement sees: empty where it is determined.
    """

    value: float
    seen: Vector
    unseen: Vector
    hidden: SparseRow

    @property
    def is_determined(self) -> bool:
        """Whether the fit determines it."""
        return not self.hidden

    @property
    def is_constant(self) -> bool:
        """Whether nothing can change it: the balances and exact values fix it."""
        slopes = float(np.linalg.norm(self.seen) + np.linalg.norm(self.unseen))
        return slopes <= 1e-12 * max(abs(self.value), 1e-3)


@record
class Gauge:
    """What readings are taken from; ``built`` and ``structure`` are at the written numbers."""

    fit: FluxFit
    built: Built
    structure: Structure
    species: tuple[_Row, ...]
    numbers: Mapping[str, Fraction]
    frame: Frame
    drifts: tuple[Frame, ...]

    def read(self, quantity: Quantity) -> Reading | None:
        """A rate, mu, a flux, or a ratio of two of them; None for a ratio over nothing."""
        if quantity.kind is QuantityKind.RATIO:
            return self._read_ratio(quantity)
        return self._read_plain(quantity)

    def _read_plain(self, quantity: Quantity) -> Reading:
        row = self.frame.row(quantity)
        drift = [frame.row(quantity) for frame in self.drifts]
        return self._read(row, drift, self._exact(quantity))

    def read_line(self, place: LedgerPlace) -> Reading:
        """The net of a line of the ledger."""
        network, stoich = self.fit.built.network, self.fit.built.stoichiometry
        rows = [
            ledger_rows(network, stoich, frame.matrix, (place,))[0]
            for frame in (self.frame, *self.drifts)
        ]
        inside = {
            j for j, r in enumerate(network.reactions) if r.compartment == place.compartment
        }
        exact = self.species[stoich.row(place.carrier)]
        return self._read(rows[0], rows[1:], {j: c for j, c in exact.items() if j in inside})

    def _read_ratio(self, quantity: Quantity) -> Reading | None:
        over, below = quantity.numerator, quantity.denominator
        if over is None or below is None:
            raise MisuseError("a ratio has two parts")
        gauge = self
        if counts_moles(quantity):
            frames = [_in_moles(frame) for frame in (self.frame, *self.drifts)]
            gauge = replace(self, frame=frames[0], drifts=tuple(frames[1:]))
        first, second = gauge._read_plain(over), gauge._read_plain(below)
        if abs(second.value) <= _NOTHING * self.scale:
            return None
        ratio = first.value / second.value
        return Reading(
            ratio,
            (first.seen - ratio * second.seen) / second.value,
            (first.unseen - ratio * second.unseen) / second.value,
            self._hidden_ratio(over, below, ratio, (first.hidden, second.hidden)),
        )

    def _hidden_ratio(
        self, over: Quantity, below: Quantity, ratio: float, hidden: tuple[SparseRow, SparseRow]
    ) -> SparseRow:
        """What no measurement sees of a ratio: nothing where its parts go together."""
        if not any(hidden):
            return {}
        space = self.structure.space
        rows = (self._exact(over, below), self._exact(below, over))
        forms = [space.image(row) for row in rows]
        if forms[0] and forms[1]:
            k = min(forms[1])
            factor = forms[0].get(k, Fraction(0)) / forms[1][k]
            if forms[0] == {j: factor * c for j, c in forms[1].items()}:
                return {}
        weight = as_fraction(ratio)
        parts = [self.structure.unseen.image(form) for form in forms]
        both = {k: parts[0].get(k, Fraction(0)) - weight * parts[1].get(k, Fraction(0))
                for k in parts[0].keys() | parts[1].keys()}  # fmt: skip
        return {k: v for k, v in both.items() if v}

    def _exact(self, quantity: Quantity, told_with: Quantity | None = None) -> _Row:
        form = form_of(self.built, quantity, told_with=told_with)
        return exact_row(self.built, form, self.species, self.numbers)

    def _read(self, row: Vector, drift: list[Vector], exact: SparseRow) -> Reading:
        region = self._region
        point = region.point
        slopes = row @ point.tangent
        free = len(point.z)
        for k, change in enumerate(drift):
            slopes[free + k] += change @ point.fluxes
        hidden = self.structure.unseen.image(self.structure.space.image(exact))
        seen, unseen = slopes @ region.seen, slopes @ region.unseen
        if not hidden:
            unseen = np.zeros_like(unseen)
        return Reading(float(row @ point.fluxes), seen, unseen, hidden)

    @property
    def scale(self) -> float:
        """The size of the largest flux; of a usual one where all are zero."""
        if self.fit.task is None:
            raise MisuseError("an infeasible fit has no values to ask for")
        return flux_scale(self.fit.task, self._region.point)

    @property
    def _region(self) -> Region:
        if self.fit.region is None:
            raise MisuseError("an infeasible fit has no values to ask for")
        return self.fit.region


def gauge_at(fit: FluxFit, network: Network, run: Run | None) -> Gauge:
    """What readings are taken from at a fit of a run.

    Raises
    ------
    MisuseError
        Where the fit is infeasible.
    """
    if fit.task is None:
        raise MisuseError("an infeasible fit has no values to ask for")
    built = build_problem(network, run)
    numbers = exact_numbers(built)
    now, stoich = fit.built, fit.built.stoichiometry
    drifts = tuple(
        derivative_frame(now.network, stoich, now.values, now.basis, name)
        for name in fit.task.rows.names
    )
    return Gauge(
        fit=fit,
        built=built,
        structure=classify(find_equalities(built)),
        species=exact_species(built.stoichiometry, numbers),
        numbers=numbers,
        frame=frame_at(now.network, stoich, now.values, now.basis),
        drifts=drifts,
    )


def _in_moles(frame: Frame) -> Frame:
    return replace(frame, per_mole=np.ones_like(frame.per_mole))
