"""The names of a model: what is declared, where, and what was lost with a rejected line."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field
from enum import Enum
from typing import NamedTuple

from fluxnet.ground.names import Name
from fluxnet.ground.pattern import pattern_of
from fluxnet.ground.source import Span
from fluxnet.network.model import Parameter, Reaction, Species
from fluxnet.network.variant_changes import Doubt
from fluxnet.reading.fault_record import NAME
from fluxnet.reading.findings import Findings
from fluxnet.reading.lines import LogicalLine
from fluxnet.reading.syntax import Word

__all__ = ["Kind", "Mention", "Scope", "claim", "names_lost", "place_words", "words_of"]

RESERVED = {"nothing": "the empty side of a reaction", "mu": "the specific growth rate"}


class Kind(Enum):
    """What a name stands for."""

    SPECIES = "species"
    PARAMETER = "parameter"
    REACTION = "reaction"


class Mention(NamedTuple):
    """A use of a species that is not declared."""

    line: LogicalLine
    word: Word


@dataclass(slots=True, eq=False, repr=False)
class Scope:
    """The names that a statement sees.

    ``lost`` are names that a rejected line may have declared, so that no second error is made
    of them; ``named`` are all words of rejected lines, ``dropped`` those of rejected ``drop``
    lines. ``broken`` are species whose declaration has a fault, ``unlimited`` what limits with
    a fault are on. ``variants`` are the scopes of the variants.
    """

    findings: Findings
    species: dict[str, Species] = field(default_factory=dict)
    parameters: dict[str, Parameter] = field(default_factory=dict)
    reactions: dict[str, Reaction] = field(default_factory=dict)
    places: dict[str, tuple[Kind, Span]] = field(default_factory=dict)
    folded: dict[str, str] = field(default_factory=dict)
    variant: str | None = None
    lost: set[str] = field(default_factory=set)
    named: set[str] = field(default_factory=set)
    dropped: set[str] = field(default_factory=set)
    unknown: dict[str, list[Mention]] = field(default_factory=dict)
    used_parameters: set[str] = field(default_factory=set)
    broken: set[str] = field(default_factory=set)
    unlimited: set[str] = field(default_factory=set)
    variants: dict[str, Scope] = field(default_factory=dict)

    @property
    def doubt(self) -> Doubt:
        """What faulty lines may have said, as the network's own checks take it."""
        return Doubt(
            frozenset(self.lost | self.broken), frozenset(self.lost | self.dropped),
            frozenset(self.named | self.unlimited),
        )

    def inner(self, variant: str) -> Scope:
        """The scope of a variant: it sees all names of this one, and adds its own."""
        return Scope(
            self.findings, dict(self.species), dict(self.parameters), dict(self.reactions),
            dict(self.places), dict(self.folded), variant, self.lost, self.named, self.dropped,
            self.unknown, self.used_parameters, self.broken, self.unlimited, self.variants,
        )

    def twin(self, name: str, *kinds: Kind) -> str | None:
        """The declared name, of one of these kinds, that differs from this one only in case."""
        twin = self.folded.get(name.casefold())
        return twin if twin not in (None, name) and self.places[twin][0] in kinds else None

    def mention(self, line: LogicalLine, word: Word) -> None:
        """Note the use of a species that is not declared."""
        if word.text not in self.lost:
            self.unknown.setdefault(word.text, []).append(Mention(line, word))


_NAMES = pattern_of(NAME)
_LABEL = pattern_of(rf"\s*({NAME})\s*:")
_ARROW = pattern_of(r"->|=>|→|⇌|<-")
_DECLARE_NOTHING = (["limit"], ["drop"], ["set"])
_LETTERS = pattern_of(r"[^\W\d]\w*")


def words_of(texts: Iterable[str]) -> set[str]:
    """All words of some lines, also those that digits touch.

    Examples
    --------
    >>> sorted(words_of(["limit CO2 << 3x"]))
    ['3x', 'CO2', 'limit', 'x']
    """
    listed = tuple(texts)
    names = {match[0] for text in listed for match in _NAMES.finditer(text)}
    return names | {match[0] for text in listed for match in _LETTERS.finditer(text)}


def names_lost(texts: Iterable[str]) -> set[str]:
    """The names that rejected lines may have declared: of a reaction only its own.

    Examples
    --------
    >>> sorted(names_lost(["inside citrat ; malate", "pdh : pyruvate => CO2", "limit CO2 << 3"]))
    ['citrat', 'inside', 'malate', 'pdh']
    """
    found: set[str] = set()
    for text in texts:
        label = _LABEL.match(text)
        if label or _ARROW.search(text):
            found.update([label[1]] if label else [text.split()[0]])
        elif text.split()[:1] not in _DECLARE_NOTHING:
            found |= words_of([text])
    return found


def claim(scope: Scope, kind: Kind, line: LogicalLine, word: Word) -> bool:
    """Whether a name is free to be declared; else say why not.

    Parameters
    ----------
    scope
        The names that the line sees; its findings take what is wrong.
    kind
        What the name is to stand for.
    line
        The logical line, for places.
    word
        The name as typed.
    """
    name = word.text
    if name in RESERVED:
        scope.findings.add(
            Name.RESERVED_NAME, f"`{name}` cannot be a name: it is {RESERVED[name]}",
            line, word, mend="choose another name",
        )
        return False
    if name in scope.places:
        before, where = scope.places[name]
        what = "is declared twice" if before is kind else f"is the name of a {before.value} already"
        scope.findings.add(
            Name.DECLARED_TWICE, f"{name} {what} (first in {place_words(where, line)})", line, word,
            mend="take one of the two away, or rename it", also=[where],
        )
        return False
    twin = scope.folded.get(name.casefold())
    if twin is not None:
        where = scope.places[twin][1]
        scope.findings.add(
            Name.CASE_DIFFERS,
            f"{name} differs only in case from {twin} ({place_words(where, line)})",
            line, word, mend=f"rename one of the two, or write {twin}", also=[where],
        )
    scope.places[name] = (kind, line.span(word.start, word.end))
    scope.folded.setdefault(name.casefold(), name)
    return True


def place_words(where: Span, line: LogicalLine) -> str:
    """``line 3``, with the file where it is another one."""
    return f"line {where.line}" if where.file == line.file else f"{where.file}, line {where.line}"
