"""Limits: the quantity that is meant, and its bounds."""

from __future__ import annotations

from fractions import Fraction

from fluxnet.ground.names import Name
from fluxnet.network.model import (
    Direction,
    Limit,
    Quantity,
    QuantityKind,
    Relation,
    Role,
    Species,
)  # fmt: skip
from fluxnet.reading import syntax as s
from fluxnet.reading.findings import nearest_names
from fluxnet.reading.lines import LogicalLine
from fluxnet.reading.scope import Scope

__all__ = ["resolve_limit", "resolve_quantity"]


def resolve_limit(line: LogicalLine, said: s.LimitLine, scope: Scope) -> Limit | None:
    """The limit of one line, or None where it makes no sense (said)."""
    bound = said.bound
    both = bound.way is not None or bound.other_way is not None
    quantity = resolve_quantity(line, said.quantity, scope, both_ways=both)
    if quantity is None:
        return None
    span = line.span(said.quantity.start, bound.end)
    value = bound.value.value
    sd: Fraction | None = None
    if bound.error is not None:
        sd = bound.error.number.value
        if bound.error.relative:
            sd = value * sd / 100
    if bound.relation is Relation.AT_MOST:
        return Limit(quantity, bound.relation, None, value, None, span)
    if bound.relation is Relation.AT_LEAST:
        return Limit(quantity, bound.relation, value, None, None, span)
    if bound.relation is Relation.EQUAL:
        return Limit(quantity, bound.relation, value, value, sd, span)
    assert bound.other is not None
    low, high = value, bound.other.value
    if both:
        if bound.way is Direction.IN:
            low = -low
        if bound.other_way is Direction.IN:
            high = -high
    return Limit(quantity, bound.relation, low, high, None, span)


def resolve_quantity(
    line: LogicalLine, said: s.QuantityText, scope: Scope, *, both_ways: bool = False
) -> Quantity | None:
    """The quantity of a limit, or None where the model has none such (said)."""
    if said.bottom is None:
        return _single(line, said.top, scope, None, both_ways=both_ways)
    top = _single(line, said.top, scope, Direction.OUT)
    bottom = _single(line, said.bottom, scope, Direction.OUT)
    if top is None or bottom is None:
        return None
    return Quantity(QuantityKind.RATIO, numerator=top, denominator=bottom)


def _single(
    line: LogicalLine, said: s.SingleText, scope: Scope, otherwise: Direction | None,
    *, both_ways: bool = False,
) -> Quantity | None:  # fmt: skip
    if said.is_mu:
        return Quantity(QuantityKind.MU)
    name = said.name.text
    if name in scope.reactions:
        return Quantity(QuantityKind.FLUX, name)
    species = scope.species.get(name)
    if species is None:
        if name not in scope.lost:
            _unknown(line, said, scope)
        return None
    if not species.role.is_boundary:
        scope.findings.add(
            Name.UNKNOWN_LIMIT,
            f"{name} is balanced inside the cell and has no rate that could be limited",
            line, said, mend="limit a boundary species, mu, a reaction or a ratio",
        )  # fmt: skip
        return None
    direction = _direction(line, said, species, scope, otherwise, both_ways)
    return None if direction is None else Quantity(QuantityKind.RATE, name, direction)


def _direction(
    line: LogicalLine, said: s.SingleText, species: Species, scope: Scope,
    otherwise: Direction | None, both_ways: bool,
) -> Direction | None:  # fmt: skip
    if species.role is Role.EXCHANGE:
        if both_ways:
            return Direction.OUT
        if said.way is None and otherwise is None:
            scope.findings.add(
                Name.LIMIT_NEEDS_DIRECTION,
                f"{species.name} can go either way: say which way the limit is meant",
                line, said, mend=f"write `{species.name} in` or `{species.name} out`",
            )  # fmt: skip
            return None
        return said.way or otherwise
    natural = Direction.IN if species.role is Role.SUBSTRATE else Direction.OUT
    if said.way not in (None, natural):
        scope.findings.add(
            Name.LIMIT_AGAINST_ROLE,
            f"{species.name} is a {species.role.value}: it goes only {natural.value}",
            line, said, mend=f"leave `{said.way.value if said.way else ''}` out, or declare "
            f"{species.name} as exchange",
        )  # fmt: skip
        return None
    return natural


def _unknown(line: LogicalLine, said: s.SingleText, scope: Scope) -> None:
    near = nearest_names(said.name.text, [*scope.species, *scope.reactions, "mu"])
    scope.findings.add(
        Name.UNKNOWN_LIMIT, f"the model has nothing called {said.name.text} to be limited",
        line, said.name,
        mend=f"a similar name is there: {', '.join(near)}" if near
        else "name a boundary species, mu, a reaction or a ratio of two",
    )  # fmt: skip
