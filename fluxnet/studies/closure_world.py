"""Which species are exchanged in a closure: those with a row, and a few that are free."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from fluxnet.chemistry.catalogue import Compound, find_compound
from fluxnet.chemistry.formula import Formula
from fluxnet.chemistry.reader import read_formula
from fluxnet.ground.record import record
from fluxnet.network.model import Network, Role, Species
from fluxnet.rates.measured import RatesTable
from fluxnet.studies.closure_result import World

__all__ = ["NitrogenSource", "describe_world", "find_source", "identity", "is_same"]

FREE_ALWAYS = ("water", "proton", "phosphate", "sulfate")
_SHOWN = {"proton": "protons"}
_GASES = {"oxygen": "O2", "CO2": "CO2", "hydrogen": "H2"}


@record
class NitrogenSource:
    """The nitrogen source: ``entry`` is what :func:`identity` gives for it."""

    name: str
    entry: str
    formula: Formula


def identity(name: str, entry: str | None = None) -> str:
    """What two names of one compound share: the catalogue's name, else the name itself."""
    if entry is not None:
        return entry
    compound = find_compound(name)
    return name if compound is None else compound.name


def is_same(species: Species, other: str) -> bool:
    """Whether a species is the one that a name means, through the catalogue's synonyms."""
    return species.name == other or identity(species.name, species.entry) == identity(other)


def find_source(
    name: str, table: RatesTable, network: Network | None
) -> NitrogenSource | tuple[str, ...]:
    """The nitrogen source of that name; the nearest names where there is none with nitrogen."""
    known: list[Species] = list(table.species) + list(network.boundary if network else ())
    for species in known:
        if is_same(species, name) and species.formula is not None:
            if species.formula.count("N"):
                entry = identity(species.name, species.entry)
                return NitrogenSource(species.name, entry, species.formula)
            return ()
    compound: Compound | None = find_compound(name)
    if compound is not None and compound.formula.count("N"):
        return NitrogenSource(name, compound.name, compound.formula)
    if compound is not None:
        return ()
    from fluxnet.chemistry.catalogue import load_catalogue

    return load_catalogue().nearest(name)


def free_formulas(rows: Iterable[Species], source: NitrogenSource) -> dict[str, Formula]:
    """The species that are free because they have no row, with their formulas."""
    taken = {identity(s.name, s.entry) for s in rows}
    formulas = {n: _formula(n) for n in FREE_ALWAYS if n not in taken}
    if source.entry not in taken:
        formulas[source.name] = source.formula
    return formulas


def describe_world(
    rows: Sequence[Species],
    free: Iterable[str],
    source: NitrogenSource,
    network: Network | None,
    aside: Iterable[str] = (),
) -> World:
    """The world in words: what is free, and what is taken not to be exchanged.

    Parameters
    ----------
    rows
        The species with a row; a biomass counts as one where mu has a row.
    free
        The free species.
    aside
        Species whose rows were left out on request.
    """
    free = tuple(free)
    taken = {identity(s.name, s.entry) for s in rows}
    own = {identity(s.name, s.entry): s.name for s in (network.boundary if network else ())}
    left = {name: own.get(name, shown) for name, shown in _GASES.items()}
    for species in network.boundary if network else ():
        if species.role is not Role.SUBSTRATE:
            left.setdefault(identity(species.name, species.entry), species.name)
    for name in aside:
        left.setdefault(identity(name), name)
    apart = taken | {source.entry if name == source.name else identity(name) for name in free}
    return World(
        free=tuple(_SHOWN.get(name, name) for name in free),
        not_exchanged=tuple(shown for name, shown in left.items() if name not in apart),
        nitrogen=source.name,
    )


def _formula(name: str) -> Formula:
    compound = find_compound(name)
    return compound.formula if compound is not None else read_formula(name)
