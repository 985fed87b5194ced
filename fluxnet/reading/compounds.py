"""What a declared species holds: its formula or cargo, given or of the catalogue."""

from __future__ import annotations

from fractions import Fraction

from fluxnet.chemistry.catalogue import Compound, CompoundKind, load_catalogue
from fluxnet.chemistry.formula import Formula, degree_of_reduction
from fluxnet.chemistry.reader import FormulaError, FormulaFault, read_formula
from fluxnet.ground.names import Name
from fluxnet.network.model import Cargo, CargoKind, Role
from fluxnet.reading import syntax as s
from fluxnet.reading.lines import LogicalLine
from fluxnet.reading.scope import Scope

__all__ = ["cargo_of", "formula_of"]


def formula_of(
    role: Role, entry: s.Entry, line: LogicalLine, scope: Scope
) -> tuple[Formula | None, str | None]:
    """The formula of a species that is no carrier, and the catalogue entry it matches.

    Parameters
    ----------
    role
        The role that the entry is declared with.
    entry
        Name, formula and ash as typed.
    line
        The logical line, for places.
    scope
        The names that the line sees; its findings take what is wrong.
    """
    compound = _compound(entry.name.text)
    if role is Role.BIOMASS:
        return _biomass_formula(entry, compound, line, scope), None
    if entry.formula is None:
        if compound is not None and not compound.kind.is_carrier:
            return compound.formula, compound.name
        if role.is_boundary:
            near = scope.findings.nearest_in_catalogue(entry.name.text)
            scope.findings.add(
                Name.FORMULA_NEEDED,
                f"{entry.name.text} crosses the boundary, but has no formula and is not in the "
                "catalogue",
                line, entry.name,
                mend="write its formula behind the name"
                + (f", or one of these names: {', '.join(near)}" if near else ""),
            )
        return None, None
    if compound is not None and _is_second_name(entry, compound, line, scope):
        return compound.formula, compound.name
    formula = _read(entry.formula, line, scope)
    if formula is None:
        return None, None
    if compound is None:
        return formula, None
    if not _agree(formula, compound.formula):
        scope.findings.add(
            Name.FORMULA_DIFFERS,
            f"{entry.name.text} is {compound.formula.written} in the catalogue, not "
            f"{entry.formula.text}",
            line, entry.formula,
            because="the two differ by more than water and protons",
            mend=f"leave the formula out ({compound.formula.written} is then taken), or give "
            "the species another name",
        )
    return formula, compound.name


def _biomass_formula(
    entry: s.Entry, compound: Compound | None, line: LogicalLine, scope: Scope
) -> Formula | None:
    """The formula of biomass: its own, or that of the catalogue's biomass."""
    if entry.formula is not None:
        formula = _read(entry.formula, line, scope)
        if formula is not None and not formula.count("C"):
            scope.findings.add(
                Name.BIOMASS_WITHOUT_CARBON,
                f"the formula of {entry.name.text} holds no carbon", line, entry.formula,
                mend="write one C-mol of biomass, for example CH1.8O0.5N0.2",
            )
        return formula
    if compound is not None and compound.kind is CompoundKind.BIOMASS:
        return compound.formula
    scope.findings.add(
        Name.FORMULA_NEEDED, f"the biomass {entry.name.text} has no formula", line, entry.name,
        mend="write it behind the name, for example CH1.8O0.5N0.2",
    )
    return None


def _compound(name: str) -> Compound | None:
    return load_catalogue().find(name)


def _is_second_name(entry: s.Entry, compound: Compound, line: LogicalLine, scope: Scope) -> bool:
    """Whether what stands as the formula is the name of another compound."""
    assert entry.formula is not None
    other = load_catalogue().find(entry.formula.text)
    if other is None or other.name == compound.name:
        return False
    if _same_counts(other.formula, compound.formula):
        return False
    gap = s.Word("", entry.name.end, entry.name.end)
    scope.findings.add(
        Name.MISSING_COMMA,
        f"{entry.name.text} is {compound.formula.written}, not {entry.formula.text}: a comma is "
        "missing between two names",
        line, s.Word("", entry.name.start, entry.formula.end),
        mend=f"write `{entry.name.text}, {entry.formula.text}`", certain=[(gap, ",")],
    )
    scope.lost.add(entry.formula.text)
    return True


