"""Species that nobody measured: which could be released or taken up, and how likely that is.

The rules are common practice, from memory; what cells release as a by-product stands in the
catalogue.
"""

from __future__ import annotations

from collections.abc import Collection, Iterator

from fluxnet.chemistry.catalogue import CompoundKind, Plausibility, load_catalogue
from fluxnet.chemistry.formula import Formula
from fluxnet.ground.record import record
from fluxnet.network.model import Network, Role, Species
from fluxnet.studies.closure_world import identity
from fluxnet.studies.suspect_result import Standing

__all__ = ["Candidate", "crosses", "find_candidates"]

_NEVER_CROSS = (
    CompoundKind.BOUND_GROUP, CompoundKind.ELECTRON_CARRIER, CompoundKind.ENERGY_CARRIER,
    CompoundKind.INTERMEDIATE,
)  # fmt: skip

# What a medium may hold unnoticed, or yeast extract and peptone bring.
_IN_MEDIA = (
    CompoundKind.SUGAR, CompoundKind.POLYOL, CompoundKind.ALCOHOL, CompoundKind.ACID,
    CompoundKind.AMINO_ACID, CompoundKind.AMINE, CompoundKind.NUCLEOBASE,
)  # fmt: skip

# Air leaks in; what else is taken up by name though it is no food.
_TAKEN_UP = {
    "oxygen": Standing.COMMON, "CO2": Standing.RARE, "bicarbonate": Standing.RARE,
    "hydrogen": Standing.RARE, "nitrate": Standing.RARE, "nitrite": Standing.RARE,
    "urea": Standing.RARE,
}  # fmt: skip

# Released only where the cells breathe nitrate.
_OF_NITRATE = ("N2", "N2O", "NO", "nitrite")
_RESPIRED = ("nitrate", "nitrite")

_STANDING = {
    Plausibility.COMMON: Standing.COMMON,
    Plausibility.RARE: Standing.RARE,
    Plausibility.NO: Standing.IMPOSSIBLE,
}


@record
class Candidate:
    """A species without a row: how its release stands, and its uptake.

    ``is_declared``: the model itself says that it is released.
    """

    name: str
    formula: Formula
    released: Standing
    taken_up: Standing
    is_declared: bool = False


def find_candidates(taken: Collection[str], network: Network | None) -> tuple[Candidate, ...]:
    """The species of the model and the catalogue that could be exchanged, and have no row.

    Parameters
    ----------
    taken
        Identities of the species that have a row or are free: see
        :func:`fluxnet.studies.closure_world.identity`.
    network
        The model; its own species come first, and keep their names.
    """
    known = set(taken)
    found: list[Candidate] = []
    for candidate, entry in _of_model(network):
        if entry not in known:
            known.add(entry)
            found.append(candidate)
    breathes = any(name in taken for name in _RESPIRED)
    for compound in load_catalogue():
        if compound.name in known or compound.kind in _NEVER_CROSS:
            continue
        released = _STANDING[compound.byproduct]
        if compound.name in _OF_NITRATE and not breathes:
            released = Standing.IMPOSSIBLE
        if compound.kind is CompoundKind.BIOMASS:
            # cells that stick to the wall or leave with the foam are not measured
            biomass = any(s.role is Role.BIOMASS for s in network.species) if network else False
            released = Standing.IMPOSSIBLE if biomass else Standing.COMMON
        usual = Standing.RARE if compound.kind in _IN_MEDIA else Standing.IMPOSSIBLE
        taken_up = _TAKEN_UP.get(compound.name, usual)
        if not (released is taken_up is Standing.IMPOSSIBLE):
            found.append(Candidate(compound.name, compound.formula, released, taken_up))
    return tuple(found)


def crosses(species: Species) -> bool:
    """Whether a species is a compound that can cross the boundary, as far as one knows.

    An own name inside may be that of a product before it leaves, and is told by the product.
    """
    entry = load_catalogue().find(species.entry or species.name)
    if entry is None:
        return species.role.is_boundary
    return entry.kind not in _NEVER_CROSS


def _of_model(network: Network | None) -> Iterator[tuple[Candidate, str]]:
    """The species of a model that are no carriers, with their identities.

    The model's answer is taken: released is what some reaction that can run makes, taken up
    what some such reaction uses and its role allows. A species inside may leak out.
    """
    if network is None:
        return
    made, used = _running(network)
    for species in network.species:
        if species.role is Role.CARRIER or species.formula is None:
            continue
        if not crosses(species):
            continue
        can_leave = species.role is not Role.SUBSTRATE and species.name in made
        can_enter = species.role in (Role.SUBSTRATE, Role.EXCHANGE) and species.name in used
        if can_leave or can_enter:
            yield (
                Candidate(
                    species.name, species.formula,
                    Standing.MODEL if can_leave else Standing.IMPOSSIBLE,
                    Standing.MODEL if can_enter else Standing.IMPOSSIBLE,
                    can_leave and species.role in (Role.PRODUCT, Role.EXCHANGE),
                ),
                identity(species.name, species.entry),
            )  # fmt: skip


def _running(network: Network) -> tuple[set[str], set[str]]:
    """The species that reactions which can carry a flux make, and those that they use."""
    from fluxnet.checks.cone import flux_cone
    from fluxnet.checks.interior import find_interior
    from fluxnet.matrices.stoichiometry import stoichiometry

    blocked = set(find_interior(flux_cone(network, stoichiometry(network))).blocked)
    made: set[str] = set()
    used: set[str] = set()
    for reaction in network.reactions:
        if reaction.name in blocked:
            continue
        left = {term.species for term in reaction.left}
        right = {term.species for term in reaction.right}
        made |= right | (left if reaction.reversible else set())
        used |= left | (right if reaction.reversible else set())
    return made, used
