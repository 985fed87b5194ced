"""The cone in which a network's routes are looked for, and what a route does there.

Balances, directions and roles hold; of the limits their signs alone, for a route has no size. A
role that the directions do not imply (a product that some reaction could use) becomes a column
of its own, so that a route keeps to it.
"""

from __future__ import annotations

from collections.abc import Iterable
from fractions import Fraction

from fluxnet.checks.cone import FormKind, exact_rows, flux_cone
from fluxnet.exact.sparse import SparseRow
from fluxnet.ground.record import record
from fluxnet.matrices.stoichiometry import stoichiometry
from fluxnet.modes.cone import Cone
from fluxnet.network.model import Limit, Network, Reaction
from fluxnet.solving.words import limit_words

__all__ = ["Openings", "RouteSystem", "plain_spenders", "route_system"]

ONE = Fraction(1)


@record
class Openings:
    """What one question opens or shuts beside the model itself.

    ``drained`` carriers may leave, and what only spends them stands still; ``opened`` ones are
    not balanced; ``taken`` and ``made`` name exchange species that go one way here.
    """

    drained: tuple[str, ...] = ()
    opened: tuple[str, ...] = ()
    taken: str | None = None
    made: str | None = None


@record
class RouteSystem:
    """The cone, whose first columns are the reactions in the order of the network.

    ``turned`` marks reactions that can only run backwards: their column is minus the flux.
    ``releases`` are the releases of what crosses the boundary (opened and drained carriers
    too) by column; ``energy`` what is left over of carriers, by column. ``sizes`` are limits
    that take no part, because they are about sizes. ``balances`` are those of the species that
    have to balance; ``shut`` are reactions that limits, or the question itself, let not run.
    """

    network: Network
    cone: Cone
    turned: tuple[bool, ...]
    releases: tuple[tuple[str, SparseRow], ...]
    energy: tuple[tuple[str, SparseRow], ...]
    sizes: tuple[str, ...]
    balances: tuple[tuple[str, SparseRow], ...]
    shut: frozenset[int]


def plain_spenders(network: Network, carrier: str) -> tuple[Reaction, ...]:
    """Reactions that do nothing but spend a carrier: ``ATP -> nothing``."""
    return tuple(
        r for r in network.reactions
        if not r.right and [t.species for t in r.left] == [carrier]
    )  # fmt: skip


def route_system(network: Network, openings: Openings) -> RouteSystem:
    """The cone of one question.

    Examples
    --------
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> system = route_system(read_model_text(MODEL).network, Openings(drained=("ATP",)))
    >>> system.cone.columns[-1], [name for name, _ in system.energy]
    ('ATP surplus', ['ATP'])
    """
    stoich = stoichiometry(network)
    rows = dict(zip(stoich.species, exact_rows(network, stoich), strict=True))
    whole = flux_cone(network, stoich)
    left_open = {*openings.opened, *openings.drained}
    halted = {r.name for name in openings.drained for r in plain_spenders(network, name)}
    equal = [
        f.row for f in whole.equal if f.kind is not FormKind.BALANCE or f.name not in left_open
    ]
    equal += [{j: ONE} for j, r in enumerate(network.reactions) if r.name in halted]
    sides = [f.row for f in whole.sides]
    sides += [_scaled(rows[name], -1) for name in (openings.taken,) if name]
    sides += [rows[name] for name in (openings.made,) if name]
    ways = _ways(len(network.reactions), sides)
    balances = [ways.of(row) for row in equal]
    held = [f.row for f in whole.equal if f.kind is not FormKind.BALANCE]
    shut = {j for row in held if len(row) == 1 for j in row}
    shut |= {j for j, r in enumerate(network.reactions) if ways.shut[j] or r.name in halted}
    names = [r.name for r in network.reactions]

    def leave(row: SparseRow, name: str) -> SparseRow:
        """A column of its own for what a row makes; that column."""
        balances.append({**ways.of(row), len(names): -ONE})
        names.append(name)
        return {len(names) - 1: ONE}

    for row in sides:
        side = ways.of(row)
        if len(side) > 1 and not all(v > 0 and not ways.both[j] for j, v in side.items()):
            if any(v > 0 or ways.both[j] for j, v in side.items()):
                leave(row, f"role {len(names) - len(network.reactions) + 1}")
            else:
                balances.append(side)
        elif len(side) == 1 and ways.shut[next(iter(side))]:
            balances.append(side)
    energy = [(name, leave(rows[name], f"{name} surplus")) for name in openings.drained]
    releases = [(s.name, ways.of(rows[s.name])) for s in network.boundary]
    releases += [(name, ways.of(rows[name])) for name in openings.opened]
    releases += energy
    for carrier in network.carriers:
        spenders = {r.name for r in plain_spenders(network, carrier.name)} - halted
        places = [j for j, r in enumerate(network.reactions) if r.name in spenders]
        if places:
            energy.append((carrier.name, {j: -rows[carrier.name][j] for j in places}))
    both = (*ways.both, *[False] * (len(names) - len(network.reactions)))
    return RouteSystem(
        network,
        Cone(tuple(names), both, tuple(row for row in balances if row)),
        tuple(factor < 0 for factor in ways.factors),
        tuple(releases),
        tuple(energy),
        tuple(limit_words(x, network) for x in network.limits if not _is_sign(x)),
        tuple(
            (s.name, ways.of(rows[s.name])) for s in network.balanced if s.name not in left_open
        ),
        frozenset(shut),
    )


@record
class _Ways:
    """For each reaction the factor that turns it forwards, whether it runs both ways, or none."""

    factors: tuple[int, ...]
    both: tuple[bool, ...]
    shut: tuple[bool, ...]

    def of(self, row: SparseRow) -> SparseRow:
        """A row in the fluxes as they are turned."""
        return {j: v * self.factors[j] for j, v in row.items()}


def _ways(count: int, sides: Iterable[SparseRow]) -> _Ways:
    """Directions from the sides that hold one reaction only."""
    signs: list[set[int]] = [set() for _ in range(count)]
    for row in sides:
        if len(row) == 1:
            ((j, value),) = row.items()
            signs[j].add(1 if value > 0 else -1)
    return _Ways(
        tuple(-1 if found == {-1} else 1 for found in signs),
        tuple(not found for found in signs),
        tuple(len(found) == 2 for found in signs),
    )


def _scaled(row: SparseRow, factor: int) -> SparseRow:
    return {j: v * factor for j, v in row.items()}


def _is_sign(limit: Limit) -> bool:
    """Whether a limit says no more than a direction, or that something is shut."""
    ends = {end for end in (limit.low, limit.high) if end is not None}
    return not limit.is_measured and ends <= {0}
