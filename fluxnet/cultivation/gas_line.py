"""The gas line of a cultivation: readings made dry, in time with the broth, with their errors.

An analyser's error has two parts. Its own noise is seen in the readings; what all readings
share is the calibration. A stretch before inoculation, when gas passes and nothing lives, shows
the inlet gas: the reading is set to it, and of the calibration only the span is left, an error
of the difference and not of the whole reading. Without that stretch the whole reading is off
by the calibration, which at small differences of oxygen leaves RQ unknown.
"""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
from numpy.typing import NDArray

from fluxnet.cultivation.errors import Block, Mode
from fluxnet.ground.record import record
from fluxnet.rates.cultivation import Series
from fluxnet.rates.thinning import Thinned, thin

__all__ = ["DRIFT", "SPAN", "Analyser", "GasLine", "read_analyser"]

Array = NDArray[np.float64]

SPAN: Mapping[str, float] = {"oxygen": 0.02, "CO2": 0.01}
"""Relative error of a calibration: paramagnetic oxygen 2 %, infrared CO2 1 % (common practice)."""

OTHER_SPAN = 0.02
FLOW_SD = 0.035
"""Relative error of a thermal mass-flow controller (common practice)."""

DRIFT = 5e-4
"""mol/mol: a drift on the stretch before inoculation that is told (0.05 % points)."""

_BINS = 400
_STRETCH = 5
"""Readings before inoculation that are needed to call it a stretch."""


@record
class Analyser:
    """One gas in dry gas: averages over bins of time, errors as blocks.

    ``offset`` was taken from every reading (the stretch before inoculation against the inlet
    gas); ``offset_sd`` is its error, or that of the whole calibration without a stretch.
    ``span`` is the relative error of the difference to the inlet. ``drift`` is the slope on the
    stretch [mol/mol/h] and its sd, ``drifted`` the change over the stretch.
    """

    name: str
    time: Array
    value: Array
    sd: Array
    inlet: float
    offset: float
    offset_sd: float
    span: float
    drift: tuple[float, float] | None
    drifted: float
    stretch: tuple[float, float] | None
    thinned_from: int

    @property
    def drifts(self) -> bool:
        """Whether the drift is large enough to be told, and told from noise."""
        if self.drift is None:
            return False
        slope, sd = self.drift
        return abs(self.drifted) > DRIFT and abs(slope) > 3 * sd


@record
class GasLine:
    """All gases on one grid of bins, and the dry inlet flow [mol/h]."""

    time: Array
    flow_in: Array
    flow_sd: float
    flow_out: Array | None
    flow_out_sd: float
    analysers: tuple[Analyser, ...]
    fractions: Mapping[str, Array]
    bar: float

    def blocks(self, edges: Array) -> tuple[Block, ...]:
        """Errors as blocks whose values are corrections: 0, or 1 for factors.

        Parameters
        ----------
        edges
            Times between which a reading's own errors are one: the mean of that stretch.
        """
        blocks = [Block("gas flow", np.ones(1), np.zeros(1),
                        (Mode("gas flow", np.array([self.flow_sd])),))]  # fmt: skip
        if self.flow_out is not None:
            blocks.append(Block("gas flow out", np.ones(1), np.zeros(1),
                                (Mode("gas flow out", np.array([self.flow_out_sd])),)))  # fmt: skip
        for one in self.analysers:
            noise = _stretch_errors(one, self.time, edges)
            drift = abs(one.drift[0]) if one.drift is not None and one.drifts else 0.0
            shifts = (
                Mode(f"{one.name} analyser, calibration", np.array([one.offset_sd, 0.0, 0.0])),
                Mode(f"{one.name} analyser, span", np.array([0.0, one.span, 0.0])),
                Mode(f"{one.name} analyser, drift", np.array([0.0, 0.0, drift])),
            )
            blocks.append(Block(f"{one.name} gas", np.array([0.0, 1.0, 0.0]), np.zeros(3), shifts))
            blocks.append(Block(f"{one.name} gas, noise", np.zeros(noise.size), noise))
        return tuple(blocks)


