"""Reactions: terms with their coefficients, resolved."""

from __future__ import annotations

from fractions import Fraction

from fluxnet.ground.names import Name
from fluxnet.network.expression import ONE, Expression, constant, parameter
from fluxnet.network.model import Reaction, Term
from fluxnet.reading import syntax as s
from fluxnet.reading.blocks import Placed
from fluxnet.reading.findings import nearest_names
from fluxnet.reading.lines import LogicalLine
from fluxnet.reading.scope import Scope

__all__ = ["resolve_reaction"]

_ZERO = Fraction(0)


def resolve_reaction(placed: Placed, said: s.ReactionLine, scope: Scope) -> Reaction:
    """The reaction of one line; faults go to the findings."""
    line = placed.line
    if not said.left and not said.right:
        scope.findings.add(
            Name.EMPTY_REACTION, f"both sides of {said.name.text} are nothing", line,
            mend="write what it uses and makes, or take it away",
        )  # fmt: skip
    left = tuple(_term(line, t, scope) for t in said.left)
    right = tuple(_term(line, t, scope) for t in said.right)
    return Reaction(
        said.name.text,
        placed.compartment.text if placed.compartment else "",
        left, right, said.reversible, line.span(said.name.start, said.name.end),
    )  # fmt: skip


def _term(line: LogicalLine, said: s.TermText, scope: Scope) -> Term:
    coefficient, half, written = _coefficient(line, said, scope)
    if said.species.text not in scope.species:
        scope.mention(line, said.species)
    return Term(
        said.species.text, coefficient, half, written, False,
        line.span(said.start, said.species.end),
    )  # fmt: skip


def _coefficient(
    line: LogicalLine, said: s.TermText, scope: Scope
) -> tuple[Expression | None, Fraction, str]:
    given = said.coefficient
    if given is None:
        return ONE, _ZERO, ""
    written = line.text[given.start : given.end]
    if isinstance(given, s.UnknownText):
        return None, _ZERO, "?"
    if isinstance(given, s.NumberText):
        return constant(given.value), given.half_unit, written
    if isinstance(given, s.BracketText):
        return evaluate(line, given.content, scope), _ZERO, written
    return _parameter(line, given, scope), _ZERO, written


def evaluate(line: LogicalLine, node: s.SumNode, scope: Scope) -> Expression:
    """The expression of a bracket."""
    if isinstance(node, s.NumberNode):
        return constant(node.number.value)
    if isinstance(node, s.NameNode):
        return _parameter(line, node.name, scope)
    right = evaluate(line, node.right, scope)
    if node.left is None:
        return -right
    left = evaluate(line, node.left, scope)
    if node.sign == "+":
        return left + right
    if node.sign == "-":
        return left - right
    if node.sign == "*":
        return left * right
    if right.is_zero:
        scope.findings.add(
            Name.DIVISION_BY_ZERO, f"{line.text[node.start : node.end]} divides by zero",
            line, node,
        )  # fmt: skip
        return left
    return left / right


def _parameter(line: LogicalLine, word: s.Word, scope: Scope) -> Expression:
    name = word.text
    if name in scope.parameters:
        scope.used_parameters.add(name)
        return parameter(name)
    if name not in scope.lost:
        near = nearest_names(name, scope.parameters)
        scope.findings.add(
            Name.UNKNOWN_PARAMETER, f"no parameter is called {name}", line, word,
            mend=f"declare it: parameter {name} = ..."
            + (f"; a similar name is declared: {', '.join(near)}" if near else ""),
        )  # fmt: skip
    return ONE
