"""What leaves a broth unmeasured: the sizes that gas flow, temperature and dilution let expect."""

from __future__ import annotations

from fluxnet.chemistry.henry import Henry, carbonate_factor, find_henry
from fluxnet.ground.record import record
from fluxnet.studies.conditions import Conditions

__all__ = ["Expected", "carried_carbonate", "evaporated_share", "stripped"]

_WEEK = 168.0
_EVAPORATED = (0.10, 0.20)  # of the broth in a week; common practice


@record
class Expected:
    """A size in the unit of a rate, None where columns are missing that would tell it.

    ``basis`` tells what it was reckoned with, ``missing`` names the columns.
    """

    size: float | None
    basis: str
    missing: tuple[str, ...] = ()


def stripped(
    henry: Henry, name: str, concentration: float | None, unit: str, conditions: Conditions
) -> Expected:
    """What the gas carries away of a volatile compound.

    Per litre of broth gas flow [mol/h] x C / (H(T) P): the gas leaves in equilibrium with the
    broth, and nothing of it comes back from a condenser. ``concentration`` is in mmol/L.
    """
    missing = [
        column
        for column, value in (
            ("temperature [C]", conditions.kelvin),
            ("gas flow [vvm]", conditions.gas_flow),
            (f"{name} conc [g/L]", concentration),
        )
        if value is None
    ]
    missing += _missing_for(unit, conditions)
    if missing or conditions.kelvin is None or conditions.gas_flow is None:
        return Expected(None, "", tuple(missing))
    share = (concentration or 0.0) / (henry.at(conditions.kelvin) * conditions.pressure)
    lost = 1e3 * conditions.gas_flow * share  # mmol/L/h; mmol/L are mol/m3
    basis = f"gas flow {conditions.gas_words}, {conditions.kelvin - 273.15:.0f} °C"
    return Expected(_in_unit(lost, unit, conditions), basis)


def carried_carbonate(unit: str, conditions: Conditions) -> Expected:
    """What leaves with the broth as dissolved CO2 and bicarbonate, beside the CO2 in the gas.

    Dilution x partial pressure x H(T) x (1 + 10^(pH - 6.35)): the broth is in equilibrium with
    the gas that leaves, and the feed brings none.
    """
    henry = find_henry("CO2")
    missing = [
        column
        for column, value in (
            ("temperature [C]", conditions.kelvin),
            ("pH", conditions.ph),
            ("off-gas CO2 [%]", conditions.carbon_dioxide),
            ("dilution [1/h]", conditions.dilution),
        )
        if value is None
    ]
    missing += _missing_for(unit, conditions)
    if missing or henry is None or conditions.kelvin is None or conditions.ph is None:
        return Expected(None, "", tuple(missing))
    dissolved = (conditions.carbon_dioxide or 0.0) * henry.at(conditions.kelvin)  # mmol/L
    carried = (conditions.dilution or 0.0) * dissolved * carbonate_factor(conditions.ph)
    basis = f"pH {conditions.ph:g}, dilution {conditions.dilution:g} 1/h"
    return Expected(_in_unit(carried, unit, conditions), basis)


def evaporated_share(conditions: Conditions) -> tuple[float, float] | None:
    """The share of the broth that evaporates, low and high; None where no time is told.

    10 to 20 % a week (common practice): over a batch's duration, or in a chemostat over the
    mean time 1/D that the broth stays.
    """
    hours = conditions.duration
    if conditions.dilution:
        hours = 1.0 / conditions.dilution
    if hours is None:
        return None
    low, high = (min(share * hours / _WEEK, 0.5) for share in _EVAPORATED)
    return low, high


def _missing_for(unit: str, conditions: Conditions) -> tuple[str, ...]:
    """The columns that turn mmol/L/h into the unit of a run."""
    if unit == "mmol/g/h" and conditions.biomass is None:
        return ("biomass conc [g/L]",)
    if unit == "mmol/L" and conditions.duration is None:
        return ("duration [h]",)
    return ()


def _in_unit(per_litre: float, unit: str, conditions: Conditions) -> float | None:
    """A rate in mmol/L/h in the unit of a run; None in a unit that needs more than columns."""
    if unit == "mmol/L/h":
        return per_litre
    if unit == "mmol/g/h" and conditions.biomass:
        return per_litre / conditions.biomass
    if unit == "mmol/L" and conditions.duration is not None:
        return per_litre * conditions.duration
    return None
