"""What a table's carried columns say of a cultivation: temperature, gas flow, concentrations.

The columns are those that a table carries through to its results, by their titles:
``temperature [C]``, ``gas flow [vvm]``, ``ethanol conc [g/L]``. A unit may also stand in the cell.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from math import isfinite

from fluxnet.chemistry.catalogue import find_compound
from fluxnet.ground.pattern import pattern_of
from fluxnet.ground.record import record

__all__ = ["Conditions", "read_conditions"]

ATMOSPHERE = 101_325.0
_ZERO_C = 273.15
_GAS = 8.314462618  # J/mol/K (CODATA 2018, exact)
_AMBIENT_C = 20.0
"""A gas volume without a reference condition is taken at this temperature and 1 atm."""

_TITLE = pattern_of(r"(?P<name>[^\[(]*)(?:[\[(](?P<unit>[^\])]*)[\])])?\s*")
_CELL = pattern_of(r"(?P<number>[+-]?\d+(?:[.,]\d+)?(?:[eE][+-]?\d+)?)\s*(?P<unit>.*)")
_AT = pattern_of(r"\bat\s+(?P<celsius>-?\d+(?:\.\d+)?)\s*°?\s*C\b.*", re.IGNORECASE)
_CONCENTRATION = pattern_of(r"(?P<species>.+?)[ _]conc(?:entration|\.)?", re.IGNORECASE)

_NAMES = {
    **dict.fromkeys(("temperature", "temp"), "temperature"),
    **dict.fromkeys(("gas flow", "air flow", "gas flow rate", "aeration"), "gas flow"),
    **dict.fromkeys(("volume", "broth volume", "working volume"), "volume"),
    "ph": "pH",
    **dict.fromkeys(("dilution", "dilution rate"), "dilution"),
    **dict.fromkeys(("off-gas co2", "co2 in off-gas", "pco2"), "off-gas CO2"),
    "pressure": "pressure",
    **dict.fromkeys(("duration", "cultivation time"), "duration"),
}
_DRY_WEIGHT = frozenset({"dry weight", "cdw", "dcw"})
_BIOMASS = _DRY_WEIGHT | {"biomass", "cell", "x"}
_PRESSURES = {"%": ATMOSPHERE / 100, "pa": 1.0, "kpa": 1e3, "mbar": 100.0, "bar": 1e5,
              "atm": ATMOSPHERE}  # fmt: skip
_LITRES = {"l": 1.0, "ml": 1e-3, "m3": 1e3}
_HOURS = {"h": 1.0, "d": 24.0, "min": 1 / 60}
_MOLAR = {"mm": 1.0, "mmol/l": 1.0, "m": 1e3, "mol/l": 1e3}
_GRAMS = {"g/l": 1.0, "mg/l": 1e-3, "kg/m3": 1.0, "g/kg": 1.0}


@record
class Conditions:
    """The conditions of a run, None where nothing tells them.

    ``kelvin``; ``gas_flow`` in mol per hour and litre of broth; ``pressure`` [Pa];
    ``carbon_dioxide``: its partial pressure in the off-gas [Pa]; ``dilution`` [1/h];
    ``duration`` [h]; ``biomass`` [g/L]; ``concentrations`` [mmol/L] by the catalogue's name.
    ``gas_words`` is the gas flow as it was written.
    """

    kelvin: float | None = None
    gas_flow: float | None = None
    gas_words: str = ""
    pressure: float = ATMOSPHERE
    ph: float | None = None
    dilution: float | None = None
    carbon_dioxide: float | None = None
    duration: float | None = None
    biomass: float | None = None
    concentrations: tuple[tuple[str, float], ...] = ()

    def concentration(self, entry: str) -> float | None:
        """The concentration of a compound in the broth [mmol/L]."""
        return dict(self.concentrations).get(entry)


def read_conditions(columns: Mapping[str, str]) -> Conditions:
    """The conditions that carried columns tell; what cannot be read is as if it were blank.

    Parameters
    ----------
    columns
        Texts by title, as a run carries them.

    Examples
    --------
    >>> found = read_conditions({"temperature [C]": "30", "gas flow [vvm]": "1", "pH": "7.0"})
    >>> found.kelvin, round(found.gas_flow, 3), found.ph
    (303.15, 2.494, 7.0)
    """
    told: dict[str, tuple[float, str]] = {}
    amounts: dict[str, float] = {}
    grown: float | None = None
    for title, text in columns.items():
        name, number, unit = _column(title, text)
        if number is None:
            continue
        species = _CONCENTRATION.fullmatch(name)
        if name.lower() in _NAMES:
            told.setdefault(_NAMES[name.lower()], (number, unit))
        elif _is_biomass(name, species):
            grown = _scaled(number, unit, _GRAMS, "g/l")
        elif species is not None:
            entry, amount = _amount(species["species"], number, unit)
            if amount is not None:
                amounts[entry] = amount

    def of(name: str, units: Mapping[str, float], usual: str) -> float | None:
        return _scaled(*told[name], units, usual) if name in told else None

    flow, words = _gas_flow(told.get("gas flow"), of("volume", _LITRES, "l"))
    pressure = of("pressure", {k: v for k, v in _PRESSURES.items() if k != "%"}, "bar")
    share = of("off-gas CO2", _PRESSURES, "%")
    if share is not None and pressure and told["off-gas CO2"][1] in ("", "%"):
        share *= pressure / ATMOSPHERE
    return Conditions(
        kelvin=_kelvin(told.get("temperature")),
        gas_flow=flow,
        gas_words=words,
        pressure=pressure or ATMOSPHERE,
        ph=of("pH", {"": 1.0}, ""),
        dilution=of("dilution", {"1/h": 1.0, "h-1": 1.0, "/h": 1.0, "1/d": 1 / 24}, "1/h"),
        carbon_dioxide=share,
        duration=of("duration", _HOURS, "h"),
        biomass=grown,
        concentrations=tuple(amounts.items()),
    )


def _is_biomass(name: str, concentration: re.Match[str] | None) -> bool:
    """Whether a column tells the dry weight per litre."""
    bare = name if concentration is None else concentration["species"]
    return bare.lower() in (_DRY_WEIGHT if concentration is None else _BIOMASS)


def _column(title: str, text: str) -> tuple[str, float | None, str]:
    """The name, number and unit of a column, the unit from the cell where one stands there."""
    head, cell = _TITLE.fullmatch(title.strip()), _CELL.fullmatch(text.strip())
    if head is None or cell is None:
        return title, None, ""
    number = float(cell["number"].replace(",", "."))
    unit = (cell["unit"] or head["unit"] or "").strip()
    return head["name"].strip(), number if isfinite(number) else None, unit


def _scaled(number: float, unit: str, units: Mapping[str, float], usual: str) -> float | None:
    factor = units.get(unit.lower() or usual)
    return None if factor is None or number < 0 else number * factor


def _kelvin(told: tuple[float, str] | None) -> float | None:
    if told is None:
        return None
    number, unit = told
    kelvin = number if unit == "K" else number + _ZERO_C
    return kelvin if unit in ("", "C", "°C", "K") and 250 < kelvin < 400 else None


def _amount(species: str, number: float, unit: str) -> tuple[str, float | None]:
    """The catalogue's name of a compound, and mmol/L of it."""
    compound = find_compound(species)
    if compound is None:
        return species, None
    grams = _scaled(number, unit, _GRAMS, "g/l")
    if grams is not None and compound.molar_mass:
        return compound.name, 1e3 * grams / compound.molar_mass
    return compound.name, _scaled(number, unit, _MOLAR, "")


