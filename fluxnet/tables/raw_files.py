"""Files and folders of raw data as grids: texts in any encoding, workbooks, long records."""

from __future__ import annotations

from dataclasses import field
from pathlib import Path

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.ground.source import Source, Span
from fluxnet.tables.decoding import decode
from fluxnet.tables.delimited import split_lines
from fluxnet.tables.inputs import MOST_BYTES, is_workbook
from fluxnet.tables.mapping import MAPPING_FILE
from fluxnet.tables.raw_grid import RawGrid
from fluxnet.tables.raw_text import cut_text

__all__ = ["LONG_BYTES", "RawFiles", "folders_of", "read_raw_file", "read_raw_path"]

LONG_BYTES = 2_000_000
"""Texts from this size on are read in chunks; of them only the beginning is a grid."""

_HEAD = 24_000
_SUFFIXES = frozenset({
    ".csv", ".tsv", ".txt", ".tab", ".asc", ".dat", ".prn", ".xlsx", ".xlsm", ".xls", ".ods",
})  # fmt: skip


@record
class RawFiles:
    """All grids of a path, and the mapping file beside them."""

    grids: tuple[RawGrid, ...] = ()
    mapping: RawGrid | None = None
    sources: tuple[Source, ...] = ()
    diagnostics: tuple[Diagnostic, ...] = field(default=())


def folders_of(path: Path) -> tuple[Path, ...]:
    """The folders that hold a cultivation each: those inside a folder without tables of its own."""
    if not path.is_dir() or _tables_in(path):
        return (path,)
    inside = tuple(p for p in sorted(path.iterdir()) if p.is_dir() and _tables_in(p))
    return inside or (path,)


def _tables_in(folder: Path) -> list[Path]:
    return [
        p for p in sorted(folder.iterdir())
        if p.is_file() and p.suffix.lower() in _SUFFIXES and p.name != MAPPING_FILE
        and not p.name.startswith((".", "~$"))
    ]  # fmt: skip


def read_raw_path(path: Path, *, whole: bool = False) -> RawFiles:
    """Read a file, or all tables of a folder, with ``columns.csv`` beside them.

    Parameters
    ----------
    whole
        Whether long texts are read whole.
    """
    files = _tables_in(path) if path.is_dir() else [path]
    if not files:
        words = f"{path} holds no table"
        return RawFiles(diagnostics=(Diagnostic(
            Name.NO_RAW_DATA, words, Span(str(path), 0, 0, 0),
            mend="put CSV, TSV, XLSX, XLS or ODS files there; `fluxnet new` writes templates",
        ),))  # fmt: skip
    grids: list[RawGrid] = []
    faults: list[Diagnostic] = []
    for file in files:
        found = read_raw_file(file, whole=whole)
        grids.extend(found.grids)
        faults.extend(found.diagnostics)
    beside = (path if path.is_dir() else path.parent) / MAPPING_FILE
    if path.is_dir() and not beside.is_file():
        beside = path.parent / MAPPING_FILE  # one for all cultivations
    mapping = None
    if beside.is_file() and beside != path:
        found = read_raw_file(beside)
        mapping = found.grids[0] if found.grids else None
        faults.extend(found.diagnostics)
    sources = tuple(g.source for g in (*grids, *([mapping] if mapping else [])))
    return RawFiles(tuple(grids), mapping, sources, tuple(faults))


def read_raw_file(path: Path, *, whole: bool = False) -> RawFiles:
    """The grids of one file."""
    file = path.as_posix()
    span = Span(file, 0, 0, 0)
    try:
        size = path.stat().st_size
        with path.open("rb") as opened:
            head = opened.read(8)
            is_book = is_workbook(head)
            is_long = size >= LONG_BYTES and not is_book and not whole
            data = head + opened.read(_HEAD if is_long else MOST_BYTES)
    except (OSError, ValueError) as fault:
        words = getattr(fault, "strerror", None) or str(fault)
        missing = isinstance(fault, (FileNotFoundError, NotADirectoryError))
        told = f"there is no file {file}" if missing else f"{file} cannot be opened: {words}"
        return RawFiles(diagnostics=(Diagnostic(Name.FILE_MISSING, told, span),))
    if not data:
        return RawFiles(diagnostics=(Diagnostic(Name.EMPTY_FILE, f"{file} is empty", span),))
    if size > MOST_BYTES and not is_long:
        words = f"{file} has more than {MOST_BYTES // 1_000_000} million bytes"
        return RawFiles(diagnostics=(Diagnostic(Name.FILE_TOO_LONG, words, span),))
    if is_book:
        from fluxnet.tables.raw_workbook import read_raw_workbook  # most tables are texts

        book = read_raw_workbook(data, file)
        return RawFiles(book.sheets, None, (), book.diagnostics)
    if is_long:
        data = data[: max(data.rfind(b"\n") // 2 * 2, 2)]
    decoded = decode(data)
    if decoded.text is None:
        words = f"{file} is neither text nor a workbook"
        mend = "save it as CSV or XLSX"
        return RawFiles(diagnostics=(Diagnostic(Name.BINARY_FILE, words, span, mend=mend),))
    lines = split_lines(decoded.text)
    if is_long:
        lines = lines[:-1]  # the last one may be cut
    grid, faults = cut_text(lines, file, decoded.encoding)
    if is_long:
        grid = RawGrid(grid.file, grid.rows, grid.lines, grid.source, None, grid.separator,
                       grid.encoding, breaks=grid.breaks, long=path)  # fmt: skip
    if not grid.rows:
        words = f"{file} holds only blank lines"
        return RawFiles(diagnostics=(Diagnostic(Name.EMPTY_FILE, words, span),))
    return RawFiles((grid,), None, (grid.source,), faults)
