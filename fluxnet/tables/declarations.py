"""Species that a table declares: whether catalogue and model agree with their formulas."""

from __future__ import annotations

from collections.abc import Sequence

from fluxnet.chemistry.catalogue import find_compound
from fluxnet.chemistry.compare import Likeness, compare_with_compound
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.network.model import Network, Role, Species

__all__ = ["check_declarations"]


def check_declarations(
    species: Sequence[Species], network: Network | None
) -> tuple[Diagnostic, ...]:
    """Faults of declared species: declared twice, or with a formula that something contradicts.

    One given must agree with the catalogue up to water and protons, and with the model.
    """
    faults: list[Diagnostic] = []
    first: dict[str, Species] = {}
    for one in species:
        before = first.setdefault(one.name, one)
        if before is not one:
            faults.append(
                Diagnostic(
                    Name.DECLARED_TWICE,
                    f"{one.name} is declared twice above the table",
                    one.span,
                    also=(before.span,),
                )
            )
        faults.extend(_against_catalogue(one))
        known = network.find_species(one.name) if network is not None else None
        if known is not None and _differ(one, known):
            faults.append(
                Diagnostic(
                    Name.FORMULA_DIFFERS,
                    f"the table declares {one.name} as {_words(one)}, the model as {_words(known)}",
                    one.span,
                    mend="take the line above the table away: the model's then holds",
                )
            )
    return tuple(faults)


def _against_catalogue(species: Species) -> list[Diagnostic]:
    compound = None if species.role is Role.BIOMASS else find_compound(species.name)
    if compound is None or species.formula is None or compound.kind.is_carrier:
        return []
    likeness = compare_with_compound(species.formula, compound)
    if likeness in (Likeness.SAME, Likeness.WATER_AND_PROTONS):
        return []
    words = (
        f"{species.name} is {compound.formula.written} in the catalogue, not "
        f"{species.formula.written}"
    )
    mend = f"leave the line out ({compound.formula.written} is then taken), or rename the species"
    return [Diagnostic(Name.FORMULA_DIFFERS, words, species.span, mend=mend)]


def _differ(one: Species, other: Species) -> bool:
    if one.formula is None or other.formula is None:
        return False
    same = dict(one.formula.counts) == dict(other.formula.counts)
    return not (same and one.formula.charge == other.formula.charge and one.ash == other.ash)


def _words(species: Species) -> str:
    formula = species.formula.written if species.formula is not None else "unknown"
    return f"{formula} with {float(species.ash) * 100:g} % ash" if species.ash else formula
