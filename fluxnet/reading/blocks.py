"""Blocks: which compartment or variant a statement stands in, told by indentation."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable
from dataclasses import dataclass, field
from typing import NamedTuple

from fluxnet.ground.names import Name
from fluxnet.reading import syntax as s
from fluxnet.reading.findings import Findings
from fluxnet.reading.lines import LogicalLine
from fluxnet.reading.parsing import Unparsed

__all__ = ["Placed", "Rejected", "place_statements"]


class Placed(NamedTuple):
    """A statement with its line and the block that it stands in.

    ``compartment`` is the compartment's name for a reaction in one; ``variant`` the variant's.
    """

    line: LogicalLine
    statement: s.Statement
    compartment: s.Word | None = None
    variant: s.Word | None = None


class Rejected(NamedTuple):
    """A line that could not be read, and the compartment that it stands in."""

    line: LogicalLine
    compartment: str | None


@dataclass(slots=True, eq=False, repr=False)
class _Block:
    """An open block: ``head`` is None where the line that should open it was rejected."""

    indentation: int
    head: s.CompartmentLine | s.VariantLine | s.AdditionLine | None
    indentations: Counter[int] = field(default_factory=Counter)

    @property
    def usual(self) -> int:
        """How most of its lines are indented; of several, as the first is."""
        return self.indentations.most_common(1)[0][0]


_IN_VARIANT = (s.LimitLine, s.SettingLine, s.DropLine, s.AdditionLine, s.SpeciesLine)
_ONLY_IN_VARIANT = (s.SettingLine, s.DropLine, s.AdditionLine)


def place_statements(
    lines: Iterable[tuple[LogicalLine, s.Statement | Unparsed]], findings: Findings
) -> tuple[tuple[Placed, ...], tuple[Rejected, ...]]:
    """Put every statement into its block, and say which lines were rejected.

    Parameters
    ----------
    lines
        The lines of one file with what the parser made of them.
    findings
        Takes what is wrong.
    """
    listed = list(lines)
    base = min((line.indentation for line, _ in listed), default=0)
    blocks: list[_Block] = []
    around: list[tuple[_Block, ...]] = []
    for line, statement in listed:
        while blocks and line.indentation <= blocks[-1].indentation:
            blocks.pop()
        around.append(tuple(blocks))
        if blocks:
            blocks[-1].indentations[line.indentation] += 1
        if isinstance(statement, Unparsed):
            blocks.append(_Block(line.indentation, None))
        elif isinstance(statement.line, (s.CompartmentLine, s.VariantLine, s.AdditionLine)):
            blocks.append(_Block(line.indentation, statement.line))
    placed: list[Placed] = []
    rejected: list[Rejected] = []
    for (line, statement), outer in zip(listed, around, strict=True):
        compartment, variant = _names_of(outer)
        if isinstance(statement, Unparsed):
            rejected.append(Rejected(line, compartment.text if compartment else None))
            continue
        placed.append(Placed(line, statement, compartment, variant))
        if all(block.head is not None for block in outer):
            _check_place(line, statement.line, outer, base, findings)
    return tuple(placed), tuple(rejected)


def _check_place(
    line: LogicalLine, said: s.Line, outer: tuple[_Block, ...], base: int, findings: Findings
) -> None:
    """Tell a line that is not indented as most lines of its block are, or belongs elsewhere."""
    wanted = outer[-1].usual if outer else line.indentation
    if line.indentation != wanted:
        findings.add(
            Name.BAD_INDENTATION,
            f"this line is indented by {line.indentation} columns, its block by {wanted}",
            line, mend=f"indent it by {wanted}",
        )
    else:
        _check_block(line, said, outer, base, findings)


def _names_of(blocks: Iterable[_Block]) -> tuple[s.Word | None, s.Word | None]:
    """The compartment and the variant of the innermost open block."""
    compartment = variant = None
    for block in blocks:
        if isinstance(block.head, s.VariantLine):
            variant = block.head.name
        elif isinstance(block.head, s.CompartmentLine):
            compartment = block.head.name
        elif isinstance(block.head, s.AdditionLine):
            compartment = block.head.compartment
    return compartment, variant


def _check_block(
    line: LogicalLine, said: s.Line, blocks: tuple[_Block, ...], base: int, findings: Findings
) -> None:
    head = blocks[-1].head if blocks else None
    if isinstance(said, s.ReactionLine):
        if not isinstance(head, (s.CompartmentLine, s.AdditionLine)):
            _outside(line, said, head, findings)
        return
    if isinstance(head, s.VariantLine) and isinstance(said, _IN_VARIANT):
        return
    word = line.text.split(maxsplit=1)[0]
    if head is not None:
        kind = {s.VariantLine: "a variant", s.CompartmentLine: "a compartment"}.get(
            type(head), "an addition"
        )
        findings.add(
            Name.BAD_INDENTATION,
            f"`{word}` stands inside {kind}, where it has no meaning",
            line, mend=f"begin the line with `{word}`, not indented",
        )
    elif line.indentation > base:
        findings.add(
            Name.BAD_INDENTATION,
            "this line is indented, but the line above opens no block",
            line, mend="begin it as far left as the other statements",
        )
    elif isinstance(said, _ONLY_IN_VARIANT):
        findings.add(
            Name.BAD_INDENTATION,
            f"`{word}` changes a variant, but it stands in none",
            line, mend="indent it under its `variant NAME` line",
        )


def _outside(
    line: LogicalLine, said: s.ReactionLine, head: object, findings: Findings
) -> None:
    if isinstance(head, s.VariantLine):
        findings.add(
            Name.REACTION_OUTSIDE,
            f"reaction {said.name.text} stands in a variant, but in no compartment",
            line, said.name, mend="put it under `add to COMPARTMENT`, indented",
        )
        return
    findings.add(
        Name.REACTION_OUTSIDE,
        f"reaction {said.name.text} stands in no compartment",
        line, said.name, mend="put it under a `compartment NAME` line and indent it",
    )
