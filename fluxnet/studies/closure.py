"""Do carbon, nitrogen and electrons close, and do the measured rates agree with one another?"""

from __future__ import annotations

from collections.abc import Collection, Iterator, Sequence
from dataclasses import replace

from fluxnet.ground.diagnostic import Diagnostic, in_order
from fluxnet.ground.names import Name
from fluxnet.ground.source import NOWHERE, Span
from fluxnet.network.model import Network, QuantityKind
from fluxnet.rates.measured import RatesTable, Run
from fluxnet.solving.suspects import TooFarApartError
from fluxnet.studies.closure_batch import ClosureArrays, NoVarianceError
from fluxnet.studies.closure_collect import collect_rows
from fluxnet.studies.closure_make import make_closures
from fluxnet.studies.closure_passes import PreparedRuns, close_prepared, prepare_runs
from fluxnet.studies.closure_plan import ClosurePlan, plan_closure
from fluxnet.studies.closure_result import Closure, RunClosure
from fluxnet.studies.closure_without import leave_rates_out
from fluxnet.studies.closure_world import NitrogenSource, find_source

__all__ = ["close_in_parts", "close_rates", "join_parts"]

_PART = 2_000
"""Runs that are closed at once: enough for arrays to pay, few enough to tell of in between."""


_NOT_WEIGHED = "its sds lie too far apart to weigh what could be wrong"


def close_rates(
    table: RatesTable,
    *,
    network: Network | None = None,
    nitrogen: str | None = None,
    without: Collection[str] = (),
    runs: Collection[str] | None = None,
    suspects: bool | None = None,
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
    suspects
        Whether to look for what could be wrong in every run; None: in those that do not close,
        where the table has no more than 2,000 runs.

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
    parts = close_in_parts(
        table, network=network, nitrogen=nitrogen, without=without, runs=runs, suspects=suspects
    )
    return join_parts(table, tuple(parts))


def close_in_parts(
    table: RatesTable,
    *,
    network: Network | None = None,
    nitrogen: str | None = None,
    without: Collection[str] = (),
    runs: Collection[str] | None = None,
    suspects: bool | None = None,
) -> Iterator[Closure]:
    """As :func:`close_rates`, some runs at a time: whoever stops keeps those that are done.

    Runs with the same rows come together; :func:`join_parts` puts them into the table's order.
    """
    faults: list[Diagnostic] = []
    source = _source(nitrogen, table, network, faults)
    chosen = _chosen(table, runs, faults)
    kept, unknown = leave_rates_out(table, chosen, without, network)
    faults.extend(unknown)
    if source is None or faults:
        yield Closure((), in_order(faults))
        return
    if suspects is None and len(kept) > _PART:
        suspects = False
    for members, aside in _alike(kept):
        rows = collect_rows(members[0], table, network, aside)
        if not rows.measured:
            yield Closure((), tuple(
                Diagnostic(
                    Name.NO_MEASURED_RATE, f"run {run.name} holds no measured rate to close",
                    run.span,
                )
                for run in members
            ))  # fmt: skip
            continue
        plan: ClosurePlan | None = None
        for start in range(0, len(members), _PART):
            batch = prepare_runs(members[start : start + _PART], rows)
            plan = plan or plan_closure(rows, batch.exact, members[0].unit, source, network)
            yield _close_batch(plan, batch, network, suspects)


def join_parts(table: RatesTable, parts: Sequence[Closure]) -> Closure:
    """Parts of a closure as one, its runs in the order of the table."""
    place = {run.name: i for i, run in enumerate(table.runs)}
    return Closure(
        tuple(sorted((r for part in parts for r in part.runs), key=lambda r: place[r.run])),
        in_order(d for part in parts for d in part.diagnostics),
    )


def _alike(
    kept: Sequence[tuple[Run, tuple[str, ...]]],
) -> list[tuple[list[Run], tuple[str, ...]]]:
    """Runs with the same rows together: quantities, units, what is exact, values of ratios."""
    groups: dict[tuple[object, ...], tuple[list[Run], tuple[str, ...]]] = {}
    for run, aside in kept:
        rows = tuple(
            (
                rate.quantity,
                rate.value is None,
                not rate.sd,
                rate.value if rate.quantity.kind is QuantityKind.RATIO else None,
            )
            for rate in run.rates
        )
        key = (rows, run.basis, run.unit, aside, run.covariance is None)
        groups.setdefault(key, ([], aside))[0].append(run)
    return list(groups.values())


def _close_batch(
    plan: ClosurePlan, batch: PreparedRuns, network: Network | None, suspects: bool | None
) -> Closure:
    """Close runs with the same rows; where one of them cannot be, each by itself."""
    try:
        arrays = close_prepared(plan, batch)
        closed = make_closures(plan, batch, arrays)
        wanted = [
            i for i, run in enumerate(closed)
            if run.test.h is not None
            and (suspects or (suspects is None and run.test.closes is False))
        ]  # fmt: skip
        if wanted:
            _add_suspects(closed, plan, batch, arrays, wanted, network)
        return Closure(tuple(closed))
    except NoVarianceError as fault:
        if len(batch.runs) > 1:
            alone = [_close_batch(plan, one, network, suspects) for one in batch.each()]
            return Closure(
                tuple(run for part in alone for run in part.runs),
                tuple(d for part in alone for d in part.diagnostics),
            )
        run = batch.runs[0]
        fault_of_run = Diagnostic(
            Name.BAD_COVARIANCE, f"run {run.name}: {fault}", run.span,
            mend="give each rate an error of its own beside those that it shares",
        )  # fmt: skip
        return Closure((), (fault_of_run,))


def _add_suspects(
    closed: list[RunClosure],
    plan: ClosurePlan,
    batch: PreparedRuns,
    arrays: ClosureArrays,
    wanted: Sequence[int],
    network: Network | None,
) -> None:
    """Add to runs what could be wrong; to those whose sds do not allow it, that they do not."""
    from fluxnet.studies.suspects_closure import seek_suspects

    try:
        found = seek_suspects(plan, batch, arrays, wanted, network)
    except TooFarApartError:
        if len(wanted) > 1:
            for place in wanted:
                _add_suspects(closed, plan, batch, arrays, (place,), network)
            return
        run = closed[wanted[0]]
        closed[wanted[0]] = replace(run, notes=(*run.notes, _NOT_WEIGHED))
        return
    for place, sought in found.items():
        closed[place] = replace(closed[place], sought=sought)


def _source(
    option: str | None, table: RatesTable, network: Network | None, faults: list[Diagnostic]
) -> NitrogenSource | None:
    name = option or table.nitrogen or "ammonia"
    found = find_source(name, table, network)
    if isinstance(found, NitrogenSource):
        return found
    near = ", ".join(found)
    where = Span(f"--nitrogen {option}", 0) if option else NOWHERE
    faults.append(Diagnostic(
        Name.UNKNOWN_QUANTITY,
        f"the nitrogen source {name} is no compound with nitrogen that is known here", where,
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
