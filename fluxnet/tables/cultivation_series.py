"""Rows of raw tables as pieces of series: values in base units with their times and places."""

from __future__ import annotations

from bisect import bisect_left
from collections.abc import Sequence
from dataclasses import field, replace

import numpy as np
from numpy.typing import NDArray

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.ground.source import Span
from fluxnet.rates.cultivation import DoubtfulCell, Form, SeriesKind
from fluxnet.tables.cultivation_columns import Column
from fluxnet.tables.grid import column_letters
from fluxnet.tables.numerals import Decimal
from fluxnet.tables.raw_grid import RawGrid
from fluxnet.tables.raw_numbers import Doubt, read_column

__all__ = [
    "Piece", "Read", "doubtful_cells", "gas_faults", "left_out", "read_piece", "value_faults",
]  # fmt: skip

Array = NDArray[np.float64]

_GAS = (SeriesKind.GAS_OUT, SeriesKind.GAS_IN)
_NEVER_NEGATIVE = (
    SeriesKind.CONCENTRATION, SeriesKind.DRY_WEIGHT, SeriesKind.OPTICAL_DENSITY,
)  # fmt: skip
_LOWEST_GAS = -0.005
"""mol/mol: an analyser's zero may read a little below nothing."""


@record
class Piece:
    """One column of one table; ``rows`` are line numbers, empty where it was thinned."""

    column: Column
    grid: RawGrid
    time: Array
    value: Array
    sd: Array | None
    below: NDArray[np.bool_]
    lines: NDArray[np.int64]
    thinned: bool = False

    def place(self, index: int) -> str:
        """The cell of a value."""
        return self.grid.place_of_line(int(self.lines[index]), self.column.title.column)

    @property
    def places(self) -> tuple[str, ...]:
        """All cells; of a thinned record the column."""
        if self.thinned or not self.lines.size:
            letters = column_letters(self.column.title.column)
            return (f"{self.grid.short} column {letters}",)
        return tuple(self.place(i) for i in range(self.lines.size))


@record
class Read:
    """A piece, with doubts and faults of its cells."""

    piece: Piece
    doubtful: tuple[DoubtfulCell, ...] = ()
    diagnostics: tuple[Diagnostic, ...] = field(default=())
    doubts: tuple[Doubt, ...] = ()


def read_piece(
    grid: RawGrid, rows: Sequence[int], column: Column, time: Array, decimal: Decimal
) -> Read:
    """The values of a column where a row has both a value and a time."""
    numbers = read_column(grid, rows, column.title.column, decimal)
    factor, offset = float(column.change.factor), float(column.change.offset)
    doubts = list(numbers.doubts)
    sd = None if numbers.sd is None else numbers.sd * factor
    if column.sd is not None:
        errors = read_column(grid, rows, column.sd, decimal)
        size = errors.value.copy()
        relative = np.array([
            column.sd_relative or (isinstance(c, str) and c.endswith("%"))
            for c in (grid.cell(r, column.sd) for r in rows)
        ], dtype=np.bool_)  # fmt: skip
        sd = np.where(relative, np.abs(numbers.value) * size / 100, size) * factor
    value = numbers.value * factor + offset
    kept = np.isfinite(value) & np.isfinite(time)
    lines = np.array([grid.lines[r] for r in rows], dtype=np.int64)
    told = doubtful_cells(grid, column.title.column, doubts, numbers.blank)
    faults: list[Diagnostic] = []
    errors_kept = None
    if sd is not None:
        errors_kept = sd[kept]
        wrong = np.flatnonzero(errors_kept < 0)
        if wrong.size:
            line = int(lines[kept][wrong[0]])
            place = grid.place_of_line(line, column.sd or column.title.column)
            words = f"{place}: the sd is negative"
            faults.append(Diagnostic(Name.NEGATIVE_SD, words, _span(grid, line, column)))
        missing = ~np.isfinite(errors_kept)
        if missing.all():
            errors_kept = None
        elif missing.any():
            # a value without an own error gets the largest relative one of its column
            size = np.abs(value[kept])
            known = ~missing & (size > 0)
            worst = float((errors_kept[known] / size[known]).max()) if known.any() else 0.0
            errors_kept = np.where(missing, worst * size, errors_kept)
            told += (DoubtfulCell(
                f"{grid.short} column {column_letters(column.sd or column.title.column)}", "",
                f"{int(missing.sum())} values without an sd get the largest of the column, "
                f"{worst:.2g} of the value",
            ),)  # fmt: skip
    piece = Piece(column, grid, time[kept], value[kept], errors_kept, numbers.below[kept],
                  lines[kept])  # fmt: skip
    piece = _as_total(piece)
    faults += [*value_faults(piece), *gas_faults(piece)]
    return Read(piece, told, tuple(faults), tuple(doubts))


