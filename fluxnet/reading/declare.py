"""Declarations: species with their formulas, and parameters."""

from __future__ import annotations

import re
from collections.abc import Mapping
from fractions import Fraction

from fluxnet.ground.names import Name
from fluxnet.ground.pattern import pattern_of
from fluxnet.network.model import Parameter, Role, Species
from fluxnet.reading import syntax as s
from fluxnet.reading.blocks import Placed
from fluxnet.reading.compounds import cargo_of, formula_of
from fluxnet.reading.findings import Findings
from fluxnet.reading.lines import LogicalLine
from fluxnet.reading.scope import Kind, Scope, claim

__all__ = ["REACH", "declare_parameter", "declare_species", "in_reach", "read_assignment"]

_PARAMETER = pattern_of(r"[A-Za-z][A-Za-z0-9_]*")
_ZERO = Fraction(0)
_REACH = 10**30
REACH = "numbers lie between 1e-30 and 1e30"


def declare_species(
    placed: Placed, said: s.SpeciesLine, scope: Scope, *, phosphate: bool = False
) -> tuple[Species, ...]:
    """The species of one declaration; ``phosphate``: whether the model balances phosphate.

    Parameters
    ----------
    placed
        The statement with its line, compartment and variant.
    said
        The declaration as parsed.
    scope
        The names that the line sees; its findings take what is wrong.
    phosphate
        Whether the model balances phosphate.
    """
    found: list[Species] = []
    line = placed.line
    for entry in said.entries:
        if not claim(scope, Kind.SPECIES, line, entry.name):
            continue
        before = len(scope.findings.found)
        cargo, formula = None, None
        if said.role is Role.CARRIER:
            cargo, matched = cargo_of(entry, line, scope, phosphate=phosphate)
        else:
            formula, matched = formula_of(said.role, entry, line, scope)
        if len(scope.findings.found) > before:
            scope.broken.add(entry.name.text)
        ash, ash_sd = _ash(said.role, entry, line, scope.findings)
        species = Species(
            entry.name.text, said.role, formula, cargo, matched, ash, ash_sd,
            line.span(entry.name.start, entry.name.end),
        )
        scope.species[species.name] = species
        found.append(species)
    return tuple(found)


def _ash(
    role: Role, entry: s.Entry, line: LogicalLine, findings: Findings
) -> tuple[Fraction, Fraction]:
    """The share of ash in dry weight, and its sd."""
    if role is not Role.BIOMASS:
        return _ZERO, _ZERO
    if entry.ash is None:
        findings.add(
            Name.ASH_ASSUMED, f"no ash content is given for {entry.name.text}; 0 % is taken",
            line, entry.name, mend="write `ash 8 %` behind the formula",
        )
        return _ZERO, _ZERO
    scale = 100 if entry.ash_in_per_cent else 1
    ash = entry.ash.value / scale
    sd = entry.ash_error.value / scale if entry.ash_error else _ZERO
    if ash < 1:
        return ash, sd
    unit = " %" if entry.ash_in_per_cent else ""
    end = s.Word("", entry.ash.end, entry.ash.end)
    findings.add(
        Name.BAD_ASH, f"an ash content of {entry.ash.text}{unit} leaves no biomass",
        line, entry.ash,
        mend="give a share of dry weight below 100 %" if unit else f"write {entry.ash.text} %",
        certain=[] if unit or ash >= 100 else [(end, " %")],
    )
    return _ZERO, _ZERO


def declare_parameter(placed: Placed, said: s.ParameterLine, scope: Scope) -> Parameter | None:
    """The parameter of one line.

    Parameters
    ----------
    placed
        The statement with its line, compartment and variant.
    said
        The declaration as parsed.
    scope
        The names that the line sees; its findings take what is wrong.
    """
    name = said.assignment.name
    if not claim(scope, Kind.PARAMETER, placed.line, name):
        return None
    if not _PARAMETER.fullmatch(name.text):
        plain = re.sub(r"\W", "_", name.text)
        scope.findings.add(
            Name.BAD_PARAMETER,
            f"{name.text} cannot be a parameter: a letter, then letters, digits and `_` make one",
            placed.line, name,
            mend=f"write {plain}" if _PARAMETER.fullmatch(plain)
            else "write a name that begins with a letter",
        )
        scope.lost.add(name.text)
    parameter = read_assignment(placed.line, said.assignment, scope.findings)
    scope.parameters[parameter.name] = parameter
    return parameter


def read_assignment(
    line: LogicalLine,
    said: s.Assignment,
    findings: Findings,
    base: Mapping[str, Parameter] | None = None,
) -> Parameter:
    """Value, sd and range as written; ``base`` holds the parameters that a variant changes.

    A setting without sd or range keeps those of its parameter: the value is held against the
    range that it keeps.

    Parameters
    ----------
    line
        The logical line, for places.
    said
        Name, value, error and range as parsed.
    findings
        Takes what is wrong.
    base
        The parameters that a variant's line changes: their sd and range are kept.
    """
    span = line.span(said.name.start, said.name.end)
    error = said.error.number if said.error is not None else None
    numbers = [n for n in (said.value, error, said.low, said.high) if n is not None]
    reached = [in_reach(line, number, findings) for number in numbers]
    if not all(reached):
        return Parameter(said.name.text, Fraction(1), span=span)
    value = said.value.value
    sd = None
    if said.error is not None:
        sd = said.error.number.value
        if said.error.relative:
            sd = abs(value) * sd / 100
        if sd == 0 and base is None:
            sd = None
    low, high = _range(line, said, findings)
    kept = (base or {}).get(said.name.text)
    least, most = low, high
    if kept is not None and low is None:
        least, most = kept.low, kept.high
    outside = (least is not None and value < least) or (most is not None and value > most)
    if outside and least is not None and most is not None:
        whose = "its range" if low is not None else "the range that it keeps"
        findings.add(
            Name.OUTSIDE_RANGE,
            f"{said.name.text} = {said.value.text} lies outside {whose}", line, said.value,
            because=f"{said.name.text} may lie between {float(least):g} and {float(most):g}",
            mend="correct the value or the range",
        )
    return Parameter(said.name.text, value, sd, low, high, span)


def _range(
    line: LogicalLine, said: s.Assignment, findings: Findings
) -> tuple[Fraction | None, Fraction | None]:
    if said.low is None or said.high is None:
        return None, None
    low, high = said.low.value, said.high.value
    if low <= high:
        return low, high
    findings.add(
        Name.BAD_PARAMETER,
        f"the range of {said.name.text} runs from {said.low.text} down to {said.high.text}",
        line, s.Word("", said.low.start, said.high.end),
        mend=f"write [{said.high.text}, {said.low.text}]",
        certain=[(said.low, said.high.text), (said.high, said.low.text)],
    )
    return high, low


def in_reach(line: LogicalLine, number: s.NumberText, findings: Findings) -> bool:
    """Whether a number can be computed with; else say so.

    Parameters
    ----------
    line
        The logical line, for places.
    number
        The number as typed.
    findings
        Takes what is wrong.
    """
    size = abs(number.value)
    if size == 0 or 1 <= size * _REACH <= _REACH * _REACH:
        return True
    findings.add(
        Name.UNREADABLE_LINE, f"the number {number.text[:20]} is out of reach", line, number,
        because=REACH,
    )
    return False
