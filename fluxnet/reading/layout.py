"""One statement laid out: its words in cells, which are then set in columns."""

from __future__ import annotations

from typing import NamedTuple

from fluxnet.reading import syntax as s

__all__ = ["Cells", "lay_out"]


class Cells(NamedTuple):
    """The first word, a name that stands in a column of its own (empty: none), the rest.

    ``word`` of a reaction is empty, its ``name`` the reaction's and ``rest`` starts with the
    colon.
    """

    word: str
    name: str
    rest: str

    @property
    def is_reaction(self) -> bool:
        """Whether the statement is a reaction."""
        return not self.word


def lay_out(statement: s.Statement, text: str) -> Cells:
    """The cells of a statement, whose logical line is ``text``.

    Parameters
    ----------
    statement
        What :func:`fluxnet.reading.parsing.parse_statement` made of the line.
    text
        The logical line, from which coefficients and formulas are taken as typed.

    Examples
    --------
    >>> from fluxnet.reading.parsing import parse_statement
    >>> text = "pdh:pyruvate->CO2+2 NADH"
    >>> cells = lay_out(parse_statement(text), text)
    >>> cells.name, cells.rest
    ('pdh', ': pyruvate -> CO2 + 2 NADH')
    """
    cells = _cells(statement.line, text)
    for accept in statement.acceptances:
        said = f"accept {accept.name.text}: {accept.reason.text.strip()}"
        cells = Cells(cells.word, cells.name, f"{cells.rest}  {said}".strip())
    return cells


def _cells(said: s.Line, text: str) -> Cells:
    match said:
        case s.TitleLine():
            return Cells("model", "", said.words.text.strip() if said.words else "")
        case s.BasisLine():
            return Cells("basis", "", said.unit.text.strip())
        case s.SpeciesLine():
            return _species(said, text)
        case s.ParameterLine():
            return _assignment("parameter", said.assignment)
        case s.SettingLine():
            return _assignment("set", said.assignment)
        case s.ReactionLine():
            sign = "<->" if said.reversible else "->"
            sides = f"{_side(said.left, text)} {sign} {_side(said.right, text)}"
            return Cells("", said.name.text, f": {sides}")
        case s.LimitLine():
            return Cells("limit", "", f"{_quantity(said.quantity)} {_bound(said.bound)}")
        case _:
            return _block_or_list(said)


def _block_or_list(said: s.Line) -> Cells:
    match said:
        case s.CompartmentLine():
            return Cells("compartment", "", said.name.text)
        case s.VariantLine():
            words = f' "{said.words.text}"' if said.words else ""
            parents = ", ".join(p.text for p in said.parents)
            return Cells(
                "variant", "", f"{said.name.text}{words}{f' from {parents}' if parents else ''}"
            )
        case s.AdditionLine():
            return Cells("add to", "", said.compartment.text)
        case s.UseLine():
            return Cells("use", "", f'"{said.path.text}"')
        case s.DropLine():
            items = [i.text if isinstance(i, s.Word) else f"limit {_quantity(i)}"
                     for i in said.items]
            return Cells("drop", "", ", ".join(items))
        case s.FreeLine() | s.BalanceLine():
            word = "free" if isinstance(said, s.FreeLine) else "balance"
            return Cells(word, "", ", ".join(n.text for n in said.names))
    raise AssertionError(f"a statement without a layout: {said!r}")


def _species(said: s.SpeciesLine, text: str) -> Cells:
    if len(said.entries) == 1:
        entry = said.entries[0]
        return Cells(said.role.value, entry.name.text, _behind(entry, text))
    entries = [f"{e.name.text} {_behind(e, text)}".strip() for e in said.entries]
    return Cells(said.role.value, "", ", ".join(entries))


def _behind(entry: s.Entry, text: str) -> str:
    """What stands behind the name of a species."""
    parts: list[str] = []
    if entry.formula is not None:
        parts.append(" ".join(entry.formula.text.split()))
    if entry.ash is not None:
        unit = " %" if entry.ash_in_per_cent else ""
        error = f" ± {entry.ash_error.text}" if entry.ash_error else ""
        parts.append(f" ash {entry.ash.text}{error}{unit}" if parts else
                     f"ash {entry.ash.text}{error}{unit}")
    if entry.cargo is not None:
        parts.append(f"carries {' '.join(text[entry.cargo.start : entry.cargo.end].split())}")
    return " ".join(parts)


def _assignment(word: str, said: s.Assignment) -> Cells:
    rest = f"= {said.value.text}{_error(said.error)}"
    if said.low is not None and said.high is not None:
        rest += f"  in [{said.low.text}, {said.high.text}]"
    return Cells(word, said.name.text, rest)


def _error(error: s.ErrorText | None) -> str:
    if error is None:
        return ""
    return f" ± {error.number.text}{' %' if error.relative else ''}"


def _side(terms: tuple[s.TermText, ...], text: str) -> str:
    return " + ".join(_term(t, text) for t in terms) or "nothing"


def _term(term: s.TermText, text: str) -> str:
    given = term.coefficient
    if given is None:
        return term.species.text
    return f"{' '.join(text[given.start : given.end].split())} {term.species.text}"


def _quantity(said: s.QuantityText) -> str:
    if said.bottom is None:
        return _single(said.top)
    return f"{_single(said.top)} / {_single(said.bottom)}"


def _single(said: s.SingleText) -> str:
    lead = "flux " if said.is_flux else ""
    return f"{lead}{said.name.text}{f' {said.way.value}' if said.way else ''}"


def _bound(said: s.BoundText) -> str:
    if said.other is None:
        return f"{said.relation.value} {said.value.text}{_error(said.error)}"
    ways = [f"{w.value} " if w else "" for w in (said.way, said.other_way)]
    return f"between {ways[0]}{said.value.text} and {ways[1]}{said.other.text}"
