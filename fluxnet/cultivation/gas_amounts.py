"""What the gas carried away, at the sample times: amounts over trials of the raw data."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from fluxnet.chemistry.carbonate import carbon_over_dissolved
from fluxnet.chemistry.gas import ZERO_C, find_solubility, vapour_pressure
from fluxnet.cultivation.errors import Values
from fluxnet.cultivation.gas import GasRates, inert_balance
from fluxnet.cultivation.gas_line import GasLine

__all__ = ["gas_rates", "held_per_fraction", "integration", "stretch_of"]

Array = NDArray[np.float64]


def stretch_of(time: Array, edges: Array) -> NDArray[np.intp]:
    """The index of the stretch between edges in which each time lies."""
    place = np.searchsorted(edges, time, side="right") - 1
    return np.asarray(np.clip(place, 0, edges.size - 2))


def gas_rates(values: Values, line: GasLine, edges: Array) -> GasRates:
    """Rates [mol/h] of all gases over trials x bins, with every error of the line in place.

    Parameters
    ----------
    values
        Of the blocks that ``line.blocks(edges)`` gives.
    """
    place = stretch_of(line.time, edges)
    inlet: dict[str, Array | float] = {"oxygen": 0.0, "CO2": 0.0}
    outlet: dict[str, Array | float] = {"oxygen": 0.0, "CO2": 0.0}
    for one in line.analysers:
        offset, span, drift = values[f"{one.name} gas"].T
        noise = values[f"{one.name} gas, noise"][:, place]
        difference = line.fractions[one.name] - one.inlet
        inlet[one.name] = one.inlet
        outlet[one.name] = (
            one.inlet + difference * span[:, None] + offset[:, None] + drift[:, None] * line.time
            + noise
        )  # fmt: skip
    flow_out = None
    if line.flow_out is not None:
        flow_out = line.flow_out * values["gas flow out"]
    return inert_balance(line.flow_in * values["gas flow"], inlet, outlet, flow_out)


def integration(time: Array, nodes: Array) -> Array:
    """The matrix (nodes x times) that integrates a piecewise straight line from the first node.

    Before the first and after the last time the line goes on level.

    Examples
    --------
    >>> matrix = integration(np.array([0.0, 2.0]), np.array([0.0, 1.0, 2.0]))
    >>> (matrix @ np.array([1.0, 3.0])).round(6).tolist()
    [0.0, 1.5, 4.0]
    """
    points = np.union1d(time, nodes)
    place = np.clip(np.searchsorted(time, points, side="right") - 1, 0, max(time.size - 2, 0))
    to_points = np.zeros((points.size, time.size))
    rows = np.arange(points.size)
    if time.size == 1:
        to_points[:, 0] = 1.0
    else:
        part = np.clip((points - time[place]) / (time[place + 1] - time[place]), 0.0, 1.0)
        to_points[rows, place] = 1 - part
        to_points[rows, place + 1] += part
    steps = np.diff(points)[:, None] * (to_points[1:] + to_points[:-1]) / 2
    total = np.vstack([np.zeros(time.size), np.cumsum(steps, axis=0)])
    at = np.searchsorted(points, nodes)
    return np.asarray(total[at] - total[at[0]])


def held_per_fraction(bar: float, ph: float, celsius: float, ionic_strength: float) -> float:
    """Inorganic carbon in the broth per CO2 in the gas that leaves [mmol/L per mol/mol dry gas]."""
    henry = find_solubility("CO2")
    assert henry is not None
    partial = (bar - vapour_pressure(celsius)) * 1e5
    return (
        henry.at(celsius + ZERO_C) * partial
        * carbon_over_dissolved(ph, celsius, ionic_strength)
    )  # fmt: skip
