"""Builds a statement while the parser reduces the rules of the grammar.

Each method of the builder has the name of a rule of ``grammar/model.lark``, where it is said
what the rule means.
"""
# ruff: noqa: D102

from __future__ import annotations

from fractions import Fraction
from typing import Any, cast

from lark import Token, Transformer

from fluxnet.network.model import Direction, Relation, Role
from fluxnet.reading import syntax as s

__all__ = ["Builder"]


class Builder(Transformer[Token, Any]):
    """Makes statements while the parser reduces its rules."""

    def statement(self, parts: list[Any]) -> s.Statement:
        return s.Statement(parts[0], tuple(parts[1:]))

    def acceptance(self, parts: list[Token]) -> s.AcceptText:
        return s.AcceptText(_word(parts[1]), _word(parts[3]))

    def title(self, parts: list[Token]) -> s.TitleLine:
        return s.TitleLine(_word(parts[1]) if len(parts) > 1 else None)

    def basis(self, parts: list[Token]) -> s.BasisLine:
        return s.BasisLine(_word(parts[1]))

    def species(self, parts: list[Any]) -> s.SpeciesLine:
        return s.SpeciesLine(Role(str(parts[0])), _those(parts, s.Entry))

    biomass = carriers = species

    def compound(self, parts: list[Token]) -> s.Entry:
        return s.Entry(_word(parts[0]), _word(parts[1]) if len(parts) > 1 else None)

    def organism(self, parts: list[Any]) -> s.Entry:
        formula = next((_word(p) for p in parts[1:] if isinstance(p, Token)), None)
        shares = next((p for p in parts[1:] if isinstance(p, list)), [])
        if not shares:
            return s.Entry(_word(parts[0]), formula)
        (value, per_cent), (error, also) = shares[0], shares[1] if len(shares) > 1 else (None, 0)
        return s.Entry(_word(parts[0]), formula, value, error, per_cent or bool(also))

    def ash(self, parts: list[Any]) -> list[tuple[s.NumberText, bool]]:
        return [p for p in parts if isinstance(p, tuple)]

    def share(self, parts: list[Token]) -> tuple[s.NumberText, bool]:
        return _number(parts[0]), len(parts) > 1

    def carrier(self, parts: list[Any]) -> s.Entry:
        return s.Entry(_word(parts[0]), cargo=parts[2] if len(parts) > 2 else None)

    def energy(self, parts: list[Token]) -> s.CargoText:
        return s.CargoText(None, None, _start(parts[0]), _end(parts[0]))

    def electrons(self, parts: list[Token]) -> s.CargoText:
        return s.CargoText(_number(parts[0]), None, _start(parts[0]), _end(parts[1]))

    def group(self, parts: list[Token]) -> s.CargoText:
        return s.CargoText(None, _word(parts[0]), _start(parts[0]), _end(parts[0]))

    def parameter(self, parts: list[Any]) -> s.ParameterLine:
        return s.ParameterLine(parts[1])

    def setting(self, parts: list[Any]) -> s.SettingLine:
        return s.SettingLine(parts[1])

    def assignment(self, parts: list[Any]) -> s.Assignment:
        error = next((p for p in parts if isinstance(p, s.ErrorText)), None)
        low, high = next((p for p in parts if isinstance(p, list)), (None, None))
        return s.Assignment(_word(parts[0]), parts[2], error, low, high)

    def error(self, parts: list[Any]) -> s.ErrorText:
        return s.ErrorText(*parts[1])

    def range(self, parts: list[Any]) -> list[s.NumberText]:
        return [p for p in parts if isinstance(p, s.NumberText)]

    def signed(self, parts: list[Token]) -> s.NumberText:
        number = _number(parts[-1])
        if len(parts) == 1:
            return number
        return number._replace(
            text=f"-{number.text}", start=_start(parts[0]), value=-number.value
        )

    def compartment(self, parts: list[Token]) -> s.CompartmentLine:
        return s.CompartmentLine(_word(parts[1]))

    def reaction(self, parts: list[Any]) -> s.ReactionLine:
        arrow = parts[3]
        return s.ReactionLine(
            _word(parts[0]), parts[2], parts[4], _word(arrow), arrow.type == "BOTH_WAYS"
        )

    def side(self, parts: list[Any]) -> tuple[s.TermText, ...]:
        return _those(parts, s.TermText)

    def term(self, parts: list[Any]) -> s.TermText:
        species = _word(parts[-1])
        first = parts[0]
        if len(parts) == 1:
            return s.TermText(None, species)
        if len(parts) == 4:
            return s.TermText(s.BracketText(parts[1], _start(first), _end(parts[2])), species)
        if first.type == "COEFFICIENT":
            return s.TermText(_number(first), species)
        if first.type == "UNKNOWN":
            return s.TermText(s.UnknownText(_start(first), _end(first)), species)
        return s.TermText(_word(first), species)

    def plus(self, parts: list[Any]) -> s.OperationNode:
        return s.OperationNode(
            str(parts[1]), parts[0], parts[2], _node_start(parts[0]), _node_end(parts[2])
        )

    minus = times = over = plus

    def number(self, parts: list[Token]) -> s.NumberNode:
        return s.NumberNode(_number(parts[0]))

    def parameter_name(self, parts: list[Token]) -> s.NameNode:
        return s.NameNode(_word(parts[0]))

    def bracket(self, parts: list[Any]) -> s.SumNode:
        content = cast("s.SumNode", parts[1])
        if isinstance(content, s.OperationNode):
            return content._replace(start=_start(parts[0]), end=_end(parts[2]))
        return content

    def negative(self, parts: list[Any]) -> s.OperationNode:
        return s.OperationNode("-", None, parts[1], _start(parts[0]), _node_end(parts[1]))

    def limit(self, parts: list[Any]) -> s.LimitLine:
        return s.LimitLine(parts[1], parts[2])

    def bound(self, parts: list[Any]) -> s.BoundText:
        numbers = [p for p in parts if isinstance(p, s.NumberText)]
        error = next((p for p in parts if isinstance(p, s.ErrorText)), None)
        end = error.number.end if error else numbers[-1].end
        relation = _RELATION[parts[0].type]
        if relation is not Relation.BETWEEN:
            return s.BoundText(relation, numbers[0], error, None, None, None,
                               _start(parts[0]), end)
        middle = next(i for i, p in enumerate(parts) if getattr(p, "type", "") == "AND")
        ways = [next((p for p in half if isinstance(p, Direction)), None)
                for half in (parts[:middle], parts[middle:])]
        return s.BoundText(relation, numbers[0], None, ways[0], numbers[1], ways[1],
                           _start(parts[0]), end)

    def quantity(self, parts: list[Any]) -> s.QuantityText:
        return s.QuantityText(parts[0], parts[2] if len(parts) > 1 else None)

    def single(self, parts: list[Any]) -> s.SingleText:
        tokens = [p for p in parts if isinstance(p, Token)]
        way = next((p for p in parts if isinstance(p, tuple)), None)
        name = tokens[-1]
        return s.SingleText(
            _word(name), way[0] if way else None, name.type == "MU", len(tokens) > 1,
            way[1] if way else _end(name),
        )

    def way(self, parts: list[Token]) -> tuple[Direction, int]:
        return Direction(str(parts[0])), _end(parts[0])

    def far_way(self, parts: list[Token]) -> Direction:
        return Direction(str(parts[0]))

    def variant(self, parts: list[Any]) -> s.VariantLine:
        words = next((p for p in parts if getattr(p, "type", "") == "QUOTED"), None)
        parents = next((p for p in parts if isinstance(p, tuple)), ())
        return s.VariantLine(_word(parts[1]), _inside(words) if words else None, parents)

    def parents(self, parts: list[Token]) -> tuple[s.Word, ...]:
        return _names(parts[1:])

    def addition(self, parts: list[Token]) -> s.AdditionLine:
        return s.AdditionLine(_word(parts[2]))

    def drop(self, parts: list[Any]) -> s.DropLine:
        return s.DropLine(tuple(p for p in parts if not isinstance(p, Token)))

    def dropped(self, parts: list[Any]) -> s.Word | s.QuantityText:
        return parts[-1] if isinstance(parts[-1], s.QuantityText) else _word(parts[-1])

    def use(self, parts: list[Token]) -> s.UseLine:
        return s.UseLine(_inside(parts[1]))

    def free(self, parts: list[Token]) -> s.FreeLine:
        return s.FreeLine(_names(parts[1:]))

    def balance(self, parts: list[Token]) -> s.BalanceLine:
        return s.BalanceLine(_names(parts[1:]))


