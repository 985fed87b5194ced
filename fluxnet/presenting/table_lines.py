"""Tables as lines of text: columns beside columns, long texts broken between words."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from unicodedata import combining, east_asian_width

from fluxnet.ground.pattern import pattern_of
from fluxnet.presenting.points import align_points

__all__ = ["GLUE", "cell_width", "lay_out"]

GLUE = "\N{NO-BREAK SPACE}"
"""A space at which no text is broken; shown as a plain one."""

_BETWEEN = "  "
_LEAST = 12
# Beside these Latin letters, signs and lines a letter may be wide, or take no place.
_UNUSUAL = pattern_of(r"[^\x00-\u02ff\u2010-\u2027\u2190-\u22ff\u2500-\u257f]")


def cell_width(text: str) -> int:
    """The number of terminal cells that a text takes.

    Examples
    --------
    >>> cell_width("CO2"), cell_width("±"), cell_width("日本")
    (3, 1, 4)
    """
    if text.isascii() or not _UNUSUAL.search(text):
        return len(text)
    return sum(
        0 if combining(letter) else 2 if east_asian_width(letter) in "WF" else 1 for letter in text
    )


def lay_out(
    titles: Sequence[str],
    rows: Sequence[Sequence[str]],
    rights: Sequence[bool],
    breaks: Sequence[int | None],
    width: int,
    text_width: int | None = None,
    rule: str = "─",
) -> tuple[str, str, tuple[str, ...]]:
    """The title line, the rule below it and the lines of a table.

    Numbers are aligned at their points where there is room, and never broken. A table that is
    too wide all the same has its widest texts broken.

    Parameters
    ----------
    rights
        Whether each column holds numbers, at its right side.
    breaks
        The width down to which the text of a column is broken so that the table is no wider
        than ``text_width``, or None.
    width, text_width
        Of the whole table at most, and of one with texts to be broken.

    Examples
    --------
    >>> lay_out(["rate", "of"], [["1.5", "CO2"]], [True, False], [None, None], 80, rule="-")
    ('rate  of', '---------', (' 1.5  CO2',))
    """
    columns = [list(column) for column in zip(*rows, strict=True)] or [[] for _ in titles]
    columns, widths = _aligned(titles, columns, rights, text_width or width)
    widths = _fitted(widths, rights, breaks, width, text_width or width)
    total = sum(widths) + len(_BETWEEN) * (len(widths) - 1)
    head, *more = _lines(titles, widths, rights)
    lines = [
        line for row in zip(*columns, strict=True) for line in _lines(row, widths, rights)
    ]
    return "\n".join([head, *more]), rule * total, tuple(lines)


def _aligned(
    titles: Sequence[str], columns: list[list[str]], rights: Sequence[bool], width: int
) -> tuple[list[list[str]], list[int]]:
    """The columns with their numbers aligned, and their widths.

    Where that makes the table too wide, numbers are left as they are, those first whose
    alignment takes most room.
    """
    plain = [_width(title, column) for title, column in zip(titles, columns, strict=True)]
    laid = [
        align_points(column) if right else column
        for column, right in zip(columns, rights, strict=True)
    ]
    widths = [_width(title, column) for title, column in zip(titles, laid, strict=True)]
    for k in sorted(range(len(widths)), key=lambda k: plain[k] - widths[k]):
        if sum(widths) + len(_BETWEEN) * (len(widths) - 1) <= width or widths[k] == plain[k]:
            break
        laid[k], widths[k] = columns[k], plain[k]
    return laid, widths


def _width(title: str, column: Sequence[str]) -> int:
    return max(cell_width(line) for cell in (title, *column) for line in cell.split("\n"))


def _fitted(
    widths: list[int],
    rights: Sequence[bool],
    breaks: Sequence[int | None],
    width: int,
    text_width: int,
) -> list[int]:
    """The widths of columns whose texts are broken where the table is too wide."""
    total = sum(widths) + len(_BETWEEN) * (len(widths) - 1)
    leasts = {k: least for k, least in enumerate(breaks) if least is not None}
    total = _narrowed(widths, leasts, total, text_width)
    _narrowed(widths, {k: _LEAST for k, right in enumerate(rights) if not right}, total, width)
    return widths


def _narrowed(widths: list[int], leasts: Mapping[int, int], total: int, width: int) -> int:
    """Narrow the widest of some columns, down to its least, until all fit; the total then."""
    while total > width:
        wide = [k for k, least in leasts.items() if widths[k] > least]
        if not wide:
            break
        widths[max(wide, key=lambda k: widths[k])] -= 1
        total -= 1
    return total


def _lines(cells: Sequence[str], widths: Sequence[int], rights: Sequence[bool]) -> list[str]:
    """One row as the lines that it takes."""
    parts = [_folded(cell, own) for cell, own in zip(cells, widths, strict=True)]
    lines: list[str] = []
    for place in range(max(map(len, parts), default=0)):
        texts = [part[place] if place < len(part) else "" for part in parts]
        line = _BETWEEN.join(
            _padded(text, own, right=right)
            for text, own, right in zip(texts, widths, rights, strict=True)
        )
        lines.append(line.rstrip().replace(GLUE, " "))
    return lines


def _padded(text: str, width: int, *, right: bool) -> str:
    """A text with the spaces that fill its column."""
    spaces = " " * (width - cell_width(text))
    return spaces + text if right else text + spaces


def _folded(text: str, width: int) -> list[str]:
    """A text broken at its spaces; within a word only where that is too long by itself."""
    if "\n" not in text and cell_width(text) <= width:
        return [text]
    lines: list[str] = []
    for part in text.split("\n"):
        line = ""
        for word in part.split(" "):
            longer = f"{line} {word}" if line else word
            if cell_width(longer) <= width:
                line = longer
                continue
            lines += [line] if line else []
            line = word
            while cell_width(line) > width:
                fits = sum(cell_width(line[: n + 1]) <= width for n in range(len(line)))
                lines.append(line[: max(fits, 1)])
                line = line[max(fits, 1) :]
        lines.append(line)
    return lines
