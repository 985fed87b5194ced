"""Rates over time, with bands: mu(t) and q(t) by splines of the amounts, and gas rates.

The account of the broth (feeds, base, acid, antifoam, samples, evaporation) stands behind the
amounts; a spline of them gives the rate, the biomass at that time divides it. A band is what the
errors of the data make of the curve; it knows nothing of what a stiff curve smooths away.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from fluxnet.cultivation.batch import PhaseFit
from fluxnet.cultivation.broth_state import RawData, state_of
from fluxnet.cultivation.errors import Block, Values, join_blocks, propagate, shift_values
from fluxnet.cultivation.gas_amounts import gas_rates
from fluxnet.cultivation.gas_line import GasLine
from fluxnet.cultivation.regression import integral
from fluxnet.cultivation.result import Course
from fluxnet.cultivation.samples import BIOMASS
from fluxnet.cultivation.splines import FEWEST, Smoother, smooth

__all__ = ["gas_courses", "rate_courses"]

Array = NDArray[np.float64]

_POINTS = 41


def rate_courses(data: RawData, whole: PhaseFit) -> tuple[Course, ...]:
    """mu(t), q(t) of every species with samples enough, and of gases between samples.

    Parameters
    ----------
    whole
        The fit of the whole time as one phase.
    """
    if whole.spline is None:
        return ()
    nominal = state_of(shift_values(data.blocks), data)
    x = data.biomass
    at = np.linspace(float(x.time[0]), float(x.time[-1]), _POINTS)
    place = np.searchsorted(data.nodes, x.time)
    logs = np.log(x.block.value * nominal.level[0, place] / nominal.kept[0, place])
    growth = smooth(x.time, logs, x.block.own / x.block.value, at)
    curves: dict[str, Smoother] = {}
    for one in data.species:
        if one.time.size >= FEWEST and one.name not in data.gases:
            there = np.searchsorted(data.nodes, one.time)
            own = one.block.own * nominal.level[0, there]
            within = np.clip(at, one.time[0], one.time[-1])
            curves[one.name] = smooth(one.time, nominal.made[one.name][0], own, within)
    between = np.stack([np.interp(at, data.nodes, row) for row in np.eye(data.nodes.size)], axis=1)
    spline = whole.spline.curve
    first, last = spline.first, spline.last

    def estimate(values: Values) -> Array:
        state = state_of(values, data)
        log = np.log(values[BIOMASS] * state.level[:, place] / state.kept[:, place])
        biomass = np.exp(log @ growth.value.T) * (state.kept @ between.T)
        columns = [log @ growth.slope.T]
        columns += [state.made[n] @ c.slope.T / biomass for n, c in curves.items()]
        work = np.diff(integral(spline, values[BIOMASS], state), axis=1)
        columns += [np.diff(state.gas[n][:, first : last + 1], axis=1) / work for n in data.gases]
        return np.concatenate(columns, axis=1)

    found = propagate(estimate, data.blocks)
    middles = (data.nodes[first:last] + data.nodes[first + 1 : last + 1]) / 2
    courses: list[Course] = []
    start = 0
    for name, time in (("mu", at), *((n, at) for n in curves), *((n, middles) for n in data.gases)):
        part = slice(start, start + time.size)
        start = part.stop
        unit = "1/h" if name == "mu" else "mmol/g/h"
        courses.append(Course(name, unit, time, found.value[part], found.sd[part]))
    return tuple(courses)


def gas_courses(line: GasLine, volume: Array, unit: str = "L") -> tuple[Course, ...]:
    """OUR and CER [mmol/L/h, or per kg] and RQ at every bin of the gas line.

    Parameters
    ----------
    volume
        Broth at each bin.
    unit
        Of the broth: ``L`` or ``kg``.

    Notes
    -----
    A bin's own error moves that bin alone, so one trial moves all bins by theirs at once.
    """
    names = [a.name for a in line.analysers]
    if not {"oxygen", "CO2"} & set(names):
        return ()
    middles = (line.time[1:] + line.time[:-1]) / 2
    edges = np.concatenate([line.time[:1] - 1.0, middles, line.time[-1:] + 1.0])
    blocks = line.blocks(edges)
    trials = _moves(blocks)
    rates = gas_rates(trials, line, edges)
    columns: list[tuple[str, str, Array]] = []
    if "oxygen" in names:
        columns.append(("OUR", f"mmol/{unit}/h", 1000.0 * rates.uptake / volume))
    if "CO2" in names:
        columns.append(("CER", f"mmol/{unit}/h", 1000.0 * rates.released["CO2"] / volume))
    if {"oxygen", "CO2"} <= set(names):
        with np.errstate(divide="ignore", invalid="ignore"):
            ratio = rates.released["CO2"] / rates.uptake
        columns.append(("RQ", "mol/mol", ratio))
    courses: list[Course] = []
    for name, shown, all_trials in columns:
        with np.errstate(invalid="ignore", over="ignore"):
            shifts = (all_trials[1:] - all_trials[:1]) / _SMALL
            sd = np.sqrt((shifts**2).sum(axis=0))
        kept = np.isfinite(all_trials[0]) & np.isfinite(sd)
        if name == "RQ":
            uptake = 1000.0 * rates.uptake / volume
            noise = np.sqrt((((uptake[1:] - uptake[:1]) / _SMALL) ** 2).sum(axis=0))
            kept &= uptake[0] > 3 * noise
        courses.append(Course(name, shown, line.time[kept], all_trials[0][kept], sd[kept]))
    return tuple(courses)


_SMALL = 1e-3


def _moves(blocks: Sequence[Block]) -> Values:
    """The values as they are; then one trial a block's own errors, and one a mode, each moved."""
    names, shifted = join_blocks(blocks)
    own = sorted({n for n in names if n.endswith(", each value")})
    steps = [np.zeros(len(names))]
    steps += [_SMALL * np.array([n == one for n in names], dtype=np.float64) for one in own]
    shared = [i for i, n in enumerate(names) if n not in own]
    steps += [_SMALL * np.eye(len(names))[i] for i in shared]
    return shifted(np.array(steps))
