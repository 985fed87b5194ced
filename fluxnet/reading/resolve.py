"""From placed statements to the network: names looked up, faults gathered."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

from fluxnet.ground.names import Name
from fluxnet.ground.source import Span
from fluxnet.network.limit_directions import against_directions
from fluxnet.network.model import Limit, Network, Parameter, Reaction, Species, Variant
from fluxnet.reading import syntax as s
from fluxnet.reading.blocks import Placed
from fluxnet.reading.declare import declare_parameter, declare_species
from fluxnet.reading.heads import resolve_acceptances, resolve_compartments, resolve_head
from fluxnet.reading.limit_pairs import compare_limits
from fluxnet.reading.limits import resolve_limit
from fluxnet.reading.loading import Loaded
from fluxnet.reading.reactions import resolve_reaction
from fluxnet.reading.scope import Kind, Scope, claim
from fluxnet.reading.unknown_names import report_unknown, resolve_free

__all__ = ["resolve_network"]


@dataclass(slots=True, eq=False, repr=False)
class _Parts:
    """What the statements of the unchanged model add up to."""

    species: list[Species] = field(default_factory=list)
    parameters: list[Parameter] = field(default_factory=list)
    reactions: list[Reaction] = field(default_factory=list)
    limits: list[Limit] = field(default_factory=list)


def resolve_network(loaded: Loaded, scope: Scope) -> Network:
    """The network that the statements describe; the scope's findings tell what is wrong.

    Reactions with a fault are left out of it.

    Parameters
    ----------
    loaded
        The statements of the model's file and of those it uses.
    scope
        The names that the line sees; its findings take what is wrong.
    """
    base = [p for p in loaded.placed if p.variant is None]
    head = resolve_head(loaded, scope.findings)
    phosphate = any(
        isinstance(said, s.BalanceLine) and any(n.text == "phosphate" for n in said.names)
        for said in (p.statement.line for p in base)
    )
    parts = _Parts()
    for one in base:
        said = one.statement.line
        if isinstance(said, s.SpeciesLine):
            parts.species.extend(declare_species(one, said, scope, phosphate=phosphate))
        elif isinstance(said, s.ParameterLine):
            parameter = declare_parameter(one, said, scope)
            if parameter is not None:
                parts.parameters.append(parameter)
    compartments = resolve_compartments(loaded, scope)
    _resolve_reactions(base, scope, parts)
    for one in base:
        if isinstance(one.statement.line, s.LimitLine):
            limit = resolve_limit(one.line, one.statement.line, scope)
            if limit is not None:
                parts.limits.append(limit)
    scope.findings.found.extend(compare_limits(parts.limits))
    scope.findings.found.extend(against_directions(parts.limits, scope.reactions))
    free = resolve_free(base, scope)
    variants: tuple[Variant, ...] = ()
    if any(isinstance(p.statement.line, s.VariantLine) for p in base):
        from fluxnet.reading.variants import resolve_variants  # many models have none

        variants = resolve_variants(loaded.placed, scope, phosphate=phosphate)
    report_unknown(scope)
    _unused_parameters(parts.parameters, scope)
    _nothing_there(loaded, base, scope)
    return Network(
        head.title, head.basis, tuple(parts.species), tuple(parts.parameters),
        tuple(compartments), tuple(parts.reactions), tuple(parts.limits), variants, free,
        resolve_acceptances(base, scope.findings), balance_phosphate=phosphate,
    )


def _resolve_reactions(base: Sequence[Placed], scope: Scope, parts: _Parts) -> None:
    for one in base:
        said = one.statement.line
        if not isinstance(said, s.ReactionLine):
            continue
        if not claim(scope, Kind.REACTION, one.line, said.name):
            continue
        reaction = resolve_reaction(one, said, scope)
        if reaction is None:
            scope.lost.add(said.name.text)
        else:
            scope.reactions[reaction.name] = reaction
            parts.reactions.append(reaction)


def _unused_parameters(parameters: Sequence[Parameter], scope: Scope) -> None:
    accounted = scope.used_parameters | scope.lost | scope.named
    for parameter in parameters:
        if parameter.name in accounted:
            continue
        scope.findings.add_at(
            Name.UNUSED_PARAMETER, f"no coefficient uses the parameter {parameter.name}",
            parameter.span, mend="use it, or take it away",
        )


def _nothing_there(loaded: Loaded, base: Sequence[Placed], scope: Scope) -> None:
    """A model without a statement, or without a reaction."""
    file = loaded.sources[0].file
    if not loaded.placed and not loaded.rejected:
        if not scope.findings.found:
            scope.findings.add_at(
                Name.EMPTY_FILE, f"{file} holds no statement", Span(file, 0),
                mend="start from `fluxnet new NAME`",
            )
        return
    has_reaction = any(isinstance(p.statement.line, s.ReactionLine) for p in base)
    if not has_reaction and not loaded.rejected:
        scope.findings.add_at(
            Name.NO_REACTION, "the model has no reaction", Span(file, 0),
            mend="add a compartment with reactions",
        )
