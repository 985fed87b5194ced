"""The closures of runs made of the arrays of their batch."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from fractions import Fraction
from math import isfinite
from typing import Any

import numpy as np
from numpy.typing import NDArray

from fluxnet.chemistry.formula import degree_of_reduction
from fluxnet.network.model import Direction, Species
from fluxnet.rates.kinds import RateKind
from fluxnet.studies.closure_batch import ClosureArrays
from fluxnet.studies.closure_passes import PreparedRuns
from fluxnet.studies.closure_plan import ClosurePlan
from fluxnet.studies.closure_result import Balance, ClosedRate, ClosureTest, RunClosure
from fluxnet.studies.closure_rows import ClosureRow, ClosureRows
from fluxnet.studies.closure_words import verdict
from fluxnet.studies.units import unusual_words

__all__ = ["make_closures"]

Array = NDArray[np.float64]
_SLACK = 1e-9


def make_closures(
    plan: ClosurePlan, batch: PreparedRuns, arrays: ClosureArrays
) -> list[RunClosure]:
    """The closures of all runs of a batch."""
    told = _Told(plan, batch, arrays)
    return [_closure(told, place) for place in range(len(batch.runs))]


class _Told:
    """The arrays of a batch as plain numbers, None where one is not defined.

    Taken out of their arrays all at once: one by one this takes longer than closing the runs.
    """

    def __init__(self, plan: ClosurePlan, batch: PreparedRuns, arrays: ClosureArrays) -> None:
        self.plan, self.batch, self.dof, self.limit = plan, batch, arrays.dof, arrays.limit
        self.h, self.p = arrays.h.tolist(), arrays.p.tolist()
        self.closes, self.residual = arrays.closes.tolist(), arrays.residual.tolist()
        self.rates = _rates(plan, batch, arrays)
        self.balances = _balances(plan, arrays)
        self.or_index = _or_indices(batch)
        self.notes = (*plan.notes, *(_not_used(name) for name in batch.rows.left_out))


def _closure(told: _Told, place: int) -> RunClosure:
    plan, run = told.plan, told.batch.runs[place]
    contradictions = _contradictions(plan, told.batch.values[place])
    test = _test(told, place, contradicts=bool(contradictions))
    balances = tuple(Balance(*cells) for cells in told.balances[place])
    rates = tuple(ClosedRate(*cells) for cells in told.rates[place])
    if contradictions:
        rates = tuple(replace(r, reconciled=None, reconciled_sd=None, z=None) for r in rates)
    unusual = unusual_words(
        ((f"{r.species} {r.direction.value}", r.measured) for r in rates if r.direction), run.unit
    ).removesuffix(".")
    return RunClosure(
        run=run.name,
        unit=run.unit,
        balances=balances,
        or_index=told.or_index[place],
        test=test,
        world=plan.world,
        rates=rates,
        reference=plan.reference,
        words=verdict(
            balances, test, contradictions, exact=bool(plan.redundancy.contradictions)
        ),
        contradictions=contradictions,
        left_out=told.batch.rows.left_out,
        notes=(*told.notes, *([unusual] if unusual else ())),
        residual=told.residual[place],
        extras=run.extras,
    )


def _test(told: _Told, place: int, *, contradicts: bool) -> ClosureTest:
    if contradicts:
        return ClosureTest(None, told.dof, None, None, False)
    if not told.dof:
        return ClosureTest(None, 0, None, None, None)
    return ClosureTest(
        told.h[place], told.dof, told.p[place], told.limit, told.closes[place]
    )  # fmt: skip


def _balances(plan: ClosurePlan, arrays: ClosureArrays) -> list[tuple[tuple[Any, ...], ...]]:
    """What the balances of each run hold, in the order of the fields of a balance."""
    told = []
    with np.errstate(divide="ignore", invalid="ignore"):
        z = arrays.gap / arrays.gap_sd
    for k, planned in enumerate(plan.balances):
        hidden = bool(planned.missing)
        numbers = (
            *(a[:, k].tolist() for a in (arrays.taken, arrays.released)),
            *(a[:, k].tolist() for a in (arrays.gap, arrays.gap_sd)),
            _numbers(z[:, k], hidden=hidden),
            _numbers(100 * arrays.recovery[:, k], hidden=hidden),
            _numbers(100 * arrays.recovery_sd[:, k], hidden=hidden),
        )
        told.append([
            (planned.name, planned.unit, *of_run, planned.missing)
            for of_run in zip(*numbers, strict=True)
        ])  # fmt: skip
    return list(zip(*told, strict=True)) if told else [() for _ in arrays.h]


def _rates(
    plan: ClosurePlan, batch: PreparedRuns, arrays: ClosureArrays
) -> list[tuple[tuple[Any, ...], ...]]:
    """All rates with a row, in the order of the table: what the fields of each hold."""
    found: list[tuple[int, list[tuple[Any, ...]]]] = []
    typed = _typed_sds(batch)
    none: list[Any] = [None] * len(batch.runs)
    ratios = {ratio.row for ratio in plan.ratios}
    changes = [_numbers(0.0 - arrays.z[:, j]) for j in range(len(plan.measured))]
    for j, row in enumerate(plan.measured):
        if j in ratios:
            continue
        numbers = (
            batch.given[:, j].tolist(), typed[:, j].tolist(), arrays.reconciled[:, j].tolist(),
            arrays.reconciled_sd[:, j].tolist(), changes[j],
        )  # fmt: skip
        found.append((row.order, _of_runs(row, _kind(plan, j), numbers)))
    for j, (row, weights) in enumerate(
        zip(plan.unmeasured, plan.redundancy.weights, strict=True)
    ):
        kind, value, sd = RateKind.NOT_CALCULABLE, none, none
        if weights is not None:
            kind = RateKind.CALCULABLE
            value, sd = arrays.calculated[:, j].tolist(), arrays.calculated_sd[:, j].tolist()
        found.append((row.order, _of_runs(row, kind, (none, none, value, sd, none))))
    for k, ratio in enumerate(plan.ratios):
        if ratio.is_told:
            found.append((ratio.order, _ratio(plan, k, batch, arrays, typed, changes)))
    found.sort(key=lambda pair: pair[0])
    return list(zip(*(rates for _, rates in found), strict=True))


def _of_runs(
    row: ClosureRow, kind: RateKind, numbers: tuple[list[Any], ...]
) -> list[tuple[Any, ...]]:
    head = (row.name, row.direction, row.unit)
    return [(*head, *of_run, kind) for of_run in zip(*numbers, strict=True)]


def _ratio(
    plan: ClosurePlan,
    k: int,
    batch: PreparedRuns,
    arrays: ClosureArrays,
    typed: Array,
    changes: list[list[float | None]],
) -> list[tuple[Any, ...]]:
    """A ratio: that of the reconciled rates where both are known, else as it was measured."""
    ratio = plan.ratios[k]
    none: list[Any] = [None] * len(batch.runs)
    values = _numbers(arrays.ratio[:, k], hidden=not plan.known[k])
    sds = _numbers(arrays.ratio_sd[:, k], hidden=not plan.known[k])
    head = (ratio.name, None, ratio.unit)
    if ratio.row is None:
        kind = RateKind.CALCULABLE if plan.known[k] else RateKind.NOT_CALCULABLE
        return [
            (*head, None, None, value, None if value is None else sd, None, kind)
            for value, sd in zip(values, sds, strict=True)
        ]
    told = []
    below = arrays.denominator[:, k].tolist() if plan.known[k] else none
    kind = _kind(plan, ratio.row)
    for place, (value, sd, z) in enumerate(zip(values, sds, changes[ratio.row], strict=True)):
        measured, own_sd = float(batch.given[place, ratio.row]), float(typed[place, ratio.row])
        if z is not None and (below[place] or 0.0) < 0:
            z = -z  # what is left of A - r B has the sign of B
        if value is None:
            value, sd = measured, own_sd
        told.append((*head, measured, own_sd, value, 0.0 if own_sd == 0 else sd, z, kind))
    return told


def _typed_sds(batch: PreparedRuns) -> Array:
    """The sds as typed: those that were used may be a per cent of the reconciled value."""
    return np.array([
        [run.rates[row.order].sd or 0.0 for row in batch.rows.measured] for run in batch.runs
    ])  # fmt: skip


def _numbers(array: Array, *, hidden: bool = False) -> list[float | None]:
    """Plain numbers, None where there is none."""
    if hidden:
        return [None] * len(array)
    return [number if isfinite(number) else None for number in array.tolist()]


def _kind(plan: ClosurePlan, j: int) -> RateKind:
    tested = plan.redundancy.balanceable[j]
    return RateKind.BALANCEABLE if tested else RateKind.NOT_BALANCEABLE


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


def _or_indices(batch: PreparedRuns) -> list[float | None]:
    """The sum of positive over that of negative oxidation values (4 C - gamma)/2 of products.

    None where oxygen or another acceptor has a row, a product is not measured, an element has
    no reference, or no product is more reduced than carbohydrate.
    """
    weights = _oxidation_weights(batch.rows)
    if weights is None:
        return [None] * len(batch.runs)
    amounts = batch.values * np.array([float(w) for w in weights])
    above, below = np.maximum(amounts, 0.0).sum(axis=1), -np.minimum(amounts, 0.0).sum(axis=1)
    return [a / b if b else None for a, b in zip(above.tolist(), below.tolist(), strict=True)]


def _oxidation_weights(rows: ClosureRows) -> list[Fraction] | None:
    """The oxidation value that a unit of each measured row releases; None without an index."""
    species = {s.name: s for s in rows.species}
    for row in (*rows.measured, *rows.unmeasured):
        if row.species is not None and _is_acceptor(species[row.species], row.direction):
            return None
    if any(row.direction is not Direction.IN for row in rows.unmeasured):
        return None
    weights: list[Fraction] = []
    counted: set[str] = set()
    for row in rows.measured:
        if row.direction is Direction.IN or row.species is None or row.species in counted:
            weights.append(Fraction(0))
            continue
        counted.add(row.species)
        oxidation = _oxidation_value(species[row.species])
        if oxidation is None:
            return None
        weights.append(row.released * oxidation)
    return weights


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
