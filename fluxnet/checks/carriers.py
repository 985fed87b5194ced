"""Carriers that are only loaded or only unloaded, in the carriers' own words."""

from __future__ import annotations

from collections.abc import Collection

from fluxnet.checks.graph import DeadEnd
from fluxnet.checks.words import and_list, names_list
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.network.model import CargoKind, Network, Role, Species

__all__ = ["tell_one_way_carriers"]


def tell_one_way_carriers(
    network: Network, dead_ends: Collection[DeadEnd]
) -> tuple[Diagnostic, ...]:
    """A warning for each carrier among the dead ends: it can neither leave nor pile up.

    Parameters
    ----------
    dead_ends
        Those of :func:`fluxnet.checks.graph.find_dead_ends`: what they tell is not told again.
    """
    told: list[Diagnostic] = []
    for end in dead_ends:
        carrier = network.find_species(end.species)
        if carrier is None or carrier.role is not Role.CARRIER:
            continue
        energy = carrier.cargo is not None and carrier.cargo.kind is CargoKind.ENERGY
        load, unload = ("makes", "spends") if energy else ("loads", "unloads")
        if set(end.makers) == set(end.users):
            message = f"only {end.makers[0]} touches carrier {carrier.name}: it cannot balance"
            mend = f"add the other reaction of {carrier.name}"
        elif end.makers:
            message = _message(carrier.name, end.makers, load, unload)
            mend = f"add what {unload} {carrier.name}"
            mend += f": upkeep : {carrier.name} -> nothing" if energy else ""
        else:
            message = _message(carrier.name, end.users, unload, load)
            mend = f"add what {load} {carrier.name}"
        others = _exchangeable(network, carrier)
        if others:
            mend += f", or a reaction that exchanges it with {and_list(others)}"
        told.append(
            Diagnostic(
                Name.DEAD_END,
                message,
                carrier.span,
                because=f"no flux can run in {names_list(end.blocked)}",
                mend=mend,
            )
        )
    return tuple(told)


def _message(carrier: str, reactions: tuple[str, ...], does: str, lacks: str) -> str:
    verb = does if len(reactions) == 1 else does.removesuffix("s")
    return f"{and_list(reactions)} {verb} {carrier}, but nothing {lacks} it"


def _exchangeable(network: Network, carrier: Species) -> tuple[str, ...]:
    """Other carriers of as many electrons."""
    if carrier.cargo is None or not carrier.cargo.electrons:
        return ()
    return tuple(
        other.name
        for other in network.carriers
        if other is not carrier
        and other.cargo is not None
        and other.cargo.kind is carrier.cargo.kind
        and other.cargo.electrons == carrier.cargo.electrons
    )
