"""Title, basis, compartments and acceptances of a model."""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

from fluxnet.ground.diagnostic import Acceptance
from fluxnet.ground.names import Name, Severity
from fluxnet.network.model import Basis, Compartment
from fluxnet.reading import syntax as s
from fluxnet.reading.blocks import Placed
from fluxnet.reading.findings import Findings, only_case_differs
from fluxnet.reading.loading import Loaded
from fluxnet.reading.scope import Scope, place_words

__all__ = ["Head", "read_basis", "resolve_acceptances", "resolve_compartments", "resolve_head"]

_SPELLINGS = {
    "mmol/g/h": Basis.SPECIFIC, "mmol/gdw/h": Basis.SPECIFIC, "mmol/(g*h)": Basis.SPECIFIC,
    "mmol/(gh)": Basis.SPECIFIC, "mmolg-1h-1": Basis.SPECIFIC, "c-mol/c-mol/h": Basis.CARBON,
    "cmol/cmol/h": Basis.CARBON, "mmol/l/h": Basis.VOLUMETRIC, "mm/h": Basis.VOLUMETRIC,
    "mmol/(l*h)": Basis.VOLUMETRIC, "mmol": Basis.AMOUNT,
}


class Head(NamedTuple):
    """Title and basis of the model that was named; those of used files do not count."""

    title: str
    basis: Basis


def read_basis(text: str) -> Basis | None:
    """The basis that a unit means, or None.

    Examples
    --------
    >>> read_basis("mmol/L/h"), read_basis("furlong") is None
    (<Basis.VOLUMETRIC: 'mmol/L/h'>, True)
    """
    return _SPELLINGS.get("".join(text.split()).casefold())


def resolve_head(loaded: Loaded, findings: Findings) -> Head:
    """Title and basis; a used file in another basis is told."""
    own = loaded.sources[0].file
    title: Placed | None = None
    bases: dict[str, tuple[Placed, Basis | None]] = {}
    for one in loaded.placed:
        said = one.statement.line
        if isinstance(said, s.TitleLine) and one.line.file == own:
            if title is not None:
                _twice(one, title, "title", findings)
            title = title or one
        elif isinstance(said, s.BasisLine):
            if one.line.file in bases:
                _twice(one, bases[one.line.file][0], "basis", findings)
            else:
                bases[one.line.file] = (one, _basis(one, said, findings))
    basis = bases[own][1] if own in bases else Basis.SPECIFIC
    if basis is not None:
        _compare_bases(loaded, basis, own, bases, findings)
    head = title.statement.line if title else None
    words = head.words.text if isinstance(head, s.TitleLine) and head.words else ""
    return Head(words.strip(), basis or Basis.SPECIFIC)


def _twice(one: Placed, first: Placed, what: str, findings: Findings) -> None:
    where = first.line.whole
    findings.add(
        Name.DECLARED_TWICE, f"the {what} is given twice (first in {place_words(where, one.line)})",
        one.line, mend="keep one of the two", also=[where],
    )


def _basis(one: Placed, said: s.BasisLine, findings: Findings) -> Basis | None:
    basis = read_basis(said.unit.text)
    bare = said.unit.text.lstrip("=: ")
    if basis is None and read_basis(bare) is not None:
        findings.add(
            Name.UNKNOWN_BASIS, f"{said.unit.text} is no basis", one.line, said.unit,
            mend=f"write {bare}", certain=[(said.unit, bare)],
        )
    elif basis is None:
        names = [b.value for b in Basis]
        near = findings.nearest(said.unit.text, names, 1)
        findings.add(
            Name.UNKNOWN_BASIS, f"{said.unit.text} is no basis", one.line, said.unit,
            mend=f"write {near[0]}" if near else f"write one of: {', '.join(names)}",
        )
    return basis


