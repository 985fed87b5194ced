"""Net equations as text."""

from __future__ import annotations

from fluxnet.presenting.numbers import format_number
from fluxnet.studies.equations import NetEquation

__all__ = ["equation_lines", "equation_text"]


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


def equation_lines(equation: NetEquation, unit: str) -> tuple[tuple[str, str, str], ...]:
    """The equation per mol of substrate and, beside it, in the unit of the rates."""
    name = equation.compartment or "whole cell"
    lines: list[tuple[str, str, str]] = []
    if equation.per is not None and equation.per_amount:
        lines.append((name, "per_mol", equation_text(equation, 1 / equation.per_amount)))
        lines.append((f"  [{unit}]", "rate", equation_text(equation)))
    else:
        lines.append((name, "rate", equation_text(equation)))
    if equation.base:
        amount = format_number(equation.base, 3)
        per = ""
        if equation.per is not None and equation.per_amount:
            share = format_number(equation.base / equation.per_amount, 3)
            per = f", {share} mol per mol {equation.per}"
        lines.append(("  base for the pH", "base", f"{amount} {unit}{per}"))
    return tuple(lines)
