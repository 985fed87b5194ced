"""Files of text: found, decoded, cut into lines. What cannot be read is told, never raised."""

from __future__ import annotations

from pathlib import Path

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.pattern import pattern_of
from fluxnet.ground.source import Source, Span

__all__ = ["MOST_BYTES", "MOST_LINES", "read_source", "source_of_bytes", "source_of_text",
           "split_lines"]

MOST_LINES = 20_000
"""More lines than this are refused unless they are asked for."""

MOST_BYTES = 50_000_000
"""No more of a file is read: it may have no end."""

_LINE_END = pattern_of("\r\n|\r|\n")


def read_source(
    path: Path, *, shown: str | None = None, large: bool = False
) -> tuple[Source | None, tuple[Diagnostic, ...]]:
    """The text of a file, and what is wrong with it."""
    name = shown or str(path)
    span = Span(name, 0)
    try:
        if path.is_dir():
            return None, (Diagnostic(Name.NOT_A_FILE, f"{name} is a folder", span,
                                     mend="name the file inside it"),)
        with path.open("rb") as file:
            data = file.read(MOST_BYTES + 1)
    except (FileNotFoundError, NotADirectoryError):
        return None, (Diagnostic(Name.FILE_MISSING, f"there is no file {name}", span,
                                 mend=_beside(path)),)
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or str(error)
        return None, (Diagnostic(Name.FILE_MISSING, f"{name} cannot be opened: {reason}", span),)
    return source_of_bytes(data, name, large=large)


def _beside(path: Path) -> str | None:
    from fluxnet.reading.findings import nearest_names

    try:
        others = [p.name for p in path.parent.iterdir()]
    except (OSError, ValueError):
        return f"there is no folder {path.parent}"
    near = nearest_names(path.name, others)
    return f"a file with a similar name is there: {', '.join(near)}" if near else None


def source_of_bytes(
    data: bytes, name: str, *, large: bool = False
) -> tuple[Source | None, tuple[Diagnostic, ...]]:
    """The text that bytes hold, and what is wrong with them.

    Parameters
    ----------
    name
        What the text is called in findings.
    large
        Whether more than 20,000 lines are meant.

    Examples
    --------
    >>> source, told = source_of_bytes("# 5 µM".encode("latin-1"), "core.flux")
    >>> source.lines, [d.name.value for d in told]
    (('# 5 µM',), ['wrong-encoding'])
    """
    notes: list[Diagnostic] = []
    span = Span(name, 0)
    if len(data) > MOST_BYTES:
        size = MOST_BYTES // 1_000_000
        return None, (Diagnostic(Name.FILE_TOO_LONG, f"{name} has more than {size} million bytes",
                                 span, mend="is this the file that is meant?"),)
    if data.startswith((b"\xff\xfe", b"\xfe\xff")):
        text = data.decode("utf-16", errors="replace")
    elif data.startswith((b"PK\x03\x04", b"\xd0\xcf\x11\xe0")):
        return None, (Diagnostic(Name.BINARY_FILE, f"{name} is a workbook, and no model", span,
                                 mend="a model is plain text; a workbook can hold the rates: "
                                 "fluxnet closure rates.xlsx"),)
    elif b"\x00" in data[:65536] or data.startswith(b"%PDF"):
        return None, (Diagnostic(Name.BINARY_FILE, f"{name} is not a text file", span,
                                 mend="save it as plain text (UTF-8)"),)
    else:
        try:
            text = data.decode("utf-8-sig")
        except UnicodeDecodeError as error:
            text = data.decode("latin-1")
            line = data.count(b"\n", 0, error.start) + 1
            notes.append(
                Diagnostic(Name.WRONG_ENCODING, f"{name} is not UTF-8; it was read as Latin-1",
                           Span(name, line), mend="save the file as UTF-8")
            )
    source, more = source_of_text(text, name, large=large)
    return source, (*notes, *more)


def source_of_text(
    text: str, name: str, *, large: bool = False
) -> tuple[Source | None, tuple[Diagnostic, ...]]:
    r"""A text cut into lines, and what is wrong with it as a whole.

    Parameters
    ----------
    name
        What the text is called in findings.
    large
        Whether more than 20,000 lines are meant.

    Examples
    --------
    >>> source, told = source_of_text("product CO2\nsubstrate glucose", "core.flux")
    >>> source.line(2), told
    ('substrate glucose', ())
    """
    lines = split_lines(text)
    span = Span(name, 0)
    if len(lines) > MOST_LINES and not large:
        return None, (
            Diagnostic(
                Name.FILE_TOO_LONG,
                f"{name} has {len(lines)} lines; more than {MOST_LINES} are no model as one is "
                "expected",
                span, mend="if it is meant, repeat the command with --large",
            ),
        )
    if "\x00" in text:
        return None, (Diagnostic(Name.BINARY_FILE, f"{name} is not a text file", span,
                                 mend="save it as plain text (UTF-8)"),)
    return Source(name, lines), ()


def split_lines(text: str) -> tuple[str, ...]:
    r"""The lines of a text, as an editor counts them.

    Examples
    --------
    >>> split_lines("one\r\ntwo\n")
    ('one', 'two')
    """
    lines = _LINE_END.split(text.removeprefix("\ufeff"))
    if len(lines) > 1 and not lines[-1]:
        lines.pop()
    return tuple(lines)
