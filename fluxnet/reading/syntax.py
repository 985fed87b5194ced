"""What one statement says, before any name is looked up. Places are offsets in its line.

Named tuples, not dataclasses: there are many of them, and a check should start at once.
"""

from __future__ import annotations

from fractions import Fraction
from typing import NamedTuple

from fluxnet.network.model import Direction, Relation, Role

__all__ = [
    "AcceptText", "AdditionLine", "Assignment", "BalanceLine", "BasisLine", "BoundText",
    "BracketText", "CargoText", "CompartmentLine", "DropLine", "Entry", "ErrorText", "FreeLine",
    "LimitLine", "NameNode", "NumberNode", "NumberText", "OperationNode", "ParameterLine",
    "QuantityText", "ReactionLine", "SettingLine", "SingleText", "SpeciesLine", "Statement",
    "SumNode", "TermText", "TitleLine", "UnknownText", "UseLine", "VariantLine", "Word",
]


class Word(NamedTuple):
    """A piece of a line: its text, where it starts and one past its end."""

    text: str
    start: int
    end: int


class NumberText(NamedTuple):
    """A number as written, exact, with half a unit of its last written decimal."""

    text: str
    start: int
    end: int
    value: Fraction
    half_unit: Fraction


class ErrorText(NamedTuple):
    """What stands behind ``±``; ``relative`` where it is in per cent."""

    number: NumberText
    relative: bool


class NumberNode(NamedTuple):
    """A number inside brackets."""

    number: NumberText


class NameNode(NamedTuple):
    """A parameter inside brackets."""

    name: Word


class OperationNode(NamedTuple):
    """Two sides joined by ``+ - * /``; ``left`` is None for a leading minus."""

    sign: str
    left: SumNode | None
    right: SumNode
    start: int
    end: int


SumNode = NumberNode | NameNode | OperationNode


class BracketText(NamedTuple):
    """A coefficient in brackets."""

    content: SumNode
    start: int
    end: int


class UnknownText(NamedTuple):
    """A ``?``."""

    start: int
    end: int


CoefficientText = NumberText | Word | BracketText | UnknownText | None


class TermText(NamedTuple):
    """A species on one side of a reaction with its coefficient (None where there is none)."""

    coefficient: CoefficientText
    species: Word

    @property
    def start(self) -> int:
        """Where the term starts."""
        return self.species.start if self.coefficient is None else self.coefficient.start


class TitleLine(NamedTuple):
    """``model TITLE``."""

    words: Word | None


class BasisLine(NamedTuple):
    """``basis UNIT``."""

    unit: Word


class CargoText(NamedTuple):
    """What stands behind ``carries``: nothing given for energy, a number or a formula else."""

    electrons: NumberText | None
    formula: Word | None
    start: int
    end: int


class Entry(NamedTuple):
    """One species of a declaration."""

    name: Word
    formula: Word | None = None
    ash: NumberText | None = None
    ash_error: NumberText | None = None
    ash_in_per_cent: bool = True
    cargo: CargoText | None = None


class SpeciesLine(NamedTuple):
    """``substrate``, ``product``, ``exchange``, ``biomass``, ``carrier``, ``inside``."""

    role: Role
    entries: tuple[Entry, ...]


class Assignment(NamedTuple):
    """``NAME = VALUE ± SD in [LOW, HIGH]``."""

    name: Word
    value: NumberText
    error: ErrorText | None
    low: NumberText | None
    high: NumberText | None


class ParameterLine(NamedTuple):
    """``parameter`` and its assignment."""

    assignment: Assignment


class SettingLine(NamedTuple):
    """``set`` and its assignment, in a variant."""

    assignment: Assignment


class CompartmentLine(NamedTuple):
    """``compartment NAME``."""

    name: Word


class ReactionLine(NamedTuple):
    """``NAME : LEFT -> RIGHT``; a side of ``nothing`` has no terms."""

    name: Word
    left: tuple[TermText, ...]
    right: tuple[TermText, ...]
    arrow: Word
    reversible: bool


class SingleText(NamedTuple):
    """A species, reaction or ``mu`` of a limit."""

    name: Word
    way: Direction | None
    is_mu: bool = False
    is_flux: bool = False
    end: int = 0

    @property
    def start(self) -> int:
        """Where the name starts."""
        return self.name.start


class QuantityText(NamedTuple):
    """A single thing, or the ratio of two."""

    top: SingleText
    bottom: SingleText | None

    @property
    def start(self) -> int:
        """Where it starts."""
        return self.top.start

    @property
    def end(self) -> int:
        """One past its end."""
        return self.top.end if self.bottom is None else self.bottom.end


class BoundText(NamedTuple):
    """What stands behind the quantity of a limit; ``other`` is the far end of ``between``."""

    relation: Relation
    value: NumberText
    error: ErrorText | None
    way: Direction | None
    other: NumberText | None
    other_way: Direction | None
    start: int
    end: int


class LimitLine(NamedTuple):
    """``limit QUANTITY BOUND``."""

    quantity: QuantityText
    bound: BoundText


class VariantLine(NamedTuple):
    """``variant NAME "WORDS" from PARENTS``."""

    name: Word
    words: Word | None
    parents: tuple[Word, ...]


class AdditionLine(NamedTuple):
    """``add to COMPARTMENT``."""

    compartment: Word


class DropLine(NamedTuple):
    """``drop`` and what it takes away."""

    items: tuple[Word | QuantityText, ...]


class UseLine(NamedTuple):
    """``use "FILE"``."""

    path: Word


class FreeLine(NamedTuple):
    """``free NAMES``."""

    names: tuple[Word, ...]


class BalanceLine(NamedTuple):
    """``balance NAMES``."""

    names: tuple[Word, ...]


class AcceptText(NamedTuple):
    """``accept NAME: REASON``."""

    name: Word
    reason: Word


Line = (
    TitleLine | BasisLine | SpeciesLine | ParameterLine | SettingLine | CompartmentLine
    | ReactionLine | LimitLine | VariantLine | AdditionLine | DropLine | UseLine | FreeLine
    | BalanceLine
)


class Statement(NamedTuple):
    """What one line says, and the warnings that it accepts."""

    line: Line
    acceptances: tuple[AcceptText, ...] = ()
