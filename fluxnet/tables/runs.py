"""Readings of one run become rates in one basis, with sds and a covariance."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import field

import numpy as np

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.network.model import Basis, Quantity, QuantityKind, Species
from fluxnet.rates.covariance import join_errors
from fluxnet.rates.measured import MeasuredRate, Run, SdSource
from fluxnet.tables.bases import Factor, Target, carbon_weight, factor_to
from fluxnet.tables.correlations import Correlation, correlation_matrix
from fluxnet.tables.entries import RunHead
from fluxnet.tables.errors_assumed import SdRule, assume_sds
from fluxnet.tables.numbers import cell_fault
from fluxnet.tables.rate_units import BadUnit, RateUnit
from fluxnet.tables.repeats import find_repeats
from fluxnet.tables.targets import choose_target
from fluxnet.tables.values import Reading

__all__ = ["BuiltRun", "KnownFactors", "build_run"]

KnownFactors = dict[tuple[object, ...], Factor | BadUnit]
"""Factors by unit, quantity and target."""

_PER_BIOMASS = (Basis.SPECIFIC, Basis.CARBON)


@record
class BuiltRun:
    """A run, or None where faults forbid one.

    ``assumed`` names the rates whose sd was assumed; ``free_acids`` the species whose grams
    were taken as the free acid's; ``independent`` says that specific rates stand without a
    shared error.
    """

    name: str
    run: Run | None = None
    assumed: tuple[str, ...] = ()
    free_acids: tuple[str, ...] = ()
    independent: bool = False
    notes: tuple[str, ...] = ()
    diagnostics: tuple[Diagnostic, ...] = field(default=())


@record
class _Scaled:
    """A reading in the basis of the run."""

    reading: Reading
    value: float | None
    sd: float | None
    relative: float | None
    factor: float = 1.0


def build_run(
    head: RunHead,
    readings: Sequence[Reading],
    *,
    biomass: Species | None,
    model_basis: Basis | None,
    concentration: tuple[float, float] | None,
    shared_error: float | None,
    correlations: Sequence[Correlation],
    rule: SdRule,
    complete: bool,
    known: KnownFactors,
) -> BuiltRun:
    """Bring a run's readings to one basis.

    Parameters
    ----------
    biomass
        The biomass to whose mass specific rates refer; None where it is not known.
    model_basis
        The basis of the model's limits; None without a model.
    concentration
        Biomass [g/L] and its relative error, which turn volumetric rates into specific ones.
    shared_error
        The relative error of the biomass that the specific rates share.
    correlations
        Those of the covariance table that are this run's.
    complete
        Whether no entry of the run was lost to a fault before.
    known
        Factors found for other runs of the table; those found here are added.
    """
    faults = list(find_repeats(readings, biomass))
    chosen = choose_target(readings, biomass, model_basis, concentration and concentration[0])
    if isinstance(chosen, BadUnit):
        faults.append(
            Diagnostic(chosen.name, f"run {head.name}: {chosen.words}", head.span, mend=chosen.mend)
        )
        return BuiltRun(head.name, diagnostics=tuple(faults))
    scaled: list[_Scaled] = []
    free_acids: list[str] = []
    for reading in readings:
        found = _scale(reading, chosen, known)
        if isinstance(found, Diagnostic):
            faults.append(found)
        else:
            scaled.append(found[0])
            free_acids.extend(found[1])
    if not any(s.value is not None for s in scaled):
        if complete and not faults:
            faults.append(_nothing_measured(head))
        return BuiltRun(head.name, diagnostics=tuple(faults))
    notes: list[str] = []
    if concentration is not None and chosen.concentration is None:
        notes.append(f"run {head.name}: the biomass concentration is not used")
    if chosen.concentration is not None and shared_error is None and concentration:
        shared_error = concentration[1] or None
    if shared_error is not None and chosen.basis not in _PER_BIOMASS:
        notes.append(f"run {head.name}: the shared error does not apply to {chosen.shown}")
        shared_error = None
    rates, assumed = _rates(scaled, chosen, biomass, shared_error, rule)
    factors = [s.factor for s in scaled if s.value is not None]
    run, wrong = _with_covariance(head, rates, factors, chosen, shared_error, correlations)
    faults.extend(wrong)
    sharing = [r for r in rates if r.value is not None and _shares(r.quantity, biomass)]
    return BuiltRun(
        head.name,
        None if faults or not complete else run,
        tuple(assumed),
        tuple(dict.fromkeys(free_acids)),
        chosen.basis in _PER_BIOMASS
        and shared_error is None
        and not correlations
        and len(sharing) > 1,
        tuple(notes),
        tuple(faults),
    )


def _scale(
    reading: Reading, target: Target, known: KnownFactors
) -> tuple[_Scaled, tuple[str, ...]] | Diagnostic:
    if reading.value is None:
        return _Scaled(reading, None, None, None), ()
    entry = reading.entry
    found = _factor(reading.unit, reading, target, known)
    if isinstance(found, BadUnit):
        return cell_fault(found.name, entry.unit_cell, "", _of(entry.name, found), found.mend)
    sd_factor = found.value
    if reading.sd_unit is not None:
        own = _factor(reading.sd_unit, reading, target, known)
        if isinstance(own, BadUnit):
            words = _of(f"sd of {entry.name}", own)
            return cell_fault(own.name, entry.sd, "", words, own.mend)
        sd_factor = own.value
    sd = None if reading.sd is None else reading.sd * sd_factor
    scaled = _Scaled(reading, reading.value * found.value, sd, reading.relative, found.value)
    return scaled, found.free_acids


def _of(what: str, bad: BadUnit) -> str:
    """Why a unit cannot be used, and of what, which is not said twice."""
    return bad.words if bad.words.startswith(what) else f"{what}: {bad.words}"


def _factor(
    unit: RateUnit | None, reading: Reading, target: Target, known: KnownFactors
) -> Factor | BadUnit:
    """The factor of a unit; found once for all runs of a table that need the same.

    Units and quantities are told apart by being the same object, which is sooner seen than
    that they are equal; the readings of a table share them, and outlive ``known``.
    """
    key = (id(unit), id(reading.quantity), target.shown, target.concentration, id(target.biomass))
    found = known.get(key)
    if found is None:
        found = known[key] = factor_to(unit, reading.quantity, reading.species, target)
    return found


def _rates(
    scaled: Sequence[_Scaled],
    target: Target,
    biomass: Species | None,
    shared_error: float | None,
    rule: SdRule,
) -> tuple[list[MeasuredRate], list[str]]:
    """The rates with an sd each, and the names of those whose sd was assumed."""
    guesses: Sequence[float] = [0.0] * len(scaled)
    if any(_lacks_sd(s) for s in scaled):
        weights = [carbon_weight(s.reading.quantity, s.reading.species, target) for s in scaled]
        guesses = assume_sds([s.value or 0.0 for s in scaled], weights, rule)
    rates: list[MeasuredRate] = []
    assumed: list[str] = []
    for one, guess in zip(scaled, guesses, strict=True):
        entry, quantity = one.reading.entry, one.reading.quantity
        sd, relative, source = one.sd, one.relative, SdSource.GIVEN
        if one.value is None:
            sd = relative = None
        elif _lacks_sd(one):
            sd, relative, source = guess or rule.floor, None, SdSource.ASSUMED
            assumed.append(str(quantity))
        elif relative is not None and (one.value != 0 or relative == 0):
            sd, source = relative * abs(one.value), SdSource.RELATIVE
        own: float | None = None
        if sd and one.value is not None and shared_error and _shares(quantity, biomass):
            # a typed 0 stays exact: it has no part in the shared error either
            own, sd = sd, float(np.hypot(sd, shared_error * one.value))
        rates.append(
            MeasuredRate(
                quantity,
                one.value,
                sd,
                relative,
                source,
                entry.value.text,
                entry.unit,
                entry.value.span,
                own,
            )
        )
    return rates, assumed


def _lacks_sd(one: _Scaled) -> bool:
    """Whether an sd is to be assumed: 5 % of nothing would be exact, so a rate of 0 has none."""
    if one.value is None or one.sd is not None:
        return False
    return one.relative is None or (one.value == 0 and one.relative != 0)


def _with_covariance(
    head: RunHead,
    rates: Sequence[MeasuredRate],
    factors: Sequence[float],
    target: Target,
    shared_error: float | None,
    correlations: Sequence[Correlation],
) -> tuple[Run, tuple[Diagnostic, ...]]:
    measured = [r for r in rates if r.value is not None]
    own = [r.sd or 0.0 if r.own_sd is None else r.own_sd for r in measured]
    matrix, faults = correlation_matrix(head.name, measured, own, factors, correlations)
    covariance = None
    if matrix is not None or shared_error:
        shared = (
            None
            if not shared_error
            else [
                shared_error * (r.value or 0.0) if r.own_sd is not None else 0.0 for r in measured
            ]
        )
        covariance = join_errors(own, shared, matrix)
    run = Run(
        head.name,
        target.basis,
        tuple(rates),
        covariance,
        head.extras,
        target.shown,
        shared_error,
        head.span,
    )
    return run, faults


def _shares(quantity: Quantity, biomass: Species | None) -> bool:
    """Whether a specific rate was divided by the biomass: not mu, nor growth itself."""
    if quantity.kind is QuantityKind.FLUX:
        return True
    return quantity.kind is QuantityKind.RATE and (biomass is None or quantity.name != biomass.name)


def _nothing_measured(head: RunHead) -> Diagnostic:
    return Diagnostic(
        Name.NO_MEASURED_RATE,
        f"run {head.name} holds no measured rate",
        head.span,
        mend="fill in at least one rate, or take the run out",
    )
