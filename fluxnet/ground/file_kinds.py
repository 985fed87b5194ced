"""Whether a text is a reaction list or a table of rates, seen from its first lines.

Both answers are given only where they are sure: a text that shows nothing is neither.
"""

from __future__ import annotations

import re
from collections.abc import Sequence
from itertools import islice

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.pattern import pattern_of
from fluxnet.ground.source import Span

__all__ = ["find_model_instead", "find_table_instead"]

_LOOKED_AT = 60
"""Lines that are no remark; a header or a reaction stands among them."""

_SEPARATORS = "\t;,"
_NAMES = frozenset({"species", "quantity", "compound", "substance"})
_RATES = frozenset({"rate", "value", "amount", "measured", "specific rate", "q"})
_MARKED = pattern_of(r".*\S\s*\[[^\[\]]+\]|.*\S[ _](?:in|out|uptake|released?)", re.IGNORECASE)
_ARROW = pattern_of(r"<->|->|→|⇌|=>")
_STATEMENT = pattern_of(
    r"(?:model|basis|substrate|product|exchange|biomass|carrier|inside|parameter|compartment|limit"
    r"|variant|use|balance|free|add|set|drop)\s"
)


def find_table_instead(lines: Sequence[str], file: str) -> Diagnostic | None:
    """The fault of a file that is given as a model and is a table; None where it may be a model."""
    told = _told(lines)
    if any(_ARROW.search(line) for line in told):
        return None
    if not any(_is_header(line) for line in told) and not _is_grid(told):
        return None
    return Diagnostic(
        Name.WRONG_KIND_OF_FILE,
        f"{file} looks like a table of rates; a model was expected here",
        Span(file, 0),
        mend="the model comes first: fluxnet solve model.flux rates.csv; a table alone is read by "
        "fluxnet closure rates.csv",
    )


def find_model_instead(lines: Sequence[str], file: str) -> Diagnostic | None:
    """The fault of a file that is given as a table and is a model; None where it may be a table."""
    told = _told(lines)
    arrows = sum(_ARROW.search(line) is not None for line in told)
    has_compartment = any(line.startswith("compartment ") for line in told)
    statements = sum(_STATEMENT.match(line) is not None for line in told)
    is_model = arrows and (arrows > 1 or has_compartment) and statements
    if not is_model or any(_is_header(line) for line in told):
        return None
    return Diagnostic(
        Name.WRONG_KIND_OF_FILE,
        f"{file} looks like a model; a table of rates was expected here",
        Span(file, 0),
        mend="a model alone is read by fluxnet check model.flux; with rates it is written as "
        "fluxnet closure rates.csv --model model.flux, or fluxnet solve model.flux rates.csv",
    )


def _told(lines: Sequence[str]) -> list[str]:
    """The first lines that say something."""
    bare = (line.strip("\ufeff \r\n") for line in lines)
    return list(islice((t for t in bare if t and not t.startswith("#")), _LOOKED_AT))


def _is_header(line: str) -> bool:
    """Whether a line holds the titles of a table, long or wide."""
    if _STATEMENT.match(line):
        return False
    for sign in _SEPARATORS:
        cells = [c.strip().strip('"').strip() for c in line.split(sign)]
        words = {c.partition("[")[0].strip().lower() for c in cells}
        if len(cells) > 2 and words & _NAMES and words & _RATES:
            return True
        if sum(_MARKED.fullmatch(c) is not None for c in cells) > 1:
            return True
    return False


def _is_grid(told: Sequence[str]) -> bool:
    """Whether all lines are cut into equally many cells, more than declarations have."""
    if len(told) < 3 or any(_STATEMENT.match(line) for line in told):
        return False
    least = {"\t": 2, ";": 1, ",": 3}
    return any(
        told[0].count(sign) >= least[sign] and len({line.count(sign) for line in told}) == 1
        for sign in _SEPARATORS
    )
