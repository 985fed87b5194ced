"""What one result shows: a sequence of sentences and tables, before any form is chosen."""

from __future__ import annotations

from dataclasses import dataclass
from enum import Enum

from fluxnet.ground.table import Table

__all__ = ["Block", "Heading", "Mood", "Sentence", "screen_tables"]


class Mood(Enum):
    """What a sentence says about the state of things; shown by a word, never colour alone."""

    PLAIN = "plain"
    GOOD = "good"
    BAD = "bad"
    DOUBTFUL = "doubtful"
    QUIET = "quiet"


@dataclass(frozen=True, slots=True)
class Heading:
    """The start of a part, such as a run."""

    text: str


@dataclass(frozen=True, slots=True)
class Sentence:
    """A sentence; ``verdict`` marks the one that ``--quiet`` keeps."""

    text: str
    mood: Mood = Mood.PLAIN
    verdict: bool = False


Block = Heading | Sentence | Table


def screen_tables(screen: tuple[Block, ...]) -> tuple[Table, ...]:
    """The tables of a screen, in order."""
    return tuple(block for block in screen if isinstance(block, Table))
