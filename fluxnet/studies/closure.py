"""Do carbon, nitrogen and electrons close, and do the measured rates agree with one another?"""

from __future__ import annotations

from collections.abc import Collection, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.diagnostic import Diagnostic, in_order
from fluxnet.ground.names import Name
from fluxnet.network.model import Network
from fluxnet.rates.covariance import covariance_at, run_covariance
from fluxnet.rates.measured import RatesTable, Run
from fluxnet.studies.closure_batch import ClosureArrays, NoVarianceError, close_many
from fluxnet.studies.closure_make import make_closure
from fluxnet.studies.closure_plan import ClosurePlan, plan_closure
from fluxnet.studies.closure_result import Closure, RunClosure
from fluxnet.studies.closure_rows import ClosureRows, collect_rows
from fluxnet.studies.closure_world import NitrogenSource, find_source, identity

__all__ = ["close_rates"]

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class _Prepared:
    """A run with its rows, values and covariance over the measured rows."""

    run: Run
    rows: ClosureRows
    values: Array
    covariance: Array

    @property
    def exact(self) -> tuple[bool, ...]:
        return tuple(bool(v == 0) for v in np.diag(self.covariance))

    @property
    def is_independent(self) -> bool:
        return not np.any(self.covariance - np.diag(np.diag(self.covariance)))

    @property
    def signature(self) -> tuple[object, ...]:
        """What runs of one batch have in common."""
        return self.rows, self.exact, self.run.unit, self.is_independent


def close_rates(
    table: RatesTable,
    *,
    network: Network | None = None,
    nitrogen: str | None = None,
    without: Collection[str] = (),
    runs: Collection[str] | None = None,
) -> Closure:
    """Balance, test and reconcile the runs of a table.

    Exchanged are the species with a row (a blank value: exchanged, but not measured), and
    water, protons, phosphate, sulfate and the nitrogen source. Runs with the same rows are
    closed as one batch.

    Parameters
    ----------
    table
        Its runs; see :func:`fluxnet.tables.rates_table.read_rates`.
    network
        Where formulas and products come from; else the table's species and the catalogue.
    nitrogen
        The nitrogen source; None: the one that the table names, else ammonia.
    without
        Species (or ``mu``) whose measured values are left aside, as if not measured.
    runs
        Names of the runs to close; None: all.

    Examples
    --------
    >>> from fluxnet.tables.rates_table import read_rates_text
    >>> table = read_rates_text('''run,species,direction,rate,sd,unit
    ... A,glucose,in,10.0,0.2,mmol/g/h
    ... A,ethanol,out,18.6,0.4,mmol/g/h
    ... A,CO2,out,19.6,0.4,mmol/g/h
    ... ''').table
    >>> run = close_rates(table).runs[0]
    >>> round(run.test.h, 6), run.test.dof, round(run.find_rate("ethanol").reconciled, 6)
    (6.5, 2, 19.4)
    """
    faults: list[Diagnostic] = []
    source = _source(nitrogen or table.nitrogen or "ammonia", table, network, faults)
    chosen = _chosen(table, runs, faults)
    faults.extend(_unknown_names(table, chosen, without))
    if source is None or faults:
        return Closure((), in_order(faults))
    prepared: list[_Prepared] = []
    for run in chosen:
        one = _prepare(run, collect_rows(run, table, network, without))
        if not len(one.values):
            faults.append(Diagnostic(
                Name.NO_MEASURED_RATE, f"run {run.name} holds no measured rate to close", run.span
            ))  # fmt: skip
        else:
            prepared.append(one)
    closed: dict[int, RunClosure] = {}
    for places in _batches(prepared):
        batch = [prepared[i] for i in places]
        plan = plan_closure(batch[0].rows, batch[0].exact, batch[0].run.unit, source, network)
        for place, answer in zip(places, _close_batch(plan, batch), strict=True):
            if isinstance(answer, Diagnostic):
                faults.append(answer)
            else:
                closed[place] = answer
    return Closure(tuple(closed[i] for i in sorted(closed)), in_order(faults))


def _prepare(run: Run, rows: ClosureRows) -> _Prepared:
    values = np.array([float(run.measured[r.place or 0].value or 0.0) for r in rows.measured])
    return _Prepared(run, rows, values, _covariance(rows, values, run_covariance(run)))


