"""What the bare drawing of a network shows: dead ends and parts that are cut off.

The only place that uses networkx.
"""

from __future__ import annotations

from collections import deque
from collections.abc import Collection, Mapping

import networkx as nx

from fluxnet.checks.words import and_list, names_list
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.matrices.stoichiometry import Stoichiometry
from fluxnet.network.model import CargoKind, Network, Role, Species

__all__ = ["DeadEnd", "Part", "find_dead_ends", "find_parts", "tell_dead_ends", "tell_parts"]


@record
class DeadEnd:
    """A balanced species through which no flux can pass.

    ``makers`` and ``users`` are the reactions that can make or use it; of one reaction alone
    that runs both ways it is named in both. ``blocked`` are the reactions that it closes,
    those next to it first, then those that only lead to them.
    """

    species: str
    makers: tuple[str, ...]
    users: tuple[str, ...]
    blocked: tuple[str, ...] = ()


@record
class Part:
    """A part of the network that hangs together with nothing that can be taken up."""

    species: tuple[str, ...]
    reactions: tuple[str, ...]


def find_dead_ends(network: Network, stoich: Stoichiometry) -> tuple[DeadEnd, ...]:
    r"""Balanced species that are only made or only used, each with the reactions it closes.

    A species that only one reaction touches is a dead end even where that runs both ways.
    Those that become dead ends only because another has closed their reactions are told with
    that other, not again.

    Examples
    --------
    >>> from fluxnet.matrices.stoichiometry import stoichiometry
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> more = "inside lactate\ncompartment c\n    ldh : pyruvate + NADH -> lactate\n"
    >>> network = read_model_text(MODEL + more).network
    >>> [(end.species, end.blocked) for end in find_dead_ends(network, stoichiometry(network))]
    [('lactate', ('ldh',))]
    """
    makers, users = _neighbours(network, stoich)
    balanced = [s.name for s in network.balanced if makers[s.name] | users[s.name]]
    touched: dict[str, set[str]] = {r: set() for r in stoich.reactions}
    for name in balanced:
        for reaction in makers[name] | users[name]:
            touched[reaction].add(name)
    order = {name: k for k, name in enumerate(stoich.reactions)}
    roots = [name for name in balanced if _is_dead(makers[name], users[name])]
    first = {n: (_sorted(makers[n], order), _sorted(users[n], order)) for n in roots}
    closed = {n: list(_sorted(makers[n] | users[n], order)) for n in roots}
    root_of = {name: name for name in roots}
    told: set[str] = set()
    queue = deque(roots)
    while queue:
        name = queue.popleft()
        root = root_of[name]
        for reaction in _sorted((makers[name] | users[name]) - told, order):
            told.add(reaction)
            if reaction not in closed[root]:
                closed[root].append(reaction)
            for other in sorted(touched[reaction]):
                makers[other].discard(reaction)
                users[other].discard(reaction)
                left = makers[other] | users[other]
                if other not in root_of and left and _is_dead(makers[other], users[other]):
                    root_of[other] = root
                    queue.append(other)
    return tuple(DeadEnd(name, *first[name], tuple(closed[name])) for name in roots)


def find_parts(network: Network, stoich: Stoichiometry) -> tuple[Part, ...]:
    """Connected parts that nothing which can be taken up belongs to.

    Carriers of energy and electrons connect nothing: they bring no matter. A part that a
    carrier feeds is sound unless it would have to release carbon (a circle of inside species
    turns on carriers alone, and so does the release of H2).
    """
    links = {s.name for s in network.species if s.cargo is None or _brings_carbon(s)}
    graph: nx.Graph[tuple[str, str]] = nx.Graph()
    graph.add_nodes_from(("species", name) for name in stoich.species if name in links)
    for i, j, _ in stoich.entries:
        if stoich.species[i] in links:
            graph.add_edge(("species", stoich.species[i]), ("reaction", stoich.reactions[j]))
    fed = {
        stoich.reactions[j] for i, j, _ in stoich.entries if stoich.species[i] not in links
    }
    parts: list[Part] = []
    for nodes in nx.connected_components(graph):
        species = tuple(n for n in stoich.species if ("species", n) in nodes)
        reactions = tuple(n for n in stoich.reactions if ("reaction", n) in nodes)
        members = [m for n in species if (m := network.find_species(n)) is not None]
        if not reactions or any(_enters(m) for m in members):
            continue
        if fed.isdisjoint(reactions) or any(m.role.is_boundary and _carbon(m) for m in members):
            parts.append(Part(species, reactions))
    return tuple(parts)