def _gas_flow(told: tuple[float, str] | None, litres: float | None) -> tuple[float | None, str]:
    """Moles of gas per hour and litre of broth, and the flow in words with its reference.

    vvm are volumes of gas per volume of broth and minute; a unit that begins with N counts
    litres at 0 °C; ``at 25 C`` may stand behind any.
    """
    if told is None:
        return None, ""
    number, written = told
    reference = _AT.search(written)
    unit = _AT.sub("", written).strip()
    celsius = float(reference["celsius"]) if reference else _AMBIENT_C
    if unit.lower() in ("mol/h", "mol/l/h", "mmol/l/h"):
        moles = number / (1e3 if unit.lower().startswith("mm") else 1.0)
        each = moles if "/l/" in unit.lower() else moles / litres if litres else None
        return each, f"{number:g} {unit}"
    if unit[:1] in ("N", "n") and not reference:
        celsius, unit = 0.0, unit[1:]
    minutes = {"vvm": 60.0, "l/l/min": 60.0, "l/l/h": 1.0}.get(unit.lower())
    whole = {"l/min": 60.0, "l/h": 1.0, "ml/min": 0.06}.get(unit.lower())
    if minutes is None and (whole is None or not litres):
        return None, ""
    volumes = number * (minutes if minutes is not None else (whole or 0.0) / (litres or 1.0))
    per_mole = 1e3 * _GAS * (celsius + _ZERO_C) / ATMOSPHERE
    return volumes / per_mole, f"{number:g} {unit} at {celsius:g} °C"
