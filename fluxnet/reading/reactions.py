"""Reactions: terms with their coefficients, resolved."""

from __future__ import annotations

from fractions import Fraction

from fluxnet.ground.names import Name
from fluxnet.ground.pattern import pattern_of
from fluxnet.network.expression import ONE, Expression, constant, parameter
from fluxnet.network.model import Reaction, Term
from fluxnet.reading import syntax as s
from fluxnet.reading.blocks import Placed
from fluxnet.reading.declare import REACH, in_reach
from fluxnet.reading.lines import LogicalLine
from fluxnet.reading.scope import RESERVED, Kind, Scope

__all__ = ["resolve_reaction"]

_ZERO = Fraction(0)
_LONGEST = 300
_MOST_MONOMIALS = 2000
_POWER_OF_TEN = pattern_of(r"\d+[eE][+-]?\d+")
_GLUED = pattern_of(r"(\d+)(?=[^\W\d])")


def resolve_reaction(placed: Placed, said: s.ReactionLine, scope: Scope) -> Reaction | None:
    """The reaction of one line, or None where it has a fault (told).

    Parameters
    ----------
    placed
        The statement with its line, compartment and variant.
    said
        The reaction as parsed.
    scope
        The names that the line sees; its findings take what is wrong.
    """
    line, findings = placed.line, scope.findings
    if not said.left and not said.right:
        findings.add(
            Name.EMPTY_REACTION, f"both sides of {said.name.text} are nothing", line,
            mend="write what it uses and makes, or take it away",
        )
        return None
    left = [_term(line, t, scope) for t in said.left]
    right = [_term(line, t, scope) for t in said.right]
    sound_left = tuple(t for t in left if t is not None)
    sound_right = tuple(t for t in right if t is not None)
    if len(sound_left) + len(sound_right) < len(left) + len(right):
        return None
    _both_sides(line, said, scope)
    return Reaction(
        said.name.text,
        placed.compartment.text if placed.compartment else "",
        sound_left, sound_right, said.reversible, line.span(said.name.start, said.name.end),
    )


def _both_sides(line: LogicalLine, said: s.ReactionLine, scope: Scope) -> None:
    left = {t.species.text for t in said.left}
    for term in said.right:
        if term.species.text in left:
            scope.findings.add(
                Name.SAME_ON_BOTH_SIDES,
                f"{term.species.text} stands on both sides of {said.name.text}",
                line, term.species, mend="write the difference on one side",
            )


def _term(line: LogicalLine, said: s.TermText, scope: Scope) -> Term | None:
    """One term, or None where it has a fault."""
    name = said.species.text
    if isinstance(said.coefficient, s.Word) and not _is_parameter(line, said, scope):
        return None
    sound = _is_species(line, said.species, scope)
    coefficient, half, written = _coefficient(line, said, scope)
    if not sound or (coefficient is None and written != "?"):
        return None
    return Term(name, coefficient, half, written, False, line.span(said.start, said.species.end))


def _is_species(line: LogicalLine, word: s.Word, scope: Scope) -> bool:
    name = word.text
    if name in scope.species:
        return True
    if name in RESERVED:
        scope.findings.add(
            Name.RESERVED_NAME, f"`{name}` is no species: it is {RESERVED[name]}", line, word,
            mend="take it out" if name == "mu" else "`nothing` stands alone on its side",
        )
        return False
    lead = _GLUED.match(name)
    if lead and name[lead.end() :] in scope.species:
        rest = name[lead.end() :]
        scope.findings.add(
            Name.GLUED_NUMBER, f"{name} is one name, and no species is called so", line, word,
            because="digits that touch letters belong to the name",
            mend=f"write {lead[0]} {rest}", certain=[(word, f"{lead[0]} {rest}")],
        )
        return False
    scope.mention(line, word)
    return False


