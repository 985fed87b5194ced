"""What a model accepts, as every report says it."""

from __future__ import annotations

from collections.abc import Iterable

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.presenting.screen import Block, Sentence

__all__ = ["accepted_blocks"]


def accepted_blocks(diagnostics: Iterable[Diagnostic]) -> tuple[Block, ...]:
    """One sentence with every accepted warning and its reason; nothing where there is none.

    Examples
    --------
    >>> from fluxnet.ground.names import Name
    >>> from fluxnet.ground.source import Span
    >>> one = Diagnostic(Name.DEAD_END, "...", Span("core.flux", 7), accepted="drained by hand")
    >>> [block.text for block in accepted_blocks([one])]
    ['Accepted in the model: dead-end, line 7: drained by hand.']
    """
    accepted = sorted(
        (d.span.file, d.span.line, d.name.value, d.accepted.rstrip(". "))
        for d in diagnostics if d.accepted is not None
    )  # fmt: skip
    said = dict.fromkeys(f"{name}, line {line}: {reason}" for _, line, name, reason in accepted)
    if not said:
        return ()
    return (Sentence(f"Accepted in the model: {'; '.join(said)}."),)