def _same_counts(one: Formula, other: Formula) -> bool:
    return dict(one.counts) == dict(other.counts)


def _agree(one: Formula, other: Formula) -> bool:
    """Whether two formulas differ only by water and protons (and by rounding as written)."""
    elements = set(one.elements) | set(other.elements)
    for element in elements - {"H", "O"}:
        slack = one.half_unit(element) + other.half_unit(element)
        if abs(one.count(element) - other.count(element)) > slack:
            return False
    first, second = degree_of_reduction(one), degree_of_reduction(other)
    if first is None or second is None:
        return True
    slack = sum((8 * half for _, half in (*one.half_units, *other.half_units)), first * 0)
    return abs(first - second) <= slack


def _read(word: s.Word, line: LogicalLine, scope: Scope) -> Formula | None:
    try:
        return read_formula(word.text)
    except FormulaError as error:
        unknown = error.kind is FormulaFault.UNKNOWN_ELEMENT
        scope.findings.add(
            Name.UNKNOWN_ELEMENT if unknown else Name.BAD_FORMULA,
            f"the formula {word.text} cannot be read: {error}",
            line, s.Word("", word.start + error.position, word.start + error.end),
            mend="check upper and lower case: Co is cobalt, CO carbon and oxygen"
            if unknown else "write elements with counts, for example C6H12O6",
        )
        return None


def cargo_of(
    entry: s.Entry, line: LogicalLine, scope: Scope, *, phosphate: bool = False
) -> tuple[Cargo | None, str | None]:
    """What a carrier carries, and the catalogue entry it matches.

    Where the model balances phosphate the catalogue's energy carriers carry HPO3.

    Parameters
    ----------
    entry
        Name and cargo as typed.
    line
        The logical line, for places.
    scope
        The names that the line sees; its findings take what is wrong.
    phosphate
        Whether the model balances phosphate: ATP then carries it.
    """
    compound = _compound(entry.name.text)
    if compound is not None and not compound.kind.is_carrier:
        compound = None
    matched = compound.name if compound else None
    said = entry.cargo
    if said is None:
        return _cargo_of_catalogue(entry, compound, line, scope, phosphate), matched
    if said.electrons is not None:
        return _electrons(entry, said, said.electrons, compound, line, scope), matched
    if said.formula is None:
        if phosphate and compound is not None and not compound.formula.counts:
            scope.findings.add(
                Name.BAD_CARGO,
                f"the model balances phosphate, so {entry.name.text} carries HPO3", line, said,
                mend="write `carries HPO3`", certain=[(said, "HPO3")],
            )
        return Cargo(CargoKind.ENERGY), matched
    formula = _read(said.formula, line, scope)
    if formula is None:
        return None, None
    return _group(formula, known="charge" in said.formula.text or formula.charge != 0), matched


def _cargo_of_catalogue(
    entry: s.Entry, compound: Compound | None, line: LogicalLine, scope: Scope, phosphate: bool
) -> Cargo | None:
    if compound is None:
        scope.findings.add(
            Name.BAD_CARGO, f"it is not said what {entry.name.text} carries", line, entry.name,
            mend="write `carries energy`, `carries 2 electrons` or `carries` and a formula",
        )
        return None
    if compound.formula.counts:
        return _group(compound.formula, known=True)
    return _group(read_formula("HPO3"), known=False) if phosphate else Cargo(CargoKind.ENERGY)


def _electrons(
    entry: s.Entry, said: s.CargoText, number: s.NumberText, compound: Compound | None,
    line: LogicalLine, scope: Scope,
) -> Cargo | None:
    if number.value <= 0:
        scope.findings.add(
            Name.BAD_CARGO, f"{entry.name.text} carries no electrons", line, said,
            mend="write `carries energy` if it carries none",
        )
        return None
    known = degree_of_reduction(compound.formula) if compound is not None else None
    if compound is not None and known and known != number.value:
        scope.findings.add(
            Name.FORMULA_DIFFERS,
            f"{compound.name} carries {known} electrons in the catalogue, not {number.text}",
            line, said, mend=f"write `carries {known} electrons`, or give the carrier another name",
        )
    return Cargo(CargoKind.ELECTRONS, number.value)


def _group(formula: Formula, *, known: bool) -> Cargo:
    electrons = degree_of_reduction(formula)
    return Cargo(CargoKind.GROUP, electrons or Fraction(0), formula, known)