def _is_parameter(line: LogicalLine, said: s.TermText, scope: Scope) -> bool:
    """Whether the word before a species is a parameter; else say what is wrong."""
    word = said.coefficient
    assert isinstance(word, s.Word)
    if word.text in scope.parameters:
        return True
    whole = f"{word.text}-{said.species.text}"
    if whole in scope.species:
        both = s.Word("", word.start, said.species.end)
        scope.findings.add(
            Name.UNREADABLE_LINE, "a name has no blanks", line, both, mend=f"write {whole}",
            certain=[(both, whole)],
        )
        return False
    near = scope.findings.nearest(word.text, [*scope.species, *scope.parameters], 1)
    if word.text in scope.species or (near and near[0] in scope.species):
        gap = s.Word("", word.end, word.end)
        scope.findings.add(
            Name.MISSING_PLUS, f"no + stands between {word.text} and {said.species.text}",
            line, s.Word("", word.start, said.species.end),
            mend=f"write {word.text} + {said.species.text}", certain=[(gap, " +")],
        )
        _is_species(line, word, scope)
        _is_species(line, said.species, scope)
        return False
    _parameter(line, word, scope)
    _is_species(line, said.species, scope)
    return False


def _coefficient(
    line: LogicalLine, said: s.TermText, scope: Scope
) -> tuple[Expression | None, Fraction, str]:
    """The coefficient (None for ``?``, and where it has a fault), half a unit, as written."""
    given = said.coefficient
    if given is None:
        return ONE, _ZERO, ""
    written = line.text[given.start : given.end]
    if isinstance(given, s.UnknownText):
        return None, _ZERO, "?"
    if isinstance(given, s.NumberText):
        value = constant(given.value) if in_reach(line, given, scope.findings) else None
        return value, given.half_unit, written
    if isinstance(given, s.Word):
        return _parameter(line, given, scope), _ZERO, written
    if given.end - given.start > _LONGEST:
        scope.findings.add(
            Name.UNREADABLE_LINE, f"these brackets hold more than {_LONGEST} characters",
            line, given, mend="give a parameter the value of a part of it",
        )
        return None, _ZERO, written
    return _evaluate(line, given.content, scope), _ZERO, written


def _evaluate(line: LogicalLine, node: s.SumNode, scope: Scope) -> Expression | None:
    """The expression of a bracket, or None where it has a fault."""
    if isinstance(node, s.NumberNode):
        if not in_reach(line, node.number, scope.findings):
            return None
        return constant(node.number.value)
    if isinstance(node, s.NameNode):
        return _parameter(line, node.name, scope)
    right = _evaluate(line, node.right, scope)
    if node.left is None:
        return None if right is None else -right
    left = _evaluate(line, node.left, scope)
    if left is None or right is None:
        return None
    if _size(left) * _size(right) > _MOST_MONOMIALS:
        scope.findings.add(
            Name.UNREADABLE_LINE, "this expression has too many terms when multiplied out",
            line, node, mend="give a parameter the value of a part of it",
        )
        return None
    if node.sign == "/" and right.is_zero:
        scope.findings.add(
            Name.DIVISION_BY_ZERO, f"{line.text[node.start : node.end]} divides by zero",
            line, node, mend="correct the expression",
        )
        return None
    return _joined(node.sign, left, right)


def _joined(sign: str, left: Expression, right: Expression) -> Expression:
    if sign == "+":
        return left + right
    if sign == "-":
        return left - right
    return left * right if sign == "*" else left / right


def _size(expression: Expression) -> int:
    return len(expression.numerator.terms) + len(expression.denominator.terms)


def _parameter(line: LogicalLine, word: s.Word, scope: Scope) -> Expression | None:
    name = word.text
    if name in scope.parameters:
        scope.used_parameters.add(name)
        return parameter(name)
    if name in scope.lost:
        return None
    if _POWER_OF_TEN.fullmatch(name):
        scope.findings.add(
            Name.UNREADABLE_LINE, f"the number {name[:20]} is out of reach", line, word,
            because=REACH,
        )
        return None
    if name in scope.species:
        scope.findings.add(
            Name.UNKNOWN_PARAMETER, f"{name} is a species, not a parameter", line, word,
            mend="brackets hold numbers, parameters and + - * / only",
        )
        return None
    near = scope.findings.nearest(name, scope.parameters)
    twin = scope.twin(name, Kind.PARAMETER)
    if twin is not None:
        scope.findings.add(
            Name.CASE_DIFFERS, f"the parameter is called {twin}, not {name}", line, word,
            mend=f"write {twin}", certain=[(word, twin)],
        )
        return None
    scope.findings.add(
        Name.UNKNOWN_PARAMETER, f"no parameter is called {name}", line, word,
        mend=f"a similar name is declared: {', '.join(near)}" if near
        else f"declare it: parameter {name} = 1.0",
    )
    return None
