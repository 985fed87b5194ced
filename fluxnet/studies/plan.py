"""What to measure next, to know one quantity better: predicted from the slopes of the fit."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from itertools import combinations

import numpy as np

from fluxnet.exact.sparse import SparseRow, independent_forms
from fluxnet.ground.record import record
from fluxnet.network.model import Network, Quantity, QuantityKind
from fluxnet.rates.measured import Run
from fluxnet.solving.flux_fit import FluxFit
from fluxnet.solving.outlook import Slopes, sd_after
from fluxnet.solving.sources import Sources, find_sources
from fluxnet.studies.plan_candidates import Candidate, better_ones, inside_ones, new_ones
from fluxnet.studies.plan_gauge import Gauge, Reading, gauge_at
from fluxnet.studies.plan_result import Option, Plan
from fluxnet.studies.plan_target import Target
from fluxnet.studies.plan_words import tell_plan
from fluxnet.studies.shares import shares_of
from fluxnet.studies.units import rate_unit

__all__ = ["plan_measurements"]


def plan_measurements(
    fit: FluxFit, network: Network, run: Run | None, target: Target, error: float, unit: str
) -> Plan:
    """Rank what could be measured by the sd that it would leave the wanted quantity.

    Parameters
    ----------
    fit
        That of the run, not infeasible.
    target
        See :func:`fluxnet.studies.plan_target.read_target`.
    error
        The relative error of what is measured anew, at least 0.5 % of the run's largest rate
        in C-mol.
    unit
        That of the run's rates.
    """
    gauge = gauge_at(fit, network, run)
    told_in = _unit_of(target, unit)
    reading = _read(gauge, target)
    if reading is None:
        words = f"{target} has no value here: its lower part is zero."
        return Plan(str(target), told_in, error, words)
    sources = find_sources(fit)
    new = new_ones(gauge, error, unit)
    better = better_ones(sources, unit)
    known = [gauge.read(m.quantity) for m in sources.members if m.quantity is not None]
    inside = inside_ones(gauge, [reading, *(c.reading for c in new), *known], error, unit)
    outlook = _Outlook(sources, reading, {})
    today = float(np.linalg.norm(reading.seen)) if reading.is_determined else None
    pairs = (outlook.option(pair, today) for pair in combinations([*new, *better], 2))
    singles = [outlook.option((one,), today) for one in (*new, *better)]
    within = [outlook.option((one,), today) for one in inside]
    best = min(pairs, key=_rank, default=None)
    plan = Plan(
        quantity=str(target),
        unit=told_in,
        error=error,
        words="",
        value=reading.value,
        sd=today,
        shares=shares_of(sources, reading.seen[None])[0] if today else (),
        options=tuple(sorted(singles, key=_rank)),
        inside=tuple(sorted(within, key=_rank)),
        pair=best if best is not None and best.sd is not None else None,
        without_bounds=bool(fit.bounds),
    )
    found = [*plan.options, *plan.inside, *([plan.pair] if plan.pair else [])]
    if today is None and all(option.sd is None for option in found):
        plan = _with_needed(plan, reading.hidden, [*new, *inside])
    return tell_plan(plan)


@record
class _Outlook:
    """What all predictions share; covariances are kept by what is better in them."""

    sources: Sources
    aim: Reading
    known: dict[tuple[int, ...], np.ndarray]

    def option(self, candidates: Sequence[Candidate], today: float | None) -> Option:
        """What one or two steps would leave of the sd."""
        sd = self._sd(candidates)
        part = None if sd is None or not today else sd / today
        return Option(tuple(c.step for c in candidates), sd, part)

    def _sd(self, candidates: Sequence[Candidate]) -> float | None:
        added = [(c.reading, c.shift, c.step.sd) for c in candidates if c.reading is not None]
        forms = [reading.hidden for reading, _, _ in added]
        rank = len(independent_forms(forms))
        if self.aim.hidden and len(independent_forms([*forms, self.aim.hidden])) > rank:
            return None
        better = tuple(sorted(c.source for c in candidates if c.source is not None))
        if better not in self.known:
            self.known[better] = self.sources.covariance(better)
        return sd_after(
            self.known[better],
            self._slopes([self.aim], [0.0]),
            self._slopes([reading for reading, _, _ in added], [shift for _, shift, _ in added]),
            np.array([sd for _, _, sd in added]),
            rank,
        )

    def _slopes(self, readings: Sequence[Reading], shifts: Sequence[float]) -> Slopes:
        """The slopes of readings, with their part in an error that rates share."""
        count = len(readings)
        seen = np.array([r.seen for r in readings]).reshape(count, len(self.aim.seen))
        if self.sources.is_shared:
            seen = np.hstack([seen, np.array(shifts).reshape(count, 1)])
        unseen = np.array([r.unseen for r in readings]).reshape(count, len(self.aim.unseen))
        return Slopes(seen, unseen)


def _with_needed(plan: Plan, hidden: SparseRow, candidates: Sequence[Candidate]) -> Plan:
    """The plan with an irreducible set of measurements that determines the quantity."""
    def serves(chosen: Sequence[Candidate]) -> bool:
        forms = [c.reading.hidden for c in chosen if c.reading is not None]
        return len(independent_forms([*forms, hidden])) == len(independent_forms(forms))

    chosen = list(candidates)
    if not serves(chosen):
        return plan
    for candidate in reversed(candidates):
        fewer = [c for c in chosen if c is not candidate]
        if serves(fewer):
            chosen = fewer
    return replace(plan, needed=tuple(c.step.name for c in chosen))


def _read(gauge: Gauge, target: Target) -> Reading | None:
    if target.line is not None:
        return gauge.read_line(target.line)
    return gauge.read(target.quantity or Quantity(QuantityKind.MU))


def _rank(option: Option) -> float:
    return float("inf") if option.sd is None else option.sd


def _unit_of(target: Target, unit: str) -> str:
    quantity = target.quantity
    if quantity is None:
        return unit
    parts = (quantity.numerator, quantity.denominator)
    is_ratio = quantity.kind is QuantityKind.RATIO
    moles = is_ratio and all(q is not None and q.kind is not QuantityKind.MU for q in parts)
    return "mol/mol" if moles else rate_unit(quantity, unit)
