"""Rates of a phase of a batch or a fed-batch, with their covariance and by other ways."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from fluxnet.cultivation.broth_state import RawData, State, state_of
from fluxnet.cultivation.errors import (
    Block,
    Propagated,
    Values,
    own_error,
    propagate,
    shift_values,
)
from fluxnet.cultivation.regression import (
    GrowthCurve,
    Regression,
    choose_curve,
    grown_mass,
    integral,
    inverse,
    mean_growth,
    slope,
)
from fluxnet.cultivation.samples import BIOMASS, Sampled
from fluxnet.cultivation.splines import FEWEST, smooth
from fluxnet.ground.record import record
from fluxnet.rates.cultivation import Phase
from fluxnet.solving.statistics import chi_squared_tail

__all__ = [
    "PhaseFit", "estimate_phase", "fit_phase", "names_of", "phase_nodes", "propagate_phase",
    "totals_of", "widened",
]  # fmt: skip

Array = NDArray[np.float64]

_WIDEN = 0.01
"""Below this p the samples' own sds are widened to what their scatter says."""


@record
class SplineWay:
    """Matrices of the other way: the curve of ln(X V) by a spline, and ends of the amounts."""

    curve: GrowthCurve
    ends: dict[str, Array]
    """2 x samples: the spline at the first and the last node of the phase."""


@record
class PhaseFit:
    """All that is chosen of a phase before its rates are reckoned, and how well it fits."""

    phase: Phase
    curve: GrowthCurve
    regressions: tuple[Regression, ...]
    gases: tuple[str, ...]
    spline: SplineWay | None
    tests: dict[str, tuple[float, int, float]]
    """By species: h, degrees of freedom, factor on its samples' own sds."""

    samples: int


def phase_nodes(nodes: Array, phase: Phase) -> tuple[int, int]:
    """The first and the last sample time in a phase."""
    slack = 1e-6
    inside = np.flatnonzero((nodes >= phase.start - slack) & (nodes <= phase.end + slack))
    return (int(inside[0]), int(inside[-1])) if inside.size else (0, 0)


def names_of(fit: PhaseFit) -> tuple[str, ...]:
    """What the results are of, in their order: mu, species, gases."""
    return ("mu", *(r.name for r in fit.regressions), *fit.gases)


def estimate_phase(values: Values, data: RawData, fit: PhaseFit) -> Array:
    """Rates of every trial: mu, species, gases; behind them the same by splines where there are."""
    state = state_of(values, data)
    biomass = values[BIOMASS]
    work = integral(fit.curve, biomass, state)
    columns = [mean_growth(fit.curve, biomass, state)]
    columns += [slope(r, state.made[r.name], work)[0] for r in fit.regressions]
    first, last = fit.curve.first, fit.curve.last
    gas = [state.gas[name][:, last] - state.gas[name][:, first] for name in fit.gases]
    columns += [amount / work[:, -1] for amount in gas]
    if fit.spline is not None:
        other = integral(fit.spline.curve, biomass, state)[:, -1]
        columns.append(mean_growth(fit.spline.curve, biomass, state))
        for r in fit.regressions:
            if r.name in fit.spline.ends:
                ends = state.made[r.name] @ fit.spline.ends[r.name].T
                columns.append((ends[:, 1] - ends[:, 0]) / other)
            else:
                columns.append(slope(r, state.made[r.name], work)[0])
        columns += [amount / other for amount in gas]
    return np.stack(columns, axis=1)


def totals_of(data: RawData, fit: PhaseFit) -> tuple[float, ...]:
    """What was made in the phase at the values themselves: g of biomass, mmol."""
    values = shift_values(data.blocks)
    state = state_of(values, data)
    work = integral(fit.curve, values[BIOMASS], state)
    first, last = fit.curve.first, fit.curve.last
    rates = [slope(r, state.made[r.name], work)[0] * work[:, -1] for r in fit.regressions]
    gas = [state.gas[name][:, last] - state.gas[name][:, first] for name in fit.gases]
    grown = grown_mass(fit.curve, values[BIOMASS], state)
    return tuple(float(v[0]) for v in (grown, *rates, *gas))


def fit_phase(data: RawData, phase: Phase) -> PhaseFit | None:
    """Choose the curve, the weights and the splines of a phase; None without two samples."""
    first, last = phase_nodes(data.nodes, phase)
    values = shift_values(data.blocks)
    state = state_of(values, data)
    x = data.biomass
    at = np.searchsorted(data.nodes, x.time)
    logs = np.log(x.block.value * state.level[0, at] / state.kept[0, at])
    relative = x.block.own / x.block.value
    inside = (x.time >= phase.start - 1e-6) & (x.time <= phase.end + 1e-6)
    if last <= first or inside.sum() < 2:
        return None
    curve = choose_curve(data.nodes, first, last, x.time, logs, relative)
    drafts = [d for d in (_draft(s, data, state, first, last) for s in data.species) if d]
    dependent = set(data.gases)
    regressions, tests = _weigh(data, curve, [d for d in drafts if d.name not in dependent])
    tests[BIOMASS] = (curve.h, curve.dof, 1.0)
    return PhaseFit(
        phase, curve, regressions, data.gases, _spline_way(data, state, curve, regressions, logs),
        tests, int(inside.sum()),
    )  # fmt: skip


