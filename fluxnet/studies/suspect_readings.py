"""Causes in the laboratory under each suspected rate of the first group."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

from fluxnet.network.model import Species
from fluxnet.studies.reading_units import unit_readings
from fluxnet.studies.readings import SuspectedRate, readings_of
from fluxnet.studies.suspect_result import Suspect, SuspectKind, Suspects

__all__ = ["with_readings"]


def with_readings(
    suspects: Suspects, species: Mapping[str, Species], columns: Mapping[str, str]
) -> Suspects:
    """The suspects with what may have made each suspected rate wrong by so much.

    Parameters
    ----------
    species
        What each measured rate is a rate of, by its name; ratios and fluxes have none.
    columns
        The columns that the run carries.
    """

    def read(one: Suspect) -> Suspect:
        if one.kind is not SuspectKind.MEASURED_RATE or not one.possible or one.measured is None:
            return one
        if one.name not in species:
            return one
        rate = SuspectedRate(
            one.name, species[one.name], one.direction, one.measured, one.unit
        )
        units = unit_readings(rate, one.would_be, one.would_be_sd)
        found = readings_of(rate, one.size, one.sd, columns)
        return replace(one, readings=(*units, *found))

    return replace(suspects, group=tuple(read(one) for one in suspects.group))
