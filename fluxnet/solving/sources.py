"""What the errors of a fit come from, and what a better source would make of them.

Around a fit the measured values are y = A u + e, e ~ N(0, V), in the coordinates u of
:class:`fluxnet.solving.region.Region`, in which the fitted errors are independent with sd 1.
Uncertain numbers are measured values of themselves. An error that several rates share (all
were divided by one biomass value) is a source of its own: V = V_own + x x'.
"""

from __future__ import annotations

from collections.abc import Collection
from enum import Enum

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record
from fluxnet.network.model import Quantity, QuantityKind
from fluxnet.solving.flux_fit import FluxFit
from fluxnet.solving.problem import RowKind

__all__ = ["Source", "SourceKind", "Sources", "find_sources"]

Vector = NDArray[np.float64]


class SourceKind(Enum):
    """What an error belongs to."""

    MEASUREMENT = "measurement"
    LIMIT = "measured limit"
    SHARED = "shared error"
    PARAMETER = "parameter"


@record
class Source:
    """A number with an error of its own.

    ``sd`` is in its own unit, and relative for a shared error; ``quantity`` what a measured
    row measures.
    """

    kind: SourceKind
    name: str
    sd: float
    quantity: Quantity | None = None


@record
class Sources:
    """All sources of a fit: measured rows, the shared error where there is one, numbers.

    ``own`` is the covariance of the measured rows without the shared error, whose shift of
    each row is ``shared``; ``design`` (rows, then numbers x u) their slopes.
    """

    members: tuple[Source, ...]
    own: Vector
    shared: Vector
    number_sds: Vector
    design: Vector

    def covariance(self, better: Collection[int] = ()) -> Vector:
        """The covariance of u with some sources at half their sd; correlations stay.

        Behind u stands the shared error itself, in its sds as given, where there is one: what
        is measured anew has a part in it too.
        """
        rows = len(self.own)
        factors = np.array([0.5 if i in better else 1.0 for i in range(len(self.members))])
        numbers = factors[len(factors) - len(self.number_sds) :]
        known = self.design[rows:] / (self.number_sds * numbers)[:, None]
        seen = self.design[:rows]
        if self.is_shared:
            own = np.zeros((1, seen.shape[1] + 1))
            own[0, -1] = 1 / factors[rows]
            seen = np.hstack([seen, self.shared[:, None]])
            known = np.vstack([np.pad(known, ((0, 0), (0, 1))), own])
        errors = self.own * np.outer(factors[:rows], factors[:rows])
        inverse: Vector = np.linalg.inv(seen.T @ _solve(errors, seen) + known.T @ known)
        return inverse

    def shares(self, gradients: Vector) -> Vector:
        """The part of each functional's variance that each source brings: rows add up to 1.

        A functional's value moves with the measured ones by w = V^-1 A g, g being its gradient
        by u; its variance g' g is w' V w, of which a row i brings w_i (V_own w)_i. Correlated
        errors may bring a negative part. NaN where there is no variance.

        Parameters
        ----------
        gradients
            Functionals x u.
        """
        rows = len(self.own)
        errors = self.own + np.outer(self.shared, self.shared)
        seen = gradients @ self.design[:rows].T
        weights = _solve(errors, seen.T).T
        parts = [weights * (weights @ self.own)]
        if self.is_shared:
            parts.append((weights @ self.shared)[:, None] ** 2)
        parts.append((gradients @ self.design[rows:].T / self.number_sds) ** 2)
        variance = np.einsum("ij,ij->i", gradients, gradients)
        found: Vector = np.hstack(parts) / np.where(variance > 0, variance, np.nan)[:, None]
        return found

    @property
    def is_shared(self) -> bool:
        """Whether an error that several rates share is among the sources."""
        return len(self.members) > len(self.own) + len(self.number_sds)


def find_sources(fit: FluxFit) -> Sources:
    """The sources of a fit.

    Raises
    ------
    MisuseError
        Where the fit is infeasible.
    """
    task, region, built = fit.task, fit.region, fit.built
    if task is None or region is None:
        raise MisuseError("an infeasible fit has no errors")
    covariance, run = built.covariance, built.run
    shared = np.zeros(len(covariance))
    members: list[Source] = []
    for k, place in enumerate(built.measured):
        row = built.problem.rows[place]
        measured = None
        if run is not None and row.quantity is not None and row.kind is RowKind.MEASUREMENT:
            measured = run.find(row.quantity)
        sd = float(np.sqrt(covariance[k, k]))
        if measured is not None and measured.own_sd is not None and measured.sd:
            # What is relative has one proportion at every value; what is absolute stays.
            own = measured.own_sd if measured.relative is None else (
                sd * measured.own_sd / measured.sd
            )  # fmt: skip
            shared[k] = np.copysign(np.sqrt(max(sd * sd - own * own, 0.0)), measured.value or 1.0)
            sd = own
        size = row.denominator or 1.0
        is_ratio = row.quantity is not None and row.quantity.kind is QuantityKind.RATIO
        kind = SourceKind.LIMIT if row.kind is RowKind.MEASURED_LIMIT else SourceKind.MEASUREMENT
        name = str(row.quantity or row.name)
        members.append(Source(kind, name, sd / size if is_ratio else sd, row.quantity))
    if shared.any() and run is not None and run.shared_error:
        members.append(Source(SourceKind.SHARED, "shared error", run.shared_error))
    sds = np.array([u.sd for u in built.uncertain])
    members += [Source(SourceKind.PARAMETER, u.name, u.sd) for u in built.uncertain]
    free = len(region.point.z)
    design = np.vstack([region.point.slopes[task.soft] @ region.seen, region.seen[free:]])
    own_errors = covariance - np.outer(shared, shared)
    return Sources(tuple(members), own_errors, shared, sds, design)


def _solve(errors: Vector, right: Vector) -> Vector:
    """V^-1 times a matrix, told in sds so that units do not matter."""
    sd = np.sqrt(np.diag(errors))
    solved: Vector = np.linalg.solve(errors / np.outer(sd, sd), right / sd[:, None])
    return solved / sd[:, None]
