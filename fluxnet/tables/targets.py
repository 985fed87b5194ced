"""Which basis a run has: what its units say, the model asks for and the biomass allows."""

from __future__ import annotations

from collections.abc import Sequence

from fluxnet.ground.names import Name
from fluxnet.network.model import Basis, QuantityKind, Species
from fluxnet.tables.bases import Target, target_of
from fluxnet.tables.rate_units import BadUnit, RateUnit, UnitKind
from fluxnet.tables.values import Reading

__all__ = ["choose_target"]

_PER_BIOMASS = (UnitKind.SPECIFIC, UnitKind.CARBON)


def choose_target(
    readings: Sequence[Reading],
    biomass: Species | None,
    model_basis: Basis | None,
    concentration: float | None,
) -> Target | BadUnit:
    """The basis of a run's readings, or why they have none together.

    Specific rates are brought to the basis of the model, so that its limits apply; without a
    model they stay per gram, or per C-mol where all are. Volumetric rates become specific
    where the biomass concentration is known.
    """
    units = {
        r.unit.shown: r.unit
        for r in readings
        if r.unit is not None
        and r.quantity.kind in (QuantityKind.RATE, QuantityKind.FLUX)
        and r.unit.kind not in (UnitKind.GROWTH, UnitKind.NUMBER)
    }
    grows = any(
        r.quantity.kind is QuantityKind.MU
        or (r.unit is not None and r.unit.kind is UnitKind.GROWTH)
        for r in readings
        if r.value is not None
    )
    kinds = {u.kind for u in units.values()}
    if kinds <= set(_PER_BIOMASS) or (kinds == {UnitKind.VOLUMETRIC} and concentration):
        basis = _per_biomass(kinds, grows, model_basis)
        per_litre = UnitKind.VOLUMETRIC in kinds
        return target_of(
            None, basis=basis, biomass=biomass, concentration=concentration if per_litre else None
        )
    if len(units) > 1:
        return BadUnit(Name.MIXED_BASIS, _mixture(readings, units), _mend(kinds))
    unit = next(iter(units.values()))
    if grows:
        words = f"a growth rate per hour stands beside rates in {unit.shown}"
        return BadUnit(Name.MIXED_BASIS, words, _mend(kinds))
    basis = Basis.AMOUNT if unit.kind is UnitKind.AMOUNT else Basis.VOLUMETRIC
    return target_of(unit, basis=basis, biomass=biomass, concentration=None)


def _per_biomass(kinds: set[UnitKind], grows: bool, model_basis: Basis | None) -> Basis:
    if model_basis in (Basis.SPECIFIC, Basis.CARBON):
        return model_basis
    if not kinds and not grows and model_basis is not None:
        return model_basis
    return Basis.CARBON if kinds == {UnitKind.CARBON} else Basis.SPECIFIC


def _mixture(readings: Sequence[Reading], units: dict[str, RateUnit]) -> str:
    """The first quantity of each unit, in words."""
    firsts: dict[str, str] = {}
    for reading in readings:
        if reading.unit is not None and reading.unit.shown in units:
            firsts.setdefault(reading.unit.shown, f"{reading.quantity} is in {reading.entry.unit}")
    return ", ".join(firsts.values())


def _mend(kinds: set[UnitKind]) -> str:
    if UnitKind.VOLUMETRIC in kinds:
        return (
            "write all in one basis; a line `biomass concentration 4.2 g/L` above the table "
            "makes rates per litre specific"
        )
    return "write all in one basis, or split the run in two"
