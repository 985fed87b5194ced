"""Workbooks (XLSX, XLS, ODS) as raw cells, quickly: one grid a sheet.

The reader hands error values and formulas without a stored value on as blanks. So the sheets'
own XML is searched for them, cell by cell only where it holds any.
"""

from __future__ import annotations

import datetime
import re
import zipfile
from collections.abc import Iterator
from dataclasses import field
from io import BytesIO
from xml.etree import ElementTree

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.ground.source import Source, Span
from fluxnet.tables.raw_grid import RawGrid, RawValue
from fluxnet.tables.raw_old_workbook import old_marks
from fluxnet.tables.sheet_marks import SheetMarks, percent_styles, place_of, read_marks, sheet_path
from fluxnet.tables.workbook import DAMAGE, LARGEST, MOST_CELLS

__all__ = ["RawBook", "read_raw_workbook"]

_OLD = b"\xd0\xcf\x11\xe0"
_LOCKED = "EncryptedPackage".encode("utf-16-le")
_CELL = re.compile(rb'<c r="([A-Z]+\d+)"([^>]*?)(?:/>|>(.*?)</c>)', re.DOTALL)
_VALUE = re.compile(rb"<v>([^<]*)</v>")
_STYLE = re.compile(rb'\bs="(\d+)"')
_NS_TABLE = "{urn:oasis:names:tc:opendocument:xmlns:table:1.0}"
_NS_OFFICE = "{urn:oasis:names:tc:opendocument:xmlns:office:1.0}"
_ERROR = re.compile(r"(?:#[A-Z/0!?]+[!?]?|Err:\d+)")


@record
class RawBook:
    """The sheets of a workbook; none where ``diagnostics`` say why."""

    sheets: tuple[RawGrid, ...] = ()
    diagnostics: tuple[Diagnostic, ...] = field(default=())
    kind: str = "XLSX"


def read_raw_workbook(data: bytes, file: str) -> RawBook:
    """All sheets of a workbook that hold anything."""
    try:
        from python_calamine import CalamineError, CalamineWorkbook
    except ImportError:
        words = f"{file} is a workbook, and the package python-calamine that reads it is missing"
        return RawBook(diagnostics=(Diagnostic(
            Name.PACKAGE_MISSING, words, Span(file, 0, 0, 0),
            mend='pip install "fluxnet[sheets]", or save the sheets as CSV',
        ),))  # fmt: skip
    if data.startswith(_OLD) and _LOCKED in data:
        return _locked(file)
    archive: zipfile.ZipFile | None = None
    kind = "XLS"
    try:
        if not data.startswith(_OLD):
            archive = zipfile.ZipFile(BytesIO(data))
            if sum(i.file_size for i in archive.infolist()) > LARGEST:
                return _refused(file, "unpacks to more than 400 MB", "keep only the tables")
            kind = "ODS" if "content.xml" in archive.namelist() else "XLSX"
            if kind == "ODS" and b"encryption-data" in archive.read("META-INF/manifest.xml"):
                return _locked(file)
        marks = old_marks(data) if archive is None else _all_marks(archive, kind)
        for name, found in marks.items():
            if found.height * max(found.width, 1) > MOST_CELLS:
                words = f"reaches down to row {found.height} and across {found.width} columns"
                return _refused(f"{file}!{name}", words, "delete what stands far from the table")
        book = CalamineWorkbook.from_filelike(BytesIO(data))
        grids: list[RawGrid] = []
        for name in book.sheet_names:
            values = book.get_sheet_by_name(name).to_python(skip_empty_area=False)
            grid = _grid(values, marks.get(name, SheetMarks()), file, name, kind)
            if grid.rows:
                grids.append(grid)
        return RawBook(tuple(grids), kind=kind)
    except CalamineError as fault:
        if "assword" in f"{type(fault).__name__} {fault}":
            return _locked(file)
        return _refused(file, f"cannot be read as a workbook ({fault})", "save it again as XLSX")
    except DAMAGE as fault:
        return _refused(file, f"cannot be unpacked as a workbook ({fault})", "save it again")
    except BaseException as fault:
        # the reader's own faults on damaged files derive from nothing narrower
        if type(fault).__name__ != "PanicException":
            raise
        return _refused(file, "is a damaged workbook", "save it again")


def _grid(
    values: list[list[RawValue]], marks: SheetMarks, file: str, sheet: str, kind: str
) -> RawGrid:
    faulty: dict[int, int] = {}
    for row, column in marks.faults:
        faulty[row] = max(faulty.get(row, 0), column + 1)
    rows: list[list[RawValue]] = []
    lines: list[int] = []
    for number in range(max([len(values), *(r + 1 for r in faulty)], default=0)):
        cells = values[number] if number < len(values) else []
        if number in faulty or any(c != "" for c in cells):
            missing = faulty.get(number, 0) - len(cells)
            rows.append([_bare(c) for c in cells] + [""] * missing)
            lines.append(number + 1)
    faults = {(r + 1, c): told for (r, c), told in marks.faults.items()}
    percents = frozenset((r + 1, c) for r, c in marks.percents)
    breaks = frozenset(i for i in range(1, len(lines)) if lines[i] - lines[i - 1] > 1)
    title = Source(f"{file}!{sheet}", ())
    return RawGrid(file, rows, lines, title, sheet, None, kind, faults, percents, breaks)


