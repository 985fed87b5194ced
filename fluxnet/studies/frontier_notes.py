"""What a reader of a trade-off has to know beside it: what may be taken up, and what must be."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import replace
from difflib import get_close_matches
from fractions import Fraction

from fluxnet.chemistry.formula import degree_of_reduction
from fluxnet.ground.errors import MisuseError
from fluxnet.network.model import (
    Direction,
    Limit,
    Network,
    Quantity,
    QuantityKind,
    Relation,
    Role,
    Species,
)
from fluxnet.solving.parametric import Extreme
from fluxnet.solving.words import number_words
from fluxnet.studies.frontier_axis import Axis
from fluxnet.studies.frontier_result import Curve

__all__ = ["shut_others", "tell_forced_uptake", "tell_sources"]


def shut_others(network: Network, only: Sequence[str]) -> Network:
    """The network in which no carbon source is taken up but some.

    Raises
    ------
    MisuseError
        Where one of these is none that the network could take up.
    """
    if not only:
        return network
    sources = [s.name for s in network.boundary if _is_source(s)]
    for name in only:
        if name not in sources:
            near = get_close_matches(name, sources, 3, 0.6) or sources
            raise MisuseError(
                f"--only {name}: the model takes up no carbon source of this name; it has "
                f"{', '.join(near) or 'none'}"
            )
    shut = [_uptake(name) for name in sources if name not in only]
    kept = [limit for limit in network.limits if limit.quantity not in shut]
    closing = [Limit(way, Relation.AT_MOST, None, Fraction(0)) for way in shut]
    return replace(network, limits=(*kept, *closing))


def tell_sources(networks: Iterable[Network], axes: Sequence[Axis]) -> str:
    """That more than one carbon source may be taken up at once; empty where none, or all are told.

    Nothing is said where each of them is one of the two quantities.
    """
    told: dict[str, None] = {}
    for network in networks:
        found = _open_sources(network)
        if len(found) > 1:
            told |= dict.fromkeys(found)
    names = list(told)
    named = {q.name for axis in axes for _, q in axis.terms}
    if not names or named >= told.keys():
        return ""
    first = next((name for name in names if name in named), names[0])
    others = [name for name in names if name != first]
    verb = "shuts the others" if len(others) > 1 else "shuts it"
    return f"{_listed(others)} may be taken up beside {first}: `--only {first}` {verb}."


def tell_forced_uptake(
    curves: Sequence[Curve], x: Axis, y: Axis, extreme: Extreme, network: Network
) -> str:
    """That a curve gets worse behind its best point only because all of x has to be taken up."""
    quantity = x.single
    if quantity is None or (quantity.kind, quantity.direction) != (
        QuantityKind.RATE, Direction.IN,
    ):  # fmt: skip
        return ""
    falls = [c for c in curves if c.points and _falls(c, extreme)]
    if not falls:
        return ""
    low = min(c.points[0].x for c in curves if c.points)
    high = max(c.points[-1].x for c in curves if c.points)
    species = network.find_species(quantity.name)
    is_substrate = species is not None and species.role is Role.SUBSTRATE
    moved = quantity.name if is_substrate else f'"in {quantity.name}"'
    aim = f'"{y.name}"' if " " in y.name else y.name
    what = "falls" if extreme is Extreme.MOST else "rises"
    return (
        f"{x.name} is held at each value, so a line that {what} behind its best point tells of "
        f"uptake that is forced, not of harm. If it need not be used: `frontier MODEL "
        f"{aim.removesuffix(' surplus')} --over {moved} --from {_n(low)} --to {_n(high)}`."
    )


def _falls(curve: Curve, extreme: Extreme) -> bool:
    ys = [extreme.sign * p.y for p in curve.points]
    return ys[-1] > min(ys) + 1e-9 * max(1.0, abs(min(ys)))


def _open_sources(network: Network) -> list[str]:
    """The carbon sources that some reaction uses, and no limit shuts."""
    used = {term.species for r in network.reactions for _, term in r.terms}
    shut = {x.quantity for x in network.limits if x.high == 0}
    return [
        s.name for s in network.boundary
        if _is_source(s) and s.name in used and _uptake(s.name) not in shut
    ]  # fmt: skip


def _is_source(species: Species) -> bool:
    """Whether what is taken up brings carbon with electrons, as CO2 does not."""
    if species.role not in (Role.SUBSTRATE, Role.EXCHANGE) or species.formula is None:
        return False
    electrons = degree_of_reduction(species.formula) or 0
    return species.formula.count("C") > 0 and electrons > 0


def _uptake(name: str) -> Quantity:
    return Quantity(QuantityKind.RATE, name, Direction.IN)


def _listed(names: Sequence[str]) -> str:
    return names[0] if len(names) == 1 else f"{', '.join(names[:-1])} and {names[-1]}"


def _n(value: float) -> str:
    return number_words(float(f"{value:.4g}") + 0.0)
