"""One run's closure made of the arrays of its batch."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from fractions import Fraction
from math import isfinite, isnan

import numpy as np
from numpy.typing import NDArray

from fluxnet.chemistry.formula import degree_of_reduction
from fluxnet.network.model import Direction, Species
from fluxnet.rates.kinds import RateKind
from fluxnet.studies.closure_batch import ClosureArrays
from fluxnet.studies.closure_passes import PreparedRun
from fluxnet.studies.closure_plan import ClosurePlan
from fluxnet.studies.closure_result import Balance, ClosedRate, ClosureTest, RunClosure
from fluxnet.studies.closure_rows import ClosureRow, ClosureRows
from fluxnet.studies.closure_words import verdict

__all__ = ["make_closure"]

Array = NDArray[np.float64]
_SLACK = 1e-9


def make_closure(
    plan: ClosurePlan, one: PreparedRun, sds: Array, arrays: ClosureArrays, place: int
) -> RunClosure:
    """The closure of run ``place`` of a batch; ``sds`` are those that it was closed with."""
    run, rows, values = one.run, one.rows, one.values
    contradictions = _contradictions(plan, values)
    test = _test(arrays, place, contradicts=bool(contradictions))
    balances = tuple(_balance(plan, arrays, place, k) for k in range(len(plan.balances)))
    return RunClosure(
        run=run.name,
        unit=run.unit,
        balances=balances,
        or_index=_or_index(rows, values),
        test=test,
        world=plan.world,
        rates=tuple(
            replace(rate, reconciled=None, reconciled_sd=None, z=None) if contradictions else rate
            for rate in _rates(plan, one, sds, arrays, place)
        ),
        reference=plan.reference,
        words=verdict(balances, test, contradictions),
        contradictions=contradictions,
        left_out=rows.left_out,
        notes=(*plan.notes, *(_not_used(name) for name in rows.left_out)),
        residual=float(arrays.residual[place]),
        extras=run.extras,
    )


def _test(arrays: ClosureArrays, place: int, *, contradicts: bool) -> ClosureTest:
    if contradicts:
        return ClosureTest(None, arrays.dof, None, None, False)
    if not arrays.dof:
        return ClosureTest(None, 0, None, None, None)
    return ClosureTest(
        float(arrays.h[place]), arrays.dof, float(arrays.p[place]), arrays.limit,
        bool(arrays.closes[place]),
    )  # fmt: skip


def _balance(plan: ClosurePlan, arrays: ClosureArrays, place: int, k: int) -> Balance:
    planned = plan.balances[k]
    gap, sd = float(arrays.gap[place, k]), float(arrays.gap_sd[place, k])
    return Balance(
        name=planned.name,
        unit=planned.unit,
        taken=float(arrays.taken[place, k]),
        released=float(arrays.released[place, k]),
        gap=gap,
        sd=sd,
        z=gap / sd if sd > 0 and not planned.missing else None,
        recovery=None if planned.missing else _per_cent(arrays.recovery[place, k]),
        recovery_sd=None if planned.missing else _per_cent(arrays.recovery_sd[place, k]),
        missing=planned.missing,
    )


def _per_cent(fraction: float) -> float | None:
    return None if isnan(fraction) else 100 * float(fraction)


def _rates(
    plan: ClosurePlan, one: PreparedRun, sds: Array, arrays: ClosureArrays, place: int
) -> tuple[ClosedRate, ...]:
    """All rates with a row, in the order of the table."""
    found: list[tuple[int, ClosedRate]] = []
    ratios = {ratio.row for ratio in plan.ratios}
    for j, row in enumerate(plan.measured):
        if j in ratios:
            continue
        found.append((row.order, ClosedRate(
            row.name, row.direction, row.unit, float(one.given[j]),
            _typed_sd(one, row.order, sds[j]),
            float(arrays.reconciled[place, j]), float(arrays.reconciled_sd[place, j]),
            _change(arrays.z[place, j]), _kind(plan, j),
        )))  # fmt: skip
    for j, (row, weights) in enumerate(
        zip(plan.unmeasured, plan.redundancy.weights, strict=True)
    ):
        fixed = weights is not None
        found.append((row.order, ClosedRate(
            row.name, row.direction, row.unit, None, None,
            float(arrays.calculated[place, j]) if fixed else None,
            float(arrays.calculated_sd[place, j]) if fixed else None,
            None,
            RateKind.CALCULABLE if fixed else RateKind.NOT_CALCULABLE,
        )))  # fmt: skip
    for k, ratio in enumerate(plan.ratios):
        if not ratio.is_told:
            continue
        found.append((ratio.order, _ratio(plan, k, one, sds, arrays, place)))
    return tuple(rate for _, rate in sorted(found, key=lambda pair: pair[0]))


def _ratio(
    plan: ClosurePlan, k: int, one: PreparedRun, sds: Array, arrays: ClosureArrays, place: int
) -> ClosedRate:
    """A ratio: that of the reconciled rates where both are known, else as it was measured."""
    ratio = plan.ratios[k]
    value = _number(arrays.ratio[place, k]) if plan.known[k] else None
    sd = _number(arrays.ratio_sd[place, k]) if value is not None else None
    if ratio.row is None:
        kind = RateKind.CALCULABLE if plan.known[k] else RateKind.NOT_CALCULABLE
        return ClosedRate(ratio.name, None, ratio.unit, None, None, value, sd, None, kind)
    measured, own_sd = float(one.given[ratio.row]), float(sds[ratio.row])
    z = _change(arrays.z[place, ratio.row])
    if z is not None and arrays.denominator[place, k] < 0:
        z = -z  # what is left of A - r B has the sign of B
    if value is None:
        value, sd = measured, own_sd
    return ClosedRate(
        ratio.name, None, ratio.unit, measured, own_sd, value, 0.0 if own_sd == 0 else sd, z,
        _kind(plan, ratio.row),
    )  # fmt: skip


def _typed_sd(one: PreparedRun, order: int, used: float) -> float:
    """The sd as typed: the one that was used may be a per cent of the reconciled value."""
    typed = one.run.rates[order].sd
    return float(used) if typed is None else typed


def _change(z: float) -> float | None:
    """The z of a rate, positive where it was raised: the batch has measured less reconciled."""
    number = _number(z)
    return None if number is None else -number + 0.0


def _kind(plan: ClosurePlan, j: int) -> RateKind:
    tested = plan.redundancy.balanceable[j]
    return RateKind.BALANCEABLE if tested else RateKind.NOT_BALANCEABLE


def _number(value: float) -> float | None:
    return float(value) if isfinite(value) else None


def _contradictions(plan: ClosurePlan, values: Array) -> tuple[tuple[str, ...], ...]:
    """The relations among exact values that these values break, by the rows in them.

    The relations are exact, the values decimals that went through units: a broken one is off
    by more than rounding of its terms.
    """
    broken: list[tuple[str, ...]] = []
    for relation in plan.redundancy.contradictions:
        terms = np.array([float(w) for w in relation]) * values
        if abs(terms.sum()) > _SLACK * np.abs(terms).sum():
            broken.append(tuple(
                _shown(row) for row, w in zip(plan.measured, relation, strict=True) if w
            ))  # fmt: skip
    return tuple(broken)


def _not_used(name: str) -> str:
    if name == "mu":
        return "mu is not used: in this unit, or without a biomass, it is no rate of a species"
    return f"{name} is not used: a closure knows rates and ratios of two rates, and no reactions"


def _shown(row: ClosureRow) -> str:
    return row.name if row.direction is None else f"{row.name} {row.direction.value}"


def _or_index(rows: ClosureRows, values: Array) -> float | None:
    """The sum of positive over that of negative oxidation values (4 C - gamma)/2 of products.

    None where oxygen or another acceptor has a row, a product is not measured, an element has
    no reference, or no product is more reduced than carbohydrate.
    """
    species = {s.name: s for s in rows.species}
    above, below = 0.0, 0.0
    for row in (*rows.measured, *rows.unmeasured):
        if row.species is not None and _is_acceptor(species[row.species], row.direction):
            return None
    if any(row.direction is not Direction.IN for row in rows.unmeasured):
        return None
    counted: set[str] = set()
    for row, value in zip(rows.measured, values, strict=True):
        if row.direction is Direction.IN or row.species is None or row.species in counted:
            continue
        counted.add(row.species)
        oxidation = _oxidation_value(species[row.species])
        if oxidation is None:
            return None
        amount = float(row.released * oxidation) * float(value)
        above, below = above + max(amount, 0.0), below - min(amount, 0.0)
    return above / below if below else None


def _oxidation_value(species: Species) -> Fraction | None:
    gamma = None if species.formula is None else degree_of_reduction(species.formula)
    if gamma is None or species.formula is None:
        return None
    return (4 * species.formula.count("C") - gamma) / 2


def _is_acceptor(species: Species, direction: Direction | None) -> bool:
    """Whether it is taken up to take electrons: without carbon, with oxygen, gamma 0 or less.

    Oxygen, nitrate, nitrite, nitrous oxide, sulfate; not phosphate or water, which take none.
    """
    formula = species.formula
    if direction is not Direction.IN or formula is None or formula.count("C"):
        return False
    if not formula.count("O") or formula.count("P"):
        return False
    others: Sequence[str] = [e for e in formula.elements if e not in ("H", "O")]
    gamma = degree_of_reduction(formula)
    return gamma is not None and (gamma < 0 or (bool(others) and gamma == 0))
