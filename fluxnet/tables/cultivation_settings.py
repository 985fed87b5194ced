"""Numbers that hold for a whole cultivation: ``volume; 1.5; L`` above a table or on a sheet."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import field
from fractions import Fraction

from fluxnet.chemistry.catalogue import find_compound
from fluxnet.chemistry.units import UnitError
from fluxnet.chemistry.units_based import conversion_of
from fluxnet.chemistry.units_measured import Measure, MeasuredUnit
from fluxnet.chemistry.weighed import Substance
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.network.model import Network
from fluxnet.rates.cultivation import Setting, SettingKind
from fluxnet.tables.cultivation_words import gas_name, plain_words
from fluxnet.tables.numerals import Decimal, read_number, split_numeral
from fluxnet.tables.raw_clock import read_duration
from fluxnet.tables.raw_grid import RawGrid, RawValue, shown
from fluxnet.tables.raw_titles import read_raw_title, try_unit

__all__ = ["Told", "read_settings", "substance_of"]

_MEASURES = {
    SettingKind.VOLUME: (Measure.VOLUME,), SettingKind.MASS: (Measure.MASS,),
    SettingKind.DENSITY: (Measure.PER_VOLUME,),
    SettingKind.CONTENT: (Measure.PER_VOLUME, Measure.PER_MASS),
    SettingKind.FLOW: (Measure.VOLUME_FLOW, Measure.MASS_FLOW),
    SettingKind.INLET: (Measure.FRACTION,),
    SettingKind.GAS_FLOW: (Measure.VOLUME_FLOW, Measure.AMOUNT_FLOW, Measure.GAS_PER_BROTH),
    SettingKind.REFERENCE: (Measure.TEMPERATURE,),
    SettingKind.HUMIDITY_IN: (Measure.FRACTION, Measure.NUMBER),
    SettingKind.HUMIDITY_OUT: (Measure.FRACTION, Measure.NUMBER),
    SettingKind.CONDENSER: (Measure.TEMPERATURE,), SettingKind.PRESSURE: (Measure.PRESSURE,),
    SettingKind.TEMPERATURE: (Measure.TEMPERATURE,), SettingKind.PH: (Measure.NUMBER,),
    SettingKind.LAG: (Measure.TIME,), SettingKind.ASH: (Measure.FRACTION, Measure.NUMBER),
    SettingKind.MOISTURE: (Measure.FRACTION, Measure.NUMBER),
}  # fmt: skip
_STREAM = r"(?:feed|base|acid|antifoam|effluent|evaporation|medium|zulauf|lauge|säure)(?: \w)?"
_STREAMS = {"medium": "feed", "zulauf": "feed", "lauge": "base", "säure": "acid"}
_FIXED = (
    (r"(?:broth |initial |start(?:ing)? |working |culture )*volume|(?:start)?volumen|v0",
     SettingKind.VOLUME),
    (r"(?:broth |initial |start(?:ing)? )*(?:mass|weight)|(?:start)?gewicht|m0", SettingKind.MASS),
    (r"density|broth density|density of (?:the )?broth|dichte", SettingKind.DENSITY),
    (r"(?:inlet )?(?:gas|air) flow(?: ?rate)?|aeration(?: rate)?|begasung(?:srate)?|luftstrom",
     SettingKind.GAS_FLOW),
    (r"(?:gas )?(?:flow )?reference(?: temperature| state)?|reference temperature of the gas flow"
     r"|bezugstemperatur|normtemperatur", SettingKind.REFERENCE),
    (r"humidity in|(?:inlet|air) humidity|humidity of (?:the )?(?:inlet|air)(?: gas)?",
     SettingKind.HUMIDITY_IN),
    (r"humidity(?: out| at (?:the )?analy[sz]er)?|outlet humidity|relative humidity",
     SettingKind.HUMIDITY_OUT),
    (r"condenser(?: temperature)?|kühlertemperatur", SettingKind.CONDENSER),
    (r"(?:head ?space |ambient |air )?pressure|(?:luft)?druck", SettingKind.PRESSURE),
    (r"temperatur(?:e)?|broth temperature|temp\.?", SettingKind.TEMPERATURE),
    (r"ph(?: value)?", SettingKind.PH),
    (r"(?:analy[sz]er )?(?:lag|delay)|lag of the (?:gas )?analy[sz]er", SettingKind.LAG),
    (r"ash(?: content)?|asche", SettingKind.ASH),
    (r"moisture(?: content)?|feuchte", SettingKind.MOISTURE),
)  # fmt: skip
_OF_STREAM = (
    (rf"(?P<stream>{_STREAM}) density|density of (?:the )?(?P<of>{_STREAM})", SettingKind.DENSITY),
    (rf"(?P<stream>{_STREAM}) (?:flow(?: ?rate)?|rate)|flow of (?:the )?(?P<of>{_STREAM})",
     SettingKind.FLOW),
)  # fmt: skip
_CONTENT = re.compile(
    rf"(?:conc(?:entration)? of )?(?P<species>.+?) in (?:the )?(?P<stream>{_STREAM})"
    rf"|(?P<first>{_STREAM}) (?P<second>.+)"
)
_INLET = re.compile(r"(?:inlet|air|zuluft) (?P<front>.+)|(?P<back>.+) (?:in|inlet|in air|zuluft)")
_WORDS = {
    "mode": "mode", "betriebsart": "mode", "process mode": "mode", "operation": "mode",
    "run": "name", "name": "name", "cultivation": "name", "title": "name",
    "inoculation": "inoculation", "inoculated": "inoculation", "inoculated at": "inoculation",
    "inoculation time": "inoculation", "time of inoculation": "inoculation",
    "animpfzeit": "inoculation", "inokulation": "inoculation", "animpfung": "inoculation",
    "start of cultivation": "inoculation", "dates": "dates", "date order": "dates",
    "decimal": "decimal",
}  # fmt: skip


@record
class Told:
    """What lines outside the tables say.

    ``words`` holds mode, name, inoculation and the order of dates as they stood, with places;
    ``rest`` are lines that say nothing to the reader: place and text.
    """

    settings: tuple[Setting, ...] = ()
    words: dict[str, tuple[RawValue, str]] = field(default_factory=dict)
    rest: tuple[tuple[str, str], ...] = ()
    diagnostics: tuple[Diagnostic, ...] = ()
    dilution: float | None = None


def substance_of(name: str, network: Network | None) -> Substance | None:
    """What a conversion needs of a species; None without a formula."""
    species = None if network is None else network.find_species(name)
    compound = find_compound(species.entry or name if species is not None else name)
    ion = None if compound is None else compound.formula_ph7
    if species is not None and species.formula is not None:
        return Substance(name, species.formula, ion, species.ash or Fraction(0))
    return None if compound is None else Substance(name, compound.formula, ion)


def read_settings(
    grid: RawGrid, rows: Sequence[int], columns: Sequence[int], decimal: Decimal,
    network: Network | None, *, listed: bool,
) -> Told:
    """Read lines of key, value, unit and sd.

    Parameters
    ----------
    columns
        Where key, value, unit and sd stand.
    listed
        Whether the lines are a table of settings, so that one that is not understood is told.
    """
    settings: list[Setting] = []
    words: dict[str, tuple[RawValue, str]] = {}
    rest: list[tuple[str, str]] = []
    faults: list[Diagnostic] = []
    dilution: float | None = None
    for row in rows:
        key, value, unit, sd = (grid.cell(row, j) if j >= 0 else "" for j in columns)
        text = shown(key).strip().rstrip(":").strip()
        failed = grid.fault(row, columns[1]) is not None
        if value == "" and isinstance(key, str) and ":" in key and not failed:
            text, _, value = (p.strip() for p in key.partition(":"))
        place = grid.place(row, max(columns[1], 0))
        word = _WORDS.get(plain_words(read_raw_title(0, [text]).name))
        if word is not None and value != "":
            words[word] = (value, place)
            continue
        title = read_raw_title(0, [text])
        kind = _find(plain_words(title.name), title.name, network)
        told = f"{text} {shown(value)} {shown(unit)}".strip()
        if plain_words(title.name) in ("dilution rate", "d", "verdünnungsrate"):
            number = _number(value, decimal)
            dilution = number[0] if number else None
            continue
        fault = grid.fault(row, columns[1])
        if kind is None or (value == "" and fault is None):
            if listed:
                rest.append((place, told))
            continue
        found = _read(kind, value, shown(unit) or title.unit, sd, place, decimal, network)
        if isinstance(found, Setting):
            settings.append(found)
        elif listed or kind[0] is not SettingKind.MASS:
            name, message, mend = found
            faults.append(Diagnostic(
                name, f"{place} ({text}): {message}", grid.span(row, max(columns[1], 0)), mend=mend,
                source_line=grid.line_text(row),
            ))  # fmt: skip
    return Told(tuple(settings), words, tuple(rest), tuple(faults), dilution)


def _find(words: str, name: str, network: Network | None) -> tuple[SettingKind, str, str] | None:
    """Kind, species and stream of a setting's name."""
    for pattern, kind in _FIXED:
        if re.fullmatch(pattern, words):
            return kind, "", ""
    for pattern, kind in _OF_STREAM:
        found = re.fullmatch(pattern, words)
        if found is not None:
            return kind, "", _stream(found["stream"] or found["of"])
    plain = " ".join(name.split())
    found = _CONTENT.fullmatch(plain) or _CONTENT.fullmatch(plain.lower())
    if found is not None:
        species = found["species"] or found["second"]
        if substance_of(gas_name(species, network), network) is not None:
            stream = _stream((found["stream"] or found["first"]).lower())
            return SettingKind.CONTENT, gas_name(species, network), stream
    found = _INLET.fullmatch(plain)
    if found is not None:
        species = gas_name(found["front"] or found["back"], network)
        if substance_of(species, network) is not None:
            return SettingKind.INLET, species, ""
    return None


