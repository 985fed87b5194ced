"""A closure without some rows of its table: exactly what it is when they are not written."""

from __future__ import annotations

from collections.abc import Collection, Sequence
from difflib import get_close_matches

from fluxnet.chemistry.catalogue import find_compound
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.source import Span
from fluxnet.network.model import Network, Quantity, QuantityKind, Role, Species
from fluxnet.rates.leaving_out import leave_out
from fluxnet.rates.measured import RatesTable, Run, SdSource
from fluxnet.studies.closure_world import identity
from fluxnet.tables.bases import Target, carbon_weight
from fluxnet.tables.errors_assumed import SdRule, assume_sds
from fluxnet.tables.vocabulary import fold, is_growth_rate, read_direction, split_direction

__all__ = ["leave_rates_out"]


def leave_rates_out(
    table: RatesTable, runs: Sequence[Run], names: Collection[str], network: Network | None
) -> tuple[list[tuple[Run, tuple[str, ...]]], list[Diagnostic]]:
    """The runs without the rows that the names mean, each with the species that it lost.

    A name is a species (a direction may follow), ``mu``, or a ratio ``A / B``. A species takes
    the ratios that name it with it, or it would still be exchanged; biomass takes mu. Sds that
    were assumed are assumed again, since the largest rate of a run may be gone.

    Returns
    -------
    The runs, and a fault for each name that no run has.
    """
    biomass = _biomass(table, network)
    kept: list[tuple[Run, tuple[str, ...]]] = []
    met: set[str] = set()
    for run in runs:
        gone: list[int] = []
        for i, rate in enumerate(run.rates):
            meant = [n for n in names if _means(n, rate.quantity, biomass)]
            met.update(meant)
            if meant:
                gone.append(i)
        if not gone:
            kept.append((run, ()))
            continue
        lost = dict.fromkeys(
            name for i in gone for name in _species_of(run.rates[i].quantity, biomass)
        )
        kept.append((leave_out(run, gone, _assumed(run, gone, table, biomass)), tuple(lost)))
    return kept, [_unknown(name, runs) for name in names if name not in met]


def _biomass(table: RatesTable, network: Network | None) -> Species | None:
    """The one biomass species that mu is the growth of, if there is one."""
    known = network.boundary if network is not None else table.species
    biomass = [s for s in known if s.role is Role.BIOMASS]
    return biomass[0] if len(biomass) == 1 else None


def _species_of(quantity: Quantity, biomass: Species | None) -> tuple[str, ...]:
    """The species that a row tells of."""
    if quantity.kind is QuantityKind.RATIO:
        parts = (quantity.numerator, quantity.denominator)
        return tuple(n for p in parts if p is not None for n in _species_of(p, biomass))
    if quantity.kind is QuantityKind.MU:
        return (biomass.name,) if biomass is not None else ()
    return (quantity.name,) if quantity.kind is QuantityKind.RATE else ()


def _means(name: str, quantity: Quantity, biomass: Species | None) -> bool:
    """Whether a name means the row of a quantity, or a species that the row tells of."""
    if quantity.kind is QuantityKind.RATIO:
        parts = (quantity.numerator, quantity.denominator)
        sides = name.split("/")
        if len(sides) == 2 and all(
            part is not None and _means(side.strip(), part, biomass)
            for side, part in zip(sides, parts, strict=True)
        ):
            return True
        return any(part is not None and _means(name, part, biomass) for part in parts)
    if quantity.kind is QuantityKind.FLUX:
        return fold(name) in (fold(quantity.name), fold(f"flux {quantity.name}"))
    bare, word = split_direction(name)
    told = read_direction(word) if word else None
    if told is not None and quantity.direction is not None and told is not quantity.direction:
        return False
    if is_growth_rate(bare):
        return quantity.kind is QuantityKind.MU or (
            biomass is not None and quantity.name == biomass.name
        )
    if quantity.kind is QuantityKind.MU:
        return biomass is not None and _is_same(bare, biomass.name)
    return _is_same(bare, quantity.name)


def _is_same(name: str, other: str) -> bool:
    return fold(name) == fold(other) or identity(name) == identity(other)


def _assumed(
    run: Run, gone: Collection[int], table: RatesTable, biomass: Species | None
) -> dict[int, float]:
    """The sds that the rates left get where none was given, by their places."""
    left = [i for i in range(len(run.rates)) if i not in gone]
    target = Target(run.basis, run.unit, run.unit, biomass=biomass)
    species = {s.name: s for s in table.species}
    weights = [
        carbon_weight(q, (species[q.name],) if q.name in species else (), target)
        for q in (run.rates[i].quantity for i in left)
    ]
    rule = SdRule(*table.sd_rule)
    guesses = assume_sds([run.rates[i].value or 0.0 for i in left], weights, rule)
    return {
        i: guess or rule.floor
        for i, guess in zip(left, guesses, strict=True)
        if run.rates[i].sd_source is SdSource.ASSUMED
    }


def _unknown(name: str, runs: Sequence[Run]) -> Diagnostic:
    """The fault of a name that no row has; the nearest where it may be a slip."""
    rows = list(dict.fromkeys(rate.quantity for run in runs for rate in run.rates))
    mend = f"the rows are {', '.join(str(q) for q in rows)}"
    bare = {fold(q.name or str(q)): q.name or str(q) for q in rows}
    near = get_close_matches(fold(name), list(bare), 1, 0.6)
    if near and find_compound(split_direction(name)[0]) is None:
        mend = f"did you mean {bare[near[0]]}?"
    where = Span(f"--without {name}", 0)
    return Diagnostic(Name.UNKNOWN_QUANTITY, f"no row of {name} to leave out", where, mend=mend)
