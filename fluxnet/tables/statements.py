"""Lines above a table: declarations of species, errors that the rates share, notes.

What can be declared is written as in a model::

    substrate yeast-extract CH1.6O0.5N0.2
    species broth CH1.9O0.6N0.15
    biomass X CH1.8O0.5N0.2 ash 8 %
    shared error biomass 4 %
    biomass concentration 4.2 ± 0.2 g/L
    nitrogen source urea

``species`` declares one that may go either way (so do ``exchange`` and, with their direction,
``substrate`` and ``product``). Every other line above the table is a note.
"""

from __future__ import annotations

import re
from dataclasses import field
from fractions import Fraction

from fluxnet.chemistry.catalogue import find_compound
from fluxnet.chemistry.reader import FormulaError, FormulaFault, read_formula
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.pattern import pattern_of
from fluxnet.ground.record import record
from fluxnet.ground.source import NOWHERE, Span
from fluxnet.network.model import Role, Species
from fluxnet.tables.grid import Cell, Row

__all__ = ["Statements", "joined", "read_statement"]

_ROLES = {r.value: r for r in (Role.SUBSTRATE, Role.PRODUCT, Role.EXCHANGE, Role.BIOMASS)}
_ROLES["species"] = Role.EXCHANGE
_NUMBER = r"\d+(?:[.,]\d+)?|\.\d+"
_DECLARATION = pattern_of(
    rf"(?P<role>{'|'.join(_ROLES)})\s+(?P<name>\S+)\s+(?P<formula>[A-Z(]\S*(?:\s+charge\s+\S+)?)"
    rf"(?:\s+ash\s+(?P<ash>{_NUMBER})(?:\s*(?:±|\+-)\s*(?P<ash_sd>{_NUMBER}))?\s*%)?"
)
_SHARED = pattern_of(r"shared\s+errors?\b(?P<rest>.*)", re.IGNORECASE)
_SHARED_REST = pattern_of(
    rf"\s*(?:of\s+)?(?P<what>[A-Za-z]*)\s*[:=]?\s*(?P<number>{_NUMBER})\s*%", re.IGNORECASE
)
_CONCENTRATION = pattern_of(
    r"biomass\s+concentration\s*[:=]?\s*(?P<number>[^A-Za-zµμ]*?)\s*(?P<unit>[A-Za-zµμ].*)?",
    re.IGNORECASE,
)
_NITROGEN = pattern_of(r"nitrogen\s+source\s*[:=]?\s*(?P<name>.+)", re.IGNORECASE)


@record
class Statements:
    """What stood above a table.

    ``shared_error`` is a fraction. ``concentration`` is the number behind ``biomass
    concentration`` with its place, read once the decimal sign is known.
    """

    species: tuple[Species, ...] = ()
    shared_error: float | None = None
    concentration: Cell | None = None
    concentration_unit: str = ""
    nitrogen: str | None = None
    notes: tuple[str, ...] = ()
    diagnostics: tuple[Diagnostic, ...] = field(default=())


def read_statement(row: Row) -> Statements | None:
    """What a line above the table says; None where it is no statement."""
    # a separator may stand inside a name or number (2,3-butanediol), or between the words
    cells = " ".join(c.text for c in row.cells if c.text)
    whole = row.text.strip().rstrip(",;\t ").strip('"').strip()
    for text in dict.fromkeys((" ".join(whole.split()), cells)):
        statement = _statement(text, row.span)
        if statement is not None and not statement.diagnostics:
            return statement
    return _statement(cells, row.span)


def _statement(text: str, span: Span) -> Statements | None:
    shared = _SHARED.fullmatch(text)
    if shared is not None:
        rest = _SHARED_REST.fullmatch(shared["rest"])
        if rest is None or rest["what"].lower() not in ("", "biomass"):
            return Statements(diagnostics=(_bad_shared(text, span),))
        return Statements(shared_error=_number(rest["number"]) / 100)
    concentration = _CONCENTRATION.fullmatch(text)
    if concentration is not None:
        number = Cell(concentration["number"], 0, span)
        return Statements(concentration=number, concentration_unit=concentration["unit"] or "")
    nitrogen = _NITROGEN.fullmatch(text)
    if nitrogen is not None:
        return Statements(nitrogen=nitrogen["name"].strip())
    declaration = _DECLARATION.fullmatch(text)
    return None if declaration is None else _declared(declaration, text, span)


def joined(first: Statements, second: Statements, span: Span = NOWHERE) -> Statements:
    """Two sets of statements as one; two different values of one thing are a fault.

    Parameters
    ----------
    span
        The line of the second.
    """
    pairs = (
        ("the shared error", first.shared_error, second.shared_error),
        ("the biomass concentration", _text(first.concentration), _text(second.concentration)),
        ("the nitrogen source", first.nitrogen, second.nitrogen),
    )
    clashes = tuple(
        Diagnostic(
            Name.ROW_REPEATED,
            f"{what} is given twice above the table, differently",
            span,
            mend="keep one of the lines; values that differ by run stand in a column",
        )
        for what, one, other in pairs
        if one is not None and other is not None and one != other
    )
    return Statements(
        first.species + second.species,
        first.shared_error if second.shared_error is None else second.shared_error,
        second.concentration or first.concentration,
        second.concentration_unit or first.concentration_unit,
        second.nitrogen or first.nitrogen,
        first.notes + second.notes,
        first.diagnostics + second.diagnostics + clashes,
    )


def _text(cell: Cell | None) -> str | None:
    return None if cell is None else cell.text


def _declared(found: re.Match[str], text: str, span: Span) -> Statements:
    role = _ROLES[found["role"]]
    try:
        formula = read_formula(found["formula"])
    except FormulaError as fault:
        name = Name.BAD_FORMULA if fault.kind is FormulaFault.BAD else Name.UNKNOWN_ELEMENT
        start = span.column + found.start("formula")
        place = Span(span.file, span.line, start + fault.position, start + fault.end)
        message = f"the formula of {found['name']} cannot be read: {fault}"
        return Statements(diagnostics=(Diagnostic(name, message, place, source_line=text),))
    faults: list[Diagnostic] = []
    ash = _fraction(found["ash"]) / 100 if found["ash"] else Fraction(0)
    ash_sd = _fraction(found["ash_sd"]) / 100 if found["ash_sd"] else Fraction(0)
    if role is Role.BIOMASS and not formula.count("C"):
        message = f"the formula of the biomass {found['name']} holds no carbon"
        faults.append(Diagnostic(Name.BIOMASS_WITHOUT_CARBON, message, span, source_line=text))
    if ash >= 1:
        message = f"an ash content of {found['ash']} % leaves no organic mass"
        faults.append(Diagnostic(Name.UNREADABLE_CELL, message, span, source_line=text))
        ash = Fraction(0)
    compound = None if role is Role.BIOMASS else find_compound(found["name"])
    entry = compound.name if compound is not None else None
    species = Species(found["name"], role, formula, entry=entry, ash=ash, ash_sd=ash_sd, span=span)
    return Statements(species=(species,), diagnostics=tuple(faults))


def _bad_shared(text: str, span: Span) -> Diagnostic:
    return Diagnostic(
        Name.UNREADABLE_CELL,
        f"`{text}` does not say what error the rates share",
        span,
        mend="write: shared error biomass 4 %",
        source_line=text,
    )


def _number(text: str) -> float:
    return float(text.replace(",", "."))


def _fraction(text: str) -> Fraction:
    return Fraction(text.replace(",", "."))
