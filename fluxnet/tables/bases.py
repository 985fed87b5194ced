"""The basis of a run, and the factors that bring units as written to it.

Rates count moles: mmol/g/h, mmol/L/h, mmol/h, or amounts (mmol, mmol/L, mol/100 mol,
mol/C-mol). In the basis C-mol/C-mol/h they count C-mol where the species holds carbon.
"""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

from fluxnet.chemistry.catalogue import find_compound
from fluxnet.chemistry.conversion import conversion_factor
from fluxnet.chemistry.formula import EMPTY
from fluxnet.chemistry.unit_words import Dimension
from fluxnet.chemistry.units import Unit, UnitError, UnitFault, parse_unit
from fluxnet.chemistry.weighed import Substance, WeighedForm, weighed_mass
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.network.model import Basis, Quantity, QuantityKind, Role, Species
from fluxnet.tables.rate_units import BadUnit, RateUnit, UnitKind

__all__ = ["Factor", "Target", "biomass_weight", "carbon_weight", "factor_to", "target_of"]


@record
class Target:
    """What a run's rates are brought to; ``concentration`` [g/L] divides volumetric rates."""

    basis: Basis
    shown: str
    base: str
    count: Fraction = Fraction(1)
    biomass: Species | None = None
    concentration: float | None = None


@record
class Factor:
    """What a value is multiplied with; ``free_acids`` names species weighed as the free acid."""

    value: float
    free_acids: tuple[str, ...] = ()


def target_of(
    unit: RateUnit | None, *, basis: Basis, biomass: Species | None, concentration: float | None
) -> Target:
    """The target of a run in a basis; ``unit`` says what is shown where it is an amount."""
    if basis is Basis.SPECIFIC:
        return Target(basis, "mmol/g/h", "mmol/g/h", Fraction(1), biomass, concentration)
    if basis is Basis.CARBON:
        return Target(basis, "C-mol/C-mol/h", "mol/C-mol/h", Fraction(1), biomass, concentration)
    if unit is None:
        return Target(basis, basis.value, basis.value, Fraction(1), biomass)
    return Target(basis, unit.shown, unit.base, unit.count, biomass)


def factor_to(
    unit: RateUnit | None, quantity: Quantity, species: Sequence[Species], target: Target
) -> Factor | BadUnit:
    """The factor from a unit as written to the target of the run, for one quantity."""
    if unit is None:
        return Factor(1.0)
    try:
        match quantity.kind:
            case QuantityKind.MU:
                return _growth_factor(unit, quantity)
            case QuantityKind.RATIO:
                return _ratio_factor(unit, quantity, species)
            case _:
                return _rate_factor(unit, quantity, species[0] if species else None, target)
    except UnitError as fault:
        return BadUnit(Name.WRONG_UNIT, str(fault))


def _growth_factor(unit: RateUnit, quantity: Quantity) -> Factor | BadUnit:
    """The growth rate [1/h] from 1/h, or from an amount of biomass per the same amount and time."""
    if unit.unit is not None:
        per = set(unit.unit.per)
        if unit.kind is UnitKind.GROWTH or per == {unit.unit.amount, Dimension.TIME}:
            return Factor(float(unit.unit.scale))
    return BadUnit(Name.WRONG_UNIT, f"`{_text(unit)}` is no unit of {quantity}", "write 1/h")


def _ratio_factor(
    unit: RateUnit, quantity: Quantity, species: Sequence[Species]
) -> Factor | BadUnit:
    """A ratio in mol/mol from another amount per amount."""
    if unit.kind is UnitKind.NUMBER:
        return Factor(float(unit.count))
    sides = (quantity.numerator, quantity.denominator)
    if any(q is None or q.kind is not QuantityKind.RATE for q in sides):
        return BadUnit(
            Name.WRONG_UNIT,
            f"`{_text(unit)}`: a ratio of other things than rates has no unit",
            "leave the unit blank; a yield of biomass is written with its species, X / glucose",
        )
    if (
        unit.unit is None
        or unit.unit.amount is None
        or len(unit.unit.per) != 1
        or unit.unit.is_rate
    ):
        return BadUnit(
            Name.WRONG_UNIT, f"`{_text(unit)}` is no unit of a ratio", "write mol/mol or g/g"
        )
    by_name = {s.name: s for s in species}
    free_acids: list[str] = []
    factors: list[Fraction] = []
    parts = (unit.unit.amount, unit.unit.per[0])
    for side, dimension in zip(sides, parts, strict=True):
        substance = substance_of(by_name[side.name if side is not None else ""])
        scale = unit.unit.scale if not factors else Fraction(1)
        part = Unit(unit.unit.text, dimension, scale, (), unit.unit.form)
        factors.append(conversion_factor(part, parse_unit("mmol"), substance))
        free_acids.extend(_free_acid(part, substance))
    return Factor(float(factors[0] / factors[1]), tuple(free_acids))


