"""What a column of raw data means, told by its title, or by the words of the mapping file."""

from __future__ import annotations

import re
import unicodedata
from enum import Enum

from fluxnet.chemistry.catalogue import CompoundKind, find_compound
from fluxnet.chemistry.units_measured import Measure, MeasuredUnit
from fluxnet.ground.record import record
from fluxnet.network.model import Network
from fluxnet.rates.cultivation import Form, SeriesKind
from fluxnet.tables.vocabulary import Vocabulary, biomass_species, find_species

__all__ = ["MEASURES", "Meaning", "Part", "gas_name", "plain_words", "read_meaning"]


class Part(Enum):
    """What a column is to its table."""

    HOURS = "time"
    CLOCK = "clock"
    TIME_OF_DAY = "time of day"
    RUN = "run"
    VALUE = "value"
    IGNORED = "ignore"


@record
class Meaning:
    """What a column holds; ``how`` says by what it was told: name, synonym, unit, mapping file."""

    part: Part
    kind: SeriesKind | None = None
    name: str = ""
    form: Form = Form.STATE
    how: str = "name"
    gauge: bool = False
    bottle: bool = False
    is_sd: bool = False

    @property
    def words(self) -> str:
        """The words that mean it in a mapping file."""
        if self.kind is None:
            return self.part.value
        told = _told(self)
        return f"{told} sd" if self.is_sd else told


_HOURS = frozenset({
    "time", "t", "process time", "elapsed time", "age", "fermentation time", "culture time",
    "cultivation time", "culture age", "run time", "runtime", "batch time", "batch age", "hours",
    "time since inoculation", "zeit", "prozesszeit", "laufzeit", "fermentationszeit",
    "kultivierungszeit", "fermentationsdauer", "duration", "dauer", "sample time", "sampling time",
    "probenzeit", "inoculation time", "relative time", "time after inoculation", "h", "eft",
})  # fmt: skip
_CLOCKS = frozenset({
    "clock", "wall clock", "date", "datetime", "date time", "date/time", "date / time",
    "date and time", "timestamp", "time stamp", "pdatetime", "datum", "datum/uhrzeit",
    "datum / uhrzeit", "datum uhrzeit", "zeitstempel", "sampled at", "local time", "utc",
    "datum und uhrzeit", "datum/zeit",
})  # fmt: skip
_DAY_TIMES = frozenset({"time of day", "uhrzeit", "clock time", "hh:mm"})
_RUNS = frozenset({
    "run", "run id", "cultivation", "fermentation", "reactor", "vessel", "fermenter", "bioreactor",
    "reaktor", "versuch", "ansatz", "lauf", "experiment",
})  # fmt: skip
_IGNORED = frozenset({
    "ignore", "po2", "do", "do2", "dissolved oxygen", "gelöstsauerstoff", "stirrer", "rpm",
    "agitation", "stirring", "rührer", "rührerdrehzahl", "comment", "comments", "remark", "remarks",
    "note", "notes", "operator", "bemerkung", "kommentar", "strain", "stamm", "sample no",
    "sample no.", "sample id", "sample name", "sample number", "no", "no.", "nr", "nr.", "#",
    "index", "probe", "sample", "probennummer", "event", "phase", "status",
})  # fmt: skip
_STREAMS = {
    SeriesKind.FEED: "feed feeding zulauf substrate-feed zufütterung nutrient",
    SeriesKind.BASE: "base alkali naoh koh nh4oh nh3 lauge titrant",
    SeriesKind.ACID: "acid säure hcl h2so4 h3po4",
    SeriesKind.ANTIFOAM: "antifoam antischaum entschäumer defoamer",
    SeriesKind.SAMPLE: "sample samples sampling probe probenahme sampled withdrawn",
    SeriesKind.EFFLUENT: "effluent outflow harvest ernte overflow bleed",
    SeriesKind.EVAPORATION: "evaporation evaporated condensate verdunstung",
}
_FORM_WORDS = {
    **dict.fromkeys(("rate", "flow", "pump", "flowrate", "speed"), "rate"),
    **dict.fromkeys(("event", "events", "pulse", "pulses", "shot", "bolus", "addition", "drawn"),
                    "event"),
    **dict.fromkeys(("balance", "weight", "bottle", "scale", "waage", "gewicht", "mass",
                     "reservoir", "flasche"), "bottle"),
    **dict.fromkeys(("total", "totaliser", "totalizer", "cumulated", "cumulative", "sum", "summe",
                     "gesamt", "added", "counter", "zähler"), "total"),
    **dict.fromkeys(("volume", "volumen", "v", "m", "f"), "amount"),
}  # fmt: skip
_FIXED: tuple[tuple[str, SeriesKind, str], ...] = (
    (r"od|od ?\d{3}|a ?\d{3}|optical density(?: \d+)?|absorbance|extinction|extinktion|abs"
     r"|optische dichte", SeriesKind.OPTICAL_DENSITY, ""),
    (r"dry (?:cell )?(?:weight|mass|matter)|cell dry (?:weight|mass)|dw|cdw|dcw|bdm|btm|bts|x|c_?x"
     r"|biomass(?: concentration| dry weight)?|biotrocken(?:masse|substanz)|trockenmasse|biomasse"
     r"|cells", SeriesKind.DRY_WEIGHT, ""),
    (r"analy[sz]er pressure|pressure (?:at|in) (?:the )?analy[sz]er", SeriesKind.PRESSURE,
     "analyser"),
    (r"(?:head(?:space)? |reactor |vessel |over)?pressure|p|(?:über)?druck|gauge pressure",
     SeriesKind.PRESSURE, ""),
    (r"(?:broth |reactor |culture )?(?:temp(?:erature|eratur)?\.?|t)", SeriesKind.TEMPERATURE, ""),
    (r"ph(?: value| wert|-wert)?", SeriesKind.PH, ""),
    (r"(?:gas|air|aeration|inlet|supply)(?: gas)?(?: flow(?: ?rate)?(?: in)?| rate)|aeration"
     r"|flow in|f_?in|f_?(?:air|gas)|begasung(?:srate)?|gasfluss|luftstrom|luft|zuluft(?:strom)?"
     r"|gas flow|air ?flow", SeriesKind.GAS_FLOW, ""),
    (r"(?:gas|outlet|off[- ]?gas|exhaust)(?: gas)? flow(?: ?rate)?(?: out)?|flow out|f_?out"
     r"|abgas(?:strom|fluss)", SeriesKind.GAS_FLOW_OUT, ""),
    (r"(?:broth|culture|reactor|working|vessel|liquid)(?: (?:volume|weight|mass|level|balance))?"
     r"|volume|weight|volumen|v_?(?:l|r|broth)|v|reaktor(?:gewicht|volumen|waage)",
     SeriesKind.BROTH, ""),
)  # fmt: skip
_OUT = re.compile(
    r"\b(?:off[- ]?gas|exhaust(?: gas)?|outlet(?: gas)?|out(?:going)?|exit(?: gas)?|abgas|vent"
    r"|analy[sz]er|gas out)\b", re.IGNORECASE,
)  # fmt: skip
_IN = re.compile(r"\b(?:inlet(?: gas)?|in|supply|zuluft|gas in)\b", re.IGNORECASE)
_NOISE = re.compile(
    r"\b(?:conc(?:entration)?\.?|konz(?:entration)?\.?|residual|rest|supernatant|enzymatic|hplc|gc"
    r"|titre|titer|broth|content|fraction|gehalt|ex)\b|[()]", re.IGNORECASE,
)  # fmt: skip
_FRONT = re.compile(r"^(?:[cxyCXY]_|[cxy](?=[\s(])|[xyXY](?=C?O2\b)|EX(?=C?O2\b))")

