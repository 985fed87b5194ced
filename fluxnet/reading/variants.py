"""Variants as data: what each of them changes. Applying them is the network's business."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace

from fluxnet.ground.names import Name
from fluxnet.network.model import Drop, Limit, Parameter, Reaction, Species, Variant
from fluxnet.reading import syntax as s
from fluxnet.reading.blocks import Placed
from fluxnet.reading.declare import declare_species, read_assignment
from fluxnet.reading.findings import only_case_differs
from fluxnet.reading.heads import resolve_acceptances
from fluxnet.reading.limit_pairs import compare_limits
from fluxnet.reading.limits import resolve_limit, resolve_quantity
from fluxnet.reading.reactions import resolve_reaction
from fluxnet.reading.scope import Kind, Scope, claim, place_words

__all__ = ["resolve_variants"]


@dataclass(slots=True, eq=False, repr=False)
class _Block:
    """The statements of one variant."""

    head: Placed
    said: s.VariantLine
    inner: list[Placed] = field(default_factory=list)

    @property
    def name(self) -> str:
        return self.said.name.text

    @property
    def dropped(self) -> set[str]:
        """The names that its `drop` lines take away."""
        lines = [p.statement.line for p in self.inner]
        return {
            item.text for line in lines if isinstance(line, s.DropLine)
            for item in line.items if isinstance(item, s.Word)
        }


def resolve_variants(
    placed: Sequence[Placed], scope: Scope, *, phosphate: bool
) -> tuple[Variant, ...]:
    """All variants of a model, in the order of the file.

    Parameters
    ----------
    placed
        All statements, those of variants among them.
    scope
        The names that the line sees; its findings take what is wrong.
    phosphate
        Whether the model balances phosphate.
    """
    blocks = _blocks(placed, scope)
    _check_parents(blocks, scope)
    found: dict[str, Variant] = {}
    for name in _parents_first(blocks):
        block = blocks[name]
        inner = scope.inner(name)
        inherited: set[str] = set()
        for parent in block.said.parents:
            _inherit(inner, scope.variants.get(parent.text), inherited)
        _let_go(inner, block.dropped | inherited | scope.dropped)
        scope.variants[name] = inner
        found[name] = _resolve(block, inner, phosphate)
    return tuple(found[name] for name in blocks)


def _blocks(placed: Sequence[Placed], scope: Scope) -> dict[str, _Block]:
    blocks: dict[str, _Block] = {}
    current: _Block | None = None
    for one in placed:
        said = one.statement.line
        if isinstance(said, s.VariantLine):
            name, current = said.name.text, None
            if name == "base":
                scope.findings.add(
                    Name.RESERVED_NAME, "`base` cannot be a variant: it is the unchanged model",
                    one.line, said.name, mend="choose another name",
                )
            elif name in blocks:
                first = blocks[name]
                where = first.head.line.span(first.said.name.start, first.said.name.end)
                scope.findings.add(
                    Name.DECLARED_TWICE,
                    f"variant {name} is declared twice (first in {place_words(where, one.line)})",
                    one.line, said.name, mend="rename one of the two, or make one of them",
                    also=[where],
                )
            else:
                current = blocks[name] = _Block(one, said)
        elif one.variant is not None and current is not None:
            current.inner.append(one)
    return blocks


def _check_parents(blocks: Mapping[str, _Block], scope: Scope) -> None:
    for block in blocks.values():
        for parent in block.said.parents:
            if parent.text in blocks or parent.text in scope.lost or parent.text == "base":
                continue
            near = scope.findings.nearest(parent.text, blocks)
            twin = only_case_differs(parent.text, blocks)
            scope.findings.add(
                Name.UNKNOWN_VARIANT,
                f"variant {block.name} builds on {parent.text}, which does not exist",
                block.head.line, parent,
                mend=f"write {' or '.join(near)}" if near else None,
                certain=[(parent, twin)] if twin else [],
            )
    told: set[str] = set()
    for name in blocks:
        circle = _circle(name, blocks)
        if circle and not told.intersection(circle):
            told.update(circle)
            block = blocks[name]
            parent = next(p for p in block.said.parents if p.text == circle[1])
            scope.findings.add(
                Name.VARIANT_CIRCLE,
                f"variants build on one another in a circle: {' from '.join(circle)}",
                block.head.line, parent, mend=f"take `from {parent.text}` away",
            )


def _circle(name: str, blocks: Mapping[str, _Block]) -> list[str]:
    """The shortest way from a variant back to itself, or an empty list."""
    ways, seen = [[name]], {name}
    for way in ways:
        for parent in blocks[way[-1]].said.parents:
            if parent.text == name:
                return [*way, name]
            if parent.text in blocks and parent.text not in seen:
                seen.add(parent.text)
                ways.append([*way, parent.text])
    return []


def _parents_first(blocks: Mapping[str, _Block]) -> list[str]:
    order: dict[str, None] = {}
    waiting = list(blocks)[::-1]
    opened: set[str] = set()
    while waiting:
        name = waiting.pop()
        parents = [p.text for p in blocks[name].said.parents if p.text in blocks]
        missing = [p for p in parents if p not in order and p not in opened]
        if name in opened or not missing:
            order.setdefault(name)
            continue
        opened.add(name)
        waiting.append(name)
        waiting.extend(reversed(missing))
    return list(order)


def _inherit(scope: Scope, parent: Scope | None, inherited: set[str]) -> None:
    """Let a variant see what its parent adds; it may declare the same names anew."""
    if parent is None:
        return
    inherited.update(n for n in parent.places if n not in scope.places)
    for name, place in parent.places.items():
        scope.places.setdefault(name, place)
    for folded, name in parent.folded.items():
        scope.folded.setdefault(folded, name)
    scope.species.update(parent.species)
    scope.reactions.update(parent.reactions)
    scope.parameters.update(parent.parameters)


def _let_go(scope: Scope, names: set[str]) -> None:
    """Names that may be declared anew: those dropped, and those of the parents."""
    for name in names:
        scope.places.pop(name, None)
        if scope.folded.get(name.casefold()) == name:
            del scope.folded[name.casefold()]


def _resolve(block: _Block, scope: Scope, phosphate: bool) -> Variant:
    species: list[Species] = []
    settings: list[Parameter] = []
    limits: list[Limit] = []
    drops: list[Drop] = []
    said = [(one, one.statement.line) for one in block.inner]
    for one, line in said:
        if isinstance(line, s.SpeciesLine):
            species.extend(declare_species(one, line, scope, phosphate=phosphate))
        elif isinstance(line, s.SettingLine):
            settings.extend(_setting(one, line, settings, scope))
    dropped_from = dict(scope.reactions)
    reactions = _reactions(block, scope)
    for one, line in said:
        if isinstance(line, s.LimitLine):
            limit = resolve_limit(one.line, line, scope)
            limits.extend([limit] if limit is not None else [])
        elif isinstance(line, s.DropLine):
            drops.extend(_drops(one, line, scope, dropped_from))
    scope.findings.found.extend(compare_limits(limits))
    head = block.said
    return Variant(
        head.name.text, head.words.text if head.words else "",
        tuple(p.text for p in head.parents), tuple(species), tuple(settings), reactions,
        tuple(limits), tuple(drops),
        resolve_acceptances([block.head, *block.inner], scope.findings),
        block.head.line.span(head.name.start, head.name.end),
    )


def _reactions(block: _Block, scope: Scope) -> tuple[Reaction, ...]:
    found: list[Reaction] = []
    for one in block.inner:
        said = one.statement.line
        if isinstance(said, s.ReactionLine) and claim(scope, Kind.REACTION, one.line, said.name):
            reaction = resolve_reaction(one, said, scope)
            if reaction is None:
                scope.lost.add(said.name.text)
                continue
            scope.reactions[reaction.name] = reaction
            found.append(reaction)
    return tuple(found)


def _setting(
    placed: Placed, said: s.SettingLine, before: Sequence[Parameter], scope: Scope
) -> list[Parameter]:
    """The parameter that a `set` line changes, in a list; empty where there is none (told)."""
    word = said.assignment.name
    if word.text in scope.lost:
        return []
    if word.text not in scope.parameters:
        near = scope.findings.nearest(word.text, scope.parameters)
        twin = scope.twin(word.text, Kind.PARAMETER)
        scope.findings.add(
            Name.VARIANT_TARGET, f"`set` names {word.text}, but no parameter is called so",
            placed.line, word,
            mend=f"a similar name is declared: {', '.join(near)}" if near else None,
            certain=[(word, twin)] if twin else [],
        )
        return []
    twice = next((p for p in before if p.name == word.text), None)
    if twice is not None:
        scope.findings.add(
            Name.DECLARED_TWICE,
            f"{word.text} is set twice (first in {place_words(twice.span, placed.line)})",
            placed.line, word, mend="keep one of the two", also=[twice.span],
        )
        return []
    setting = read_assignment(placed.line, said.assignment, scope.findings, scope.parameters)
    scope.parameters[word.text] = _merged(scope.parameters[word.text], setting)
    return [setting]


def _merged(old: Parameter, new: Parameter) -> Parameter:
    sd = old.sd if new.sd is None else new.sd or None
    low, high = (old.low, old.high) if new.low is None else (new.low, new.high)
    return replace(old, value=new.value, sd=sd, low=low, high=high)


def _drops(
    placed: Placed, said: s.DropLine, scope: Scope, reactions: Mapping[str, Reaction]
) -> list[Drop]:
    found: list[Drop] = []
    for item in said.items:
        span = placed.line.span(item.start, item.end)
        if isinstance(item, s.QuantityText):
            quantity = resolve_quantity(placed.line, item, scope)
            if quantity is not None:
                found.append(Drop("", quantity, span))
        elif item.text in reactions or item.text in scope.species:
            found.append(Drop(item.text, None, span))
        elif item.text not in scope.lost:
            candidates = [*reactions, *scope.species]
            near = scope.findings.nearest(item.text, candidates)
            twin = scope.twin(item.text, Kind.REACTION, Kind.SPECIES)
            scope.findings.add(
                Name.VARIANT_TARGET, f"`drop` names {item.text}, which the model does not have",
                placed.line, item,
                mend=f"a similar name is there: {', '.join(near)}" if near else None,
                certain=[(item, twin)] if twin else [],
            )
    return found
