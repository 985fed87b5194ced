"""Limits: the quantity that is meant, and its bounds."""

from __future__ import annotations

from fractions import Fraction

from fluxnet.ground.names import Name
from fluxnet.network.model import Direction, Limit, Quantity, QuantityKind, Relation, Role, Species
from fluxnet.reading import syntax as s
from fluxnet.reading.declare import in_reach
from fluxnet.reading.lines import LogicalLine
from fluxnet.reading.scope import Kind, Scope

__all__ = ["resolve_limit", "resolve_quantity"]

_LEAST = Fraction(1, 10**9)
"""A smaller sd, as a part of its value, is lost in the rounding of the numbers."""


def resolve_limit(line: LogicalLine, said: s.LimitLine, scope: Scope) -> Limit | None:
    """The limit of one line, or None where it makes no sense (told).

    Parameters
    ----------
    line
        The logical line, for places.
    said
        Quantity and bound as parsed.
    scope
        The names that the line sees; its findings take what is wrong.
    """
    limit = _limit(line, said, scope)
    if limit is None:
        single = (said.quantity.top, said.quantity.bottom)
        scope.unlimited.update(one.name.text for one in single if one is not None)
    return limit


def _limit(line: LogicalLine, said: s.LimitLine, scope: Scope) -> Limit | None:
    bound = said.bound
    quantity = resolve_quantity(line, said.quantity, scope, ways=(bound.way, bound.other_way))
    numbers = [n for n in (bound.value, bound.other) if n is not None]
    sound = all(in_reach(line, n, scope.findings) for n in numbers)
    if quantity is None or not sound or not _error_is_sound(line, bound, scope):
        return None
    if not _may_be_negative(quantity, scope) and not _magnitudes(line, said, quantity, scope):
        return None
    span = line.span(said.quantity.start, bound.end)
    value = bound.value.value
    if bound.relation is Relation.AT_MOST:
        return Limit(quantity, bound.relation, None, value, None, span)
    if bound.relation is Relation.AT_LEAST:
        return Limit(quantity, bound.relation, value, None, None, span)
    if bound.relation is Relation.EQUAL:
        return Limit(quantity, bound.relation, value, value, _sd(bound), span)
    assert bound.other is not None
    low, high = value, bound.other.value
    ways = (bound.way, bound.other_way)
    if ways == (Direction.OUT, Direction.IN):
        low, high = -high, low
    elif ways == (Direction.IN, Direction.OUT):
        low = -low
    elif low > high:
        scope.findings.add(
            Name.CONTRADICTORY_LIMITS,
            f"between {bound.value.text} and {bound.other.text} lies nothing", line, bound,
            mend=f"write between {bound.other.text} and {bound.value.text}",
            certain=[(bound.value, bound.other.text), (bound.other, bound.value.text)],
        )
        return None
    return Limit(quantity, bound.relation, low, high, None, span)


def _sd(bound: s.BoundText) -> Fraction | None:
    if bound.error is None:
        return None
    sd = bound.error.number.value
    return abs(bound.value.value) * sd / 100 if bound.error.relative else sd


def _may_be_negative(quantity: Quantity, scope: Scope) -> bool:
    """Whether a limit of it may be negative: a flux has a sign, a rate a direction by word."""
    if quantity.kind is QuantityKind.FLUX:
        return True
    parts = (quantity.numerator, quantity.denominator)
    return any(
        p is not None and p.kind is QuantityKind.FLUX and scope.reactions[p.name].reversible
        for p in parts
    )


def _magnitudes(
    line: LogicalLine, said: s.LimitLine, quantity: Quantity, scope: Scope
) -> bool:
    """Whether no number of a limit is negative; else say so."""
    bound = said.bound
    negative = [n for n in (bound.value, bound.other) if n is not None and n.value < 0]
    what = str(quantity) if quantity.direction is None else quantity.name
    for number in negative:
        scope.findings.add(
            Name.BAD_LIMIT, f"a limit on {what} is a magnitude: it is never negative",
            line, number,
            mend="tell a species' direction by the words in and out"
            if quantity.kind is QuantityKind.RATE else "write it without the minus",
        )
    return not negative


def _error_is_sound(line: LogicalLine, bound: s.BoundText, scope: Scope) -> bool:
    """Whether the ± of a limit makes sense; else say why not."""
    if bound.error is None:
        return True
    behind = s.Word("", bound.value.end, bound.end)
    said = line.text[bound.value.end : bound.end]
    error = s.Word("", bound.end - len(said.lstrip()), bound.end)
    if bound.relation is not Relation.EQUAL:
        scope.findings.add(
            Name.BAD_LIMIT, "a bound has no error; a measured value is written with =",
            line, error, mend="write =, or leave the ± out",
        )
        return False
    if not in_reach(line, bound.error.number, scope.findings):
        return False
    sd, size = _sd(bound), abs(bound.value.value)
    if sd and size and not _LEAST <= sd / size <= 1 / _LEAST:
        what = "is nothing beside the value" if sd < size else "leaves nothing of the value"
        scope.findings.add(
            Name.BAD_LIMIT, f"the error {bound.error.number.text} {what}", line, error,
            mend="leave the ± out: the value is then exact" if sd < size else "check the number",
        )
        return False
    if sd == 0:
        scope.findings.add(
            Name.BAD_LIMIT, "a measured value has an sd above zero", line, error,
            mend="leave the ± out: the value is then exact", certain=[(behind, "")],
        )
        return False
    return True


