"""What the records of an older workbook (XLS) say of errors, and how far its cells reach.

The reader makes room for the area up to the farthest cell before anything can be refused, and
hands error values on as blanks. So the records are walked first: a compound file of sectors, in
it one stream of records, each with kind and length (the published BIFF8 and compound file
formats; numbers from memory).
"""

from __future__ import annotations

import struct

from fluxnet.tables.sheet_marks import SheetMarks

__all__ = ["old_marks"]

_CELLS = frozenset({0x0006, 0x00BD, 0x00BE, 0x00D6, 0x00FD, 0x0201, 0x0203, 0x0204, 0x0205, 0x027E})
_FORMULA, _ERROR_VALUE, _SHEET, _AREA, _END = 0x0006, 0x0205, 0x0085, 0x0200, 0x000A
_ERRORS = {
    0x00: "#NULL!", 0x07: "#DIV/0!", 0x0F: "#VALUE!", 0x17: "#REF!", 0x1D: "#NAME?",
    0x24: "#NUM!", 0x2A: "#N/A",
}  # fmt: skip
_LAST = 0xFFFFFFF0
"""Sector numbers from here on are marks, no places."""


def old_marks(data: bytes) -> dict[str, SheetMarks]:
    """The marks of each sheet.

    Raises
    ------
    ValueError
        Where the file is not laid out as it should.
    """
    try:
        return _walk(_stream(data))
    except (struct.error, IndexError) as fault:
        raise ValueError("its records are damaged") from fault


def _stream(data: bytes) -> bytes:
    """The stream of the workbook."""
    (shift,) = struct.unpack_from("<H", data, 30)
    if shift not in (9, 12):
        raise ValueError("its sectors have no possible size")
    size = 1 << shift
    count = len(data) // size
    tables, folder, _, small, first_small, small_count, more, more_count = struct.unpack_from(
        "<8I", data, 44
    )
    if max(tables, small_count, more_count) > count:
        raise ValueError("it names more sectors than it has")
    table_places = [p for p in struct.unpack_from("<109I", data, 76) if p < _LAST]
    for _ in range(more_count):
        if more >= count:
            break
        entries = struct.unpack_from(f"<{size // 4}I", data, (more + 1) * size)
        table_places += [p for p in entries[:-1] if p < _LAST]
        more = entries[-1]
    following: list[int] = []
    for place in table_places:
        following += struct.unpack_from(f"<{size // 4}I", data, (place + 1) * size)

    def chain(start: int) -> bytes:
        parts: list[bytes] = []
        while start < _LAST and len(parts) <= count:
            parts.append(data[(start + 1) * size : (start + 2) * size])
            start = following[start]
        return b"".join(parts)

    entries_of = chain(folder)
    root = b""
    for place in range(0, len(entries_of), 128):
        (length,) = struct.unpack_from("<H", entries_of, place + 64)
        name = entries_of[place : place + max(length - 2, 0)].decode("utf-16-le", "replace")
        start, long = struct.unpack_from("<II", entries_of, place + 116)
        if place == 0:
            root = chain(start) if start < _LAST else b""
        elif name in ("Workbook", "Book"):
            return chain(start)[:long] if long >= small else _small(
                data, root, start, long, chain(first_small)
            )
    raise ValueError("it holds no workbook")


def _small(data: bytes, root: bytes, start: int, long: int, table: bytes) -> bytes:
    """A stream below the size from which on it has sectors of its own."""
    parts: list[bytes] = []
    while start < _LAST and len(parts) * 64 < long:
        parts.append(root[start * 64 : (start + 1) * 64])
        (start,) = struct.unpack_from("<I", table, 4 * start)
    return b"".join(parts)[:long]


def _walk(stream: bytes) -> dict[str, SheetMarks]:
    sheets: list[tuple[str, int]] = []
    place = 0
    while place + 4 <= len(stream):
        kind, length = struct.unpack_from("<HH", stream, place)
        if kind == _SHEET:
            (start,) = struct.unpack_from("<I", stream, place + 4)
            letters, flag = stream[place + 10], stream[place + 11]
            raw = stream[place + 12 :]
            name = raw[: 2 * letters].decode("utf-16-le", "replace") if flag & 1 else (
                raw[:letters].decode("latin-1")
            )
            sheets.append((name, start))
        place += 4 + length
        if kind == _END:
            break
    return {name: _sheet(stream, start) for name, start in sheets}


def _sheet(stream: bytes, place: int) -> SheetMarks:
    faults: dict[tuple[int, int], tuple[str, str]] = {}
    height = width = 0
    while place + 4 <= len(stream):
        kind, length = struct.unpack_from("<HH", stream, place)
        if kind == _END:
            break
        if kind == _AREA and length >= 12:
            _, last, _, end = struct.unpack_from("<IIHH", stream, place + 4)
            height, width = max(height, last), max(width, end)
        elif kind in _CELLS and length >= 6:
            row, column = struct.unpack_from("<HH", stream, place + 4)
            if kind in (0x00BD, 0x00BE):  # several cells: the last column stands at the end
                (column,) = struct.unpack_from("<H", stream, place + 2 + length)
            height, width = max(height, row + 1), max(width, column + 1)
            body = stream[place + 4 : place + 4 + length]
            code = None
            if kind == _ERROR_VALUE and length >= 8 and body[7]:
                code = body[6]
            elif kind == _FORMULA and body[12:14] == b"\xff\xff" and body[6] == 2:
                code = body[8]
            if code is not None:
                text = _ERRORS.get(code, "an error")
                faults[(row, column)] = (text, "is an error of the spreadsheet")
        place += 4 + length
    return SheetMarks(faults, frozenset(), height, width)
