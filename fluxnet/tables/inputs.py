"""Bytes of a file as lines of text or as the sheets of a workbook."""

from __future__ import annotations

from dataclasses import field
from pathlib import Path

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.record import record
from fluxnet.ground.source import Span
from fluxnet.tables.decoding import decode
from fluxnet.tables.delimited import split_lines
from fluxnet.tables.grid import Grid

__all__ = ["MOST_BYTES", "Input", "is_workbook", "read_input"]

MOST_BYTES = 200_000_000
"""No more of a file is read: it may have no end."""


@record
class Input:
    """One file: lines of text, or sheets; neither where ``diagnostics`` hold the reason."""

    file: str
    lines: tuple[str, ...] = ()
    sheets: tuple[Grid, ...] = ()
    diagnostics: tuple[Diagnostic, ...] = field(default=())


def read_input(data: bytes | Path, file: str) -> Input:
    """Read a file, or bytes that were read already; ``file`` is its name in messages."""
    if isinstance(data, Path):
        found = _bytes_of(data, file)
        if isinstance(found, Diagnostic):
            return Input(file, diagnostics=(found,))
        data = found
    span = Span(file, 0, 0, 0)
    if not data:
        return Input(file, diagnostics=(Diagnostic(Name.EMPTY_FILE, f"{file} is empty", span),))
    if len(data) > MOST_BYTES:
        words = f"{file} has more than {MOST_BYTES // 1_000_000} million bytes"
        mend = "is this the file that is meant?"
        return Input(file, diagnostics=(Diagnostic(Name.FILE_TOO_LONG, words, span, mend=mend),))
    if is_workbook(data):
        from fluxnet.tables.workbook import read_workbook  # most tables are texts

        book = read_workbook(data, file)
        return Input(file, (), book.sheets, book.diagnostics)
    decoded = decode(data)
    if decoded.text is None:
        words = f"{file} is neither text nor a workbook"
        return Input(file, diagnostics=(
            Diagnostic(Name.BINARY_FILE, words, span, mend="save it as CSV or XLSX"),
        ))  # fmt: skip
    lines = split_lines(decoded.text)
    if not any(line.strip() for line in lines):
        words = f"{file} holds only blank lines"
        return Input(file, diagnostics=(Diagnostic(Name.EMPTY_FILE, words, span),))
    if not decoded.guessed:
        return Input(file, lines)
    words = f"{file} is not UTF-8 and was read as Latin-1"
    note = Diagnostic(Name.WRONG_ENCODING, words, span, mend="save the file as UTF-8")
    return Input(file, lines, diagnostics=(note,))


def is_workbook(data: bytes) -> bool:
    """Whether bytes are a packed workbook, or one of an older kind that cannot be read."""
    return data.startswith((b"PK\x03\x04", b"\xd0\xcf\x11\xe0"))


def _bytes_of(path: Path, file: str) -> bytes | Diagnostic:
    span = Span(file, 0, 0, 0)
    try:
        if path.is_dir():
            return Diagnostic(
                Name.NOT_A_FILE, f"{file} is a folder", span, mend="name the file inside it"
            )
        with path.open("rb") as opened:
            return opened.read(MOST_BYTES + 1)
    except (FileNotFoundError, NotADirectoryError):
        return Diagnostic(Name.FILE_MISSING, f"there is no file {file}", span)
    except (OSError, ValueError) as fault:
        words = getattr(fault, "strerror", None) or str(fault)
        return Diagnostic(Name.FILE_MISSING, f"{file} cannot be opened: {words}", span)
