"""Variants as data: what each of them changes. Applying them is the network's business."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

from fluxnet.ground.names import Name
from fluxnet.network.model import Drop, Limit, Parameter, Reaction, Species, Variant
from fluxnet.reading import syntax as s
from fluxnet.reading.blocks import Placed
from fluxnet.reading.declare import claim, declare_species, read_assignment
from fluxnet.reading.findings import nearest_names
from fluxnet.reading.limits import resolve_limit, resolve_quantity
from fluxnet.reading.reactions import resolve_reaction
from fluxnet.reading.scope import Kind, Scope

__all__ = ["resolve_variants"]


@dataclass(slots=True)
class _Block:
    """The statements of one variant."""

    head: Placed
    said: s.VariantLine
    inner: list[Placed] = field(default_factory=list)


def resolve_variants(placed: Sequence[Placed], scope: Scope) -> tuple[Variant, ...]:
    """All variants of a model, in the order of the file."""
    blocks: dict[str, _Block] = {}
    for one in placed:
        said = one.statement.line
        if isinstance(said, s.VariantLine):
            blocks.setdefault(said.name.text, _Block(one, said))
        elif one.variant is not None and one.variant.text in blocks:
            blocks[one.variant.text].inner.append(one)
    return tuple(_resolve(block, scope.inner()) for block in blocks.values())


def _resolve(block: _Block, scope: Scope) -> Variant:
    species: list[Species] = []
    settings: list[Parameter] = []
    limits: list[Limit] = []
    drops: list[Drop] = []
    reactions: list[Reaction] = []
    for one in block.inner:
        said = one.statement.line
        if isinstance(said, s.SpeciesLine):
            species.extend(declare_species(one, said, scope))
    for one in block.inner:
        said = one.statement.line
        if isinstance(said, s.ReactionLine) and claim(
            scope, Kind.REACTION, one.line, said.name
        ):
            reaction = resolve_reaction(one, said, scope)
            scope.reactions[reaction.name] = reaction
            reactions.append(reaction)
    for one in block.inner:
        said = one.statement.line
        if isinstance(said, s.SettingLine):
            setting = _setting(one, said, scope)
            if setting is not None:
                settings.append(setting)
        elif isinstance(said, s.LimitLine):
            limit = resolve_limit(one.line, said, scope)
            if limit is not None:
                limits.append(limit)
        elif isinstance(said, s.DropLine):
            drops.extend(_drops(one, said, scope))
    head = block.said
    return Variant(
        head.name.text, head.words.text if head.words else "",
        tuple(p.text for p in head.parents), tuple(species), tuple(settings), tuple(reactions),
        tuple(limits), tuple(drops), block.head.line.span(head.name.start, head.name.end),
    )  # fmt: skip


def _setting(placed: Placed, said: s.SettingLine, scope: Scope) -> Parameter | None:
    name = said.assignment.name.text
    if name not in scope.parameters and name not in scope.lost:
        near = nearest_names(name, scope.parameters)
        scope.findings.add(
            Name.VARIANT_TARGET, f"`set` names {name}, but no parameter is called so",
            placed.line, said.assignment.name,
            mend=f"a similar name is declared: {', '.join(near)}" if near else None,
        )  # fmt: skip
        return None
    return read_assignment(placed.line, said.assignment, scope.findings)


def _drops(placed: Placed, said: s.DropLine, scope: Scope) -> list[Drop]:
    found: list[Drop] = []
    for item in said.items:
        span = placed.line.span(item.start, item.end)
        if isinstance(item, s.QuantityText):
            quantity = resolve_quantity(placed.line, item, scope)
            if quantity is not None:
                found.append(Drop("", quantity, span))
        elif item.text in scope.reactions or item.text in scope.species:
            found.append(Drop(item.text, None, span))
        elif item.text not in scope.lost:
            near = nearest_names(item.text, [*scope.reactions, *scope.species])
            scope.findings.add(
                Name.VARIANT_TARGET, f"`drop` names {item.text}, which the model does not have",
                placed.line, item,
                mend=f"a similar name is there: {', '.join(near)}" if near else None,
            )  # fmt: skip
    return found
