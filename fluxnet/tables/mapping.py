"""The mapping file beside the data: what each column means, mended once by hand.

``columns.csv`` has the columns ``column, means, unit`` and, where titles are not unique, ``file``.
``means`` takes the words that the reader itself shows (``glucose``, ``oxygen out``, ``base
total``, ``time``, ``ignore``); a unit there overrules the one in the title.
"""

from __future__ import annotations

import csv
import io
from collections.abc import Iterable
from dataclasses import field

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.ground.source import Span
from fluxnet.network.model import Network
from fluxnet.tables.cultivation_words import Meaning, plain_words, read_meaning
from fluxnet.tables.raw_grid import RawGrid, shown
from fluxnet.tables.raw_titles import RawTitle, read_raw_title, try_unit

__all__ = ["MAPPING_FILE", "ColumnMatch", "Mapping", "mapping_text", "read_mapping"]

MAPPING_FILE = "columns.csv"


@record
class ColumnMatch:
    """One column as it was understood; ``means`` is empty where it was not.

    ``how``: by name, synonym, unit, or the mapping file.
    """

    file: str
    column: str
    unit: str
    means: str
    how: str


@record
class Mapping:
    """What the mapping file says, by file (empty: all) and title."""

    rows: dict[tuple[str, str], tuple[str, str]] = field(default_factory=dict)
    diagnostics: tuple[Diagnostic, ...] = field(default=())
    spans: dict[tuple[str, str], Span] = field(default_factory=dict)

    def find(self, file: str, title: RawTitle) -> tuple[str, str] | None:
        """Meaning and unit that a column is given."""
        for name in (title.shown, title.name):
            for where in (plain_words(file), ""):
                found = self.rows.get((where, plain_words(name)))
                if found is not None:
                    return found
        return None


def read_mapping(grid: RawGrid, network: Network | None) -> Mapping:
    """The rows of a mapping file; words in it that mean nothing are told."""
    heads = [plain_words(shown(c)) for c in grid.rows[0]]
    faults: list[Diagnostic] = []
    if "column" not in heads or "means" not in heads:
        words = f"{grid.file} has no columns `column` and `means`"
        mend = "its first line is: column,means,unit"
        return Mapping(diagnostics=(Diagnostic(
            Name.BAD_MAPPING, words, grid.span(0, 0), mend=mend, source_line=grid.line_text(0)
        ),))  # fmt: skip
    places = {name: heads.index(name) for name in heads}
    rows: dict[tuple[str, str], tuple[str, str]] = {}
    spans: dict[tuple[str, str], Span] = {}
    for row in range(1, len(grid.rows)):
        told = {n: shown(grid.cell(row, j)).strip() for n, j in places.items()}
        key = (plain_words(told.get("file", "")), plain_words(told["column"]))
        if not told["column"] or not told["means"]:
            continue
        unit = told.get("unit", "")
        for column, text, word in (("means", told["means"], ""), ("unit", unit, "unit ")):
            if column == "unit" and (not unit or try_unit(unit) is not None):
                continue
            if column == "means" and meaning_of(text, unit, network) is not None:
                continue
            faults.append(Diagnostic(
                Name.BAD_MAPPING, f"{grid.place(row, places[column])}: the {word}`{text}` means "
                "nothing that raw data hold", grid.span(row, places[column]),
                mend="write a species, dry weight, OD, oxygen out, gas flow, feed total, "
                "base rate, sample, time, clock, ... or ignore", source_line=grid.line_text(row),
            ))  # fmt: skip
        rows[key], spans[key] = (told["means"], unit), grid.span(row, places["column"])
    return Mapping(rows, tuple(faults), spans)


def meaning_of(words: str, unit: str, network: Network | None) -> Meaning | None:
    """The meaning of the words of a mapping file; sds are told by ``sd`` behind them."""
    title = read_raw_title(0, [words])
    found = read_meaning(title.name, try_unit(unit) if unit else None, network)
    if found is None:
        return None
    return Meaning(
        found.part, found.kind, found.name, found.form, "mapping file", found.gauge, found.bottle,
        title.is_sd,
    )


def mapping_text(columns: Iterable[ColumnMatch]) -> str:
    """A mapping file that says what was understood, to be mended by hand.

    Examples
    --------
    >>> match = ColumnMatch("a.csv", "Glc [g/L]", "g/L", "glucose", "synonym")
    >>> print(mapping_text([match]), end="")
    column,means,unit,file
    Glc [g/L],glucose,g/L,a.csv
    """
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(["column", "means", "unit", "file"])
    for one in dict.fromkeys(columns):
        writer.writerow([one.column, one.means or "ignore", one.unit, one.file])
    return text.getvalue()