def _compare_bases(
    loaded: Loaded, basis: Basis, own: str, bases: dict[str, tuple[Placed, Basis | None]],
    findings: Findings,
) -> None:
    """Used files must be written in the model's basis (the usual one where none is given)."""
    for source in loaded.sources:
        if source.file == own:
            continue
        other = bases[source.file][1] if source.file in bases else Basis.SPECIFIC
        if other is None or other is basis:
            continue
        line = bases[source.file][0].line if source.file in bases else None
        if line is None:
            line = next(
                (p.line for p in loaded.placed
                 if p.line.file == source.file and isinstance(p.statement.line, s.LimitLine)),
                None,
            )
        if line is not None:
            findings.add(
                Name.BASIS_DIFFERS,
                f"{source.file} is written in {other.value}, the model in {basis.value}", line,
                mend=f"write both in {basis.value}",
            )


def resolve_compartments(loaded: Loaded, scope: Scope) -> tuple[Compartment, ...]:
    """The compartments; one may go on further down, or in a used file."""
    found: dict[str, Compartment] = {}
    for one in loaded.placed:
        said = one.statement.line
        if not isinstance(said, s.CompartmentLine) or said.name.text in found:
            continue
        span = one.line.span(said.name.start, said.name.end)
        twin = only_case_differs(said.name.text, found)
        if twin is not None:
            scope.findings.add(
                Name.CASE_DIFFERS,
                f"compartment {said.name.text} differs only in case from {twin} "
                f"({place_words(found[twin].span, one.line)})",
                one.line, said.name, mend=f"write {twin}, or rename one of the two",
                also=[found[twin].span],
            )
        found[said.name.text] = Compartment(said.name.text, span)
    _check_additions(loaded, found, scope)
    filled = {p.compartment.text for p in loaded.placed
              if p.compartment and isinstance(p.statement.line, s.ReactionLine)}
    filled.update(r.compartment for r in loaded.rejected if r.compartment)
    for compartment in found.values():
        if compartment.name not in filled:
            scope.findings.add_at(
                Name.EMPTY_COMPARTMENT, f"compartment {compartment.name} holds no reaction",
                compartment.span, mend="add its reactions, indented, or take it away",
            )
    return tuple(found.values())


def _check_additions(loaded: Loaded, found: dict[str, Compartment], scope: Scope) -> None:
    for one in loaded.placed:
        said = one.statement.line
        if not isinstance(said, s.AdditionLine) or said.compartment.text in found:
            continue
        name = said.compartment
        if name.text in scope.lost:
            continue
        near = scope.findings.nearest(name.text, found)
        twin = only_case_differs(name.text, found)
        scope.findings.add(
            Name.UNKNOWN_COMPARTMENT, f"no compartment is called {name.text}", one.line, name,
            mend=f"write {' or '.join(near)}" if near
            else f"the compartments are: {', '.join(found) or 'none'}",
            certain=[(name, twin)] if twin else [],
        )


def resolve_acceptances(
    placed: Sequence[Placed], findings: Findings
) -> tuple[Acceptance, ...]:
    """All acceptances; those of no diagnostic, or of an error, are told."""
    names = {n.value: n for n in Name}
    found: list[Acceptance] = []
    for one in placed:
        for said in one.statement.acceptances:
            name = names.get(said.name.text)
            if name is None:
                near = findings.nearest(said.name.text, names)
                findings.add(
                    Name.ACCEPT_UNKNOWN, f"no diagnostic is called {said.name.text}", one.line,
                    said.name, mend=f"write {' or '.join(near)}" if near
                    else "`fluxnet explain` lists the names",
                )
            elif name.severity is Severity.ERROR:
                findings.add(
                    Name.ACCEPT_UNKNOWN, f"{name.value} is an error: it cannot be accepted",
                    one.line, said.name, mend="mend it instead",
                )
            else:
                span = one.line.span(said.name.start, said.name.end)
                found.append(Acceptance(name, said.reason.text, span, one.line.number))
    return tuple(found)
