"""Faults as they are found, with the place in the user's own line, and near names."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field
from typing import Protocol

from fluxnet.chemistry.catalogue import load_catalogue
from fluxnet.ground.diagnostic import Diagnostic, Edit
from fluxnet.ground.names import Name
from fluxnet.ground.source import Span
from fluxnet.reading.lines import LogicalLine

__all__ = ["Findings", "Stretch", "nearest_names", "only_case_differs"]


class Stretch(Protocol):
    """Anything with a start and an end in a logical line."""

    @property
    def start(self) -> int:
        """The first offset."""
        ...

    @property
    def end(self) -> int:
        """One past the last."""
        ...


@dataclass(slots=True, eq=False, repr=False)
class Findings:
    """The list of faults of one reading.

    ``searches`` are the searches for near names that are left: a text with thousands of
    unknown names is another kind of fault.
    """

    found: list[Diagnostic] = field(default_factory=list)
    searches: int = 60

    def nearest(self, name: str, candidates: Iterable[str], most: int = 3) -> tuple[str, ...]:
        """Near names, as long as searches are left."""
        if self.searches <= 0:
            return ()
        self.searches -= 1
        return nearest_names(name, candidates, most)

    def nearest_in_catalogue(self, name: str) -> tuple[str, ...]:
        """Near names of the catalogue, as long as searches are left."""
        if self.searches <= 0:
            return ()
        self.searches -= 1
        return load_catalogue().nearest(name)

    def add(
        self,
        name: Name,
        message: str,
        line: LogicalLine,
        place: Stretch | None = None,
        *,
        because: str | None = None,
        mend: str | None = None,
        certain: Iterable[tuple[Stretch, str]] = (),
        also: Iterable[Span] = (),
    ) -> None:
        """Note a fault at a stretch of a line (None: the whole line).

        ``certain`` are the replacements that carry the mend out, where it needs no decision.
        """
        span = line.whole if place is None else line.span(place.start, place.end)
        edits = tuple(Edit(line.span(s.start, s.end), text) for s, text in certain)
        self.found.append(
            Diagnostic(name, message, span, because, mend, None, tuple(also), None, edits)
        )

    def add_at(
        self, name: Name, message: str, span: Span, *, mend: str | None = None
    ) -> None:
        """Note a fault at a place that is known already."""
        self.found.append(Diagnostic(name, message, span, None, mend))


def nearest_names(name: str, candidates: Iterable[str], most: int = 3) -> tuple[str, ...]:
    """The candidates that are spelt nearly so, the nearest first.

    Examples
    --------
    >>> nearest_names("pyruvat", ["glucose", "pyruvate"])
    ('pyruvate',)
    """
    from difflib import SequenceMatcher

    lower = name.casefold()
    scored = []
    for candidate in dict.fromkeys(candidates):
        matcher = SequenceMatcher(None, lower, candidate.casefold())
        if matcher.real_quick_ratio() < 0.6 or matcher.quick_ratio() < 0.6:
            continue
        ratio = matcher.ratio()
        allowed = 0.66 if len(lower) <= 4 else 0.74
        if ratio >= allowed:
            scored.append((-ratio, candidate))
    return tuple(candidate for _, candidate in sorted(scored)[:most])


def only_case_differs(name: str, candidates: Iterable[str]) -> str | None:
    """The candidate that is the same but for upper and lower case.

    Examples
    --------
    >>> only_case_differs("Glucose", ["glucose", "CO2"])
    'glucose'
    """
    lower = name.casefold()
    return next((c for c in candidates if c.casefold() == lower and c != name), None)