def _draft(
    one: Sampled, data: RawData, state: State, first: int, last: int
) -> Regression | None:
    """A species' samples in the phase, weighted by their own errors alone."""
    at = np.searchsorted(data.nodes, one.time)
    samples = np.flatnonzero((at >= first) & (at <= last))
    if samples.size < 2:
        return None
    own = one.block.own[samples] * state.level[0, at[samples]]
    least = 1e-9 * max(float(np.abs(state.made[one.name]).max()), 1e-12)
    return Regression(
        one.name, samples, at[samples] - first, np.diag(1 / np.maximum(own, least) ** 2)
    )


def _weigh(
    data: RawData, curve: GrowthCurve, drafts: Sequence[Regression]
) -> tuple[tuple[Regression, ...], dict[str, tuple[float, int, float]]]:
    """Weights from the covariance of the samples about one rate.

    Errors of the biomass and of each reading of a stream are in it; what all share is not.
    """
    found: list[Regression] = []
    tests: dict[str, tuple[float, int, float]] = {}
    if not drafts:
        return (), tests
    values = shift_values(data.blocks)
    state = state_of(values, data)
    work = integral(curve, values[BIOMASS], state)
    fits = [slope(d, state.made[d.name], work) for d in drafts]

    def rests(trial: Values) -> Array:
        s = state_of(trial, data)
        w = integral(curve, trial[BIOMASS], s)
        return np.concatenate([
            s.made[d.name][:, d.samples] - f[1][0] - f[0][0] * w[:, d.nodes_of]
            for d, f in zip(drafts, fits, strict=True)
        ], axis=1)  # fmt: skip

    spread = propagate(rests, _own_only(data))
    start = 0
    for draft in drafts:
        part = slice(start, start + draft.samples.size)
        start = part.stop
        names = {own_error(n) for n in (BIOMASS, draft.name, *(f.name for f in data.flows))}
        kept = [i for i, source in enumerate(spread.sources) if source in names]
        shifts = spread.jacobian[part][:, kept]
        covariance = shifts @ shifts.T
        one = replace(draft, weights=inverse(covariance))
        rate, level = slope(one, state.made[one.name], work)
        rest = (
            state.made[one.name][0, one.samples] - level[0] - rate[0] * work[0, one.nodes_of]
        )
        h, dof = float(rest @ one.weights @ rest), one.samples.size - 2
        p = chi_squared_tail(max(h, 0.0), dof) if dof > 0 else 1.0
        tests[one.name] = (h, dof, float(np.sqrt(h / dof)) if p < _WIDEN else 1.0)
        found.append(one)
    return tuple(found), tests


def _own_only(data: RawData) -> tuple[Block, ...]:
    """The blocks with the errors that each sample and each reading of a stream has alone."""
    names = {BIOMASS, *(s.name for s in data.species), *(f.name for f in data.flows)}
    return tuple(
        replace(b, modes=(), own=b.own if b.name in names else np.zeros_like(b.own))
        for b in data.blocks
    )


def widened(data: RawData, fit: PhaseFit) -> RawData:
    """The raw data with the own sds of samples as large as their scatter about one rate says."""

    def wider(one: Sampled) -> Sampled:
        factor = fit.tests.get(one.name, (0.0, 0, 1.0))[2]
        return replace(one, block=replace(one.block, own=one.block.own * factor))

    return replace(data, species=tuple(wider(s) for s in data.species))


def _spline_way(
    data: RawData, state: State, curve: GrowthCurve, regressions: Sequence[Regression], logs: Array
) -> SplineWay | None:
    """Splines of ln(X V) and of the amounts, where the phase holds samples enough."""
    if curve.samples.size < FEWEST:
        return None
    x = data.biomass
    time = x.time[curve.samples]
    start, end = data.nodes[curve.first : curve.last], data.nodes[curve.first + 1 : curve.last + 1]
    steps = np.linspace(0.0, 1.0, curve.fine.shape[1])
    grid = start[:, None] + (end - start)[:, None] * steps
    relative = (x.block.own / x.block.value)[curve.samples]
    fine = smooth(time, logs[curve.samples], relative, np.clip(grid.ravel(), time[0], time[-1]))
    ends: dict[str, Array] = {}
    for r in regressions:
        if r.samples.size < FEWEST:
            continue
        one = next(s for s in data.species if s.name == r.name)
        at = np.searchsorted(data.nodes, one.time[r.samples])
        own = one.block.own[r.samples] * state.level[0, at]
        at_ends = np.array([data.nodes[curve.first], data.nodes[curve.last]])
        inside = np.clip(at_ends, one.time[r.samples][0], one.time[r.samples][-1])
        whole = np.zeros((2, one.time.size))
        found = smooth(one.time[r.samples], state.made[r.name][0, r.samples], own, inside)
        whole[:, r.samples] = found.value
        ends[r.name] = whole
    spline = replace(curve, fine=fine.value.reshape(*grid.shape, time.size), name="spline")
    return SplineWay(spline, ends)


def propagate_phase(data: RawData, fit: PhaseFit) -> Propagated:
    """The rates of a phase with their covariance."""
    return propagate(lambda values: estimate_phase(values, data, fit), data.blocks)
