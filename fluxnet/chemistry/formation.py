"""Gibbs energies and enthalpies of formation, 25 °C, of the forms that stand in a culture.

The data stand in ``formation.csv`` beside this file, one form a line, each with its source:
dissolved at 1 mol/kg, gases at 1 bar. OBIGT is the open thermodynamic data set of that name,
read from the data package ``pychnosz`` 1.5.3 (MIT licence), in calories as most of it is
published; in square brackets its own reference key. Some of its values are themselves from
correlations of homologous series.
"""

from __future__ import annotations

import csv
from collections import defaultdict
from collections.abc import Mapping
from enum import Enum
from functools import cache
from pathlib import Path

from fluxnet.chemistry.formula import Formula
from fluxnet.ground.record import record

__all__ = ["Formation", "State", "combustion_by_hess", "find_formation", "find_formations"]


class State(Enum):
    """How a form stands: ``GAS`` at 1 bar, ``DISSOLVED`` at 1 mol/kg, pure otherwise."""

    GAS = "g"
    LIQUID = "l"
    DISSOLVED = "aq"
    SOLID = "s"


@record
class Formation:
    """Gibbs energy and enthalpy of formation of one form [kJ/mol], 25 °C.

    ``charge`` tells the form: 0 the neutral one, else the ion at pH 7.
    """

    charge: int
    state: State
    gibbs: float
    enthalpy: float
    source: str


def find_formations(compound: str) -> tuple[Formation, ...]:
    """All forms of a catalogue compound (by its first name) whose formation is known.

    Examples
    --------
    >>> [(f.charge, f.state.value, f.gibbs) for f in find_formations("CO2")]
    [(0, 'g', -394.36), (0, 'aq', -385.97)]
    """
    return _table().get(compound, ())


def find_formation(compound: str, charge: int) -> Formation | None:
    """The form of that charge as it crosses the boundary of a culture: a gas as gas.

    Examples
    --------
    >>> find_formation("acetate", -1).gibbs, find_formation("CO2", 0).state
    (-369.32, <State.GAS: 'g'>)
    """
    return next((f for f in find_formations(compound) if f.charge == charge), None)


_BURNT: Mapping[str, float] = {"C": -393.51, "N": 0.0, "S": -909.60, "P": -1292.08}
"""Enthalpies of formation [kJ/mol] of CO2(g), N2(g) and, in water, sulfate and phosphate."""
_WATER = -285.83
"""The enthalpy of formation of liquid water [kJ/mol] (CRC, read from ``chemicals`` 1.5.2)."""
_PROTONS: Mapping[str, int] = {"S": 2, "P": 3}
"""Hydrogen that goes with sulfate (2 H+) and phosphate (HPO4 with 2 H+)."""


def combustion_by_hess(formula: Formula, formation: Formation) -> float | None:
    """The heat that a form gives off on combustion [kJ/mol], by Hess.

    H = dHf - sum of the dHf of CO2(g), H2O(l), N2(g), sulfate and phosphate in water, with
    protons at zero. None where the formula holds an element without one of these.

    Parameters
    ----------
    formula
        The form itself, with its charge.

    Examples
    --------
    >>> from fluxnet.chemistry.reader import read_formula
    >>> glucose = find_formation("glucose", 0)
    >>> round(combustion_by_hess(read_formula("C6H12O6"), glucose), 1)
    2814.1
    """
    water = formula.count("H") - formula.charge
    total = formation.enthalpy
    for element, count in formula.counts:
        if element in ("H", "O"):
            continue
        if element not in _BURNT:
            return None
        total -= float(count) * _BURNT[element]
        water -= count * _PROTONS.get(element, 0)
    return total - float(water) / 2 * _WATER


@cache
def _table() -> Mapping[str, tuple[Formation, ...]]:
    found: defaultdict[str, list[Formation]] = defaultdict(list)
    with Path(__file__).with_name("formation.csv").open(encoding="utf-8", newline="") as file:
        for line in csv.DictReader(file):
            found[line["compound"]].append(
                Formation(
                    int(line["charge"]),
                    State(line["state"]),
                    float(line["gibbs_kJ"]),
                    float(line["enthalpy_kJ"]),
                    line["source"],
                )
            )
    return {name: tuple(forms) for name, forms in found.items()}