MEASURES: dict[SeriesKind, tuple[Measure, ...]] = {
    SeriesKind.CONCENTRATION: (Measure.PER_VOLUME, Measure.PER_MASS),
    SeriesKind.DRY_WEIGHT: (Measure.PER_VOLUME, Measure.PER_MASS),
    SeriesKind.OPTICAL_DENSITY: (Measure.NUMBER,),
    SeriesKind.GAS_OUT: (Measure.FRACTION,),
    SeriesKind.GAS_IN: (Measure.FRACTION,),
    SeriesKind.GAS_FLOW: (Measure.VOLUME_FLOW, Measure.AMOUNT_FLOW, Measure.GAS_PER_BROTH),
    SeriesKind.GAS_FLOW_OUT: (Measure.VOLUME_FLOW, Measure.AMOUNT_FLOW),
    SeriesKind.PRESSURE: (Measure.PRESSURE,),
    SeriesKind.TEMPERATURE: (Measure.TEMPERATURE,),
    SeriesKind.PH: (Measure.NUMBER,),
    SeriesKind.BROTH: (Measure.VOLUME, Measure.MASS),
    **dict.fromkeys(_STREAMS, (
        Measure.VOLUME, Measure.MASS, Measure.VOLUME_FLOW, Measure.MASS_FLOW,
    )),
}  # fmt: skip
"""What each kind of series can be measured in."""


def plain_words(text: str) -> str:
    """A title as it is compared: case, underscores and blanks do not count.

    Examples
    --------
    >>> plain_words("  Process_Time ")
    'process time'
    """
    plain = unicodedata.normalize("NFKC", text).replace("_", " ")
    return " ".join(plain.split()).casefold()


