"""What a workbook's own XML says of cells that a spreadsheet reader hands on as blank or bare.

An error value (``#DIV/0!``) and a formula without a stored value look blank to the reader, and
a percentage (``5 %`` on screen) is handed on as 0.05: both would change a rate in silence.
"""

from __future__ import annotations

import re
import zipfile
from collections.abc import Iterator
from dataclasses import field
from io import BytesIO
from posixpath import join, normpath
from xml.etree import ElementTree

from fluxnet.ground.record import record

__all__ = ["SheetMarks", "percent_styles", "place_of", "read_marks", "sheet_path"]

_BUILT_IN_PERCENT = frozenset({9, 10})
_ADDRESS = re.compile(r"([A-Z]+)(\d+)")
_QUOTED = re.compile(r'"[^"]*"|\\.')


@record
class SheetMarks:
    """Cells by (row, column), both from 0: why one holds nothing, and which are in per cent.

    ``height`` and ``width`` are those of the area that holds all filled cells, from A1.
    """

    faults: dict[tuple[int, int], tuple[str, str]] = field(default_factory=dict)
    percents: frozenset[tuple[int, int]] = frozenset()
    height: int = 0
    width: int = 0


def read_marks(archive: zipfile.ZipFile, sheet: str) -> SheetMarks:
    """The marks of one sheet; none where the workbook is not laid out as the standard says.

    A fault is a pair: what stands in the cell, and why it is no value.
    """
    path = sheet_path(archive, sheet)
    if path is None:
        return SheetMarks()
    percent = percent_styles(archive)
    faults: dict[tuple[int, int], tuple[str, str]] = {}
    percents: set[tuple[int, int]] = set()
    height = width = 0
    for cell in _cells(archive.read(path)):
        place = place_of(cell.get("r", ""))
        if place is None:
            continue
        if len(cell):
            height, width = max(height, place[0] + 1), max(width, place[1] + 1)
        value = next((c.text or "" for c in cell if _tag(c) == "v"), None)
        kind = cell.get("t", "n")
        if kind == "e":
            faults[place] = (value or "an error", "is an error of the spreadsheet")
        elif not value and kind != "str" and any(_tag(c) == "f" for c in cell):
            faults[place] = ("", "a formula stands there without a stored value")
        elif kind == "n" and cell.get("s", "0") in percent:
            percents.add(place)
    return SheetMarks(faults, frozenset(percents), height, width)


def _cells(xml: bytes) -> Iterator[ElementTree.Element]:
    for _, element in ElementTree.iterparse(BytesIO(xml)):
        if _tag(element) == "c":
            yield element
        elif _tag(element) == "row":
            element.clear()


def sheet_path(archive: zipfile.ZipFile, sheet: str) -> str | None:
    """The member of the archive that holds a sheet."""
    names = set(archive.namelist())
    if not {"xl/workbook.xml", "xl/_rels/workbook.xml.rels"} <= names:
        return None
    workbook = ElementTree.fromstring(archive.read("xl/workbook.xml"))
    link = next(
        (
            value
            for element in workbook.iter()
            if _tag(element) == "sheet" and element.get("name") == sheet
            for key, value in element.items()
            if key.endswith("}id")
        ),
        None,
    )
    links = ElementTree.fromstring(archive.read("xl/_rels/workbook.xml.rels"))
    target = next((e.get("Target", "") for e in links if e.get("Id") == link), "")
    path = target.lstrip("/") if target.startswith("/") else normpath(join("xl", target))
    return path if path in names else None


def percent_styles(archive: zipfile.ZipFile) -> frozenset[str]:
    """The indices of the cell styles that show a number in per cent."""
    if "xl/styles.xml" not in archive.namelist():
        return frozenset()
    styles = ElementTree.fromstring(archive.read("xl/styles.xml"))
    formats = {
        int(e.get("numFmtId", "0")): e.get("formatCode", "")
        for e in styles.iter()
        if _tag(e) == "numFmt"
    }
    percent = _BUILT_IN_PERCENT | {
        number for number, code in formats.items() if "%" in _QUOTED.sub("", code)
    }
    cells = next((e for e in styles if _tag(e) == "cellXfs"), None)
    return frozenset(
        str(index)
        for index, style in enumerate(cells if cells is not None else ())
        if int(style.get("numFmtId", "0")) in percent
    )


def place_of(address: str) -> tuple[int, int] | None:
    """Row and column, both from 0, of an address such as ``C12``."""
    found = _ADDRESS.fullmatch(address)
    if found is None:
        return None
    column = 0
    for letter in found[1]:
        column = 26 * column + ord(letter) - ord("A") + 1
    return int(found[2]) - 1, column - 1


def _tag(element: ElementTree.Element) -> str:
    return element.tag.rpartition("}")[2]
