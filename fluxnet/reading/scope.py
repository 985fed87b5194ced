"""The names of a model: what is declared, where, and what was lost with a rejected line."""

from __future__ import annotations

from dataclasses import dataclass, field
from enum import Enum

from fluxnet.ground.source import Span
from fluxnet.network.model import Parameter, Reaction, Species
from fluxnet.reading.findings import Findings, Stretch
from fluxnet.reading.lines import LogicalLine
from fluxnet.reading.syntax import Word

__all__ = ["Kind", "Mention", "Scope"]


class Kind(Enum):
    """What a name stands for."""

    SPECIES = "species"
    PARAMETER = "parameter"
    REACTION = "reaction"


@dataclass(frozen=True, slots=True)
class Mention:
    """A name that was used but is not declared, for one report at its first use."""

    line: LogicalLine
    word: Word
    stretch: Stretch


@dataclass(slots=True)
class Scope:
    """The names that a statement sees.

    ``lost`` are words of rejected lines: they may have been declared there, so that no second
    error is made of them. A variant's scope starts as a copy of its parents'.
    """

    findings: Findings
    species: dict[str, Species] = field(default_factory=dict)
    parameters: dict[str, Parameter] = field(default_factory=dict)
    reactions: dict[str, Reaction] = field(default_factory=dict)
    places: dict[str, tuple[Kind, Span]] = field(default_factory=dict)
    folded: dict[str, str] = field(default_factory=dict)
    lost: frozenset[str] = frozenset()
    unknown: dict[str, list[Mention]] = field(default_factory=dict)
    used_parameters: set[str] = field(default_factory=set)

    def inner(self) -> Scope:
        """A scope inside this one: it sees all, and adds names of its own."""
        return Scope(
            self.findings, dict(self.species), dict(self.parameters), dict(self.reactions),
            dict(self.places), dict(self.folded), self.lost, self.unknown,
            self.used_parameters,
        )  # fmt: skip

    def mention(self, line: LogicalLine, word: Word, stretch: Stretch | None = None) -> None:
        """Note the use of a species that is not declared."""
        if word.text not in self.lost:
            mentions = self.unknown.setdefault(word.text, [])
            mentions.append(Mention(line, word, stretch or word))
