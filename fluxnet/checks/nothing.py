"""Nothing comes out of nothing: no energy, no electrons, no biomass, no product.

Every uptake is closed, release is open, limits are reduced to their signs, and carriers may
pile up. One linear programme tells whether anything can then be made at all; each thing that
can is shown with an irreducible set of reactions that makes it.
"""

from __future__ import annotations

from collections.abc import Collection, Sequence
from dataclasses import replace
from enum import Enum
from fractions import Fraction

from fluxnet.checks.cone import Cone, Form, FormKind, flux_cone
from fluxnet.checks.interior import Opening, exact_weights, open_exactly, open_most
from fluxnet.checks.loops import find_loop
from fluxnet.checks.words import and_list, equation, names_list
from fluxnet.exact.sparse import null_space, product
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.matrices.stoichiometry import Stoichiometry
from fluxnet.network.model import CargoKind, Network, Role, Species

__all__ = ["FromNothing", "Loop", "Made", "find_from_nothing", "tell_from_nothing"]


class Made(Enum):
    """What a loop makes out of nothing."""

    ENERGY = "energy"
    ELECTRONS = "electrons"
    BIOMASS = "biomass"
    PRODUCT = "product"


_NAMES = {
    Made.ENERGY: Name.ENERGY_FROM_NOTHING,
    Made.ELECTRONS: Name.ELECTRONS_FROM_NOTHING,
    Made.BIOMASS: Name.BIOMASS_FROM_NOTHING,
    Made.PRODUCT: Name.PRODUCT_FROM_NOTHING,
}


@record
class Loop:
    """An irreducible set of reactions that makes something out of nothing.

    ``fluxes`` are exact, whole numbers where these are not huge, each with its reaction;
    negative for one that runs backwards. ``made`` is all that comes of them, ``species``
    first. ``maker`` is the reaction of the loop that makes most of it. ``through`` are the
    other species that can be made out of nothing by this loop and further reactions.
    """

    kind: Made
    species: str
    maker: str
    fluxes: tuple[tuple[str, Fraction], ...]
    made: tuple[tuple[str, Fraction], ...]
    through: tuple[str, ...] = ()

    @property
    def reactions(self) -> tuple[str, ...]:
        """The reactions of the loop."""
        return tuple(name for name, _ in self.fluxes)


@record
class FromNothing:
    """The loops found, each cause once; ``verified`` says that the verdict was proven exactly."""

    loops: tuple[Loop, ...]
    verified: bool


def find_from_nothing(network: Network, stoich: Stoichiometry) -> FromNothing:
    r"""Everything that the network can make while it takes nothing up.

    Examples
    --------
    >>> from fluxnet.matrices.stoichiometry import stoichiometry
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> more = "compartment c\n    slip : nothing -> ATP\n"
    >>> network = read_model_text(MODEL + more).network
    >>> found = find_from_nothing(network, stoichiometry(network))
    >>> [(loop.species, loop.reactions) for loop in found.loops]
    [('ATP', ('slip',))]
    """
    cone = _closed_cone(network, stoich)
    wanted = [
        k for k, s in enumerate(cone.sides) if s.kind in (FormKind.BALANCE, FormKind.ROLE)
    ]
    opening = open_most(cone, wanted)
    if not opening.open:
        if not wanted or _is_proven(cone, wanted, opening):
            return FromNothing((), True)
        opening = open_exactly(cone, wanted)
        if not opening.open:
            return FromNothing((), _is_proven(cone, wanted, opening))
    found: list[Loop] = []
    verified = True
    for k in sorted(opening.open, key=lambda k: _order(network, cone.sides[k])):
        fluxes = find_loop(cone, cone.sides[k])
        if fluxes is None:
            verified = False
            continue
        found.append(_loop(network, cone, cone.sides[k], fluxes))
    return FromNothing(_each_cause_once(found), verified)


def _is_proven(cone: Cone, wanted: Collection[int], opening: Opening) -> bool:
    """Whether the weights of an opening prove that nothing wanted opens."""
    weights = opening.weights.tolist()
    held = [k for k, w in enumerate(weights) if w > 0 or k in wanted]
    space = null_space([f.row for f in cone.equal], len(cone.reactions))
    sides = [cone.sides[k] for k in held]
    return exact_weights(space, sides, [weights[k] for k in held]) is not None