def read_meaning(
    name: str, unit: MeasuredUnit | None, network: Network | None = None
) -> Meaning | None:
    """What a title means, or None.

    Examples
    --------
    >>> read_meaning("Base totaliser", None).words, read_meaning("O2 off-gas", None).words
    ('base total', 'oxygen out')
    >>> read_meaning("Traubenzucker", None).words, read_meaning("vibes", None)
    ('glucose', None)
    """
    words = plain_words(name)
    measure = None if unit is None else unit.measure
    for known, part in (
        (_HOURS, Part.HOURS), (_CLOCKS, Part.CLOCK), (_DAY_TIMES, Part.TIME_OF_DAY),
        (_RUNS, Part.RUN),
    ):  # fmt: skip
        if words in known and measure in (None, Measure.TIME):
            return Meaning(part)
    stream = _read_stream(words, measure)
    if stream is not None:
        return stream
    if words in _IGNORED:
        return Meaning(Part.IGNORED)
    for pattern, kind, told in _FIXED:
        if re.fullmatch(pattern, words) or re.fullmatch(pattern, words.replace(" ", "_")):
            if measure is not None and measure not in MEASURES[kind]:
                continue
            own = _biomass(network) if kind in _OF_BIOMASS else told
            return Meaning(Part.VALUE, kind, own, gauge="over" in words or "gauge" in words
                           or "über" in words)  # fmt: skip
    return _read_species(name, measure, network)


_OF_BIOMASS = (SeriesKind.DRY_WEIGHT, SeriesKind.OPTICAL_DENSITY)


def _read_stream(words: str, measure: Measure | None) -> Meaning | None:
    """A stream with the words that say how it is counted: ``feed 2 rate``, ``base total``."""
    tokens = words.replace("-", " ").split()
    for kind, known in _STREAMS.items():
        own = [t for t in tokens if t in known.split()]
        if not own:
            continue
        rest = [t for t in tokens if t not in own]
        if not all(t in _FORM_WORDS or (len(t) == 1 and t.isalnum()) for t in rest):
            continue
        numbers = [t for t in rest if t not in _FORM_WORDS]
        if measure is not None and measure not in MEASURES[kind]:
            return None
        if kind is SeriesKind.SAMPLE and measure is None and not (set(rest) - set(numbers)):
            return None  # the name of a sample
        said = {_FORM_WORDS[t] for t in rest if t in _FORM_WORDS}
        form = _form(said, measure, kind)
        stream = " ".join([kind.value, *numbers])
        return Meaning(Part.VALUE, kind, stream, form, bottle="bottle" in said)
    return None


def _form(said: set[str], measure: Measure | None, kind: SeriesKind) -> Form:
    if measure in (Measure.VOLUME_FLOW, Measure.MASS_FLOW):
        return Form.RATE
    if "event" in said or (kind is SeriesKind.SAMPLE and not said & {"total", "bottle"}):
        return Form.EVENT
    return Form.RATE if "rate" in said and measure is None else Form.TOTAL


def _read_species(name: str, measure: Measure | None, network: Network | None) -> Meaning | None:
    plain = " ".join(unicodedata.normalize("NFKC", name).split())
    bare = plain.replace("_", " ") if "_" in plain and find_compound(plain) is None else plain
    goes_out, comes_in = _OUT.search(bare), _IN.search(bare)
    bare = _IN.sub(" ", _OUT.sub(" ", bare))
    for text in (plain, bare, _NOISE.sub(" ", _FRONT.sub("", bare.strip()))):
        text = " ".join(text.split()).strip(" -.,:")
        found = find_species(text, Vocabulary(network)) if text else None
        if found is None:
            continue
        if found.species.entry is None and network is None:
            return None
        own = gas_name(text, network)
        compound = find_compound(found.species.entry or found.species.name)
        is_gas = compound is not None and compound.kind is CompoundKind.GAS
        how = "name" if text.casefold() == own.casefold() else "synonym"
        if comes_in and not goes_out:
            return Meaning(Part.VALUE, SeriesKind.GAS_IN, own, how=how)
        if goes_out or (is_gas and measure is Measure.FRACTION):
            how = how if goes_out else "unit"
            return Meaning(Part.VALUE, SeriesKind.GAS_OUT, own, how=how)
        return Meaning(Part.VALUE, SeriesKind.CONCENTRATION, own, how=how)
    return None


def gas_name(text: str, network: Network | None) -> str:
    """A species by its name in the model, else in the catalogue, else as written."""
    found = find_species(text, Vocabulary(network))
    if found is None:
        return text
    if network is not None and network.find_species(found.species.name) is not None:
        return found.species.name
    return found.species.entry or found.species.name


def _biomass(network: Network | None) -> str:
    own = biomass_species(Vocabulary(network))
    return own[0].name if len(own) == 1 else "biomass"


def _told(meaning: Meaning) -> str:
    kind = meaning.kind
    assert kind is not None
    if kind is SeriesKind.CONCENTRATION:
        return meaning.name
    if kind in (SeriesKind.GAS_OUT, SeriesKind.GAS_IN):
        return f"{meaning.name} {'out' if kind is SeriesKind.GAS_OUT else 'in'}"
    if kind in _STREAMS:
        word = "weight" if meaning.bottle else meaning.form.value
        return f"{meaning.name} {word}"
    if kind is SeriesKind.PRESSURE:
        return f"{meaning.name} pressure".strip() if not meaning.gauge else "overpressure"
    return "OD" if kind is SeriesKind.OPTICAL_DENSITY else kind.value
