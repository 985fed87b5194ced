"""Declarations: species with their formulas, and parameters."""

from __future__ import annotations

from fractions import Fraction

from fluxnet.ground.names import Name
from fluxnet.ground.source import Span
from fluxnet.network.model import Parameter, Role, Species
from fluxnet.reading import syntax as s
from fluxnet.reading.blocks import Placed
from fluxnet.reading.compounds import cargo_of, formula_of
from fluxnet.reading.findings import Findings
from fluxnet.reading.lines import LogicalLine
from fluxnet.reading.scope import Kind, Scope

__all__ = ["claim", "declare_parameter", "declare_species", "read_assignment"]

RESERVED = {"nothing": "the empty side of a reaction", "mu": "the specific growth rate"}


def claim(scope: Scope, kind: Kind, line: LogicalLine, word: s.Word) -> bool:
    """Whether a name is free to be declared; else say why not."""
    name = word.text
    if name in RESERVED:
        scope.findings.add(
            Name.RESERVED_NAME, f"`{name}` cannot be a name: it is {RESERVED[name]}",
            line, word, mend="choose another name",
        )  # fmt: skip
        return False
    if name in scope.places:
        before, where = scope.places[name]
        also = place_words(where, line)
        what = "is declared twice" if before is kind else f"is a {before.value} already"
        scope.findings.add(
            Name.DECLARED_TWICE, f"{name} {what} (first in {also})", line, word,
            mend="take one of the two away, or rename it", also=[where],
        )  # fmt: skip
        return False
    twin = scope.folded.get(name.casefold())
    if twin is not None:
        where = scope.places[twin][1]
        scope.findings.add(
            Name.CASE_DIFFERS,
            f"{name} differs only in case from {twin} (line {where.line})",
            line, word, mend=f"rename one of the two, or write {twin}", also=[where],
        )  # fmt: skip
    scope.places[name] = (kind, line.span(word.start, word.end))
    scope.folded.setdefault(name.casefold(), name)
    return True


def place_words(where: Span, line: LogicalLine) -> str:
    """``line 3``, with the file where it is another one."""
    return f"line {where.line}" if where.file == line.file else f"{where.file}, line {where.line}"


def declare_species(placed: Placed, said: s.SpeciesLine, scope: Scope) -> tuple[Species, ...]:
    """The species of one declaration."""
    found: list[Species] = []
    for entry in said.entries:
        line = placed.line
        if not claim(scope, Kind.SPECIES, line, entry.name):
            continue
        formula, matched = formula_of(said.role, entry, line, scope)
        cargo = None
        if said.role is Role.CARRIER:
            cargo, matched = cargo_of(entry, line, scope)
            formula = None
        ash, ash_sd = _ash(said.role, entry, line, scope.findings)
        species = Species(
            entry.name.text, said.role, formula, cargo, matched, ash, ash_sd,
            line.span(entry.name.start, entry.name.end),
        )  # fmt: skip
        scope.species[species.name] = species
        found.append(species)
    return tuple(found)


def _ash(
    role: Role, entry: s.Entry, line: LogicalLine, findings: Findings
) -> tuple[Fraction, Fraction]:
    """The share of ash in dry weight, and its sd."""
    zero = Fraction(0)
    if role is not Role.BIOMASS:
        return zero, zero
    if entry.ash is None:
        findings.add(
            Name.ASH_ASSUMED, f"no ash content is given for {entry.name.text}; 0 % is taken",
            line, entry.name, mend="write `ash 8 %` behind the formula",
        )  # fmt: skip
        return zero, zero
    scale = 100 if entry.ash_in_per_cent else 1
    ash = entry.ash.value / scale
    sd = entry.ash_error.value / scale if entry.ash_error else zero
    if ash >= 1:
        per_cent = entry.ash_in_per_cent
        findings.add(
            Name.BAD_ASH,
            f"an ash content of {entry.ash.text}{' %' if per_cent else ''} leaves no biomass",
            line, entry.ash,
            mend="give a share of dry weight below 100 %"
            if per_cent else f"write `ash {entry.ash.text} %`",
        )  # fmt: skip
        return zero, zero
    return ash, sd


def declare_parameter(placed: Placed, said: s.ParameterLine, scope: Scope) -> Parameter | None:
    """The parameter of one line."""
    if not claim(scope, Kind.PARAMETER, placed.line, said.assignment.name):
        return None
    parameter = read_assignment(placed.line, said.assignment, scope.findings)
    scope.parameters[parameter.name] = parameter
    return parameter


def read_assignment(line: LogicalLine, said: s.Assignment, findings: Findings) -> Parameter:
    """Value, sd and range as written."""
    value = said.value.value
    sd = None
    if said.error is not None:
        sd = said.error.number.value
        if said.error.relative:
            sd = abs(value) * sd / 100
    low = said.low.value if said.low else None
    high = said.high.value if said.high else None
    if low is not None and high is not None and said.low and said.high:
        if low > high:
            findings.add(
                Name.BAD_PARAMETER,
                f"the range of {said.name.text} runs from {said.low.text} down to "
                f"{said.high.text}",
                line, s.Word("", said.low.start, said.high.end),
                mend=f"write [{said.high.text}, {said.low.text}]",
                certain=[(said.low, said.high.text), (said.high, said.low.text)],
            )  # fmt: skip
            low, high = high, low
        if not low <= value <= high:
            findings.add(
                Name.OUTSIDE_RANGE,
                f"{said.name.text} = {said.value.text} lies outside its range "
                f"[{said.low.text}, {said.high.text}]",
                line, said.value, mend="correct the value or the range",
            )  # fmt: skip
    return Parameter(
        said.name.text, value, sd, low, high, line.span(said.name.start, said.name.end)
    )