def _as_total(piece: Piece) -> Piece:
    """What a bottle on a balance lost, as a total that rises."""
    meaning = piece.column.meaning
    if meaning.form is not Form.TOTAL or piece.value.size < 2:
        return piece
    steps = np.diff(piece.value)
    falls, rises = int((steps < 0).sum()), int((steps > 0).sum())
    told = meaning.bottle or falls > 9 * rises
    if not told or falls <= rises:
        return piece
    return replace(piece, value=piece.value[0] - piece.value)


def value_faults(piece: Piece) -> list[Diagnostic]:
    """Negative concentrations: told, and kept, since a blank that is taken off scatters about 0."""
    if piece.column.meaning.kind not in _NEVER_NEGATIVE:
        return []
    wrong = np.flatnonzero(piece.value < 0)
    if not wrong.size:
        return []
    first = int(wrong[0])
    more = f", and {wrong.size - 1} more in this column" if wrong.size > 1 else ""
    return [Diagnostic(
        Name.NEGATIVE_CONCENTRATION,
        f"{piece.place(first)}: {piece.column.meaning.words} is negative "
        f"({piece.value[first]:g} {piece.column.change.base}){more}; kept as it stands",
        _span(piece.grid, int(piece.lines[first]), piece.column),
        mend="leave the cell blank where it was not measured, or write the limit: <0.05",
    )]  # fmt: skip


def gas_faults(piece: Piece) -> list[Diagnostic]:
    """Fractions of gas that cannot be."""
    if piece.column.meaning.kind not in _GAS:
        return []
    wrong = np.flatnonzero((piece.value > 1.0) | (piece.value < _LOWEST_GAS))
    if not wrong.size:
        return []
    first = int(wrong[0])
    return [Diagnostic(
        Name.IMPOSSIBLE_GAS,
        f"{piece.place(first)}: {piece.column.meaning.words} is {100 * piece.value[first]:.4g} % "
        f"of the gas; {wrong.size} such in this column",
        _span(piece.grid, int(piece.lines[first]), piece.column),
        mend=f"check the unit `{piece.column.title.unit}` of the column",
    )]  # fmt: skip


def _span(grid: RawGrid, line: int, column: Column) -> Span:
    row = bisect_left(grid.lines, line)
    if row < len(grid.lines) and grid.lines[row] == line:
        return grid.span(row, column.title.column)
    return Span(grid.file, line, 1, 1)


def doubtful_cells(
    grid: RawGrid, column: int, doubts: Sequence[Doubt], blank: Sequence[int] = ()
) -> tuple[DoubtfulCell, ...]:
    """Doubts with their cells; blanks of a column are told together."""
    told = [DoubtfulCell(grid.place(d.row, column), d.text, d.done) for d in doubts]
    if blank:
        where = grid.place(blank[0], column)
        more = f" and {len(blank) - 1} more of this column" if len(blank) > 1 else ""
        told.append(DoubtfulCell(where + more, "", "blank: not measured"))
    return tuple(told)


def left_out(grid: RawGrid, doubts: Sequence[tuple[int, Doubt]]) -> list[Diagnostic]:
    """One warning for all cells of a grid that held something and gave no value."""
    grave = [(c, d) for c, d in doubts if d.grave]
    if not grave:
        return []
    cells = [f"{grid.place(d.row, c)} `{d.text}` {d.done}" for c, d in grave[:5]]
    more = f"; {len(grave) - 5} more" if len(grave) > 5 else ""
    column, first = grave[0]
    return [Diagnostic(
        Name.CELLS_LEFT_OUT, "; ".join(cells) + more, grid.span(first.row, column),
        mend="correct the cells, or leave them blank", source_line=grid.line_text(first.row),
    )]  # fmt: skip
