"""The elements: atomic weights, and electrons relative to the reference compounds.

``ATOMIC_WEIGHT`` holds the abridged (five-figure) standard atomic weights of the IUPAC, table
of 2021; where the table gives an interval, the conventional value. The numbers are from
memory; the tests compare each with the element table of the package ``chemicals``.

``VALENCE`` is the number of electrons that one atom brings into the degree of reduction,
relative to CO2, H2O, H+, NH3, phosphate and sulfate (Roels 1983; from memory). Metals and
halogens stand at their usual ion in a medium: iron at Fe(2+), the form in which it is fed;
molybdenum and tungsten as molybdate and tungstate, boron and silicon as borate and silicate.
An element that is missing here has no reference: electron balances with it are not checked.
"""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType
from typing import Final

__all__ = ["ATOMIC_WEIGHT", "VALENCE"]

ATOMIC_WEIGHT: Final[Mapping[str, float]] = MappingProxyType(
    {
        "H": 1.008, "He": 4.0026, "Li": 6.94, "Be": 9.0122, "B": 10.81, "C": 12.011,
        "N": 14.007, "O": 15.999, "F": 18.998, "Ne": 20.180, "Na": 22.990, "Mg": 24.305,
        "Al": 26.982, "Si": 28.085, "P": 30.974, "S": 32.06, "Cl": 35.45, "Ar": 39.95,
        "K": 39.098, "Ca": 40.078, "Sc": 44.956, "Ti": 47.867, "V": 50.942, "Cr": 51.996,
        "Mn": 54.938, "Fe": 55.845, "Co": 58.933, "Ni": 58.693, "Cu": 63.546, "Zn": 65.38,
        "Ga": 69.723, "Ge": 72.630, "As": 74.922, "Se": 78.971, "Br": 79.904, "Kr": 83.798,
        "Rb": 85.468, "Sr": 87.62, "Y": 88.906, "Zr": 91.224, "Nb": 92.906, "Mo": 95.95,
        "Ru": 101.07, "Rh": 102.91, "Pd": 106.42, "Ag": 107.87, "Cd": 112.41, "In": 114.82,
        "Sn": 118.71, "Sb": 121.76, "Te": 127.60, "I": 126.90, "Xe": 131.29, "Cs": 132.91,
        "Ba": 137.33, "La": 138.91, "Ce": 140.12, "Pr": 140.91, "Nd": 144.24, "Sm": 150.36,
        "Eu": 151.96, "Gd": 157.25, "Tb": 158.93, "Dy": 162.50, "Ho": 164.93, "Er": 167.26,
        "Tm": 168.93, "Yb": 173.05, "Lu": 174.97, "Hf": 178.49, "Ta": 180.95, "W": 183.84,
        "Re": 186.21, "Os": 190.23, "Ir": 192.22, "Pt": 195.08, "Au": 196.97, "Hg": 200.59,
        "Tl": 204.38, "Pb": 207.2, "Bi": 208.98, "Th": 232.04, "U": 238.03,
    }
)  # fmt: skip
"""Conventional atomic weight by element symbol [g/mol]."""

VALENCE: Final[Mapping[str, int]] = MappingProxyType(
    {
        "C": 4, "H": 1, "O": -2, "N": -3, "P": 5, "S": 6,
        "Li": 1, "Na": 1, "K": 1, "Rb": 1, "Cs": 1, "Ag": 1,
        "Mg": 2, "Ca": 2, "Sr": 2, "Ba": 2, "Mn": 2, "Fe": 2, "Co": 2, "Ni": 2, "Cu": 2,
        "Zn": 2, "Cd": 2, "Al": 3, "B": 3, "Si": 4, "Mo": 6, "W": 6,
        "F": -1, "Cl": -1, "Br": -1, "I": -1,
    }
)  # fmt: skip
"""Electrons per atom in the degree of reduction, with ammonia as nitrogen reference."""
