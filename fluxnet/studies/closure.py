"""Do carbon, nitrogen and electrons close, and do the measured rates agree with one another?"""

from __future__ import annotations

from collections.abc import Collection, Sequence

from fluxnet.ground.diagnostic import Diagnostic, in_order
from fluxnet.ground.names import Name
from fluxnet.network.model import Network
from fluxnet.rates.measured import RatesTable, Run
from fluxnet.studies.closure_batch import NoVarianceError
from fluxnet.studies.closure_collect import collect_rows
from fluxnet.studies.closure_make import make_closure
from fluxnet.studies.closure_passes import PreparedRun, close_prepared, prepare_run
from fluxnet.studies.closure_plan import ClosurePlan, plan_closure
from fluxnet.studies.closure_result import Closure, RunClosure
from fluxnet.studies.closure_without import leave_rates_out
from fluxnet.studies.closure_world import NitrogenSource, find_source

__all__ = ["close_rates"]


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
        Species, ``mu`` or ratios whose rows are left out, as if they were not in the table: what
        has no row left counts as not exchanged. A species takes its ratios with it.
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
    kept, unknown = leave_rates_out(table, chosen, without, network)
    faults.extend(unknown)
    if source is None or faults:
        return Closure((), in_order(faults))
    prepared: list[PreparedRun] = []
    for run, aside in kept:
        one = prepare_run(run, collect_rows(run, table, network, aside))
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


def _batches(prepared: Sequence[PreparedRun]) -> list[list[int]]:
    """Indices of the runs that one batch can close together."""
    batches: dict[tuple[object, ...], list[int]] = {}
    for i, one in enumerate(prepared):
        batches.setdefault(one.signature, []).append(i)
    return list(batches.values())


def _close_batch(plan: ClosurePlan, batch: list[PreparedRun]) -> list[RunClosure | Diagnostic]:
    """Close runs with the same rows; where one of them cannot be, each by itself."""
    try:
        arrays, sds = close_prepared(plan, batch)
    except NoVarianceError as fault:
        if len(batch) > 1:
            return [answer for one in batch for answer in _close_batch(plan, [one])]
        run = batch[0].run
        return [Diagnostic(Name.BAD_COVARIANCE, f"run {run.name}: {fault}", run.span)]
    return [make_closure(plan, one, sds[i], arrays, i) for i, one in enumerate(batch)]


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
