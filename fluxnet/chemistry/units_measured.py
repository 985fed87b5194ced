"""Units of what is measured in a cultivation: times, volumes, flows, gas, concentrations.

Every unit has one base to which it is converted by an exact factor (and an offset, for
temperatures and gauge pressures). A gas flow in litres is an amount only with the temperature
that its litres are stated at: "normal" says 0 °C, "standard" says 0, 20 or 21.1 °C, so nothing.
"""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Mapping
from enum import Enum
from fractions import Fraction
from types import MappingProxyType
from typing import Final

from fluxnet.chemistry.unit_words import Dimension
from fluxnet.chemistry.units import Unit, UnitError, UnitFault, parse_unit, read_factors
from fluxnet.chemistry.weighed import split_form
from fluxnet.ground.record import record

__all__ = ["Measure", "MeasuredUnit", "read_measured_unit"]


class Measure(Enum):
    """What a unit measures; the value is the base unit."""

    TIME = "h"
    VOLUME = "L"
    MASS = "kg"
    VOLUME_FLOW = "L/h"
    MASS_FLOW = "kg/h"
    AMOUNT_FLOW = "mol/h"
    PER_VOLUME = "mmol/L"
    PER_MASS = "mmol/kg"
    FRACTION = "mol/mol"
    PRESSURE = "bar"
    TEMPERATURE = "°C"
    NUMBER = "1"
    PER_TIME = "1/h"
    GAS_PER_BROTH = "L/L/h"


@record
class MeasuredUnit:
    """A unit: ``base = factor * value + offset``, in the base unit of its measure.

    ``amount`` is the unit of an amount per litre or kilogram, whose factor needs the species.
    ``reference`` is the temperature that litres of gas are stated at [°C]; ``standard`` says
    that they are called standard litres, which leaves it open.
    """

    text: str
    measure: Measure
    factor: Fraction = Fraction(1)
    offset: Fraction = Fraction(0)
    amount: Unit | None = None
    reference: Fraction | None = None
    standard: bool = False


