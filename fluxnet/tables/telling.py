"""What was guessed and assumed about a table, in words."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.ground.source import Span
from fluxnet.tables.entries import Entries
from fluxnet.tables.errors_assumed import SdRule
from fluxnet.tables.grid import Grid
from fluxnet.tables.layout import Layout
from fluxnet.tables.numerals import DecimalChoice
from fluxnet.tables.runs import BuiltRun
from fluxnet.tables.surplus import untitled_words

__all__ = ["Told", "assumption_notes", "tell_understood"]

_SEPARATORS = {",": "comma-separated", ";": "semicolon-separated", "\t": "tab-separated"}


@record
class Told:
    """The note on how a table was read, and its parts."""

    note: Diagnostic
    parts: tuple[str, ...]


def tell_understood(
    grid: Grid,
    layout: Layout,
    entries: Entries,
    choice: DecimalChoice,
    covariance: Grid | None,
    untitled: Sequence[int] = (),
) -> Told:
    """How the table was read: form, separator, decimal sign, header, what was carried through.

    ``untitled`` are the columns that hold something and have no title.
    """
    parts = [f"{layout.form.value if layout.form else 'no'} table"]
    if grid.sheet is not None:
        parts.append(f"sheet {grid.sheet}")
    if grid.separator is not None:
        sign = grid.separator
        parts.append(_SEPARATORS.get(sign, f"separated by {sign}"))
    if choice.said:
        parts.append(f"decimal {choice.decimal.name.lower()}")
    rows = layout.header_rows
    parts.append("one header row" if rows == 1 else f"{rows} header rows")
    parts.append(_count(len(entries.heads), "run"))
    if entries.carried:
        parts.append(f"carried through: {', '.join(entries.carried)}")
    if untitled:
        parts.append(untitled_words(untitled))
    if entries.continued:
        parts.append("a blank run cell continues the run above")
    if covariance is not None:
        parts.append(f"correlations from {covariance.source.file}")
    if layout.statements.notes:
        parts.append(f"{_count(len(layout.statements.notes), 'line')} above it taken as notes")
    file = grid.source.file
    note = Diagnostic(
        Name.TABLE_UNDERSTOOD, f"the rates were read from a {', '.join(parts)}", Span(file, 0, 0, 0)
    )
    return Told(note, tuple(parts))


def assumption_notes(
    grid: Grid, runs: Sequence[BuiltRun], rule: SdRule, biomass_rows: Sequence[str]
) -> tuple[Diagnostic, ...]:
    """The notes on assumed sds, independent errors, free acids, an assumed biomass formula."""
    place = Span(grid.source.file, 0, 0, 0)
    notes: list[Diagnostic] = []
    assumed = [(b.name, q) for b in runs for q in b.assumed]
    if assumed:
        names = _listed(f"{q} ({run})" if len(runs) > 1 else q for run, q in assumed)
        notes.append(
            Diagnostic(
                Name.SD_ASSUMED,
                f"no sd is given for {names}: {rule.relative * 100:g} % of the value is taken, "
                f"and at least {rule.floor * 100:g} % of the run's largest rate in C-mol",
                place,
            )
        )
    independent = [b.name for b in runs if b.independent]
    if independent:
        which = (
            "the specific rates"
            if len(independent) == len(runs)
            else (f"the specific rates of {_listed(independent)}")
        )
        notes.append(
            Diagnostic(
                Name.SHARED_ERROR_ASSUMED,
                f"{which} are taken as independent of one another",
                place,
                because="all were divided by one biomass value, whose error they share",
                mend="write above the table: shared error biomass 4 %",
            )
        )
    acids = dict.fromkeys(name for b in runs for name in b.free_acids)
    if acids:
        notes.append(
            Diagnostic(
                Name.FREE_ACID_TAKEN,
                f"grams of {_listed(acids)} are taken as grams of the free acid or base",
                place,
            )
        )
    if biomass_rows:
        notes.append(
            Diagnostic(
                Name.BIOMASS_ASSUMED,
                f"nothing says what the biomass in {_listed(biomass_rows)} is made of: "
                "CH1.8O0.5N0.2 without ash is taken",
                place,
                mend="write above the table: biomass X CH1.8O0.5N0.2 ash 8 %",
            )
        )
    notes.extend(Diagnostic(Name.TABLE_UNDERSTOOD, words, place) for b in runs for words in b.notes)
    return tuple(notes)


def _count(number: int, word: str) -> str:
    return f"one {word}" if number == 1 else f"{number} {word}s"


def _listed(words: Iterable[str], most: int = 6) -> str:
    """Words as a list, the first few of many."""
    every = list(words)
    if len(every) <= most:
        return ", ".join(every)
    return f"{', '.join(every[:most])} and {len(every) - most} more"
