"""Workbooks (XLSX) as grids: one a sheet, every cell with its address.

Read with python-calamine, which the extra ``sheets`` installs; it is imported when a workbook
is met and not before.
"""

from __future__ import annotations

import datetime
import zipfile
import zlib
from collections.abc import Sequence
from dataclasses import field
from io import BytesIO
from xml.etree import ElementTree

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.ground.source import Source, Span
from fluxnet.tables.grid import Cell, Grid, Row
from fluxnet.tables.sheet_marks import SheetMarks, read_marks

__all__ = ["DAMAGE", "LARGEST", "MOST_CELLS", "Workbook", "read_workbook"]

DAMAGE = (
    zipfile.BadZipFile,
    zlib.error,
    ElementTree.ParseError,
    LookupError,
    NotImplementedError,
    RuntimeError,
    EOFError,
    ValueError,
    OSError,
)
"""What unpacking a damaged archive raises."""

LARGEST = 400_000_000
"""Bytes that a workbook may unpack to; more is no table of rates."""

MOST_CELLS = 20_000_000
"""Cells of the area that a sheet fills: the reader makes room for all, the blank ones too."""


@record
class Workbook:
    """The sheets of a workbook, hidden ones last; none where ``diagnostics`` say why."""

    sheets: tuple[Grid, ...] = ()
    diagnostics: tuple[Diagnostic, ...] = field(default=())


def read_workbook(data: bytes, file: str) -> Workbook:
    """All sheets of a workbook."""
    if data.startswith(b"\xd0\xcf\x11\xe0"):
        return _refused(file, "is a workbook of an older kind, or one with a password",
                        "save it as XLSX without a password")  # fmt: skip
    try:
        with zipfile.ZipFile(BytesIO(data)) as archive:
            if "xl/workbook.xml" not in archive.namelist():
                return _refused(file, "is packed, but is no XLSX workbook", "save it as XLSX")
            if sum(i.file_size for i in archive.infolist()) > LARGEST:
                return _refused(file, "unpacks to more than 400 MB", "keep only the table")
            return _read_sheets(data, archive, file)
    except DAMAGE as fault:
        return _refused(file, f"cannot be unpacked as a workbook ({fault})", "save it again")


def _read_sheets(data: bytes, archive: zipfile.ZipFile, file: str) -> Workbook:
    try:
        from python_calamine import CalamineError, CalamineWorkbook, SheetVisibleEnum
    except ImportError:
        return Workbook(diagnostics=(
            Diagnostic(
                Name.PACKAGE_MISSING,
                f"{file} is a workbook, and the package python-calamine that reads it is "
                "not installed",
                Span(file, 0, 0, 0),
                mend='pip install "fluxnet[sheets]", or save the sheet as CSV',
            ),
        ))  # fmt: skip
    try:
        book = CalamineWorkbook.from_filelike(BytesIO(data))
        grids: list[Grid] = []
        seen = SheetVisibleEnum.Visible
        for sheet in sorted(book.sheets_metadata, key=lambda one: one.visible != seen):
            name = sheet.name
            marks = read_marks(archive, name)
            if marks.height * marks.width > MOST_CELLS:
                words = f"reaches down to row {marks.height} and across {marks.width} columns"
                return _refused(f"{file}!{name}", words, "delete what stands far from the table")
            values = book.get_sheet_by_name(name).to_python(skip_empty_area=False)
            grids.append(_grid(values, marks, f"{file}!{name}", name))
        return Workbook(tuple(grids))
    except CalamineError as fault:
        return _refused(file, f"cannot be read as a workbook ({fault})", "save it again")


def _grid(values: Sequence[Sequence[object]], marks: SheetMarks, file: str, sheet: str) -> Grid:
    rows: list[Row] = []
    comments: list[str] = []
    # the reader leaves rows out behind the last value, where a fault may still stand
    height = max([len(values), *(r + 1 for r, _ in marks.faults)], default=0)
    for number in range(height):
        line = values[number] if number < len(values) else []
        width = max([len(line), *(c + 1 for r, c in marks.faults if r == number)], default=0)
        cells = tuple(
            _cell(line[j] if j < len(line) else "", number, j, marks, file) for j in range(width)
        )
        filled = [c for c in cells if not c.is_blank]
        if filled and filled[0].text.startswith("#") and filled[0].fault is None:
            comments.append(" ".join(c.text for c in filled).lstrip("#").strip())
        elif filled:
            text = " ".join(c.text for c in filled)
            rows.append(Row(cells, text, Span(file, number + 1, 1, width + 1)))
    return Grid(tuple(rows), Source(file, ()), None, sheet, tuple(comments))


def _cell(value: object, row: int, column: int, marks: SheetMarks, file: str) -> Cell:
    span = Span(file, row + 1, column + 1, column + 2)
    fault = marks.faults.get((row, column))
    if fault is not None:
        return Cell(fault[0], column, span, fault=fault[1])
    if isinstance(value, bool):
        return Cell(str(value).upper(), column, span)
    if isinstance(value, (int, float)):
        number = float(value)
        if (row, column) in marks.percents:
            return Cell(f"{_plain(_percent(number))} %", column, span, _percent(number))
        return Cell(_plain(number), column, span, number)
    if isinstance(value, datetime.datetime) and value.time() == datetime.time():
        return Cell(value.date().isoformat(), column, span)
    if isinstance(value, (datetime.date, datetime.time)):
        return Cell(value.isoformat(), column, span)
    return Cell(str(value).strip(), column, span)


def _percent(number: float) -> float:
    """A fraction as per cent, without the digits that the multiplication adds."""
    return float(f"{number * 100:.13g}")


def _plain(number: float) -> str:
    return f"{number:.15g}"


def _refused(file: str, words: str, mend: str) -> Workbook:
    span = Span(file, 0, 0, 0)
    return Workbook(diagnostics=(Diagnostic(Name.BINARY_FILE, f"{file} {words}", span, mend=mend),))
