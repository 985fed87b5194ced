"""The cases of a comparison: variants and their combinations, each on each substrate."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import replace
from fractions import Fraction
from itertools import product as combinations

from fluxnet.chemistry.formula import degree_of_reduction
from fluxnet.ground.diagnostic import Diagnostic, has_errors
from fluxnet.ground.errors import InputError, MisuseError
from fluxnet.ground.names import Name, Severity
from fluxnet.ground.record import record
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
from fluxnet.network.variant import BASE, apply_variant
from fluxnet.solving.words import limit_words
from fluxnet.studies.compare_reserve import Reserve

__all__ = ["Case", "Cases", "Skipped", "find_cases", "split_names"]

_MOST = 2000


@record
class Case:
    """A variant on one substrate.

    ``network`` has the other sources of carbon or electrons closed and the reserves as limits.
    ``uptake`` is that of the substrate in the unit of the basis, None where nothing gives one:
    then the case is worked out per mole, and limits in absolute units take no part.
    ``reserved`` are the quantities of the reserves, ``closed`` the species closed. ``parts``
    are the names that were chosen, one from each list.
    """

    variant: str
    substrate: str
    network: Network
    uptake: Fraction | None
    reserved: frozenset[Quantity]
    closed: tuple[str, ...] = ()
    parts: tuple[str, ...] = ()


@record
class Skipped:
    """A combination that makes no network, and why."""

    variant: str
    words: str


@record
class Cases:
    """The cases in the order asked for, what was skipped, and what was noted on the way."""

    members: tuple[Case, ...]
    skipped: tuple[Skipped, ...]
    notes: tuple[str, ...]


def split_names(text: str) -> tuple[str, ...]:
    """The alternatives of a list such as ``"base | anaerobic"``.

    Examples
    --------
    >>> split_names("base | anaerobic")
    ('base', 'anaerobic')
    """
    return tuple(part.strip() for part in text.split("|"))


def find_cases(
    network: Network,
    product: str,
    substrates: Sequence[str],
    across: Sequence[str] = (),
    reserves: Sequence[Reserve] = (),
    *,
    uptake: Fraction | None = None,
    beside: Sequence[str] = (),
) -> Cases:
    """All combinations of the lists in ``across``, each on each substrate.

    Without any list: the unchanged model, then each variant by itself. Combinations that clash
    are skipped; two ways to write one combination are one.

    Raises
    ------
    MisuseError
        Where product or substrate cannot be what they are asked to be, or nothing is left.
    InputError
        Where a variant does not exist.
    """
    if not substrates:
        raise MisuseError("a comparison needs a substrate: --from NAME")
    for substrate in substrates:
        _refuse_pair(network, product, substrate)
    kept, several = {*substrates, *beside}, len(substrates) > 1
    for name in beside:
        if network.find_species(name) is None:
            raise MisuseError(f"the model has no species {name} to be left open beside it")
    members: list[Case] = []
    skipped: list[Skipped] = []
    notes: dict[str, None] = {}
    seen: set[frozenset[str]] = set()
    closed: dict[str, None] = {}
    for parts in _choices(network, across):
        label = " * ".join(parts)
        changed, told = apply_variant(network, label)
        unknown = tuple(d for d in told if d.name is Name.UNKNOWN_VARIANT)
        if unknown:
            raise InputError(unknown)
        if changed is None:
            skipped.append(Skipped(label, _reason(told)))
            continue
        names = frozenset(changed.variant.split(" * "))
        if names in seen:
            continue
        seen.add(names)
        notes |= dict.fromkeys(
            f"variant {changed.variant} changes nothing: it can what base can"
            for d in told
            if d.name is Name.VARIANT_EMPTY
        )
        for substrate in substrates:
            lacking = [n for n in (product, substrate) if changed.find_species(n) is None]
            if lacking:
                skipped.append(Skipped(changed.variant, f"it has no species {lacking[0]}"))
                continue
            shutting = _shut_by(changed, substrate)
            if shutting is not None:
                name = f"{substrate}: {changed.variant}" if several else changed.variant
                skipped.append(Skipped(name, f"`{shutting}` closes the substrate"))
                continue
            open_ = {substrate, *(kept - set(substrates))}
            case = replace(_case(changed, substrate, open_, reserves, uptake), parts=parts)
            members.append(case)
            closed |= dict.fromkeys(case.closed)
    if not members:
        reasons = "; ".join(f"{s.variant}: {s.words}" for s in skipped)
        raise MisuseError(f"no combination is left to compare ({reasons})")
    others = [name for name in closed if name not in substrates]
    if others:
        listed = ", ".join(others)
        notes[f"not taken up beside the substrate: {listed} (--beside leaves it open)"] = None
    return Cases(tuple(members), tuple(skipped), tuple(notes))


def _refuse_pair(network: Network, product: str, substrate: str) -> None:
    if product == substrate:
        raise MisuseError(f"product and substrate are both {product}: name two species")
    for name, role, verb, wrong in (
        (product, "product", "released", Role.SUBSTRATE),
        (substrate, "substrate", "taken up", Role.PRODUCT),
    ):
        species = network.find_species(name)
        if species is None:
            added = any(s.name == name for v in network.variants for s in v.species)
            if not added:
                raise MisuseError(f"the model has no species {name}{_near(network, name)}")
            continue
        if not species.role.is_boundary:
            raise MisuseError(f"{name} stays inside the cell: a {role} has to cross the boundary")
        if species.role is wrong or (role == "substrate" and species.role is Role.BIOMASS):
            raise MisuseError(f"{name} cannot be {verb}: it is declared as {species.role.value}")


def _near(network: Network, name: str) -> str:
    from difflib import get_close_matches

    near = get_close_matches(name, [s.name for s in network.boundary], 3, 0.6)
    return f"; near to it are {', '.join(near)}" if near else ""


def _choices(network: Network, across: Sequence[str]) -> Iterator[tuple[str, ...]]:
    """Each combination as the names chosen, one from each list."""
    if not across:
        yield (BASE,)
        yield from ((v.name,) for v in network.variants)
        return
    lists = [split_names(text) for text in across]
    if any(not name for names in lists for name in names):
        raise MisuseError('a list of variants is written "base | anaerobic", without empty places')
    count = 1
    for names in lists:
        count *= len(names)
    if count > _MOST:
        raise MisuseError(f"{count} combinations are more than {_MOST}: ask for fewer at a time")
    yield from combinations(*lists)


def _reason(told: Sequence[Diagnostic]) -> str:
    first = next(d for d in told if d.severity is Severity.ERROR)
    return first.message if has_errors(told) else ""


def _case(
    network: Network,
    substrate: str,
    open_: set[str],
    reserves: Sequence[Reserve],
    uptake: Fraction | None,
) -> Case:
    shut = tuple(s.name for s in network.boundary if s.name not in open_ and _feeds(s))
    taken = [Quantity(QuantityKind.RATE, name, Direction.IN) for name in shut]
    reserved = [r.quantity for r in reserves]
    kept = [
        limit
        for limit in network.limits
        if limit.quantity not in taken and limit.quantity not in reserved
    ]
    closing = [Limit(q, Relation.AT_MOST, None, Fraction(0)) for q in taken]
    holding = [Limit(r.quantity, Relation.AT_LEAST, r.value, None) for r in reserves]
    if uptake is None:
        uptake = _limit_of(network, substrate)
    changed = replace(network, limits=(*kept, *closing, *holding))
    return Case(network.variant, substrate, changed, uptake, frozenset(reserved), shut)


def _feeds(species: Species) -> bool:
    """Whether a species brings carbon or electrons when it is taken up.

    Of those that go either way carbon without electrons stays open: it is CO2 as a rule.
    """
    if species.role not in (Role.SUBSTRATE, Role.EXCHANGE) or species.formula is None:
        return False
    electrons = degree_of_reduction(species.formula) or 0
    carbon = species.role is Role.SUBSTRATE and species.formula.count("C") > 0
    return carbon or electrons > 0


def _shut_by(network: Network, substrate: str) -> str | None:
    """The limit that lets nothing of the substrate in."""
    way = Quantity(QuantityKind.RATE, substrate, Direction.IN)
    for limit in network.limits:
        if limit.quantity == way and limit.high == 0:
            return limit_words(limit, network)
    return None


def _limit_of(network: Network, substrate: str) -> Fraction | None:
    """The most of the substrate that the model lets in."""
    way = Quantity(QuantityKind.RATE, substrate, Direction.IN)
    ends = [
        limit.high if limit.high is not None else limit.low
        for limit in network.limits
        if limit.quantity == way and (limit.high is not None or limit.is_measured)
    ]
    known = [end for end in ends if end]
    return min(known) if known else None
