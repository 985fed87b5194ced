"""What LV-3 really does: the true rates, and three vessels reckoned from them without errors.

Everything here is invented. ``make_raw.py`` adds the errors of the instruments and writes the
files. Do not read on if you want to find out by yourself what the rates are.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from math import exp

import numpy as np

__all__ = ["AIR", "PHASES", "Cells", "Vessel", "cultivate", "gas_out", "hold_steady", "true_rates"]

PO, K_X, UPKEEP = 1.25, 1.85, 1.5
"""The true ATP per oxygen atom, per C-mol of biomass, and for upkeep [mmol/g/h]."""

# one C-mol of CH1.8O0.5N0.2 with 8 % ash [g/mol]
_MASS = (12.011 + 1.8 * 1.008 + 0.5 * 15.999 + 0.2 * 14.007) / 0.92

AIR = {"oxygen": 0.2095, "CO2": 0.0004}
BAR = 1.01325
_CELSIUS = 30.0
# mol/L/bar of ethanol and of CO2 with its bicarbonate at pH 5 and 30 °C (from memory)
_ETHANOL = 190.0 * exp(6500.0 * (1 / (_CELSIUS + 273.15) - 1 / 298.15))
_HELD_CO2 = 0.0297 / BAR * (1 + 10 ** (5.0 - 6.3))
# mol of water in a mole of gas that leaves a condenser of 8 °C
_WET = 0.010727 / BAR


@dataclass(frozen=True, slots=True)
class Cells:
    """What the cells do at one time: mu [1/h] and what they release [mmol/g/h]."""

    mu: float
    ethanol: float
    acetate: float


PHASES: dict[tuple[str, str], Cells] = {
    ("vessel 1", "slow"): Cells(0.10, 0.0, 0.0),
    ("vessel 1", "fast"): Cells(0.24, 1.2, 0.15),
    ("vessel 2", "lag"): Cells(0.0, 0.0, 0.0),
    ("vessel 2", "growth"): Cells(0.30, 3.0, 0.4),
    ("vessel 3", "feed"): Cells(0.12, 0.0, 0.05),
}
"""What is true in each phase of each vessel."""


def true_rates(cells: Cells) -> dict[str, float]:
    """Releases [mmol/g/h] (negative: taken up) from the balances of pyruvate, NADH and ATP."""
    grown = 1000.0 * cells.mu / _MASS
    e, a = cells.ethanol, cells.acetate
    sugar = (K_X * grown + UPKEEP + e + a + PO * (6 * e + 4 * a - 0.1 * grown)) / (4 + 12 * PO)
    burnt = 2 * sugar - e - a
    electrons = 2 * sugar + 5 * burnt - e + a + 0.1 * grown
    return {
        "mu": cells.mu,
        "glucose": -(sugar + 1.1 / 6 * grown),
        "ammonia": -0.2 * grown,
        "oxygen": -electrons / 2,
        "CO2": 3 * burnt + e + a + 0.1 * grown,
        "ethanol": e,
        "acetate": a,
    }


@dataclass(frozen=True, slots=True)
class Vessel:
    """What stood in and around a vessel at ``time``: broth [L or kg], g of cells and mmol in each.

    ``fed`` and ``base`` [L] are what went in until then, ``gone`` [L] what went with the gas as
    water. ``gas_time`` and ``gas`` are the dry fractions of the gas that left.
    """

    time: np.ndarray
    broth: np.ndarray
    biomass: np.ndarray
    glucose: np.ndarray
    ethanol: np.ndarray
    acetate: np.ndarray
    fed: np.ndarray
    base: np.ndarray
    gone: np.ndarray
    gas_time: np.ndarray
    gas: dict[str, np.ndarray]


def gas_out(flow: float, oxygen: float, carbon: float) -> tuple[float, dict[str, float]]:
    """The flow [mol/h] that leaves and its dry fractions; uptake and release in mol/h."""
    leaves = flow - oxygen + carbon
    return leaves, {
        "oxygen": (flow * AIR["oxygen"] - oxygen) / leaves,
        "CO2": (flow * AIR["CO2"] + carbon) / leaves,
    }


def hold_steady(
    cells: Cells, *, broth: float, flow: float, sugar: float, residual: float, ammonia: float
) -> dict[str, float]:
    """A steady state: feed and base [L/h], g/L of cells, mmol/L, fractions of the gas.

    Parameters
    ----------
    flow
        Dry gas [mol/h].
    sugar, residual
        Glucose in the feed and in the broth [mmol/L].
    ammonia
        Of the base [mmol/L]; it meets the need for nitrogen and the acid that is made.
    """
    rates = true_rates(cells)
    out = cells.mu * broth
    feed, leaves, gas, cell_mass = out, flow, dict(AIR), 0.0
    for _ in range(200):
        cell_mass = (feed * sugar - out * residual) / -rates["glucose"]
        held = 1000 * _HELD_CO2 * BAR * gas["CO2"]
        carbon = (rates["CO2"] * cell_mass - out * held) / 1000
        leaves, gas = gas_out(flow, -rates["oxygen"] * cell_mass / 1000, carbon)
        base = (cells.acetate - rates["ammonia"]) * cell_mass / ammonia
        gone = leaves * _WET / (1 - _WET) * 0.018015
        feed = out + gone - base
    stripped = leaves / (_ETHANOL * BAR)
    return {
        "feed": feed, "base": base, "gone": gone, "biomass": cell_mass / broth,
        "glucose": residual, "ethanol": cells.ethanol * cell_mass / (out + stripped),
        "acetate": cells.acetate * cell_mass / out, **{f"{k} gas": v for k, v in gas.items()},
    }  # fmt: skip


def cultivate(
    phases: list[tuple[float, Cells]], times: np.ndarray, *, broth: float, biomass: float,
    glucose: float, flow: float, ammonia: float, sample: float,
    feed: Callable[[float], float] = lambda t: 0.0, sugar: float = 0.0, by_mass: bool = False,
    step: float = 0.002,
) -> Vessel:
    """A batch or fed-batch in small steps; samples are taken at ``times``, and tell what was there.

    Parameters
    ----------
    phases
        When each ends [h], and what the cells do in it.
    broth, biomass, glucose
        At the start: L, g/L, mmol/L.
    feed, sugar
        Feed over time [L/h], and its glucose [mmol/L].
    sample
        L each; the last one is taken after the end.
    by_mass
        Broth is kilograms: what leaves as CO2 lightens it, and oxygen makes it heavier.
    """
    v, x, s = broth, biomass * broth, glucose * broth
    e = a = fed = based = gone = t = 0.0
    y = AIR["CO2"]
    rows: list[tuple[float, ...]] = []
    gas_rows: list[tuple[float, float, float]] = []
    ends = iter(phases)
    end, cells = next(ends)
    rates = true_rates(cells)
    for now in times:
        for _ in range(round((now - t) / step)):
            if t >= end - step / 2:
                end, cells = next(ends)
                rates = true_rates(cells)
            work = x * ((exp(cells.mu * step) - 1) / (cells.mu * step) if cells.mu else 1.0)
            _, still = gas_out(
                flow, -rates["oxygen"] * work / 1000, rates["CO2"] * work / 1000
            )
            # the CO2 of the gas stands with that of the broth, which it fills and empties
            before, lag = y, _HELD_CO2 * BAR * v / flow
            y = still["CO2"] + (y - still["CO2"]) * exp(-step / lag)
            carbon = rates["CO2"] * work / 1000 - _HELD_CO2 * BAR * v * (y - before) / step
            leaves, gas = gas_out(flow, -rates["oxygen"] * work / 1000, carbon)
            lost = e / v * leaves / (_ETHANOL * BAR)
            moved, water = feed(t + step / 2), leaves * _WET / (1 - _WET) * 0.018015
            base = (rates["acetate"] - rates["ammonia"]) * work / ammonia
            x *= exp(cells.mu * step)
            s += (rates["glucose"] * work + moved * sugar) * step
            e += (rates["ethanol"] * work - lost) * step
            a += rates["acetate"] * work * step
            light = 0.04401 * carbon + 0.031998 * rates["oxygen"] * work / 1000 if by_mass else 0.0
            v += (moved + base - water - light) * step
            fed, based, gone = fed + moved * step, based + base * step, gone + water * step
            t += step
            gas_rows.append((t, gas["oxygen"], gas["CO2"]))
        rows.append((t, v, x / v, s / v, e / v, a / v, fed, based, gone))
        keep = 1 - sample / v
        v, x, s, e, a = v - sample, x * keep, s * keep, e * keep, a * keep
    table, gases = np.array(rows).T, np.array(gas_rows).T
    return Vessel(*table, gas_time=gases[0], gas={"oxygen": gases[1], "CO2": gases[2]})