def _covariance(rows: ClosureRows, values: Array, whole: Array) -> Array:
    """The covariance of the rows used, with what an uncertain ash content adds."""
    places = [r.place or 0 for r in rows.measured]
    spread = np.array([r.spread for r in rows.measured]) * values
    return np.asarray(whole[np.ix_(places, places)] + np.outer(spread, spread))


def _batches(prepared: Sequence[_Prepared]) -> list[list[int]]:
    """Indices of the runs that one batch can close together."""
    batches: dict[tuple[object, ...], list[int]] = {}
    for i, one in enumerate(prepared):
        batches.setdefault(one.signature, []).append(i)
    return list(batches.values())


def _close_batch(plan: ClosurePlan, batch: list[_Prepared]) -> list[RunClosure | Diagnostic]:
    """Close runs with the same rows; where one of them cannot be, each by itself."""
    try:
        covariances = np.array([one.covariance for one in batch])
        arrays = _close(plan, batch, covariances)
        if any(_is_relative(one.run) for one in batch):
            covariances = np.array(
                [_at_reconciled(one, arrays.reconciled[i]) for i, one in enumerate(batch)]
            )
            arrays = _close(plan, batch, covariances)
    except NoVarianceError as fault:
        if len(batch) > 1:
            return [answer for one in batch for answer in _close_batch(plan, [one])]
        run = batch[0].run
        return [Diagnostic(Name.BAD_COVARIANCE, f"run {run.name}: {fault}", run.span)]
    sds = np.sqrt(np.einsum("nii->ni", covariances))
    return [
        make_closure(plan, one.run, one.rows, one.values, sds[i], arrays, i)
        for i, one in enumerate(batch)
    ]


def _close(plan: ClosurePlan, batch: Sequence[_Prepared], covariances: Array) -> ClosureArrays:
    values = np.array([one.values for one in batch])
    if batch[0].is_independent:
        return close_many(plan.matrices, values, np.sqrt(np.einsum("nii->ni", covariances)))
    return close_many(plan.matrices, values, covariances=covariances)


def _is_relative(run: Run) -> bool:
    return bool(run.shared_error) or any(r.relative is not None for r in run.measured)


def _at_reconciled(one: _Prepared, reconciled: Array) -> Array:
    """The covariance with relative errors taken of the reconciled values.

    A variance that would vanish with its value is kept: only a typed 0 is exact.
    """
    values = np.array([float(r.value or 0.0) for r in one.run.measured])
    for row, value in zip(one.rows.measured, reconciled, strict=True):
        values[row.place or 0] = value
    moved = _covariance(one.rows, reconciled, covariance_at(one.run, values))
    vanished = np.diag(moved) <= 1e-12 * np.diag(one.covariance)
    return one.covariance if (vanished & (np.diag(one.covariance) > 0)).any() else moved


def _source(
    name: str, table: RatesTable, network: Network | None, faults: list[Diagnostic]
) -> NitrogenSource | None:
    found = find_source(name, table, network)
    if isinstance(found, NitrogenSource):
        return found
    near = ", ".join(found)
    faults.append(Diagnostic(
        Name.UNKNOWN_QUANTITY,
        f"the nitrogen source {name} is no compound with nitrogen that is known here",
        mend=f"write {near}" if near else "write ammonia, N2, nitrate, urea or a species' name",
    ))  # fmt: skip
    return None


def _chosen(
    table: RatesTable, runs: Collection[str] | None, faults: list[Diagnostic]
) -> tuple[Run, ...]:
    names = [run.name for run in table.runs]
    for name in runs or ():
        if name not in names:
            faults.append(Diagnostic(
                Name.UNKNOWN_RUN, f"the table has no run {name}",
                mend=f"its runs are {', '.join(names)}",
            ))  # fmt: skip
    return tuple(run for run in table.runs if runs is None or run.name in runs)


def _unknown_names(
    table: RatesTable, runs: Sequence[Run], without: Collection[str]
) -> list[Diagnostic]:
    """A fault for each name to be left aside that no run has."""
    known = {
        identity(q.name) if q.name else str(q)
        for run in runs
        for q in (rate.quantity for rate in run.rates)
    }
    known |= {identity(s.name, s.entry) for s in table.species}
    return [
        Diagnostic(
            Name.UNKNOWN_QUANTITY, f"no run has a rate of {name} to leave aside",
            mend=f"rates are given of {', '.join(sorted(known))}",
        )
        for name in without
        if identity(name) not in known and name not in known
    ]  # fmt: skip