def tell_from_nothing(network: Network, loops: Sequence[Loop]) -> tuple[Diagnostic, ...]:
    r"""An error for each loop, at the reaction that makes it; the others stand beside that.

    Examples
    --------
    >>> from fluxnet.matrices.stoichiometry import stoichiometry
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> more = "compartment c\n    slip : nothing -> ATP\n"
    >>> network = read_model_text(MODEL + more).network
    >>> found = find_from_nothing(network, stoichiometry(network))
    >>> [told.message for told in tell_from_nothing(network, found.loops)]
    ['reaction slip makes ATP out of nothing']
    """
    told: list[Diagnostic] = []
    for loop in loops:
        members = [r for r in network.reactions if r.name in loop.reactions]
        places = [r.span for r in sorted(members, key=lambda r: r.name != loop.maker)]
        names = and_list(loop.reactions)
        plural = len(loop.reactions) > 1
        subject = f"reactions {names} together make" if plural else f"reaction {names} makes"
        because = f"{_sum_words(loop)}: {equation((), loop.made)}"
        if loop.through:
            because += f"; through it also {names_list(loop.through)}"
        told.append(
            Diagnostic(
                _NAMES[loop.kind],
                f"{subject} {loop.species} out of nothing",
                places[0],
                because=because,
                mend=_mend(loop, plural),
                also=tuple(places[1:]),
            )
        )
    return tuple(told)


def _closed_cone(network: Network, stoich: Stoichiometry) -> Cone:
    """The cone without uptake, in which carriers may pile up."""
    cone = flux_cone(network, stoich, uptake=())
    carriers = {s.name for s in network.carriers}
    surplus = [f for f in cone.equal if f.kind is FormKind.BALANCE and f.name in carriers]
    rest = tuple(f for f in cone.equal if f not in surplus)
    return replace(cone, equal=rest, sides=(*cone.sides, *surplus))


def _kind(species: Species) -> Made:
    if species.cargo is None:
        return Made.BIOMASS if species.role is Role.BIOMASS else Made.PRODUCT
    if species.cargo.kind is CargoKind.ENERGY:
        return Made.ENERGY
    return Made.ELECTRONS if species.cargo.electrons else Made.PRODUCT


def _order(network: Network, form: Form) -> tuple[int, int]:
    names = [s.name for s in network.species]
    species = network.species[names.index(form.name)]
    return list(Made).index(_kind(species)), names.index(form.name)


def _loop(network: Network, cone: Cone, aim: Form, fluxes: tuple[Fraction, ...]) -> Loop:
    species = next(s for s in network.species if s.name == aim.name)
    amounts = {
        side.name: amount
        for side in cone.sides
        if side.kind in (FormKind.BALANCE, FormKind.ROLE)
        and (amount := product(side.row, fluxes))
    }
    first = (aim.name, amounts.pop(aim.name))
    return Loop(
        _kind(species),
        aim.name,
        cone.reactions[max(aim.row, key=lambda j: aim.row[j] * fluxes[j])],
        tuple((name, v) for name, v in zip(cone.reactions, fluxes, strict=True) if v),
        (first, *amounts.items()),
    )


def _each_cause_once(loops: Sequence[Loop]) -> tuple[Loop, ...]:
    """Loops that hold no other loop; what the others make is named with the one they hold."""
    kept: list[Loop] = []
    through: dict[int, list[str]] = {}
    for loop in sorted(loops, key=lambda found: len(found.fluxes)):
        members = set(loop.reactions)
        inside = [k for k, other in enumerate(kept) if members.issuperset(other.reactions)]
        if inside:
            through.setdefault(inside[0], []).append(loop.species)
        else:
            kept.append(loop)
    return tuple(
        replace(loop, through=tuple(through.get(k, ()))) for k, loop in enumerate(kept)
    )


def _sum_words(loop: Loop) -> str:
    """The loop as a sum of its reactions."""
    words = ""
    for name, flux in loop.fluxes:
        size = abs(flux)
        sign = "-" if flux < 0 else "+"
        lead = f" {sign} " if words else "-" if flux < 0 else ""
        words += lead + (name if size == 1 else f"{_number(size)} {name}")
    return words


def _number(value: Fraction) -> str:
    return str(value) if value.denominator == 1 else f"{float(value):.6g}"


def _mend(loop: Loop, plural: bool) -> str:
    if loop.kind is Made.ENERGY:
        where = "in one of these reactions" if plural else "in it"
        return f"correct a coefficient of {loop.species} or a direction {where}"
    where = "one of these reactions" if plural else "it"
    return f"correct {where}: what goes in must come out"
