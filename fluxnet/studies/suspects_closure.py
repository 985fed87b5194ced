"""The suspects of closures: errors of measured rates, and species that have no row.

The suspects of all runs with the same rows are weighed together. The sds are those that the
closure used: where they are relative to the reconciled rates, h left is that of a closure
without the rate, but for what that one would make of its sds.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction
from math import inf

import numpy as np
from numpy.typing import NDArray

from fluxnet.exact.linear import kernel
from fluxnet.ground.record import record
from fluxnet.network.contents import ELECTRONS
from fluxnet.network.model import Basis, Network, QuantityKind, Role, Species
from fluxnet.studies.closure_batch import ClosureArrays
from fluxnet.studies.closure_errors import Errors, Independent
from fluxnet.studies.closure_passes import PreparedRuns
from fluxnet.studies.closure_plan import BalanceSystem, ClosurePlan
from fluxnet.studies.closure_rows import ClosureRow
from fluxnet.studies.suspect_plan import Hypothesis, SuspectPlan, plan_suspects
from fluxnet.studies.suspect_readings import with_readings
from fluxnet.studies.suspect_result import SuspectKind, Suspects
from fluxnet.studies.suspect_species import find_candidates
from fluxnet.studies.suspects import (
    JudgedSuspects,
    MeasuredValues,
    judge_suspects,
    tell_suspects,
)

__all__ = ["SoughtSuspects", "plan_closure_suspects", "seek_suspects"]

Array = NDArray[np.float64]

_EITHER_WAY = ("CO2", "hydrogen", "bicarbonate")
"""Gases that cells release or take up; other rates keep their direction."""


@record
class SoughtSuspects:
    """The suspects of one run of several that were weighed together.

    ``species`` are those of the rates by their names, ``columns`` what the run carries.
    """

    judged: JudgedSuspects
    place: int
    species: Mapping[str, Species]
    columns: Mapping[str, str]

    def tell(self) -> Suspects:
        """The suspects as records."""
        told = tell_suspects(self.judged, self.place)
        return with_readings(told, self.species, self.columns)


def seek_suspects(
    plan: ClosurePlan,
    batch: PreparedRuns,
    arrays: ClosureArrays,
    wanted: Sequence[int],
    network: Network | None,
) -> dict[int, SoughtSuspects]:
    """Weigh the suspects of some runs of a batch; nothing where no rate is tested.

    Parameters
    ----------
    wanted
        The places of the runs in the batch.
    """
    if not wanted or not arrays.dof:
        return {}
    suspects = plan_closure_suspects(plan, batch.runs[0].basis, batch.runs[0].unit, network)
    if not suspects.hypotheses:
        return {}
    some = list(wanted)
    factors = np.ones((len(some), len(plan.measured)))
    for k, ratio in enumerate(plan.ratios):
        if ratio.row is not None:
            below = arrays.denominator[some, k]
            # a ratio to nothing has no other value that it could have
            factors[:, ratio.row] = np.where(below != 0, 1 / np.where(below != 0, below, 1.0), 0.0)
    judged = judge_suspects(
        suspects,
        MeasuredValues(
            batch.values[some], *_covariances(arrays.errors, some), batch.given[some], factors
        ),
    )
    known = {s.name: s for s in batch.rows.species}
    species = {row.name: known[row.species] for row in plan.measured if row.species in known}
    return {
        place: SoughtSuspects(judged, k, species, dict(batch.runs[place].extras))
        for k, place in enumerate(some)
    }


def plan_closure_suspects(
    plan: ClosurePlan, basis: Basis, unit: str, network: Network | None
) -> SuspectPlan:
    """The suspects of runs with the same rows, and the relations that test them."""
    system = plan.system
    rates = _rates(plan, unit, network, basis)
    species: list[Hypothesis] = []
    for candidate in find_candidates(system.taken, network):
        released = system.of_formula(candidate.formula)
        if released is None or not any(released):
            continue
        per_unit = Fraction(1)
        if basis is Basis.CARBON:
            per_unit = candidate.formula.count("C") or Fraction(1)
        # what is released and not counted is missing from the sum
        species.append(Hypothesis(
            SuspectKind.UNMEASURED_SPECIES, candidate.name, unit,
            tuple(-x / per_unit for x in released),
            positive=candidate.released, negative=candidate.taken_up,
            is_declared=candidate.is_declared,
        ))  # fmt: skip
    probes = _probes(system)
    effects = [*(h.effect for h in species), *probes]
    rows = [
        [*row, *(effect[k] for effect in effects)] for k, row in enumerate(system.measured)
    ]
    unseen = kernel([list(c) for c in zip(*system.unmeasured, strict=True)], len(rows))
    equations = [_combined(weights, rows) for weights in unseen]
    return plan_suspects(
        equations, plan.matrices.exact.tolist(), [*rates, *species], probes=len(probes),
        with_model=network is not None,
    )  # fmt: skip


def _rates(
    plan: ClosurePlan, unit: str, network: Network | None, basis: Basis
) -> list[Hypothesis]:
    """An error of each measured rate that the others test."""
    ratios = {ratio.row for ratio in plan.ratios}
    found: list[Hypothesis] = []
    for j, row in enumerate(plan.measured):
        if plan.matrices.exact[j] or not plan.matrices.balanceable[j] or row.spread:
            continue  # an uncertain ash content is an error of mu
        low, high = (0.0, inf) if j in ratios else _bounds(row, network, basis)
        found.append(Hypothesis(
            SuspectKind.MEASURED_RATE, row.name, row.unit, row=j, direction=row.direction,
            low=low, high=high,
        ))  # fmt: skip
    return found


def _bounds(row: ClosureRow, network: Network | None, basis: Basis) -> tuple[float, float]:
    """Where a true rate may lie: not reversed, and within the limits of the model."""
    species = network.find_species(row.species or "") if network is not None else None
    is_free = row.entry in _EITHER_WAY
    if species is not None and species.role.is_boundary:
        is_free = species.role is Role.EXCHANGE
    low, high = (-inf if is_free else 0.0), inf
    if network is None or network.basis is not basis:
        return low, high
    for limit in network.limits:
        quantity = limit.quantity
        is_mu = quantity.kind is QuantityKind.MU and row.name == "mu"
        is_own = quantity.kind is QuantityKind.RATE and quantity.name == row.name
        if limit.is_measured or not (is_mu or is_own):
            continue
        ends = [None if x is None else float(x) for x in (limit.low, limit.high)]
        if is_own and (quantity.direction or row.direction) is not row.direction:
            ends = [None if x is None else -x for x in reversed(ends)]
        low = max(low, -inf if ends[0] is None else ends[0])
        high = min(high, inf if ends[1] is None else ends[1])
    return low, high


def _probes(system: BalanceSystem) -> list[tuple[Fraction, ...]]:
    """What something released that has one carbon, or one electron, takes from the balances.

    Nothing where these balances are not there, or are mixed with others.
    """
    names = [f.name for f in system.functionals]
    if any(len(f.weights) > 1 for f in system.functionals):
        return []
    if not {"C", ELECTRONS} <= set(names):
        return []
    return [
        tuple(
            Fraction(-1 if k < len(names) and names[k] == name else 0)
            for k in range(len(system.measured))
        )
        for name in ("C", ELECTRONS)
    ]


def _combined(
    weights: Sequence[Fraction], rows: Sequence[Sequence[Fraction]]
) -> tuple[Fraction, ...]:
    return tuple(
        sum((w * x for w, x in zip(weights, column, strict=True) if w and x), Fraction(0))
        for column in zip(*rows, strict=True)
    )


def _covariances(errors: Errors, some: Sequence[int]) -> tuple[Array, Array]:
    """The errors of some runs as covariances, and the roots of these."""
    variances = errors.variances[list(some)]
    sds = np.sqrt(variances)
    whole = np.eye(variances.shape[1])
    if isinstance(errors, Independent):
        return variances[:, :, None] * whole, sds[:, :, None] * whole
    covariances = errors.matrix[list(some)]
    # exact values have no error; beside them correlations keep the matrix positive
    divisor = np.where(sds > 0, sds, 1.0)
    correlations = covariances / (divisor[:, :, None] * divisor[:, None, :])
    exact = (sds == 0)[:, :, None] * whole
    return covariances, np.linalg.cholesky(correlations + exact) * sds[:, :, None]
