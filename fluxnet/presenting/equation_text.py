"""Net equations as text."""

from __future__ import annotations

from fluxnet.ground.pattern import pattern_of
from fluxnet.presenting.numbers import format_number
from fluxnet.presenting.table_lines import GLUE
from fluxnet.studies.equations import NetEquation

__all__ = ["equation_lines", "equation_text"]

_SIGN = pattern_of(f"{GLUE}(\\+|->){GLUE}")


def equation_text(equation: NetEquation, scale: float = 1.0, digits: int = 3) -> str:
    """The equation with what is used on the left; implied terms stand in brackets.

    Examples
    --------
    >>> from fluxnet.studies.equations import EquationTerm
    >>> terms = (EquationTerm("glucose", -2.0), EquationTerm("ethanol", 4.0))
    >>> equation_text(NetEquation(None, terms, "glucose", 2.0), 0.5)
    'glucose -> 2 ethanol'
    """
    sides: tuple[list[str], list[str]] = ([], [])
    for term in equation.terms:
        size = abs(term.coefficient) * scale
        number = format_number(size, digits)
        text = term.species if number == "1" else f"{number} {term.species}"
        sides[term.coefficient > 0].append(f"({text})" if term.implied else text)
    left, right = (" + ".join(side) or "nothing" for side in sides)
    return f"{left} -> {right}"


def equation_lines(equation: NetEquation, unit: str) -> tuple[tuple[str, str], ...]:
    """The equation per mol of substrate and, below it, in the unit of the rates.

    Examples
    --------
    >>> from fluxnet.studies.equations import EquationTerm
    >>> terms = (EquationTerm("glucose", -2.0), EquationTerm("ethanol", 4.0))
    >>> for name, text in equation_lines(NetEquation(None, terms, "glucose", 2.0), "mmol/g/h"):
    ...     print(name, text.replace(GLUE, " "), sep=" | ")
    whole cell | glucose -> 2 ethanol
      mmol/g/h | 2 glucose -> 4 ethanol
    """
    name = equation.compartment or "whole cell"
    amount = equation.per_amount
    lines = [(name, _glued(equation_text(equation, 1 / amount if amount else 1.0)))]
    if amount and format_number(amount, 3) != "1":
        lines.append((f"  {unit}", _glued(equation_text(equation))))
    if equation.base:
        text = f"{format_number(equation.base, 3)} {unit}"
        if amount and equation.per is not None:
            text += f", {format_number(equation.base / amount, 3)} mol per mol {equation.per}"
        lines.append(("  base needed", text))
    return tuple(lines)


def _glued(text: str) -> str:
    """An equation that can only be broken before a + or the arrow."""
    return _SIGN.sub(rf" \1{GLUE}", text.replace(" ", GLUE))
