"""What is declared and never used, and a model without anything to live on."""

from __future__ import annotations

from fluxnet.chemistry.formula import degree_of_reduction
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.source import NOWHERE
from fluxnet.network.model import Network, Role, Species

__all__ = ["check_substrates", "check_unused"]


def check_unused(network: Network) -> tuple[Diagnostic, ...]:
    r"""Species that no reaction uses, of the base model or of any variant.

    Where a variant is applied nothing is told: what it leaves out is meant to be. Parameters
    without use are told where the file is read.

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> more = "inside citrate\n"
    >>> network = read_model_text(MODEL + more).network
    >>> [told.message for told in check_unused(network)]
    ['citrate is declared, but no reaction uses it']
    """
    if network.variant != "base":
        return ()
    reactions = [*network.reactions, *(r for v in network.variants for r in v.reactions)]
    used = {term.species for reaction in reactions for _, term in reaction.terms}
    return tuple(
        Diagnostic(
            Name.UNUSED_SPECIES,
            f"{s.name} is declared, but no reaction uses it",
            s.span,
            mend="use it in a reaction, or take the declaration away",
        )
        for s in network.species
        if s.name not in used and s.name not in network.free
    )


def check_substrates(network: Network) -> tuple[Diagnostic, ...]:
    r"""A warning where nothing with carbon can be taken up; CO2 as an exchange is no food.

    Examples
    --------
    >>> from fluxnet.reading.model import read_model_text
    >>> text = "carrier ATP\ncompartment c\n    idle : ATP -> nothing\n"
    >>> [(told.message, told.span.line) for told in check_substrates(read_model_text(text).network)]
    [('no species with carbon can be taken up', 2)]
    """
    if any(_is_food(s) for s in network.boundary):
        return ()
    places = [thing.span for thing in network.boundary]
    places += [compartment.span for compartment in network.compartments]
    place = places[0] if places else NOWHERE
    return (
        Diagnostic(
            Name.NO_SUBSTRATE,
            "no species with carbon can be taken up",
            place,
            because="without a substrate no flux can run",
            mend="declare one: substrate glucose",
        ),
    )


def _is_food(species: Species) -> bool:
    if species.formula is None or species.formula.count("C") <= 0:
        return False
    if species.role is Role.SUBSTRATE:
        return True
    return species.role is Role.EXCHANGE and (degree_of_reduction(species.formula) or 0) > 0


