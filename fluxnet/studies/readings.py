"""Laboratory causes as readings of a suspected rate: what the error that was found may come from.

A reading adds no hypothesis to those that the balances can tell apart: it explains one of them,
a gross error in one rate. It is weighed by sign and size: by how far the factor that the
balances ask for lies from those that the cause gives, in sds of that factor. Ranges are common
practice unless a source stands beside them.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from enum import Enum
from math import exp, inf

from fluxnet.chemistry.catalogue import CompoundKind, find_compound
from fluxnet.chemistry.henry import find_henry
from fluxnet.ground.record import record
from fluxnet.network.model import Direction, Role, Species
from fluxnet.studies.conditions import Conditions, read_conditions
from fluxnet.studies.reading_sizes import Expected, carried_carbonate, evaporated_share, stripped

__all__ = ["LEAST_WEIGHT", "Cause", "Reading", "SuspectedRate", "readings_of"]

_WATER = 18.015
_HYDRATES = {"glucose": 1, "lactose": 1, "maltose": 1, "rhamnose": 1, "citrate": 1,
             "trehalose": 2, "raffinose": 5}  # fmt: skip
_HYDRATE_WORDS = {1: "monohydrate", 2: "dihydrate", 5: "pentahydrate"}
_VOLATILE_KINDS = (CompoundKind.ALCOHOL, CompoundKind.CARBONYL, CompoundKind.ESTER)
_NOT_VOLATILE = ("1,3-propanediol", "2,3-butanediol", "1,4-butanediol", "1,2-propanediol")
LEAST_WEIGHT = 0.05
_LEAST_SD = 0.005
_HALF_TO_TWICE = (0.5, 2.0)


class Cause(Enum):
    """What went wrong in the laboratory; of equal weight the first is told first."""

    UNIT = "unit"
    HYDRATE = "hydrate"
    STRIPPED = "stripped"
    BICARBONATE = "bicarbonate"
    CALIBRATION = "calibration"
    BIOMASS_COMPOSITION = "biomass_composition"
    FEED = "feed"
    EVAPORATION = "evaporation"
    COMPLEX_MEDIUM = "complex_medium"


@record
class SuspectedRate:
    """A measured rate: its name as in the table, species (None: unknown), value and unit."""

    name: str
    species: Species | None
    direction: Direction | None
    measured: float
    unit: str

    @property
    def entry(self) -> str:
        """The catalogue's name of its species."""
        if self.species is None:
            return self.name
        compound = find_compound(self.species.entry or self.species.name)
        return self.species.name if compound is None else compound.name

    @property
    def is_biomass(self) -> bool:
        """Whether it tells growth."""
        role = self.species.role if self.species is not None else None
        return self.name == "mu" or role is Role.BIOMASS


@record
class Reading:
    """One cause of an error: ``words`` in one line, and the true over the measured rate.

    ``weight``, from 0 to 1, is how well sign and size agree with what was found. ``expected``
    is the size of the error that the conditions let expect, in ``unit``; None where they do
    not tell it.
    """

    cause: Cause
    words: str
    factor_low: float
    factor_high: float
    weight: float
    expected: float | None = None
    unit: str = ""


_Draft = tuple[Cause, str, float, float, Expected | None]