def _bare(value: RawValue) -> RawValue:
    if type(value) is str:
        return value.strip()
    if isinstance(value, datetime.datetime) and value.microsecond:
        # serial numbers of whole seconds are off by some microseconds
        return (value + datetime.timedelta(microseconds=500)).replace(microsecond=0)
    return value


def _all_marks(archive: zipfile.ZipFile, kind: str) -> dict[str, SheetMarks]:
    if kind == "ODS":
        return dict(_ods_marks(archive.read("content.xml")))
    styles = percent_styles(archive)
    root = ElementTree.fromstring(archive.read("xl/workbook.xml"))
    names = [e.get("name", "") for e in root.iter() if e.tag.endswith("}sheet")]
    found: dict[str, SheetMarks] = {}
    for name in names:
        path = sheet_path(archive, name)
        if path is not None:
            xml = archive.read(path)
            found[name] = _marks(xml, styles) if b'<c r="' in xml else read_marks(archive, name)
    return found


def _marks(xml: bytes, styles: frozenset[str]) -> SheetMarks:
    """What read_marks tells, found without taking each cell apart where nothing is marked."""
    last = place_of(xml[xml.rindex(b'<c r="') + 6 :].partition(b'"')[0].decode())
    height = 0 if last is None else last[0] + 1
    width = 26
    if re.search(rb'<c r="[A-Z]{2}', xml):
        columns = set(re.findall(rb'<c r="([A-Z]+)', xml))
        width = max((place_of(c.decode() + "1") or (0, 0))[1] + 1 for c in columns)
    if b't="e"' not in xml and b"<f" not in xml and not styles:
        return SheetMarks(height=height, width=width)
    faults: dict[tuple[int, int], tuple[str, str]] = {}
    percents: set[tuple[int, int]] = set()
    for address, options, inside in _CELL.findall(xml):
        is_error, has_formula = b't="e"' in options, b"<f" in inside
        style = _STYLE.search(options) if styles else None
        if not is_error and not has_formula and style is None:
            continue
        place = place_of(address.decode())
        if place is None:
            continue
        value = _VALUE.search(inside)
        text = value[1].decode() if value else ""
        if is_error:
            faults[place] = (text or "an error", "is an error of the spreadsheet")
        elif has_formula and not text and b't="str"' not in options:
            faults[place] = ("", "a formula stands there without a stored value")
        elif style is not None and style[1].decode() in styles and b' t="' not in options:
            percents.add(place)
    return SheetMarks(faults, frozenset(percents), height, width)


def _ods_marks(xml: bytes) -> Iterator[tuple[str, SheetMarks]]:
    """Error values and formulas without a value of each sheet of an ODS workbook."""
    for table in ElementTree.fromstring(xml).iter(f"{_NS_TABLE}table"):
        faults: dict[tuple[int, int], tuple[str, str]] = {}
        percents: set[tuple[int, int]] = set()
        row = height = width = 0
        for line in table.iter(f"{_NS_TABLE}table-row"):
            column, filled = 0, False
            for cell in line:
                place = (row, column)
                column += int(cell.get(f"{_NS_TABLE}number-columns-repeated", "1"))
                text = "".join(cell.itertext()).strip()
                has_value = any(k.startswith(_NS_OFFICE) for k in cell.attrib) or text
                if cell.get(f"{_NS_TABLE}formula") and not has_value:
                    faults[place] = ("", "a formula stands there without a stored value")
                elif cell.get(f"{_NS_TABLE}formula") and _ERROR.fullmatch(text):
                    faults[place] = (text, "is an error of the spreadsheet")
                elif cell.get(f"{_NS_OFFICE}value-type") == "percentage":
                    percents.add(place)
                if has_value:
                    filled, width = True, max(width, column)
            row += int(line.get(f"{_NS_TABLE}number-rows-repeated", "1"))
            height = row if filled else height
        name = table.get(f"{_NS_TABLE}name", "")
        yield name, SheetMarks(faults, frozenset(percents), height, width)


def _locked(file: str) -> RawBook:
    return _refused(file, "has a password", "save it without a password")


def _refused(file: str, words: str, mend: str) -> RawBook:
    span = Span(file, 0, 0, 0)
    return RawBook(diagnostics=(Diagnostic(Name.BINARY_FILE, f"{file} {words}", span, mend=mend),))
