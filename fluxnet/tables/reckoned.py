"""Rows that a spreadsheet reckons below its data: totals, means, standard deviations."""

from __future__ import annotations

import re

from fluxnet.ground.pattern import pattern_of
from fluxnet.tables.grid import Row

__all__ = ["MOST_BELOW", "label_of", "names_mean", "names_total"]

MOST_BELOW = 4
"""So many rows at the end of a table may be reckoned from those above."""

_TOTAL = pattern_of(
    r"(?:grand |sub)?totals?\b.*|sum\b.*|summe\b.*|gesamt(?:summe)?\b.*"
    r"|(?:sd|s\.d\.|stdev|std\.? ?dev\.?|std|st\.dev\.?|standard deviation"
    r"|standardabweichung|stabw|rsd|cv"
    r"|sem|variance|varianz)"
    r"(?: ?[\[(]?%[\])]?)?",
    re.IGNORECASE,
)
_MEAN = pattern_of(
    r"(?:mean|average|avg|ave|mittelwert|mw|median|durchschnitt)\b.*", re.IGNORECASE
)


def names_total(text: str) -> bool:
    """Whether a text names a sum or a spread of the rows above.

    Examples
    --------
    >>> names_total("Total carbon"), names_total("SD (%)"), names_total("sdh mutant")
    (True, True, False)
    """
    return _TOTAL.fullmatch(text.strip().rstrip(":")) is not None


def names_mean(text: str) -> bool:
    """Whether a text names a mean of the rows above."""
    return _MEAN.fullmatch(text.strip().rstrip(":")) is not None


def label_of(row: Row) -> str:
    """The first word of a row that names a total or a mean; empty where none does."""
    texts = [c.text for c in row.cells if c.text][:2]
    return next((t for t in texts if names_total(t) or names_mean(t)), "")
