"""A unit mistaken for another, as a reading of a rate that is wrong by a whole factor."""

from __future__ import annotations

from collections.abc import Iterator
from math import exp, log

from fluxnet.chemistry.formula import molar_mass
from fluxnet.network.model import Species
from fluxnet.studies.readings import LEAST_WEIGHT, Cause, Reading, SuspectedRate

__all__ = ["unit_readings"]

_ROUGH = 0.1
_SMALL = 20.0
_SURE = 0.02


def unit_readings(
    rate: SuspectedRate, would_be: float | None, sd: float | None
) -> tuple[Reading, ...]:
    """Units that may have been mistaken, by the factor from the measured to the true rate.

    The distance is that of the logarithms. One suspect bears the errors of all rates, so that
    a factor of 20 or more need be met within 10 % only, a smaller one within 2 % and its sd.

    Examples
    --------
    >>> rate = SuspectedRate("glucose", None, None, 10200.0, "mmol/g/h")
    >>> [reading.words for reading in unit_readings(rate, 10.4, 0.2)]
    ['mmol typed as mol? The rate times 0.001']
    """
    if rate.measured <= 0 or would_be is None or would_be <= 0:
        return ()
    factor, own = would_be / rate.measured, (sd or 0.0) / would_be
    found: list[Reading] = []
    for words, times in _mistakes(rate):
        near = _ROUGH if max(times, 1 / times) >= _SMALL else _SURE
        weight = exp(-0.5 * (log(factor / times) / max(near, own)) ** 2)
        if weight >= LEAST_WEIGHT and own < _ROUGH:
            told = f"{words}? The rate times {times:.3g}"
            found.append(Reading(Cause.UNIT, told, times, times, weight, None, rate.unit))
    return tuple(sorted(found, key=lambda r: -r.weight))


def _mistakes(rate: SuspectedRate) -> Iterator[tuple[str, float]]:
    """What was typed as what, and the factor that makes it good."""
    pairs = [("per minute", "per hour", 60.0), ("per hour", "per day", 24.0)]
    if not rate.is_biomass or rate.unit != "1/h":
        pairs += [("mol", "mmol", 1000.0), *_of_species(rate.species)]
    for meant, typed, factor in pairs:
        yield f"{meant} typed as {typed}", factor
        yield f"{typed} typed as {meant}", 1 / factor


def _of_species(species: Species | None) -> list[tuple[str, str, float]]:
    formula = species.formula if species is not None else None
    if formula is None:
        return []
    mass, carbons = molar_mass(formula), float(formula.count("C"))
    pairs = [("mmol", "mg", mass), ("g", "mmol", 1000 / mass)]
    return pairs + ([("mmol", "C-mmol", carbons)] if carbons > 1 else [])
