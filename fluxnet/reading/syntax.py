"""What one statement says, before any name is looked up. Places are offsets in its line."""

from __future__ import annotations

from dataclasses import dataclass
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


@dataclass(frozen=True, slots=True)
class TermText:
    """A species on one side of a reaction with its coefficient (None where there is none)."""

    coefficient: CoefficientText
    species: Word

    @property
    def start(self) -> int:
        """Where the term starts."""
        return self.species.start if self.coefficient is None else self.coefficient.start


@dataclass(frozen=True, slots=True)
class TitleLine:
    """``model TITLE``."""

    words: Word | None


@dataclass(frozen=True, slots=True)
class BasisLine:
    """``basis UNIT``."""

    unit: Word


@dataclass(frozen=True, slots=True)
class CargoText:
    """What stands behind ``carries``: nothing given for energy, a number or a formula else."""

    electrons: NumberText | None
    formula: Word | None
    start: int
    end: int


@dataclass(frozen=True, slots=True)
class Entry:
    """One species of a declaration."""

    name: Word
    formula: Word | None = None
    ash: NumberText | None = None
    ash_error: NumberText | None = None
    ash_in_per_cent: bool = True
    cargo: CargoText | None = None


@dataclass(frozen=True, slots=True)
class SpeciesLine:
    """``substrate``, ``product``, ``exchange``, ``biomass``, ``carrier``, ``inside``."""

    role: Role
    entries: tuple[Entry, ...]


@dataclass(frozen=True, slots=True)
class Assignment:
    """``NAME = VALUE ± SD in [LOW, HIGH]``."""

    name: Word
    value: NumberText
    error: ErrorText | None
    low: NumberText | None
    high: NumberText | None


@dataclass(frozen=True, slots=True)
class ParameterLine:
    """``parameter`` and its assignment."""

    assignment: Assignment


@dataclass(frozen=True, slots=True)
class SettingLine:
    """``set`` and its assignment, in a variant."""

    assignment: Assignment


@dataclass(frozen=True, slots=True)
class CompartmentLine:
    """``compartment NAME``."""

    name: Word


@dataclass(frozen=True, slots=True)
class ReactionLine:
    """``NAME : LEFT -> RIGHT``; a side of ``nothing`` has no terms."""

    name: Word
    left: tuple[TermText, ...]
    right: tuple[TermText, ...]
    arrow: Word
    reversible: bool


@dataclass(frozen=True, slots=True)
class SingleText:
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


@dataclass(frozen=True, slots=True)
class QuantityText:
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


@dataclass(frozen=True, slots=True)
class BoundText:
    """What stands behind the quantity of a limit; ``other`` is the far end of ``between``."""

    relation: Relation
    value: NumberText
    error: ErrorText | None
    way: Direction | None
    other: NumberText | None
    other_way: Direction | None
    start: int
    end: int


@dataclass(frozen=True, slots=True)
class LimitLine:
    """``limit QUANTITY BOUND``."""

    quantity: QuantityText
    bound: BoundText


@dataclass(frozen=True, slots=True)
class VariantLine:
    """``variant NAME "WORDS" from PARENTS``."""

    name: Word
    words: Word | None
    parents: tuple[Word, ...]


@dataclass(frozen=True, slots=True)
class AdditionLine:
    """``add to COMPARTMENT``."""

    compartment: Word


@dataclass(frozen=True, slots=True)
class DropLine:
    """``drop`` and what it takes away."""

    items: tuple[Word | QuantityText, ...]


@dataclass(frozen=True, slots=True)
class UseLine:
    """``use "FILE"``."""

    path: Word


@dataclass(frozen=True, slots=True)
class FreeLine:
    """``free NAMES``."""

    names: tuple[Word, ...]


@dataclass(frozen=True, slots=True)
class BalanceLine:
    """``balance NAMES``."""

    names: tuple[Word, ...]


@dataclass(frozen=True, slots=True)
class AcceptText:
    """``accept NAME: REASON``."""

    name: Word
    reason: Word


Line = (
    TitleLine | BasisLine | SpeciesLine | ParameterLine | SettingLine | CompartmentLine
    | ReactionLine | LimitLine | VariantLine | AdditionLine | DropLine | UseLine | FreeLine
    | BalanceLine
)


@dataclass(frozen=True, slots=True)
class Statement:
    """What one line says, and the warnings that it accepts."""

    line: Line
    acceptances: tuple[AcceptText, ...] = ()