def _stretch_errors(one: Analyser, grid: Array, edges: Array) -> Array:
    """The sd of the mean over each stretch between edges, of bins with their own sds."""
    sd = np.interp(grid, one.time, one.sd)
    place = np.clip(np.searchsorted(edges, grid, side="right") - 1, 0, max(edges.size - 2, 0))
    count = np.bincount(place, minlength=edges.size - 1)
    squares = np.bincount(place, sd**2, edges.size - 1)
    step = float(np.median(np.diff(one.time))) if one.time.size > 1 else 1.0
    grid_step = float(np.median(np.diff(grid))) if grid.size > 1 else 1.0
    repeat = max(step / grid_step, 1.0)  # a slow analyser's readings stand in several bins
    fallback = float(np.median(one.sd))
    mean = np.sqrt(squares * repeat) / np.maximum(count, 1)
    return np.where(count > 0, np.minimum(mean, fallback), fallback)


def read_analyser(
    series: Series, name: str, inlet: float, water: float, lag: float, before: float = 0.0,
    *, same_analyser: bool = False,
) -> Analyser:
    """One analyser's readings, made dry, moved by its lag, set to the inlet gas, thinned.

    Parameters
    ----------
    water
        Moles of water in a mole of the gas that the analyser sees.
    before
        The time of inoculation [h]; readings before it see the inlet gas only.
    same_analyser
        Whether ``inlet`` was read by this analyser, so that its offset is in both.
    """
    time, value = series.time - lag, series.value / (1.0 - water)
    stretch = time < before
    width = max((float(time[-1]) - float(time[0])) / _BINS, 1e-9)
    thinned = thin(time, value, width) if time.size > _BINS else _as_it_is(time, value)
    span = SPAN.get(name, OTHER_SPAN) if series.common is None else series.common
    own = _row_sd(series, thinned)
    sd = thinned.sd
    if series.sd is not None:  # what neighbours scatter is seen whatever was given
        sd = np.maximum(sd, own / np.sqrt(thinned.count))
    offset, offset_sd = 0.0, span * float(np.median(value))
    drift, drifted, seen = None, 0.0, None
    if stretch.sum() >= _STRETCH:
        t, v = time[stretch], value[stretch]
        mean = float(v.mean())
        noise = float(np.std(v, ddof=1))
        worth = max(v.size * (1 - thinned.alike) / (1 + thinned.alike), 1.0)
        offset, offset_sd = mean - inlet, noise / float(np.sqrt(worth))
        drift, drifted = _slope(t, v, worth)
        seen = (float(t[0]), float(t[-1]))
    elif same_analyser:
        offset_sd = float(np.median(sd))
    else:
        span = 0.0  # it is in the calibration of the whole reading
    return Analyser(
        name, thinned.time, thinned.value - offset, sd, inlet, offset, offset_sd, span,
        drift, drifted, seen, time.size,
    )  # fmt: skip


def _as_it_is(time: Array, value: Array) -> Thinned:
    """A short record: every row its own average; noise from second differences."""
    ones = np.ones_like(value)
    noise = 0.0
    if value.size >= 4:
        noise = float(np.sqrt(np.mean(np.diff(value, 2) ** 2) / 6))
    return Thinned(time, value, noise * ones, ones, noise, 0.0)


def _row_sd(series: Series, thinned: Thinned) -> Array:
    if series.sd is None:
        return np.full(thinned.time.size, thinned.row_sd)
    return np.interp(thinned.time, series.time, series.sd)


def _slope(t: Array, v: Array, worth: float) -> tuple[tuple[float, float], float]:
    """The slope of a stretch with its sd, rows counted for what they are worth; the change."""
    centred = t - t.mean()
    spread = float(centred @ centred)
    if spread <= 0:
        return (0.0, float("inf")), 0.0
    slope = float(centred @ v) / spread
    rest = v - v.mean() - slope * centred
    sd = float(np.sqrt(rest @ rest / max(v.size - 2, 1) / spread * v.size / worth))
    return (slope, sd), slope * float(np.ptp(t))