_ATMOSPHERE = Fraction("1.01325")
_PRESSURES: Final[Mapping[str, Fraction]] = MappingProxyType({
    "bar": Fraction(1), "bara": Fraction(1), "mbar": Fraction(1, 1000), "hPa": Fraction(1, 1000),
    "kPa": Fraction(1, 100), "Pa": Fraction(1, 10**5), "MPa": Fraction(10), "atm": _ATMOSPHERE,
    "torr": _ATMOSPHERE / 760, "mmHg": _ATMOSPHERE / 760,
})  # fmt: skip
_GAUGES = {"barg": "bar", "bar(g)": "bar", "mbarg": "mbar", "mbar(g)": "mbar", "baru": "bar"}
_TEMPERATURES = {
    **dict.fromkeys(("°C", "oC", "degC", "C", "deg C", "Grad C"), (Fraction(1), Fraction(0))),
    "K": (Fraction(1), Fraction("-273.15")),
    **dict.fromkeys(("°F", "degF", "F"), (Fraction(5, 9), Fraction(-160, 9))),
}
_FRACTIONS = {
    **dict.fromkeys((
        "%", "%v/v", "%(v/v)", "vol%", "vol.%", "vol.-%", "vol-%", "%vol", "mol%", "mol-%",
        "mole%", "%mol", "v/v%", "volume%", "%rh",
    ), Fraction(1, 100)),
    **dict.fromkeys(("mol/mol", "l/l", "v/v", "m3/m3"), Fraction(1)),
    **dict.fromkeys(("mmol/mol", "ml/l", "‰"), Fraction(1, 1000)),
    **dict.fromkeys(("ppm", "ppmv", "ppm(v)", "µmol/mol", "umol/mol"), Fraction(1, 10**6)),
    **dict.fromkeys(("ppb", "ppbv"), Fraction(1, 10**9)),
}  # fmt: skip
_PARTS_OF_BROTH = {
    **dict.fromkeys(("%w/v", "%(w/v)", "%m/v", "g/100ml", "g/dl"), "10 g/L"),
    **dict.fromkeys((
        "%w/w", "%(w/w)", "%m/m", "wt%", "wt.%", "wt.-%", "gew.-%", "gew%",
    ), "10 g/kg"),
}  # fmt: skip
_NUMBERS = frozenset({"1", "-", "–", "au", "a.u.", "od", "ph", "rel.", "dimensionless"})
_FLOWS = {"lpm": "L/min", "lph": "L/h", "ccm": "mL/min", "cfm": "cubic_foot/min"}
_NORMAL = re.compile(
    r"(?:N(?:orm(?:al)?)?[ .\-]?(?P<after>(?:m?[Ll](?:it(?:re|er)s?)?|m3|lpm|LPM)\b.*)"
    r"|(?P<before>m?[Ll])(?:[ _]?[nN]|\([nN]\))(?P<rest>/.*))"
)
_STANDARD = re.compile(
    r"(?:s(?:td|tandard)?[ .\-]?(?P<after>(?:m?[Ll](?:it(?:re|er)s?)?|m3)\b.*)"
    r"|(?:s|S)(?P<short>ccm|CCM|lpm|LPM))"
)
_STATED = re.compile(
    r"\s*[,;(]?\s*(?:@|at|bei|ref(?:erence)?\.?)?\s*(?P<number>[+-]?\d+(?:[.,]\d+)?)\s*°\s?C\s*"
    r"(?:[,/;]?\s*1[.,]01\d*\s*(?:bar|atm))?\s*\)?\s*$"
)
_WHAT_OF = re.compile(
    r"(?<=[gLl])[ _]*\(?(?:dry[ -]?(?:weight|mass|matter)|[cd]?[cd]w|dw|cells|biomass|broth"
    r"|culture(?: broth)?|medium|reactor)\)?(?=$|[\s/*·^-])", re.IGNORECASE,
)  # fmt: skip
_MEASURES = {
    (("h", 1),): Measure.TIME, (("L", 1),): Measure.VOLUME, (("g", 1),): Measure.MASS,
    (("L", 1), ("h", -1)): Measure.VOLUME_FLOW, (("g", 1), ("h", -1)): Measure.MASS_FLOW,
    (("mmol", 1), ("h", -1)): Measure.AMOUNT_FLOW, (("h", -1),): Measure.PER_TIME,
}  # fmt: skip


def read_measured_unit(text: str) -> MeasuredUnit:
    """Read a unit of raw data.

    Raises
    ------
    UnitError
        Where it cannot be read, or measures nothing that raw data hold.

    Examples
    --------
    >>> unit = read_measured_unit("NL/min")
    >>> unit.measure.value, unit.factor, unit.reference
    ('L/h', Fraction(60, 1), Fraction(0, 1))
    >>> read_measured_unit("L/min (20 °C)").reference, read_measured_unit("mL").factor
    (Fraction(20, 1), Fraction(1, 1000))
    >>> read_measured_unit("% w/v").amount.text
    '10 g/L'
    """
    plain = " ".join(unicodedata.normalize("NFKC", text).replace("\u2212", "-").split())
    folded = plain.replace(" ", "").lower()
    if folded in _FRACTIONS:
        return MeasuredUnit(plain, Measure.FRACTION, _FRACTIONS[folded])
    if folded in _NUMBERS:
        return MeasuredUnit(plain, Measure.NUMBER)
    if folded in _PARTS_OF_BROTH:
        return _of_amount(plain, _PARTS_OF_BROTH[folded])
    if folded == "vvm" or folded in ("l/l/min", "vol/vol/min"):
        return MeasuredUnit(plain, Measure.GAS_PER_BROTH, Fraction(60))
    if folded in ("vvh", "l/l/h"):
        return MeasuredUnit(plain, Measure.GAS_PER_BROTH)
    if plain in _TEMPERATURES:
        return MeasuredUnit(plain, Measure.TEMPERATURE, *_TEMPERATURES[plain])
    bare = plain.replace(" ", "")
    if bare in _GAUGES:
        size = _PRESSURES[_GAUGES[bare]]
        return MeasuredUnit(plain, Measure.PRESSURE, size, _ATMOSPHERE)
    if bare in _PRESSURES:
        return MeasuredUnit(plain, Measure.PRESSURE, _PRESSURES[bare])
    return _read_compound(plain)


