"""The catalogue: compounds of fermentation practice with names, formulas and heats.

The data stand in ``catalogue.csv`` beside this file, one compound a line, each value with its
source. Formulas and charges at pH 7 are from memory, as each line says; where the data package
``chemicals`` knows the compound its formula was compared, and the tests compare it again. The
names, German ones among them, are from memory.
"""

from __future__ import annotations

import csv
import unicodedata
from collections.abc import Iterator, Mapping
from dataclasses import field
from enum import Enum
from fractions import Fraction
from functools import cache
from pathlib import Path

from fluxnet.chemistry.formula import EMPTY, Formula, composition, molar_mass
from fluxnet.chemistry.reader import read_formula
from fluxnet.ground.record import record

__all__ = [
    "Catalogue", "Compound", "CompoundKind", "Plausibility", "find_compound", "load_catalogue",
]  # fmt: skip


class CompoundKind(Enum):
    """What a compound is to a fermentation.

    The formula of a ``BOUND_GROUP`` is the acid less water (acetyl-CoA is C2H2O); that of an
    ``ELECTRON_CARRIER`` is its cargo; an ``ENERGY_CARRIER`` has an empty one.
    """

    SUGAR = "sugar"
    POLYOL = "polyol"
    ALCOHOL = "alcohol"
    CARBONYL = "carbonyl"
    ESTER = "ester"
    ACID = "acid"
    AMINO_ACID = "amino-acid"
    AMINE = "amine"
    NUCLEOBASE = "nucleobase"
    HYDROCARBON = "hydrocarbon"
    GAS = "gas"
    NITROGEN = "nitrogen"
    SULFUR = "sulfur"
    PHOSPHORUS = "phosphorus"
    SALT = "salt"
    OTHER = "other"
    BIOMASS = "biomass"
    INTERMEDIATE = "intermediate"
    BOUND_GROUP = "bound-group"
    ELECTRON_CARRIER = "electron-carrier"
    ENERGY_CARRIER = "energy-carrier"

    @property
    def is_carrier(self) -> bool:
        """Whether it carries electrons or energy."""
        return self in (CompoundKind.ELECTRON_CARRIER, CompoundKind.ENERGY_CARRIER)


class Plausibility(Enum):
    """How likely a compound is as an unmeasured by-product (common practice, from memory)."""

    COMMON = "common"
    RARE = "rare"
    NO = "no"


@record
class Compound:
    """One compound of the catalogue.

    ``formula`` is the neutral form (the free acid or base), ``formula_ph7`` the form at pH 7
    with its charge. ``combustion_kJ`` is the heat given off on combustion to CO2(g), H2O(l)
    and N2(g) [kJ/mol], positive, of the pure compound in ``combustion_state`` (s, l or g).
    """

    name: str
    synonyms: tuple[str, ...]
    formula: Formula
    formula_ph7: Formula
    kind: CompoundKind
    byproduct: Plausibility
    formula_source: str
    registry_number: str | None = None
    combustion_kJ: float | None = None  # noqa: N815
    combustion_state: str | None = None
    combustion_source: str | None = None

    @property
    def charge(self) -> int:
        """The charge of the form at pH 7."""
        return int(self.formula_ph7.charge)

    @property
    def molar_mass(self) -> float:
        """Molar mass of the neutral form [g/mol]; 0 for an energy carrier."""
        return molar_mass(self.formula)


@record
class Catalogue:
    """All compounds, found by any of their names.

    Names are compared without regard to case; blanks and underscores count as hyphens; a
    leading ``D-``, ``L-`` or ``DL-`` is ignored where the name is not found with it.
    """

    names: tuple[str, ...]
    _lines: tuple[Mapping[str, str], ...] = field(repr=False)
    _keys: Mapping[str, int] = field(repr=False)

    def find(self, name: str) -> Compound | None:
        """The compound of that name or synonym, or None.

        Examples
        --------
        >>> load_catalogue().find("Acetic acid").name
        'acetate'
        """
        key = _key(name)
        place = self._keys.get(key)
        if place is None:
            for prefix in ("d-", "l-", "dl-", "(r)-", "(s)-"):
                if key.startswith(prefix):
                    place = self._keys.get(key[len(prefix) :])
        return None if place is None else _compound(place)

    def nearest(self, name: str, most: int = 3) -> tuple[str, ...]:
        """Names of compounds whose names or synonyms are spelt nearly so, the nearest first.

        Examples
        --------
        >>> load_catalogue().nearest("glucos")[0]
        'glucose'
        """
        from difflib import get_close_matches

        keys = get_close_matches(_key(name), self._keys, n=2 * most, cutoff=0.75)
        return tuple(dict.fromkeys(self.names[self._keys[k]] for k in keys))[:most]

    def __iter__(self) -> Iterator[Compound]:
        return (_compound(place) for place in range(len(self.names)))

    def __len__(self) -> int:
        return len(self.names)


def find_compound(name: str) -> Compound | None:
    """The compound of that name in the catalogue, or None.

    Examples
    --------
    >>> compound = find_compound("acetic acid")
    >>> compound.name, compound.formula.written, find_compound("Essigsäure") is compound
    ('acetate', 'C2H4O2', True)
    """
    return load_catalogue().find(name)


@cache
def load_catalogue() -> Catalogue:
    """The catalogue. It is read once; a compound is made when it is first asked for.

    Examples
    --------
    >>> len(load_catalogue()) > 150
    True
    """
    with Path(__file__).with_name("catalogue.csv").open(encoding="utf-8", newline="") as file:
        lines = tuple(csv.DictReader(file))
    keys: dict[str, int] = {}
    for place, line in enumerate(lines):
        for name in (line["name"], *_list(line["synonyms"])):
            keys.setdefault(_key(name), place)
    return Catalogue(tuple(line["name"] for line in lines), lines, keys)


@cache
def _compound(place: int) -> Compound:
    line = load_catalogue()._lines[place]
    formula = read_formula(line["formula"]) if line["formula"] else EMPTY
    charge = int(line["charge_ph7"])
    combustion = line["combustion_kJ"]
    return Compound(
        name=line["name"],
        synonyms=_list(line["synonyms"]),
        formula=formula,
        formula_ph7=_with_charge(formula, charge),
        kind=CompoundKind(line["kind"]),
        byproduct=Plausibility(line["byproduct"]),
        formula_source=line["formula_source"],
        registry_number=line["cas"] or None,
        combustion_kJ=float(combustion) if combustion else None,
        combustion_state=line["combustion_state"] or None,
        combustion_source=line["combustion_source"] or None,
    )


def _with_charge(formula: Formula, charge: int) -> Formula:
    """The form of that charge: protons added to or taken from a formula."""
    protons = Fraction(charge) - formula.charge
    if not protons:
        return formula
    counts = dict(formula.counts)
    counts["H"] = counts.get("H", Fraction(0)) + protons
    return composition(counts, charge)


def _list(cell: str) -> tuple[str, ...]:
    return tuple(cell.split("|")) if cell else ()


def _key(name: str) -> str:
    """A name as it is compared."""
    plain = unicodedata.normalize("NFKC", name).replace("\u2212", "-").casefold()
    return "-".join(plain.replace("_", " ").split())
