"""Raw data of one cultivation, as read: series over time, settings, phases. Nothing reckoned yet.

Units are canonical, so that no number below needs another conversion: time in h since
inoculation (negative before it), amounts per litre or per kilogram of broth as the table gave
them, gas in mol/mol and mol/h, volumes in L, masses in kg, temperature in °C, pressure in bar.
"""

from __future__ import annotations

from dataclasses import field
from enum import Enum

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.record import record

__all__ = [
    "CalibrationPoint", "Cultivation", "DoubtfulCell", "Form", "Mode", "Phase", "Series",
    "SeriesKind", "Setting", "SettingKind", "make_series",
]  # fmt: skip

Array = NDArray[np.float64]


class Mode(Enum):
    """How the cultivation was run."""

    CHEMOSTAT = "chemostat"
    BATCH = "batch"
    FED_BATCH = "fed-batch"


class SeriesKind(Enum):
    """What a series measures. ``Series.name`` says of what, where there can be several.

    | kind | name | units |
    |---|---|---|
    | CONCENTRATION | species | ``mmol/L``, ``mmol/kg``; ``g/L``, ``g/kg`` without a formula |
    | DRY_WEIGHT | biomass | ``g/L``, ``g/kg`` |
    | OPTICAL_DENSITY | biomass | ``1`` |
    | GAS_OUT, GAS_IN | species | ``mol/mol`` as the analyser reads it |
    | GAS_FLOW, GAS_FLOW_OUT | | ``mol/h``; ``L/h`` where no reference state was given |
    | PRESSURE, TEMPERATURE, PH | | ``bar``, ``°C``, ``1`` |
    | BROTH | | ``L``, ``kg``: what is in the vessel |
    | FEED, BASE, ACID, ANTIFOAM | the stream | ``L``, ``kg`` (TOTAL, EVENT); ``L/h``, ``kg/h`` |
    | SAMPLE, EFFLUENT, EVAPORATION | | the same; what leaves |
    """

    CONCENTRATION = "concentration"
    DRY_WEIGHT = "dry weight"
    OPTICAL_DENSITY = "optical density"
    GAS_OUT = "gas out"
    GAS_IN = "gas in"
    GAS_FLOW = "gas flow"
    GAS_FLOW_OUT = "gas flow out"
    PRESSURE = "pressure"
    TEMPERATURE = "temperature"
    PH = "pH"
    BROTH = "broth"
    FEED = "feed"
    BASE = "base"
    ACID = "acid"
    ANTIFOAM = "antifoam"
    SAMPLE = "sample"
    EFFLUENT = "effluent"
    EVAPORATION = "evaporation"

    @property
    def is_addition(self) -> bool:
        """Whether it is a stream into the broth."""
        return self in (SeriesKind.FEED, SeriesKind.BASE, SeriesKind.ACID, SeriesKind.ANTIFOAM)

    @property
    def is_removal(self) -> bool:
        """Whether it is a stream out of the broth."""
        return self in (SeriesKind.SAMPLE, SeriesKind.EFFLUENT, SeriesKind.EVAPORATION)


class Form(Enum):
    """How a number belongs to its time.

    ``STATE``: as it is at that time (a concentration, a level, a flow of gas). ``TOTAL``: since
    the series began (a totaliser, a balance under the feed bottle); it may start anywhere.
    ``RATE``: per hour, from this time until the next. ``EVENT``: that much, at that time.
    """

    STATE = "state"
    TOTAL = "total"
    RATE = "rate"
    EVENT = "event"


@record
class Series:
    """One measured quantity over time.

    ``time`` increases, and ``value`` is never NaN: rows without a value are not there. ``sd``
    is each value's own error where one was given. ``below`` marks upper limits (``<0.05``).
    ``common`` is the relative error that all values share (a calibration), None where it was
    not given. ``places`` name the cells (``HPLC!F17``, ``offgas.csv row 7``), one a value, or
    one for the whole of a long series.
    """

    kind: SeriesKind
    name: str
    unit: str
    time: Array
    value: Array
    sd: Array | None = None
    below: NDArray[np.bool_] | None = None
    form: Form = Form.STATE
    common: float | None = None
    places: tuple[str, ...] = ()

    def place(self, index: int) -> str:
        """Where a value stood."""
        if not self.places:
            return self.name or self.kind.value
        return self.places[index] if len(self.places) > 1 else self.places[0]

    @property
    def title(self) -> str:
        """What it is, in words: ``O2 (gas out)``, ``glucose``, ``feed``."""
        if self.kind in (SeriesKind.GAS_OUT, SeriesKind.GAS_IN):
            return f"{self.name} ({self.kind.value})"
        return self.name or self.kind.value