def _read_compound(plain: str) -> MeasuredUnit:
    """A unit of words above and below a line, litres of gas among them."""
    body, reference, standard = plain, None, False
    stated = _STATED.search(body)
    if stated is not None and stated.start():
        reference = Fraction(stated["number"].replace(",", "."))
        body = body[: stated.start()].strip()
    normal, called = _NORMAL.fullmatch(body), _STANDARD.fullmatch(body)
    if normal is not None:
        body = normal["after"] or normal["before"] + normal["rest"]
        reference = Fraction(0) if reference is None else reference
    elif called is not None:
        body, standard = called["after"] or called["short"].lower(), True
    body = _FLOWS.get(body.lower(), body)
    body = _WHAT_OF.sub("", body)
    if body.lower() == "vvm":
        return MeasuredUnit(plain, Measure.GAS_PER_BROTH, Fraction(60), reference=reference)
    if not body.strip():
        raise UnitError(UnitFault.UNKNOWN, "there is no unit", plain)
    try:
        scale, factors = read_factors(split_form(body)[0])
    except UnitError:
        found = _by_pint(plain)
        if found is None:
            raise
        return found
    powers: dict[str, int] = {}
    for factor in factors:
        scale *= factor.word.scale**factor.power
        name = factor.word.dimension.value
        powers[name] = powers.get(name, 0) + factor.power
    key = tuple((name, power) for name, power in powers.items() if power)
    measure = _MEASURES.get(tuple(sorted(key, key=lambda one: -one[1])))
    if measure is None:
        if Dimension.OTHER.value in powers:
            found = _by_pint(plain)
            if found is not None:
                return found
        return _of_amount(plain, body)
    if measure in (Measure.MASS, Measure.MASS_FLOW, Measure.AMOUNT_FLOW):
        scale /= 1000
    return MeasuredUnit(plain, measure, scale, reference=reference, standard=standard)


def _of_amount(plain: str, body: str) -> MeasuredUnit:
    amount = parse_unit(body)
    if amount.per == (Dimension.VOLUME,):
        return MeasuredUnit(plain, Measure.PER_VOLUME, amount.scale, amount=amount)
    if amount.per == (Dimension.MASS,):
        return MeasuredUnit(plain, Measure.PER_MASS, amount.scale, amount=amount)
    raise UnitError(UnitFault.WRONG, f"`{plain}` measures nothing that raw data hold", plain)


_PINTED = {"bar": Measure.PRESSURE, "liter/hour": Measure.VOLUME_FLOW, "kg/hour": Measure.MASS_FLOW}


def _by_pint(plain: str) -> MeasuredUnit | None:
    """An unusual unit, such as ``psi`` or ``gallon/day``, with pint; None where it has none."""
    if not re.fullmatch(r"[A-Za-z_]+(?:\s*/\s*[A-Za-z_]+)?", plain):
        return None
    from fluxnet.chemistry.unit_words import registry

    try:
        quantity = registry().Quantity(1, plain)
    except Exception:  # pint has no common fault for texts that it cannot read
        return None
    for base, measure in _PINTED.items():
        if quantity.check(registry().Unit(base).dimensionality):
            size = Fraction(f"{float(quantity.to(base).magnitude):.12g}")
            return MeasuredUnit(plain, measure, size)
    return None
