"""Which limits apply to a run, and what a run leaves open."""

from __future__ import annotations

from collections.abc import Iterable
from math import inf

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.network.model import Limit, Network, Quantity, QuantityKind, Role
from fluxnet.rates.measured import Run
from fluxnet.solving.problem import Row
from fluxnet.solving.quantities import default_direction, has_mu
from fluxnet.solving.words import limit_words

__all__ = [
    "applies", "empty_notes", "free_species", "is_closed", "is_same", "is_zero", "limit_notes",
    "may_reverse",
]  # fmt: skip


def applies(limit: Limit, network: Network, run: Run | None) -> bool:
    """Whether a limit has the same meaning in the run's basis.

    One that is zero on every side it has does; :func:`_add_zeros` then keeps it as it is.
    """
    if run is None or run.basis is network.basis:
        return True
    parts = (limit.quantity, limit.quantity.numerator, limit.quantity.denominator)
    mu = any(q is not None and q.kind is QuantityKind.MU for q in parts)
    if limit.quantity.kind is QuantityKind.RATIO:
        return not mu
    return mu and has_mu(network, run.basis)


def is_zero(limit: Limit) -> bool:
    """Whether a limit is zero on every side it has."""
    return not limit.is_measured and limit.low in (0, None) and limit.high in (0, None)


def is_same(quantity: Quantity, other: Quantity, network: Network) -> bool:
    """Whether two quantities are one thing: also in the other direction, and mu and biomass."""
    if quantity == other:
        return True
    if quantity.kind is other.kind is QuantityKind.RATE:
        return quantity.name == other.name
    biomass = [s.name for s in network.boundary if s.role is Role.BIOMASS]
    kinds = {quantity.kind, other.kind}
    rate = quantity if quantity.kind is QuantityKind.RATE else other
    return kinds == {QuantityKind.MU, QuantityKind.RATE} and biomass == [rate.name]


def may_reverse(quantity: Quantity | None, network: Network) -> bool:
    """Whether neither role nor arrow keeps a quantity from being negative."""
    if quantity is None:
        return False
    if quantity.kind is QuantityKind.FLUX:
        reaction = network.find_reaction(quantity.name)
        return reaction is not None and reaction.reversible
    species = network.find_species(quantity.name)
    return species is not None and species.role is Role.EXCHANGE


def is_closed(quantity: Quantity | None, network: Network) -> bool:
    """Whether a limit leaves a quantity no value but zero."""
    return quantity is not None and any(
        is_zero(limit)
        and is_same(limit.quantity, quantity, network)
        and (limit.low == 0 or not may_reverse(quantity, network))
        and limit.high == 0
        for limit in network.limits
    )


def empty_notes(empty: Iterable[Limit], network: Network) -> tuple[Diagnostic, ...]:
    """Notes on measured ratios over a quantity that a limit closes."""
    return tuple(
        Diagnostic(
            Name.LIMIT_LEFT_OUT,
            f"{limit_words(limit, network)} is left out: a limit closes "
            f"{limit.quantity.denominator}, and a ratio over nothing has no value",
            limit.span,
        )
        for limit in empty
    )


def free_species(
    network: Network, measured: Iterable[Quantity], bounds: Iterable[tuple[Row, float, float]]
) -> tuple[str, ...]:
    """Boundary species that nothing measures and no limit fixes.

    ``bounds`` are the rows with their low and high.
    """
    known = tuple(measured)
    limited: dict[str, list[tuple[Quantity, float, float]]] = {}
    for row, low, high in bounds:
        if row.quantity is not None and row.quantity.kind is QuantityKind.RATE:
            limited.setdefault(row.quantity.name, []).append((row.quantity, low, high))
    free: list[str] = []
    for species in network.boundary:
        way = default_direction(species.role)
        own = Quantity(QuantityKind.RATE, species.name, way)
        if any(is_same(own, q, network) for q in known):
            continue
        low, high = -inf, inf
        for quantity, a, b in limited.get(species.name, ()):
            if quantity.direction is way:
                low, high = max(low, a), min(high, b)
            else:
                low, high = max(low, -b), min(high, -a)
        if low < high:
            free.append(species.name)
    return tuple(free)


def limit_notes(
    left_out: list[Limit], replaced: list[Limit], network: Network, run: Run | None
) -> tuple[Diagnostic, ...]:
    """Notes on the limits that a run leaves out or replaces."""
    if run is None:
        return ()
    notes = [
        Diagnostic(
            Name.LIMIT_LEFT_OUT,
            f"{limit_words(limit, network)} is written in {network.basis.value}; "
            f"it does not apply to run {run.name} in {run.basis.value}",
            limit.span,
        )
        for limit in left_out
        if not is_zero(limit)
    ]
    notes += [
        Diagnostic(
            Name.LIMIT_REPLACED,
            f"run {run.name} measures {limit.quantity} itself: it replaces "
            f"{limit_words(limit, network)}",
            limit.span,
        )
        for limit in replaced
    ]
    return tuple(notes)