class SettingKind(Enum):
    """A number that holds for the whole cultivation; ``Setting.of`` and ``.stream`` say of what.

    | kind | of, stream | unit |
    |---|---|---|
    | VOLUME, MASS | | ``L``, ``kg`` of broth at inoculation (of a chemostat: all the time) |
    | DENSITY | stream (empty: the broth) | ``kg/L`` |
    | CONTENT | species, stream | ``mmol/L``, ``mmol/kg`` of that stream (else ``g/L``, ``g/kg``) |
    | FLOW | stream | ``L/h``, ``kg/h`` |
    | INLET | species | ``mol/mol`` dry |
    | GAS_FLOW | | ``mol/h``; ``L/h`` where no reference state was given |
    | REFERENCE | | ``°C`` that the flow's litres are stated at (at 1.01325 bar) |
    | HUMIDITY_IN, HUMIDITY_OUT | | relative humidity, ``1``; of the gas at the analyser |
    | CONDENSER | | ``°C`` of the gas that leaves |
    | PRESSURE, TEMPERATURE, PH | | ``bar``, ``°C``, ``1`` |
    | LAG | | ``h`` by which the analyser is late |
    | ASH, MOISTURE | | fraction of dry weight |
    """

    VOLUME = "volume"
    MASS = "mass"
    DENSITY = "density"
    CONTENT = "content"
    FLOW = "flow"
    INLET = "inlet"
    GAS_FLOW = "gas flow"
    REFERENCE = "reference temperature of the gas flow"
    HUMIDITY_IN = "humidity in"
    HUMIDITY_OUT = "humidity out"
    CONDENSER = "condenser temperature"
    PRESSURE = "pressure"
    TEMPERATURE = "temperature"
    PH = "pH"
    LAG = "lag of the gas analyser"
    ASH = "ash"
    MOISTURE = "moisture"


@record
class Setting:
    """A number that holds throughout; ``sd`` absolute, None where it was not given."""

    kind: SettingKind
    value: float
    unit: str
    sd: float | None = None
    of: str = ""
    stream: str = ""
    place: str = ""


@record
class CalibrationPoint:
    """One sample of which optical density and dry weight [g/L] were both measured."""

    optical_density: float
    dry_weight: float
    sd: float | None = None
    place: str = ""


@record
class Phase:
    """A stretch of time that gets rates of its own [h]."""

    name: str
    start: float
    end: float


@record
class DoubtfulCell:
    """A cell that was not plainly a number, and what became of it."""

    place: str
    text: str
    what_was_done: str


@record
class Cultivation:
    """The raw data of one cultivation. ``understood`` tells how they were read."""

    name: str
    mode: Mode
    series: tuple[Series, ...]
    settings: tuple[Setting, ...] = ()
    calibration: tuple[CalibrationPoint, ...] = ()
    phases: tuple[Phase, ...] = ()
    doubtful: tuple[DoubtfulCell, ...] = ()
    understood: tuple[str, ...] = field(default=())

    def of_kind(self, kind: SeriesKind) -> tuple[Series, ...]:
        """All series of a kind."""
        return tuple(s for s in self.series if s.kind is kind)

    def find(self, kind: SeriesKind, name: str | None = None) -> Series | None:
        """The first series of a kind, and of a name where one is given."""
        return next((s for s in self.of_kind(kind) if name in (None, s.name)), None)

    def setting(self, kind: SettingKind, of: str = "", stream: str = "") -> Setting | None:
        """The setting of a kind for that species and stream, or None."""
        wanted = (kind, of, stream)
        return next((s for s in self.settings if (s.kind, s.of, s.stream) == wanted), None)


def make_series(
    kind: SeriesKind,
    name: str,
    unit: str,
    time: Array | list[float],
    value: Array | list[float],
    sd: Array | list[float] | float | None = None,
    *,
    below: NDArray[np.bool_] | None = None,
    form: Form = Form.STATE,
    common: float | None = None,
    places: tuple[str, ...] = (),
) -> Series:
    """A series with read-only arrays; a single ``sd`` holds for every value.

    Raises
    ------
    MisuseError
        Where lengths differ, a number is not finite, an sd is negative, or time does not
        increase: what a table holds of this kind is told before, with its cell.

    Examples
    --------
    >>> series = make_series(SeriesKind.CONCENTRATION, "glucose", "mmol/L", [0, 1], [50, 40], 0.5)
    >>> series.sd.tolist(), series.title
    ([0.5, 0.5], 'glucose')
    """
    times, values = (np.array(a, dtype=np.float64) for a in (time, value))
    sds = None if sd is None else np.array(np.broadcast_to(sd, values.shape), dtype=np.float64)
    what = name or kind.value
    if times.ndim != 1 or times.shape != values.shape:
        raise MisuseError(f"{what}: {times.size} times and {values.size} values")
    if below is not None and below.shape != values.shape:
        raise MisuseError(f"{what}: {values.size} values and {below.size} marks of upper limits")
    if not (np.isfinite(times).all() and np.isfinite(values).all()):
        raise MisuseError(f"{what}: a time or a value is no number")
    if times.size > 1 and not (np.diff(times) > 0).all():
        raise MisuseError(f"{what}: time does not increase")
    if sds is not None and not (np.isfinite(sds) & (sds >= 0)).all():
        raise MisuseError(f"{what}: an sd is negative or no number")
    if len(places) not in (0, 1, values.size):
        raise MisuseError(f"{what}: {values.size} values and {len(places)} places")
    for array in (times, values, *([sds] if sds is not None else [])):
        array.setflags(write=False)
    return Series(kind, name, unit, times, values, sds, below, form, common, places)
