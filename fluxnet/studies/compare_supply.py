"""What a reactor has to supply to an optimum, and to carry away, an hour."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from types import MappingProxyType

from fluxnet.chemistry.units import Dimension, UnitError
from fluxnet.chemistry.units_measured import Measure, read_measured_unit
from fluxnet.ground.errors import MisuseError
from fluxnet.ground.pattern import pattern_of
from fluxnet.ground.record import record
from fluxnet.network.model import Basis, Network
from fluxnet.studies.compare_modes import moles_of
from fluxnet.studies.compare_result import Facts, ModeYield, Supply

__all__ = ["SupplyUnits", "find_supply", "per_litre", "read_biomass", "units_of"]


@record
class SupplyUnits:
    """The units of a supply; ``factor`` is that of kJ/mol times ``moles`` in ``heat``."""

    moles: str
    heat: str
    factor: float


_UNITS: Mapping[Basis, SupplyUnits] = MappingProxyType({
    Basis.SPECIFIC: SupplyUnits("mmol/g/h", "kJ/g/h", 1e-3),
    Basis.CARBON: SupplyUnits("mol/C-mol/h", "kJ/C-mol/h", 1.0),
    Basis.VOLUMETRIC: SupplyUnits("mmol/L/h", "W/L", 1e-3 / 3.6),
    Basis.AMOUNT: SupplyUnits("mmol", "kJ", 1e-3),
})  # fmt: skip

_CONCENTRATION = pattern_of(r"\s*(?P<number>\d+(?:\.\d+)?(?:[eE][+-]?\d+)?)\s*(?P<unit>\S.*)?")


def units_of(basis: Basis) -> SupplyUnits:
    """The units in which a model of some basis has its supply."""
    return _UNITS[basis]


def find_supply(
    network: Network, substrate: str, product: str, final: ModeYield, facts: Facts
) -> Supply | None:
    """The rates of an optimum at the uptake it was found at; None where it makes nothing."""
    if not final.moles:
        return None
    used = final.uptake / moles_of(network, substrate)
    made = float(final.moles * used)
    heat = None if facts.heat is None else facts.heat.value

    def sized(amount: float | None) -> float | None:
        return None if amount is None else amount * made

    return Supply(
        uptake=float(used),
        product=made,
        oxygen=sized(facts.oxygen),
        carbon_dioxide=sized(facts.carbon_dioxide),
        heat=None if heat is None else heat * made * units_of(network.basis).factor,
        base=sized(facts.base),
    )


def per_litre(supply: Supply, grams: float) -> Supply:
    """A supply per gram and hour as one per litre and hour [mmol/L/h, W/L].

    Examples
    --------
    >>> per_litre(Supply(5.0, 8.0, 4.0, 4.0, 2.0, 8.0), 20.0).oxygen
    80.0
    >>> round(per_litre(Supply(5.0, 8.0, 4.0, 4.0, 2.0, 8.0), 20.0).heat, 2)
    11.11
    """

    def sized(amount: float | None, factor: float = grams) -> float | None:
        return None if amount is None else amount * factor

    return Supply(
        supply.uptake * grams, supply.product * grams, sized(supply.oxygen),
        sized(supply.carbon_dioxide), sized(supply.heat, grams / 3.6), sized(supply.base),
    )  # fmt: skip


def read_biomass(text: str | float | Fraction, basis: Basis) -> float:
    """A concentration of biomass in g/L; a number alone is one.

    Raises
    ------
    MisuseError
        Where it is none, or the rates of the model are not per gram.

    Examples
    --------
    >>> read_biomass("20 g/L", Basis.SPECIFIC), read_biomass("5000 mg/L", Basis.SPECIFIC)
    (20.0, 5.0)
    """
    if basis is not Basis.SPECIFIC:
        raise MisuseError(
            f"a concentration of biomass goes with rates per gram, mmol/g/h: those of the model "
            f"are in {basis.value}"
        )
    found = _CONCENTRATION.fullmatch(str(text))
    wrong = MisuseError(f'a concentration of biomass is written "20 g/L", not {str(text)!r}')
    if found is None:
        raise wrong
    try:
        unit = read_measured_unit(found["unit"] or "g/L")
    except UnitError:
        raise wrong from None
    counts = unit.amount.amount if unit.amount is not None else None
    if unit.measure is not Measure.PER_VOLUME or counts is not Dimension.MASS:
        raise wrong
    grams = float(Fraction(found["number"]) * unit.factor)
    if grams <= 0:
        raise MisuseError("a concentration of biomass is above zero")
    return grams