def _rate_factor(
    unit: RateUnit, quantity: Quantity, species: Species | None, target: Target
) -> Factor | BadUnit:
    """A rate or flux in the target from a unit of the same kind, or one that biomass links."""
    if unit.kind in (UnitKind.GROWTH, UnitKind.NUMBER) or unit.unit is None:
        return _growth_as_rate(unit, quantity, species, target)
    substance = Substance(quantity.name, EMPTY) if species is None else substance_of(species)
    if species is None and unit.unit.amount is not Dimension.MOLES:
        return BadUnit(
            Name.WRONG_UNIT, f"a flux is counted in moles, not in `{_text(unit)}`", "write mmol/g/h"
        )
    written = unit.unit
    if written.amount is Dimension.CARBON and not substance.formula.count("C"):
        return BadUnit(
            Name.WRONG_UNIT,
            f"{quantity.name} holds no carbon to count in `{written.text}`",
            f"give it a unit of its own: {written.text.replace('C-', '', 1)}",
        )
    factor = Fraction(1)
    if unit.kind is UnitKind.CARBON and Dimension.MOLES in written.per:
        # per mole of biomass: as many C-mol as its formula says
        factor /= _counted(_biomass(target))
        written = Unit(
            written.text,
            written.amount,
            written.scale,
            (Dimension.CARBON, Dimension.TIME),
            written.form,
        )
    factor *= conversion_factor(written, parse_unit(unit.base), substance) * unit.count
    factor *= Fraction(_between(unit.kind, target))
    if target.basis is Basis.CARBON and species is not None:
        factor *= _counted(species)
    return Factor(float(factor), _free_acid(written, substance))


def _growth_as_rate(
    unit: RateUnit, quantity: Quantity, species: Species | None, target: Target
) -> Factor | BadUnit:
    """The rate of a biomass species from 1/h."""
    per_biomass = target.basis in (Basis.SPECIFIC, Basis.CARBON)
    if (
        unit.kind is UnitKind.GROWTH
        and unit.unit is not None
        and species is not None
        and species.role is Role.BIOMASS
        and per_biomass
    ):
        scale = float(unit.unit.scale)
        if target.basis is Basis.CARBON:
            return Factor(scale)
        return Factor(scale * 1000 / biomass_weight(species))
    mend = "write a unit such as mmol/g/h"
    if unit.kind is UnitKind.NUMBER:
        mend += "; per cent of the substrate are mmol per 100 mmol, or C-mol per 100 C-mol"
    return BadUnit(
        Name.WRONG_UNIT, f"`{_text(unit)}` is no unit of the rate of {quantity.name}", mend
    )


def _between(kind: UnitKind, target: Target) -> Fraction:
    """From the base of a kind to the target's: through the biomass."""
    if kind is UnitKind.VOLUMETRIC and target.concentration is not None:
        specific = 1 / Fraction(target.concentration)
    elif kind is UnitKind.CARBON and target.basis is Basis.SPECIFIC:
        return 1000 / _mass_per_carbon(target)
    else:
        specific = Fraction(1)
    if target.basis is Basis.CARBON and kind in (UnitKind.SPECIFIC, UnitKind.VOLUMETRIC):
        specific *= _mass_per_carbon(target) / 1000
    return specific


def carbon_weight(quantity: Quantity, species: Sequence[Species], target: Target) -> float | None:
    """C-mol per unit of a rate in the target, mol where there is no carbon, None for ratios."""
    if quantity.kind is QuantityKind.RATE and species:
        return 1.0 if target.basis is Basis.CARBON else float(_counted(species[0]))
    if quantity.kind is QuantityKind.MU and target.biomass is not None:
        if target.basis is Basis.CARBON:
            return 1.0
        return float(1000 / _mass_per_carbon(target))
    return None


def biomass_weight(species: Species) -> float:
    """Dry weight of one mole of a biomass species [g/mol], ash included."""
    mass = weighed_mass(substance_of(species), WeighedForm())
    return float(mass or 0)


def substance_of(species: Species) -> Substance:
    """What a conversion needs to know of a species, with its ion from the catalogue."""
    entry = find_compound(species.entry) if species.entry else None
    return Substance(
        species.name, species.formula or EMPTY, entry.formula_ph7 if entry else None, species.ash
    )


def _free_acid(unit: Unit, substance: Substance) -> tuple[str, ...]:
    ion = substance.formula_ph7 or substance.formula
    weighed = unit.amount is Dimension.MASS and unit.form == WeighedForm()
    return (substance.name,) if weighed and ion.charge else ()


def _counted(species: Species) -> Fraction:
    """C-mol per mole; 1 where there is no carbon."""
    carbon = species.formula.count("C") if species.formula is not None else Fraction(0)
    return carbon or Fraction(1)


def _mass_per_carbon(target: Target) -> Fraction:
    """Dry weight of one C-mol of biomass [g/C-mol]."""
    biomass = _biomass(target)
    return (weighed_mass(substance_of(biomass), WeighedForm()) or Fraction(1)) / _counted(biomass)


def _biomass(target: Target) -> Species:
    if target.biomass is None:
        raise UnitError(
            UnitFault.WRONG,
            "one biomass formula is needed between grams and C-mol of biomass, "
            "and the model does not have exactly one",
        )
    return target.biomass


def _text(unit: RateUnit) -> str:
    if unit.unit is not None:
        return unit.unit.text
    return "1" if unit.count == 1 else "%"
