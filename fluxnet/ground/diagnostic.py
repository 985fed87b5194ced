"""Faults of the input, as values: what is wrong, where, why, and what would mend it."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import field, replace

from fluxnet.ground.names import Name, Severity
from fluxnet.ground.record import record
from fluxnet.ground.source import NOWHERE, Span

__all__ = ["Acceptance", "Diagnostic", "Edit", "has_errors", "in_order", "silence", "with_accepted"]


@record
class Edit:
    """Text that stands in the place of another (an empty place: text put in between)."""

    span: Span
    text: str


@record
class Diagnostic:
    """One finding about the input.

    ``message`` is one sentence in the user's terms that stands alone; ``because``
    gives the reckoning behind it; ``mend`` states what would repair it; ``source_line``
    is the user's own line, untouched; ``also`` are second places (a first declaration).
    ``accepted`` holds the user's reason where the line silences the warning. ``edits`` carry
    the mend out where it is certain; empty where it needs the user's decision.
    """

    name: Name
    message: str
    span: Span = NOWHERE
    because: str | None = None
    mend: str | None = None
    source_line: str | None = None
    also: tuple[Span, ...] = field(default=())
    accepted: str | None = None
    edits: tuple[Edit, ...] = ()

    @property
    def severity(self) -> Severity:
        """How grave it is: a property of the name, never of the place."""
        return self.name.severity


@record
class Acceptance:
    """``accept NAME: REASON`` at the end of a line.

    ``first_line`` is the line where its statement starts, where it goes over several.
    """

    name: Name
    reason: str
    span: Span
    first_line: int | None = None


def has_errors(diagnostics: Iterable[Diagnostic]) -> bool:
    """Whether any finding forbids an answer.

    Examples
    --------
    >>> from fluxnet.ground.names import Name
    >>> has_errors([Diagnostic(Name.UNBALANCED_LINE, "it makes carbon", Span("m.flux", 3, 1, 2))])
    True
    """
    return any(d.severity is Severity.ERROR and d.accepted is None for d in diagnostics)


def in_order(diagnostics: Iterable[Diagnostic]) -> tuple[Diagnostic, ...]:
    """Errors first, then warnings, then notes; inside each by place; each once."""
    unique = dict.fromkeys(diagnostics)
    return tuple(
        sorted(unique, key=lambda d: (d.severity.rank, d.span.file, d.span.line, d.span.column))
    )


def silence(
    diagnostics: Iterable[Diagnostic], acceptances: Iterable[Acceptance]
) -> tuple[Diagnostic, ...]:
    """Mark warnings that their own line accepts, and report acceptances that met nothing.

    Errors cannot be accepted away.
    """
    marked, unused = _marked(diagnostics, acceptances)
    told = (
        Diagnostic(
            Name.ACCEPT_UNUSED,
            f"nothing on this line gives the warning {acceptance.name.value}",
            acceptance.span,
            mend="take the acceptance away",
        )
        for acceptance in unused
    )
    return (*marked, *told)


def with_accepted(
    diagnostics: Iterable[Diagnostic], acceptances: Iterable[Acceptance]
) -> tuple[Diagnostic, ...]:
    """The findings of a report that does not check the model, with all that it accepts.

    Warnings that are there and accepted are marked; of the others, which only a check would
    find, the acceptance itself is listed.
    """
    marked, unused = _marked(diagnostics, acceptances)
    listed = (
        Diagnostic(
            acceptance.name, f"the model accepts {acceptance.name.value} on this line",
            acceptance.span, accepted=acceptance.reason,
        )
        for acceptance in unused
    )  # fmt: skip
    return (*marked, *listed)


def _marked(
    diagnostics: Iterable[Diagnostic], acceptances: Iterable[Acceptance]
) -> tuple[list[Diagnostic], list[Acceptance]]:
    """The findings, accepted warnings marked, and the acceptances that met none."""
    listed = tuple(acceptances)
    waiting = {
        (a.span.file, line, a.name): a
        for a in listed
        for line in range(a.first_line or a.span.line, a.span.line + 1)
    }
    used: set[Acceptance] = set()
    marked: list[Diagnostic] = []
    for diagnostic in diagnostics:
        key = (diagnostic.span.file, diagnostic.span.line, diagnostic.name)
        if key in waiting and diagnostic.severity is not Severity.ERROR:
            used.add(waiting[key])
            marked.append(replace(diagnostic, accepted=waiting[key].reason))
        else:
            marked.append(diagnostic)
    return marked, [a for a in listed if a not in used]
