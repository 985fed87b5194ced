"""Blocks: which compartment or variant a statement stands in, told by indentation."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
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
    inner: int | None = None


_IN_VARIANT = (s.LimitLine, s.SettingLine, s.DropLine, s.AdditionLine, s.SpeciesLine)
_ONLY_IN_VARIANT = (s.SettingLine, s.DropLine, s.AdditionLine)


def place_statements(
    lines: Iterable[tuple[LogicalLine, s.Statement | Unparsed]], findings: Findings
) -> tuple[tuple[Placed, ...], tuple[Rejected, ...]]:
    """Put every statement into its block, and say which lines were rejected."""
    listed = list(lines)
    base = min((line.indentation for line, _ in listed), default=0)
    blocks: list[_Block] = []
    placed: list[Placed] = []
    rejected: list[Rejected] = []
    for line, statement in listed:
        while blocks and line.indentation <= blocks[-1].indentation:
            blocks.pop()
        if isinstance(statement, Unparsed):
            _settle(line, blocks)
            compartment, _ = _names_of(blocks)
            rejected.append(Rejected(line, compartment.text if compartment else None))
            blocks.append(_Block(line.indentation, None))
            continue
        placed.append(_place(line, statement, blocks, base, findings))
        if isinstance(statement.line, (s.CompartmentLine, s.VariantLine, s.AdditionLine)):
            blocks.append(_Block(line.indentation, statement.line))
    return tuple(placed), tuple(rejected)


def _settle(line: LogicalLine, blocks: list[_Block]) -> bool:
    """Whether a line is indented as its block is; the first line of a block decides."""
    if not blocks:
        return True
    if blocks[-1].inner is None:
        blocks[-1].inner = line.indentation
    return blocks[-1].inner == line.indentation


def _place(
    line: LogicalLine,
    statement: s.Statement,
    blocks: list[_Block],
    base: int,
    findings: Findings,
) -> Placed:
    in_step = _settle(line, blocks)
    compartment, variant = _names_of(blocks)
    if not any(block.head is None for block in blocks):
        if not in_step:
            _out_of_step(line, blocks[-1], findings)
        else:
            _check_block(line, statement.line, blocks, base, findings)
    return Placed(line, statement, compartment, variant)


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


def _out_of_step(line: LogicalLine, block: _Block, findings: Findings) -> None:
    wanted = block.inner or 0
    findings.add(
        Name.BAD_INDENTATION,
        f"this line is indented by {line.indentation} columns, the block's first line by {wanted}",
        line, mend=f"indent it by {wanted}",
    )


def _check_block(
    line: LogicalLine, said: s.Line, blocks: list[_Block], base: int, findings: Findings
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