def _stream(words: str) -> str:
    first, _, number = words.partition(" ")
    return f"{_STREAMS.get(first, first)} {number}".strip()


def _number(value: RawValue, decimal: Decimal) -> tuple[float, float | None, str] | None:
    """Value, sd and unit of a cell such as ``1.5 ± 0.1 L``."""
    if isinstance(value, bool) or not isinstance(value, (str, int, float)):
        hours = read_duration(value)
        return None if hours is None else (hours, None, "h")
    if not isinstance(value, str):
        return float(value), None, ""
    found = re.match(r"[-+]?[\d.,]+(?:[eE][+-]?\d+)?(?:\s*(?:±|\+/?-)\s*[\d.,]+)?", value)
    if found is None:
        return None
    parts = split_numeral(found[0])
    number = read_number(parts.value, decimal)
    error = read_number(parts.error, decimal) if parts.error else None
    if number is None:
        other = Decimal.POINT if decimal is Decimal.COMMA else Decimal.COMMA
        number = read_number(parts.value, other) if "." in found[0] or "," in found[0] else None
        if number is None or len(re.split("[.,]", parts.value)[-1]) == 3:
            return None  # a thousand, or a fraction of three digits
    return number, error, value[found.end() :].strip()


def _read(
    kind: tuple[SettingKind, str, str], value: RawValue, unit: str, sd: RawValue, place: str,
    decimal: Decimal, network: Network | None,
) -> Setting | tuple[Name, str, str | None]:
    what, species, stream = kind
    number = _number(value, decimal)
    if number is None:
        return Name.UNREADABLE_CELL, f"`{shown(value)}` is no number", None
    size, error, behind = number
    text = unit or behind
    measured = _unit(what, text)
    if isinstance(measured, str):
        wrong = Name.WRONG_UNIT if text else Name.UNIT_MISSING
        return wrong, measured, f"write one such as {_MEASURES[what][0].value}"
    if what in (SettingKind.VOLUME, SettingKind.MASS):
        what = SettingKind.VOLUME if measured.measure is Measure.VOLUME else SettingKind.MASS
    given = _number(sd, decimal) if sd != "" else None
    error = given[0] if given is not None else error
    if isinstance(sd, str) and sd.strip().endswith("%") and error is not None:
        error = abs(size) * error / 100
    substance = substance_of(species, network) if what is SettingKind.CONTENT else None
    try:
        change = conversion_of(measured, substance, grams=what is SettingKind.DENSITY)
    except UnitError as fault:
        return Name.WRONG_UNIT, str(fault), None
    factor, base = change.factor, change.base
    if what is SettingKind.DENSITY:
        factor, base = factor / 1000, "kg/L"
    elif base == "mol/mol" and what is not SettingKind.INLET:
        base = "1"
    if what is SettingKind.GAS_FLOW and measured.reference is None and measured.standard:
        base = "L/h"
    result = float(Fraction(repr(size)) * factor + change.offset)
    spread = None if error is None else abs(error) * float(factor)
    return Setting(what, result, base, spread, species, stream, place)


def _unit(kind: SettingKind, text: str) -> MeasuredUnit | str:
    """The unit of a setting, or what is wrong with it."""
    allowed = _MEASURES[kind]
    if kind in (SettingKind.VOLUME, SettingKind.MASS):
        allowed = (Measure.VOLUME, Measure.MASS)
    if not text:
        if Measure.NUMBER in allowed:
            return MeasuredUnit("", Measure.NUMBER)
        return f"the {kind.value} has no unit"
    found = try_unit(text)
    if found is None or found.measure not in allowed:
        return f"`{text}` is no unit of a {kind.value}"
    return found
