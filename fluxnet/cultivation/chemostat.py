"""Rates of a steady state: what flows out less what flows in, with feed, base and evaporation.

The volume stands, so the outlet flow is all that flows in less what evaporates, mu is the outlet
flow over the volume (the dilution rate where only feed flows), and q = (F_out c - sum F_k c_k)
/ (X V). Samples of one steady state are replicates: their mean counts.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from fluxnet.cultivation.broth_state import START, RawData, gas_at_nodes
from fluxnet.cultivation.errors import Propagated, Values, propagate, shift_values
from fluxnet.cultivation.result import Steadiness
from fluxnet.cultivation.samples import BIOMASS, Sampled
from fluxnet.ground.record import record
from fluxnet.rates.cultivation import Phase, SeriesKind
from fluxnet.solving.statistics import chi_squared_tail

__all__ = [
    "SteadyFit",
    "estimate_steady",
    "fit_steady",
    "judge_steadiness",
    "outlet_flow",
    "propagate_steady",
]  # fmt: skip

Array = NDArray[np.float64]

_ALPHA = 0.01
_WIDEN = 0.05
RESIDENCE_TIMES = 5
TELLING = 0.02
"""Of its mean within a residence time: a smaller change is called steady."""


@record
class SteadyFit:
    """A steady state: the weights of its samples, and how they scatter."""

    phase: Phase
    weights: dict[str, Array]
    gases: tuple[str, ...]
    tests: dict[str, tuple[float, int, float]]
    """By name: h of the replicates about their mean, degrees of freedom, factor on their sds."""

    @property
    def names(self) -> tuple[str, ...]:
        """What the results are of, in their order."""
        return ("mu", *(n for n in self.weights if n != BIOMASS), *self.gases)


def fit_steady(data: RawData, phase: Phase) -> SteadyFit | None:
    """Weigh the samples within a phase; None where there is no biomass in it."""
    weights: dict[str, Array] = {}
    tests: dict[str, tuple[float, int, float]] = {}
    for one in (data.biomass, *data.species):
        inside = (one.time >= phase.start - 1e-6) & (one.time <= phase.end + 1e-6)
        if not inside.any() or one.name in data.gases:
            continue
        own = np.maximum(one.block.own, 1e-9 * max(float(np.abs(one.block.value).max()), 1e-12))
        precision = np.where(inside, 1 / own**2, 0.0)
        weights[one.name] = precision / precision.sum()
        mean = float(weights[one.name] @ one.block.value)
        h = float((precision * (one.block.value - mean) ** 2).sum())
        dof = int(inside.sum()) - 1
        p = chi_squared_tail(h, dof) if dof else 1.0
        tests[one.name] = (h, dof, float(np.sqrt(h / dof)) if p < _WIDEN else 1.0)
    if BIOMASS not in weights:
        return None
    return SteadyFit(phase, weights, data.gases, tests)


def outlet_flow(values: Values, data: RawData) -> Array:
    """Broth that leaves [L/h or kg/h]: as measured, else what comes in less what evaporates."""
    hours = float(data.nodes[-1] - data.nodes[0])
    moved = {f.name: values[f.name][:, -1] / hours for f in data.flows}
    measured = [moved[f.name] for f in data.flows if f.kind is SeriesKind.EFFLUENT]
    if measured:
        taken = [moved[f.name] for f in data.flows if f.kind is SeriesKind.SAMPLE]
        return np.asarray(sum(measured + taken))
    signs = [
        moved[f.name] * (-1.0 if f.kind is SeriesKind.EVAPORATION else 1.0)
        for f in data.flows if f.kind is not SeriesKind.SAMPLE
    ]  # fmt: skip
    return np.asarray(sum(signs, np.zeros(len(values[START]))))


def estimate_steady(values: Values, data: RawData, fit: SteadyFit) -> Array:
    """mu, species, gases of every trial: trials x results."""
    hours = float(data.nodes[-1] - data.nodes[0])
    out, volume = outlet_flow(values, data), values[START][:, 0]
    biomass = values[BIOMASS] @ fit.weights[BIOMASS] * volume
    columns = [out / volume]
    gas, leaving, held = gas_at_nodes(values, data)
    for one in data.species:
        if one.name not in fit.weights:
            continue
        inside = values[one.name] @ fit.weights[one.name]
        rate = out * inside - _fed(values, data, one.name, hours)
        if leaving is not None and one.name in data.lost:
            away = 1000.0 * data.lost[one.name] * inside * leaving[:, -1] / hours
            rate = rate + values[f"loss of {one.name}"][:, 0] * away
        columns.append(rate / biomass)
    for name in fit.gases:
        rate = gas[name][:, -1] / hours
        if name == "CO2":
            rate = rate - _fed(values, data, "CO2", hours)
            if held is not None:
                rate = rate + out * held[:, -1]
        columns.append(rate / biomass)
    return np.stack(columns, axis=1)


def _fed(values: Values, data: RawData, name: str, hours: float) -> Array | float:
    total: Array | float = 0.0
    for content in data.contents:
        if content.species == name:
            total = total + values[content.name][:, 0] * values[content.stream][:, -1] / hours
    return total


def propagate_steady(data: RawData, fit: SteadyFit) -> Propagated:
    """The rates of a steady state with their covariance."""

    def wider(one: Sampled) -> Sampled:
        factor = fit.tests.get(one.name, (0.0, 0, 1.0))[2]
        return replace(one, block=replace(one.block, own=one.block.own * factor))

    data = replace(
        data, biomass=wider(data.biomass), species=tuple(wider(s) for s in data.species)
    )
    return propagate(lambda values: estimate_steady(values, data, fit), data.blocks)


def judge_steadiness(
    data: RawData, phase: Phase, extra: Sequence[tuple[str, Array, Array, Array]] = ()
) -> tuple[Steadiness, ...]:
    """Whether samples and gas still change over the last residence times of a phase.

    A straight line through each, weighted; its slope times the residence time over the mean.
    Steady unless the slope is told from none at 1 % (shared over all that are tested) and
    changes the value by more than 2 % in a residence time.

    Parameters
    ----------
    extra
        Name, time, value, sd of further records.
    """
    values = shift_values(data.blocks)
    dilution = float(outlet_flow(values, data)[0] / values[START][0, 0])
    if dilution <= 0:
        return ()
    residence = 1.0 / dilution
    since = max(phase.start, phase.end - RESIDENCE_TIMES * residence)
    records = [(s.name, s.time, s.block.value, s.block.own) for s in (data.biomass, *data.species)]
    found: list[tuple[str, float, float, float]] = []
    for name, time, value, sd in (*records, *extra):
        inside = (time >= since - 1e-6) & (time <= phase.end + 1e-6)
        if inside.sum() < 3:
            continue
        t, y = time[inside], value[inside]
        s = np.maximum(sd[inside], 1e-9 * max(float(np.abs(y).max()), 1e-12))
        w = 1.0 / s**2
        tm, mean = float(w @ t / w.sum()), float(w @ y / w.sum())
        spread = float(w @ (t - tm) ** 2)
        slope = float(w @ ((t - tm) * (y - mean))) / spread
        h = float(w @ (y - mean - slope * (t - tm)) ** 2)
        error = np.sqrt(max(h / max(t.size - 2, 1), 1.0) / spread)
        scale = residence / mean if mean else 0.0
        p = chi_squared_tail((slope / error) ** 2, 1)
        found.append((name, slope * scale, float(error) * abs(scale), p))
    limit = _ALPHA / max(len(found), 1)
    return tuple(
        Steadiness(name, change, sd, p, not (p < limit and abs(change) > TELLING))
        for name, change, sd, p in found
    )