def readings_of(
    rate: SuspectedRate, size: float, sd: float, columns: Mapping[str, str] | None = None
) -> tuple[Reading, ...]:
    """What may have made a rate wrong by so much, the most plausible first.

    Parameters
    ----------
    rate
        The measured rate that is suspected.
    size
        Its error: measured less what it would be, in its unit.
    sd
        The standard deviation of that size.
    columns
        The columns that the run carries, such as ``temperature [C]``; see
        :mod:`fluxnet.studies.conditions`.

    Returns
    -------
    Readings of a weight of at least 0.05; none of a rate of 0, which no factor moves.

    Examples
    --------
    >>> from fluxnet.chemistry.reader import read_formula
    >>> glucose = Species("glucose", Role.SUBSTRATE, read_formula("C6H12O6"))
    >>> rate = SuspectedRate("glucose", glucose, Direction.IN, 10.0, "mmol/g/h")
    >>> readings_of(rate, 0.91, 0.1)[0].words
    'glucose monohydrate was weighed as anhydrous: the rate times 0.909'
    """
    if not rate.measured:
        return ()
    conditions = read_conditions(columns or {})
    factor = (rate.measured - size) / rate.measured
    spread = max(sd / abs(rate.measured), _LEAST_SD)
    found: list[Reading] = []
    for drafts in _CAUSES:
        for cause, words, low, high, expected in drafts(rate, conditions):
            weight = exp(-0.5 * (max(low - factor, factor - high, 0.0) / spread) ** 2)
            told = None if expected is None else expected.size
            if weight >= LEAST_WEIGHT:
                found.append(Reading(cause, words, low, high, weight, told, rate.unit))
    order = list(Cause)
    found.sort(key=lambda r: (-round(r.weight, 2), r.expected is None, order.index(r.cause)))
    return tuple(found)


def _hydrate(rate: SuspectedRate, conditions: Conditions) -> Iterator[_Draft]:
    compound, waters = find_compound(rate.entry), _HYDRATES.get(rate.entry)
    if compound is None or waters is None or rate.direction is not Direction.IN:
        return
    factor = compound.molar_mass / (compound.molar_mass + waters * _WATER)
    name = f"{rate.name} {_HYDRATE_WORDS[waters]}"
    yield (
        Cause.HYDRATE,
        f"{name} was weighed as anhydrous: the rate times {factor:.3f}",
        factor, factor, None,
    )  # fmt: skip
    yield (
        Cause.HYDRATE,
        f"{name} was reckoned with, and it was anhydrous: the rate times {1 / factor:.3f}",
        1 / factor, 1 / factor, None,
    )  # fmt: skip


def _stripped(rate: SuspectedRate, conditions: Conditions) -> Iterator[_Draft]:
    henry, compound = find_henry(rate.entry), find_compound(rate.entry)
    if rate.entry == "CO2" or compound is None or rate.direction is None:
        return
    is_volatile = compound.kind in _VOLATILE_KINDS and rate.entry not in _NOT_VOLATILE
    if henry is None and not is_volatile:
        return
    concentration = conditions.concentration(rate.entry)
    sign = -1.0 if rate.direction is Direction.IN else 1.0
    words = f"{rate.name} is carried away by the gas"
    if rate.direction is Direction.IN:
        words += ", and was not taken up"
    if henry is None:
        yield (
            Cause.STRIPPED, f"{words}; how much is not known here: no Henry constant",
            *_between(1 + sign * 0.01, 1 + sign * 0.3), None,
        )  # fmt: skip
        return
    expected = stripped(henry, rate.name, concentration, rate.unit, conditions)
    yield from _sized(Cause.STRIPPED, words, rate, expected, sign, 0.3)


def _bicarbonate(rate: SuspectedRate, conditions: Conditions) -> Iterator[_Draft]:
    if rate.entry != "CO2" or rate.direction is not Direction.OUT:
        return
    if conditions.ph is not None and conditions.ph < 5.5:
        return  # less than an eighth of the dissolved CO2 is bicarbonate
    words = "CO2 stays in the broth as bicarbonate and leaves with it"
    expected = carried_carbonate(rate.unit, conditions)
    yield from _sized(Cause.BICARBONATE, words, rate, expected, 1.0, 0.1)


def _biomass(rate: SuspectedRate, conditions: Conditions) -> Iterator[_Draft]:
    if not rate.is_biomass:
        return
    words = "the dry-weight calibration is off"
    if rate.unit == "1/h" or rate.unit == "mmol/g/h":
        words = "the dry-weight calibration is off, and with it all specific rates together"
    yield (Cause.CALIBRATION, f"{words}: 4 to 8 % (common practice)", 0.92, 1.08, None)
    if rate.species is not None and rate.species.ash:
        words = "the biomass has another composition or ash content: up to 5 % (common practice)"
        yield (Cause.BIOMASS_COMPOSITION, words, 0.95, 1.05, None)
    else:
        words = "ash is counted as biomass: 5 to 15 % of the dry weight (common practice)"
        yield (Cause.BIOMASS_COMPOSITION, words, 0.85, 0.95, None)


