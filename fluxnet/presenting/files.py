"""Tables as files: CSV and workbooks, written beside and then renamed, never half."""

from __future__ import annotations

import csv
import io
import math
import os
import stat
import tempfile
from collections.abc import Sequence
from pathlib import Path

from fluxnet.ground.errors import MisuseError
from fluxnet.ground.table import Cell, Table

__all__ = [
    "refuse_file", "refuse_workbook", "write_bytes", "write_csv", "write_text", "write_workbook",
]  # fmt: skip

# A cell that begins like this would run as a formula in a spreadsheet.
_FORMULA_STARTS = ("=", "+", "-", "@", "\t", "\r")

# A cell of a workbook holds no more letters, a sheet no more rows.
_LONGEST = 32_767
_MOST_ROWS = 1_048_576


def write_text(path: Path, text: str, *, force: bool = False) -> None:
    """Write a text file, whole or not at all.

    Raises
    ------
    MisuseError
        Where the file exists and ``force`` is not given.
    """
    _write(path, text.encode("utf-8"), force)


def write_bytes(path: Path, data: bytes, *, force: bool = False) -> None:
    """Write a file, whole or not at all; as :func:`write_text`."""
    _write(path, data, force)


def write_csv(tables: Sequence[Table], folder: Path, *, force: bool = False) -> tuple[Path, ...]:
    """Write each table as ``KEY.csv`` into a folder; columns by key, numbers in full.

    Raises
    ------
    MisuseError
        Where a file exists and ``force`` is not given.
    """
    folder.mkdir(parents=True, exist_ok=True)
    paths = tuple(folder / f"{table.key}.csv" for table in tables)
    if not force:
        for path in paths:
            _refuse_existing(path)
    for table, path in zip(tables, paths, strict=True):
        stream = io.StringIO(newline="")
        writer = csv.writer(stream)
        writer.writerow([c.key for c in table.columns])
        for row in table.rows:
            writer.writerow([_safe(cell) for cell in row])
        _write(path, stream.getvalue().encode("utf-8"), force=True)
    return paths


def write_workbook(tables: Sequence[Table], path: Path, *, force: bool = False) -> None:
    """Write each table as a sheet: titles, a units row, numbers as numbers.

    Raises
    ------
    MisuseError
        Where the file exists and ``force`` is not given, xlsxwriter is not installed, or a
        table has more rows than a sheet.
    """
    refuse_workbook(path, force=force)
    for table in tables:
        if len(table.rows) + 2 > _MOST_ROWS:
            raise MisuseError(
                f"{path}: the table {table.key} has {len(table.rows):,} rows, and a sheet holds "
                f"{_MOST_ROWS:,}; --csv DIR writes any number"
            )
    import xlsxwriter

    stream = io.BytesIO()
    options = {"in_memory": True, "strings_to_formulas": False, "strings_to_urls": False}
    with xlsxwriter.Workbook(stream, options) as book:
        bold = book.add_format({"bold": True})
        names: set[str] = set()
        for table in tables:
            sheet = book.add_worksheet(_sheet_name(table.key, names))
            for j, column in enumerate(table.columns):
                sheet.write_string(0, j, column.key, bold)
                sheet.write_string(1, j, column.unit)
            for i, row in enumerate(table.rows, start=2):
                for j, cell in enumerate(map(_finite, row)):
                    if isinstance(cell, bool):
                        sheet.write_boolean(i, j, cell)
                    elif isinstance(cell, (int, float)):
                        sheet.write_number(i, j, cell)
                    elif cell is not None:
                        sheet.write_string(i, j, cell[:_LONGEST])
            sheet.freeze_panes(2, 1)
            sheet.autofit()
    _write(path, stream.getvalue(), force)


def refuse_file(path: Path, *, force: bool = False) -> None:
    """Raise what writing a file would raise, before anything is computed for it.

    Raises
    ------
    MisuseError
        Where the file exists and ``force`` is not given, is a folder, or would lie in none.
    """
    if path.is_dir():
        raise MisuseError(f"{path} is a folder; name a file in it")
    if not path.parent.is_dir():
        raise MisuseError(f"{path} cannot be written: there is no folder {path.parent}")
    if not force:
        _refuse_existing(path)


def refuse_workbook(path: Path, *, force: bool = False) -> None:
    """Raise what writing a workbook would raise; as :func:`refuse_file`.

    Raises
    ------
    MisuseError
        Also where xlsxwriter is not installed.
    """
    try:
        import xlsxwriter  # noqa: F401
    except ImportError:
        raise MisuseError(
            f"{path} cannot be written: workbooks need the package xlsxwriter, which is not "
            "installed; pip install 'fluxnet[sheets]', or pip install xlsxwriter"
        ) from None
    refuse_file(path, force=force)


def _safe(cell: Cell) -> Cell:
    if isinstance(cell, str) and cell.startswith(_FORMULA_STARTS):
        return "'" + cell
    return _finite(cell)


def _finite(cell: Cell) -> Cell:
    """The cell, blank where it is an infinite end or no number: as null is in JSON."""
    return None if isinstance(cell, float) and not math.isfinite(cell) else cell


def _sheet_name(key: str, names: set[str]) -> str:
    """A name that a workbook allows: at most 31 characters, unique."""
    base = "".join("_" if letter in "[]:*?/\\'" else letter for letter in key)[:28]
    name, number = base, 2
    while name.lower() in names:
        name, number = f"{base[:25]}_{number}", number + 1
    names.add(name.lower())
    return name


def _refuse_existing(path: Path) -> None:
    if path.exists():
        raise MisuseError(f"{path} exists; --force overwrites it")


def _write(path: Path, data: bytes, force: bool) -> None:
    """Write beside the file that the path leads to, then rename; its rights are kept."""
    if not force:
        _refuse_existing(path)
    target = Path(os.path.realpath(path))
    rights = _rights(target, path)
    try:
        handle, name = tempfile.mkstemp(prefix=f".{target.name[:50]}.", dir=target.parent)
    except OSError as error:
        raise OSError(error.errno, error.strerror, str(path)) from None
    try:
        with os.fdopen(handle, "wb") as file:
            file.write(data)
        os.chmod(name, rights)
        os.replace(name, target)
    except BaseException as error:
        Path(name).unlink(missing_ok=True)
        if isinstance(error, OSError):
            raise OSError(error.errno, error.strerror, str(path)) from None
        raise


def _rights(target: Path, shown: Path) -> int:
    """The rights of the file to be written; nothing but an ordinary file is replaced."""
    try:
        found = os.lstat(target)
    except FileNotFoundError:
        return 0o666 & ~_umask()
    if not stat.S_ISREG(found.st_mode):
        raise MisuseError(f"{shown} is no ordinary file; name another")
    return stat.S_IMODE(found.st_mode)


def _umask() -> int:
    mask = os.umask(0)
    os.umask(mask)
    return mask