_Ways = tuple[Direction | None, Direction | None]


def resolve_quantity(
    line: LogicalLine, said: s.QuantityText, scope: Scope, *, ways: _Ways = (None, None)
) -> Quantity | None:
    """The quantity of a limit, or None where the model has none such (told).

    ``ways`` are the directions that stand inside ``between``. In a ratio an exchange species
    without a direction is meant as released.
    """
    if said.bottom is None:
        return _single(line, said.top, scope, ways, None)
    if ways != (None, None):
        _no_way(line, said, scope, "a ratio")
        return None
    top = _single(line, said.top, scope, ways, Direction.OUT)
    bottom = _single(line, said.bottom, scope, ways, Direction.OUT)
    if top is None or bottom is None:
        return None
    if (top.kind, top.name) == (bottom.kind, bottom.name):
        scope.findings.add(
            Name.BAD_LIMIT, "the ratio of a quantity to itself is always 1", line, said,
            mend="name another quantity below the line",
        )
        return None
    return Quantity(QuantityKind.RATIO, numerator=top, denominator=bottom)


def _no_way(
    line: LogicalLine, said: s.QuantityText | s.SingleText, scope: Scope, what: str
) -> None:
    scope.findings.add(
        Name.BAD_LIMIT, f"{what} goes neither in nor out", line, said,
        mend="leave `in` and `out` away",
    )


def _single(
    line: LogicalLine, said: s.SingleText, scope: Scope, ways: _Ways,
    otherwise: Direction | None,
) -> Quantity | None:
    name = said.name.text
    directed = said.way is not None or ways != (None, None)
    if said.is_mu or name in scope.reactions:
        if directed:
            _no_way(line, said, scope, "mu" if said.is_mu else f"the flux of reaction {name}")
            return None
        return Quantity(QuantityKind.MU) if said.is_mu else Quantity(QuantityKind.FLUX, name)
    species = scope.species.get(name)
    if species is None or said.is_flux:
        if name not in scope.lost:
            _unknown(line, said, scope)
        return None
    if not species.role.is_boundary:
        scope.findings.add(
            Name.UNKNOWN_LIMIT,
            f"{name} is balanced inside the cell: it has no rate that could be limited",
            line, said.name, mend="limit a boundary species, mu, a reaction or a ratio",
        )
        return None
    direction = _direction(line, said, species, scope, ways, otherwise)
    return None if direction is None else Quantity(QuantityKind.RATE, name, direction)


def _direction(
    line: LogicalLine, said: s.SingleText, species: Species, scope: Scope, ways: _Ways,
    otherwise: Direction | None,
) -> Direction | None:
    """The direction in which a boundary species is limited."""
    told = {w for w in (said.way, *ways) if w is not None}
    if species.role is not Role.EXCHANGE:
        natural = Direction.IN if species.role is Role.SUBSTRATE else Direction.OUT
        if told <= {natural}:
            return natural
        scope.findings.add(
            Name.LIMIT_AGAINST_ROLE,
            f"{species.name} is declared as {species.role.value}: it only goes {natural.value}",
            line, said, mend=f"leave the direction out, or declare {species.name} as exchange",
            also=[species.span],
        )
        return None
    if ways != (None, None):
        if None not in ways and said.way is None:
            return told.pop() if len(told) == 1 else Direction.OUT
    elif said.way or otherwise:
        return said.way or otherwise
    scope.findings.add(
        Name.LIMIT_NEEDS_DIRECTION,
        f"{species.name} can go either way, and the limit does not say which is meant",
        line, said,
        mend=f"write {species.name} in or {species.name} out, or between in 1 and out 5",
    )
    return None


def _unknown(line: LogicalLine, said: s.SingleText, scope: Scope) -> None:
    name = said.name.text
    twin = "mu" if name.casefold() == "mu" else scope.twin(name, Kind.SPECIES, Kind.REACTION)
    if twin is not None:
        scope.findings.add(
            Name.CASE_DIFFERS, f"{twin} is written {name} here: case counts", line, said.name,
            mend=f"write {twin}", certain=[(said.name, twin)],
        )
        return
    near = scope.findings.nearest(name, [*scope.species, *scope.reactions, "mu"])
    scope.findings.add(
        Name.UNKNOWN_LIMIT, f"the model has nothing called {name} that could be limited", line,
        said.name,
        mend=f"a similar name is there: {', '.join(near)}" if near
        else "name a boundary species, mu, a reaction or a ratio of two",
    )