def _gas(rate: SuspectedRate, conditions: Conditions) -> Iterator[_Draft]:
    compound = find_compound(rate.entry)
    if compound is not None and compound.kind is CompoundKind.GAS:
        words = (
            "the gas analyser or the gas flow is off: a few per cent, and more where the gas "
            "changes little on its way (common practice)"
        )
        yield (Cause.CALIBRATION, words, 0.9, 1.1, None)


def _feed(rate: SuspectedRate, conditions: Conditions) -> Iterator[_Draft]:
    if _is_substrate(rate):
        words = "the feed has another concentration: 2 to 5 % (common practice)"
        yield (Cause.FEED, words, 0.95, 1.05, None)


def _evaporation(rate: SuspectedRate, conditions: Conditions) -> Iterator[_Draft]:
    """Concentrations rise alike, so products per gram stay; what is not dissolved does not."""
    compound = find_compound(rate.entry)
    is_gas = compound is not None and compound.kind is CompoundKind.GAS
    low, high = evaporated_share(conditions) or (0.01, 0.05)
    size = f"{100 * low:.1f} to {100 * high:.1f} %"
    if evaporated_share(conditions) is None:
        size = "a few per cent; a column duration [h] or dilution [1/h] would tell"
    if rate.unit == "mmol/g/h" and not rate.is_biomass and (is_gas or _is_substrate(rate)):
        words = f"broth evaporated: the biomass that rates are divided by is too high by {size}"
        yield (Cause.EVAPORATION, words, 1 / (1 - low), 1 / (1 - high), None)
    elif rate.unit not in ("mmol/g/h", "1/h") and rate.direction is Direction.OUT and not is_gas:
        words = f"broth evaporated: concentrations are too high by {size}"
        yield (Cause.EVAPORATION, words, 1 - high, 1 - low, None)


def _medium(rate: SuspectedRate, conditions: Conditions) -> Iterator[_Draft]:
    if rate.is_biomass or not _holds_carbon(rate) or rate.entry == "CO2":
        return
    if _is_substrate(rate):
        words = "a complex medium brings carbon beside it (yeast extract, peptone)"
        yield (Cause.COMPLEX_MEDIUM, words, 1.02, 1.15, None)
    elif rate.direction is Direction.OUT:
        words = f"{rate.name} is taken up from a complex medium, and not released"
        yield (Cause.COMPLEX_MEDIUM, words, -inf, 0.0, None)


_CAUSES: tuple[Callable[[SuspectedRate, Conditions], Iterator[_Draft]], ...] = (
    _hydrate, _stripped, _bicarbonate, _biomass, _gas, _feed, _evaporation, _medium,
)  # fmt: skip


def _sized(
    cause: Cause, words: str, rate: SuspectedRate, expected: Expected, sign: float, most: float
) -> Iterator[_Draft]:
    """A reading with its expected size, from half to twice of it; else up to a usual share."""
    if expected.size is None:
        told = f"; {_and(expected.missing)} would tell how much" if expected.missing else ""
        yield (cause, words + told, *_between(1.0, 1 + sign * most), expected)
        return
    share = expected.size / abs(rate.measured)
    half, twice = (1 + sign * share * part for part in _HALF_TO_TWICE)
    told = f": about {expected.size:.2g} {rate.unit} ({expected.basis})"
    yield (cause, words + told, *_between(half, twice), expected)


def _between(one: float, other: float) -> tuple[float, float]:
    return min(one, other), max(one, other)


def _is_substrate(rate: SuspectedRate) -> bool:
    return rate.direction is Direction.IN and _holds_carbon(rate)


def _holds_carbon(rate: SuspectedRate) -> bool:
    formula = rate.species.formula if rate.species is not None else None
    return formula is not None and bool(formula.count("C"))


def _and(names: tuple[str, ...]) -> str:
    columns = "a column " if len(names) == 1 else "columns "
    return columns + (names[0] if len(names) == 1 else f"{', '.join(names[:-1])} and {names[-1]}")
