"""Limits on the flux of an irreversible reaction, held against its direction."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.network.amounts import number_text
from fluxnet.network.model import Limit, QuantityKind, Reaction

__all__ = ["against_directions"]


def against_directions(
    limits: Iterable[Limit], reactions: Mapping[str, Reaction]
) -> tuple[Diagnostic, ...]:
    """What is wrong with limits below zero: nothing where the reaction is reversible.

    Parameters
    ----------
    reactions
        The reactions by name, as they stand in the network that holds the limits.

    Returns
    -------
    tuple of Diagnostic
        ``limit-against-direction`` where the flux would have to be negative,
        ``limit-without-effect`` where it only need not be below something negative.

    Examples
    --------
    >>> from fractions import Fraction
    >>> from fluxnet.network.model import Quantity, Relation
    >>> flux = Quantity(QuantityKind.FLUX, "adh")
    >>> limit = Limit(flux, Relation.AT_MOST, None, Fraction(-2))
    >>> for reversible in (False, True):
    ...     adh = Reaction("adh", "catabolism", (), (), reversible)
    ...     [d.message for d in against_directions([limit], {"adh": adh})]
    ['adh is irreversible, and this limit holds its flux at most -2']
    []
    """
    found: list[Diagnostic] = []
    for limit in limits:
        reaction = reactions.get(limit.quantity.name)
        if limit.quantity.kind is not QuantityKind.FLUX or reaction is None or reaction.reversible:
            continue
        if limit.high is not None and limit.high < 0:
            where = "at" if limit.low == limit.high else "at most"
            found.append(
                Diagnostic(
                    Name.LIMIT_AGAINST_DIRECTION,
                    f"{reaction.name} is irreversible, and this limit holds its flux {where} "
                    f"{number_text(limit.high)}",
                    limit.span,
                    mend=f"write {reaction.name} with <->, or correct the number",
                    also=(reaction.span,),
                )
            )
        elif limit.low is not None and limit.low < 0:
            found.append(
                Diagnostic(
                    Name.LIMIT_WITHOUT_EFFECT,
                    f"{reaction.name} is irreversible: that its flux is at least "
                    f"{number_text(limit.low)} holds nothing back",
                    limit.span,
                    mend=f"write {reaction.name} with <->, or take the limit away",
                    also=(reaction.span,),
                )
            )
    return tuple(found)
