"""From placed statements to the network: names looked up, faults gathered."""

from __future__ import annotations

from collections.abc import Sequence

from fluxnet.ground.diagnostic import Acceptance
from fluxnet.ground.names import Name
from fluxnet.network.model import (
    Basis,
    Compartment,
    Limit,
    Network,
    Parameter,
    Reaction,
    Species,
)  # fmt: skip
from fluxnet.reading import syntax as s
from fluxnet.reading.blocks import Placed
from fluxnet.reading.declare import claim, declare_parameter, declare_species
from fluxnet.reading.findings import nearest_names
from fluxnet.reading.limits import resolve_limit
from fluxnet.reading.reactions import resolve_reaction
from fluxnet.reading.scope import Kind, Scope
from fluxnet.reading.variants import resolve_variants

__all__ = ["resolve_network"]


def resolve_network(placed: Sequence[Placed], scope: Scope) -> Network:
    """The network that the statements describe; the scope's findings tell what is wrong."""
    base = [p for p in placed if p.variant is None]
    species: list[Species] = []
    parameters: list[Parameter] = []
    compartments: dict[str, Compartment] = {}
    title, basis = "", Basis.SPECIFIC
    free: list[str] = []
    phosphate = False
    for one in base:
        said = one.statement.line
        if isinstance(said, s.SpeciesLine):
            species.extend(declare_species(one, said, scope))
        elif isinstance(said, s.ParameterLine):
            parameter = declare_parameter(one, said, scope)
            if parameter is not None:
                parameters.append(parameter)
        elif isinstance(said, s.CompartmentLine):
            name = said.name
            span = one.line.span(name.start, name.end)
            compartments.setdefault(name.text, Compartment(name.text, span))
        elif isinstance(said, s.TitleLine):
            title = said.words.text if said.words else ""
        elif isinstance(said, s.BasisLine):
            basis = Basis(said.unit.text)
        elif isinstance(said, s.FreeLine):
            free.extend(name.text for name in said.names)
        elif isinstance(said, s.BalanceLine):
            phosphate = True
    reactions = _reactions(base, scope)
    limits: list[Limit] = []
    for one in base:
        if isinstance(one.statement.line, s.LimitLine):
            limit = resolve_limit(one.line, one.statement.line, scope)
            if limit is not None:
                limits.append(limit)
    variants = resolve_variants(placed, scope)
    _report_unknown(scope)
    return Network(
        title, basis, tuple(species), tuple(parameters), tuple(compartments.values()),
        reactions, tuple(limits), variants, tuple(free), _acceptances(placed, scope),
        balance_phosphate=phosphate,
    )  # fmt: skip


def _reactions(base: Sequence[Placed], scope: Scope) -> tuple[Reaction, ...]:
    found: list[Reaction] = []
    for one in base:
        said = one.statement.line
        if isinstance(said, s.ReactionLine) and claim(scope, Kind.REACTION, one.line, said.name):
            reaction = resolve_reaction(one, said, scope)
            scope.reactions[reaction.name] = reaction
            found.append(reaction)
    return tuple(found)


def _report_unknown(scope: Scope) -> None:
    for name, mentions in scope.unknown.items():
        first = mentions[0]
        more = f" (and {len(mentions) - 1} more)" if len(mentions) > 1 else ""
        near = nearest_names(name, scope.species)
        scope.findings.add(
            Name.UNKNOWN_SPECIES, f"no species is called {name}{more}", first.line, first.word,
            mend=f"a similar name is declared: {', '.join(near)}" if near
            else f"declare it, for example: inside {name}",
        )  # fmt: skip


def _acceptances(placed: Sequence[Placed], scope: Scope) -> tuple[Acceptance, ...]:
    found: list[Acceptance] = []
    names = {n.value: n for n in Name}
    for one in placed:
        for said in one.statement.acceptances:
            if said.name.text in names:
                found.append(
                    Acceptance(
                        names[said.name.text], said.reason.text,
                        one.line.span(said.name.start, said.name.end),
                    )
                )  # fmt: skip
                continue
            near = nearest_names(said.name.text, names)
            scope.findings.add(
                Name.ACCEPT_UNKNOWN, f"no diagnostic is called {said.name.text}", one.line,
                said.name, mend=f"write {near[0]}" if near else None,
            )  # fmt: skip
    return tuple(found)