def tell_dead_ends(network: Network, dead_ends: Collection[DeadEnd]) -> tuple[Diagnostic, ...]:
    r"""A warning for each dead end, with the reactions that can carry no flux because of it.

    Carriers are told by :func:`fluxnet.checks.carriers.tell_one_way_carriers`.

    Examples
    --------
    >>> from fluxnet.matrices.stoichiometry import stoichiometry
    >>> from fluxnet.cli.new import MODEL
    >>> from fluxnet.reading.model import read_model_text
    >>> more = "inside lactate\ncompartment c\n    ldh : pyruvate + NADH -> lactate\n"
    >>> network = read_model_text(MODEL + more).network
    >>> ends = find_dead_ends(network, stoichiometry(network))
    >>> [told.message for told in tell_dead_ends(network, ends)]
    ['lactate is made by ldh, but nothing uses it']
    """
    told: list[Diagnostic] = []
    for end in dead_ends:
        species = network.find_species(end.species)
        if species is None or species.role is Role.CARRIER:
            continue
        if set(end.makers) == set(end.users):
            message = f"{end.species} takes part in {end.makers[0]} alone: no flux can pass"
            mend = f"add the other reaction of {end.species}"
        elif end.makers:
            message = f"{end.species} is made by {and_list(end.makers)}, but nothing uses it"
            mend = f"add the reaction that uses {end.species}"
        else:
            message = f"{end.species} is used by {and_list(end.users)}, but nothing makes it"
            mend = f"add the reaction that makes {end.species}"
        role = "product" if end.makers else "substrate"
        mend += f", or declare it as a {role}"
        told.append(
            Diagnostic(
                Name.DEAD_END,
                message,
                species.span,
                because=f"no flux can run in {names_list(end.blocked)}",
                mend=mend,
            )
        )
    return tuple(told)


def tell_parts(network: Network, parts: Collection[Part]) -> tuple[Diagnostic, ...]:
    """A warning for each part cut off from all that can be taken up."""
    told: list[Diagnostic] = []
    for part in parts:
        first = network.find_reaction(part.reactions[0])
        if first is None:
            continue
        verb = "hang" if len(part.reactions) > 1 else "hangs"
        told.append(
            Diagnostic(
                Name.CUT_OFF,
                f"{names_list(part.reactions)} {verb} together with nothing that can be taken up",
                first.span,
                because=f"this part holds only {names_list(part.species)}",
                mend="connect it with a reaction, declare what feeds it as a substrate, "
                "or take it away",
            )
        )
    return tuple(told)


def _neighbours(
    network: Network, stoich: Stoichiometry
) -> tuple[dict[str, set[str]], dict[str, set[str]]]:
    """The reactions that can make and that can use each species."""
    makers: dict[str, set[str]] = {name: set() for name in stoich.species}
    users: dict[str, set[str]] = {name: set() for name in stoich.species}
    values = {p.name: p.value for p in network.parameters}
    for i, j, coefficient in stoich.entries:
        number = coefficient.number
        value = coefficient.exact(values) if number is None else number
        species, reaction = stoich.species[i], network.reactions[j]
        if value > 0 or (value and reaction.reversible):
            makers[species].add(reaction.name)
        if value < 0 or (value and reaction.reversible):
            users[species].add(reaction.name)
    return makers, users


def _is_dead(makers: Collection[str], users: Collection[str]) -> bool:
    return not makers or not users or (len(makers) == 1 and set(makers) == set(users))


def _sorted(names: Collection[str], order: Mapping[str, int]) -> tuple[str, ...]:
    return tuple(sorted(names, key=order.__getitem__))


def _enters(species: Species) -> bool:
    return species.role in (Role.SUBSTRATE, Role.EXCHANGE)


def _carbon(species: Species) -> bool:
    return species.formula is not None and species.formula.count("C") > 0


def _brings_carbon(species: Species) -> bool:
    cargo = species.cargo
    return cargo is not None and cargo.kind is CargoKind.GROUP and cargo.formula.count("C") > 0
