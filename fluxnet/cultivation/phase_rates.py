"""The rates of one phase as a result: values, errors, tests, and the other ways beside them."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from fluxnet.cultivation.batch import PhaseFit, estimate_phase, names_of, totals_of
from fluxnet.cultivation.broth_state import RawData
from fluxnet.cultivation.chemostat import SteadyFit, estimate_steady
from fluxnet.cultivation.errors import Propagated, shift_values
from fluxnet.cultivation.gas import RatioInterval, ratio_interval
from fluxnet.cultivation.result import Method, PhaseRates, RateLine, Steadiness, WayRates
from fluxnet.cultivation.runs import quantity_of, run_of, shared_biomass_error
from fluxnet.cultivation.samples import BIOMASS
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.network.model import Network
from fluxnet.rates.cultivation import Cultivation, Phase, SeriesKind

__all__ = ["judge", "steady_rates", "transient_rates"]

Array = NDArray[np.float64]

_FEW = 4
"""Samples that any smooth curve could follow."""


def transient_rates(
    raw: Cultivation, data: RawData, network: Network | None, fit: PhaseFit, many: bool,
    propagate_phase: Callable[[RawData, PhaseFit], Propagated],
) -> PhaseRates:
    """Rates of a phase of a batch or fed-batch."""
    found = propagate_phase(data, fit)
    names = names_of(fit)
    plain = replace(fit, spline=None)
    others = [
        (method, estimate_phase(shift_values(other.blocks), other, plain)[0])
        for method, other in _other_ways(data)
    ]  # fmt: skip
    spline = None if fit.spline is None else len(names)
    return _phase(
        raw, data, network, fit.phase, names, found, others, fit.tests, totals_of(data, fit),
        fit.samples, fit.curve.name, many, spline,
    )  # fmt: skip


def steady_rates(
    raw: Cultivation, data: RawData, network: Network | None, fit: SteadyFit, many: bool,
    found: Propagated, trends: tuple[Steadiness, ...],
) -> PhaseRates:
    """Rates of a steady state."""
    others = [
        (method, estimate_steady(shift_values(other.blocks), other, fit)[0])
        for method, other in _other_ways(data)
    ]  # fmt: skip
    biomass = float(fit.weights[BIOMASS] @ data.biomass.block.value)
    work = biomass * float(data.start.value[0]) * (fit.phase.end - fit.phase.start)
    totals = tuple(float(v) * work for v in found.value)
    samples = int((fit.weights[BIOMASS] > 0).sum())
    phase = _phase(
        raw, data, network, fit.phase, fit.names, found, others, fit.tests, totals, samples,
        "mean", many, None,
    )  # fmt: skip
    return replace(phase, steadiness=trends)


def _other_ways(data: RawData) -> list[tuple[Method, RawData]]:
    """The raw data with something left out, as a spreadsheet would."""
    ways: list[tuple[Method, RawData]] = []
    if any(f.kind is not SeriesKind.FEED and f.total.any() for f in data.flows):
        flows = tuple(
            f if f.kind is SeriesKind.FEED else
            replace(f, total=0.0 * f.total, own=0.0 * f.own, shift=0.0 * f.shift,
                    first=0.0)
            for f in data.flows
        )  # fmt: skip
        ways.append((Method.NAIVE, replace(data, flows=flows)))
    if data.lost:
        ways.append((Method.UNSTRIPPED, replace(data, lost={})))
    if data.held is not None:
        ways.append((Method.UNHELD, replace(data, held=None)))
    return ways


def _phase(
    raw: Cultivation, data: RawData, network: Network | None, phase: Phase,
    names: tuple[str, ...], found: Propagated, others: list[tuple[Method, Array]],
    tests: dict[str, tuple[float, int, float]], totals: tuple[float, ...], samples: int,
    curve: str, many: bool, spline: int | None,
) -> PhaseRates:
    count = len(names)
    covariance = np.array(found.covariance[:count, :count])
    lines: list[RateLine] = []
    for i, name in enumerate(names):
        value, sd = float(found.value[i]), float(found.sd[i])
        ways = [
            WayRates(method, float(rates[i]), None, float(rates[i]) - value, None)
            for method, rates in others
            if abs(float(rates[i]) - value) > 1e-9 * max(abs(value), 1e-12)
        ]
        if spline is not None:
            j = spline + i
            contrast = found.jacobian[j] - found.jacobian[i]
            ways.insert(0, WayRates(
                Method.SPLINE, float(found.value[j]), float(found.sd[j]),
                float(found.value[j]) - value, float(np.sqrt(contrast @ contrast)),
            ))  # fmt: skip
        h, dof, factor = tests.get(BIOMASS if name == "mu" else name, (None, 0, 1.0))
        lines.append(RateLine(
            quantity_of(name, value, network), value, sd, totals[i], h, dof, factor,
            found.shares(i), tuple(ways),
        ))  # fmt: skip
    shared = _shared(data, found, count)
    title = f"{raw.name} {phase.name}" if many else raw.name
    extras = (("phase", phase.name), ("mode", raw.mode.value))
    covariance.setflags(write=False)
    return PhaseRates(
        phase, run_of(title, lines, covariance, shared, extras), tuple(lines), covariance,
        samples, curve, _quotient(names, found),
    )  # fmt: skip


def _shared(data: RawData, found: Propagated, count: int) -> float:
    """The relative error of the biomass in all specific rates, where it is one number."""
    modes = [m.name for m in data.biomass.block.modes]
    places = [i for i, source in enumerate(found.sources) if source in modes]
    if not places:
        return 0.0
    largest = max(places, key=lambda i: float(np.abs(found.jacobian[:count, i]).sum()))
    is_specific = np.ones(count, dtype=np.bool_)
    is_specific[0] = False
    return shared_biomass_error(found.value[:count], found.jacobian[:count, largest], is_specific)


def _quotient(names: tuple[str, ...], found: Propagated) -> RatioInterval | None:
    """RQ with its interval, where both gases have a rate."""
    if "CO2" not in names or "oxygen" not in names:
        return None
    i, j = names.index("CO2"), names.index("oxygen")
    turn = np.array([1.0, -1.0])
    pair = found.covariance[np.ix_([i, j], [i, j])] * np.outer(turn, turn)
    return ratio_interval(float(found.value[i]), -float(found.value[j]), pair)


def judge(rates: PhaseRates, faults: list[Diagnostic]) -> None:
    """What a reader must know of the rates of a phase before using them."""
    name = rates.phase.name
    for line in rates.lines:
        if line.widened > 1 and line.h is not None:
            what = "scatters" if rates.curve == "mean" else "scatters about one rate"
            faults.append(Diagnostic(
                Name.RATE_NOT_CONSTANT,
                f"phase {name}: {line.quantity.name or 'biomass'} {what} {line.widened:.2g} times "
                "as much as its errors say; its sds were widened by that",
            ))  # fmt: skip
    if rates.curve == "points" and rates.samples > _FEW:
        faults.append(Diagnostic(
            Name.RATE_NOT_CONSTANT,
            f"phase {name}: ln(X V) follows no cubic within the errors of the biomass; straight "
            "lines from sample to sample are taken, and mu is their mean",
        ))  # fmt: skip
    for trend in rates.steadiness:
        if not trend.steady:
            faults.append(Diagnostic(
                Name.NOT_STEADY,
                f"phase {name}: {trend.name} changes by {trend.change:+.1%} ± {trend.sd:.1%} in a "
                f"residence time",
            ))  # fmt: skip
    if rates.rq is not None and not rates.rq.usable:
        faults.append(Diagnostic(
            Name.RATIO_UNUSABLE,
            f"phase {name}: oxygen uptake is below three of its sds, so RQ says nothing",
        ))  # fmt: skip