_RELATION = {"AT_MOST": Relation.AT_MOST, "AT_LEAST": Relation.AT_LEAST,
             "EQUALS": Relation.EQUAL, "BETWEEN": Relation.BETWEEN}


def _start(token: Token) -> int:
    return cast("int", token.start_pos)


def _end(token: Token) -> int:
    return cast("int", token.end_pos)


def _word(token: Token) -> s.Word:
    return s.Word(str(token), _start(token), _end(token))


def _inside(token: Token) -> s.Word:
    """The text between quotation marks."""
    return s.Word(str(token)[1:-1], _start(token) + 1, _end(token) - 1)


def _names(tokens: list[Token]) -> tuple[s.Word, ...]:
    return tuple(_word(t) for t in tokens if t.type == "DECLARED_NAME")


def _those(parts: list[Any], kind: type[Any]) -> tuple[Any, ...]:
    return tuple(p for p in parts if isinstance(p, kind))


def _node_start(node: s.SumNode) -> int:
    if isinstance(node, s.OperationNode):
        return node.start
    return node.number.start if isinstance(node, s.NumberNode) else node.name.start


def _node_end(node: s.SumNode) -> int:
    if isinstance(node, s.OperationNode):
        return node.end
    return node.number.end if isinstance(node, s.NumberNode) else node.name.end


def _number(token: Token) -> s.NumberText:
    """The exact value of a number, and half a unit of its last written decimal."""
    text = str(token)
    mantissa, _, exponent = text.lower().partition("e")
    decimals = len(mantissa.partition(".")[2])
    half = Fraction(0)
    if decimals:
        half = Fraction(10) ** (int(exponent or 0) - decimals) / 2
    return s.NumberText(text, _start(token), _end(token), Fraction(text), half)
