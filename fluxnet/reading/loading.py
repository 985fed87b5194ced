"""All statements of a model, those of the files that it uses among them."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass, field
from pathlib import Path
from typing import NamedTuple

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.source import Source, Span
from fluxnet.network.model import Role
from fluxnet.reading import syntax as s
from fluxnet.reading.blocks import Placed, Rejected, place_statements
from fluxnet.reading.fault_record import NAME, Known
from fluxnet.reading.findings import Findings, nearest_names
from fluxnet.reading.lines import LONGEST, LogicalLine, logical_lines
from fluxnet.reading.parsing import Unparsed, parse_statement
from fluxnet.reading.scope import words_of
from fluxnet.reading.source import read_source
from fluxnet.reading.statement_cache import keep_statements, kept_statements, statement_file

__all__ = ["Loaded", "Place", "load_statements"]

_ROLES = {role.value for role in Role}

_DEEPEST = 100
"""No more files use one another in a row."""


class Place(NamedTuple):
    """Where ``use`` looks and may look.

    ``folder`` is the folder of the model named by the user (None where it came as a text
    without one); files outside it must lie in or be one of ``allowed``.
    """

    folder: Path | None
    allowed: tuple[Path, ...] = ()
    large: bool = False


@dataclass(slots=True, eq=False, repr=False)
class Loaded:
    """Statements in order, the texts they come from, and the lines that were refused."""

    placed: list[Placed] = field(default_factory=list)
    sources: list[Source] = field(default_factory=list)
    rejected: list[Rejected] = field(default_factory=list)
    files: set[Path] = field(default_factory=set)


def load_statements(source: Source, path: Path | None, place: Place, findings: Findings) -> Loaded:
    """The statements of a text and of all files that it uses, each file once.

    Parameters
    ----------
    source
        The text of the model itself.
    path
        Its file; None for a text.
    place
        Where used files may lie.
    findings
        Takes what is wrong.
    """
    loaded = Loaded()
    chain: tuple[Path, ...] = ()
    if path is not None:
        chain = (path.resolve(),)
        loaded.files.update(chain)
    folder = path.parent if path is not None else place.folder
    _load(source, folder, chain, place, findings, loaded)
    return loaded


def _load(
    source: Source, folder: Path | None, chain: tuple[Path, ...], place: Place,
    findings: Findings, loaded: Loaded,
) -> None:
    loaded.sources.append(source)
    parsed = _parse_all(logical_lines(source), chain[-1] if chain else None, findings)
    known = _known(parsed)
    for line, said in parsed:
        if isinstance(said, Unparsed) and len(line.text) <= LONGEST:
            from fluxnet.reading.faults import explain_line  # only faulty files need it

            explain_line(line, said, known, findings)
    placed, rejected = place_statements(parsed, findings)
    loaded.rejected.extend(rejected)
    for one in placed:
        use = one.statement.line
        if isinstance(use, s.UseLine):
            _use(one.line, use, folder, chain, place, findings, loaded)
        else:
            loaded.placed.append(one)


def _parse_all(
    lines: Iterable[LogicalLine], path: Path | None, findings: Findings
) -> list[tuple[LogicalLine, s.Statement | Unparsed]]:
    """What each line says; of a file's lines those are parsed that it did not hold before."""
    file = None if path is None else statement_file(path)
    kept = {} if file is None else kept_statements(file)
    parsed = [(line, kept.get(line.text) or _parse(line, findings)) for line in lines]
    said = {line.text: one for line, one in parsed if isinstance(one, s.Statement)}
    if file is not None and said.keys() != kept.keys():
        keep_statements(said, file)
    return parsed


def _parse(line: LogicalLine, findings: Findings) -> s.Statement | Unparsed:
    if len(line.text) <= LONGEST:
        return parse_statement(line.text)
    findings.add(
        Name.UNREADABLE_LINE, f"this line has {len(line.text)} characters, more than {LONGEST}",
        line, mend="a model has one statement a line: is this the file that is meant?",
    )
    return Unparsed(0)


def _known(parsed: Iterable[tuple[LogicalLine, s.Statement | Unparsed]]) -> Known:
    """The names that are declared, those that a rejected line means to declare among them."""
    species: set[str] = set()
    parameters: set[str] = set()
    for line, statement in parsed:
        if isinstance(statement, Unparsed):
            if len(line.text) > LONGEST:
                continue
            first, _, rest = line.text.partition(" ")
            if first == "parameter":
                parameters.update(_first_name(rest))
            elif first in _ROLES:
                species.update(words_of([rest]))
            continue
        if isinstance(statement.line, s.SpeciesLine):
            species.update(entry.name.text for entry in statement.line.entries)
        elif isinstance(statement.line, s.ParameterLine):
            parameters.add(statement.line.assignment.name.text)
    return Known(frozenset(species), frozenset(parameters))


def _first_name(text: str) -> list[str]:
    found = re.match(rf"\s*({NAME})", text)
    return [found[1]] if found else []


def _use(
    line: LogicalLine, said: s.UseLine, folder: Path | None, chain: tuple[Path, ...],
    place: Place, findings: Findings, loaded: Loaded,
) -> None:
    written = said.path.text.strip()
    if folder is None:
        findings.add(
            Name.USE_MISSING, f"{written} cannot be found: the model is a text without a folder",
            line, said.path, mend="save the model in a file, beside the file that it uses",
        )
        return
    path = _found(line, said, written, folder, place, findings)
    if path is None or path in loaded.files:
        if path is not None and path in chain:
            files = " uses ".join(p.name for p in (*chain[chain.index(path) :], path))
            findings.add(
                Name.USE_CIRCLE, f"files use one another in a circle: {files}", line, said.path,
                mend="take one of these `use` lines away",
            )
        return
    if len(chain) >= _DEEPEST:
        findings.add(
            Name.FILE_TOO_LONG, f"more than {_DEEPEST} files use one another in a row", line,
            said.path, mend="use the file from the model itself",
        )
        return
    loaded.files.add(path)
    shown = str(Path(line.file).parent / written)
    source, told = read_source(path, shown=shown, large=place.large)
    for one in told:
        _pass_on(one, line, said, findings)
    if source is not None:
        _load(source, path.parent, (*chain, path), place, findings, loaded)


def _found(
    line: LogicalLine, said: s.UseLine, written: str, folder: Path, place: Place,
    findings: Findings,
) -> Path | None:
    """The file that a ``use`` names, where it may be read."""
    try:
        path = (folder / written).resolve()
        absolute = Path(written).is_absolute() or bool(re.match(r"[A-Za-z]:[\\/]", written))
        root = (place.folder or folder).resolve()
        allowed = any(path.is_relative_to(p.resolve()) for p in place.allowed)
        inside = not absolute and path.is_relative_to(root)
        exists = path.exists()
    except (OSError, ValueError, RuntimeError):
        path, allowed, inside, exists = folder, True, True, False
    if not written or (not exists and (inside or allowed)):
        near = _names_beside(path, written)
        findings.add(
            Name.USE_MISSING, f"there is no file {written or 'without a name'}", line, said.path,
            because="the path is relative to the folder of the file that uses it",
            mend=f"a file with a similar name is there: {', '.join(near)}" if near else None,
        )
        return None
    if not (inside or allowed):
        what = "is an absolute path" if absolute else "leaves the model's folder"
        findings.add(
            Name.USE_OUTSIDE, f"{written} {what}", line, said.path,
            mend="copy the file beside the model, or allow it with --allow-use",
        )
        return None
    return path


def _names_beside(path: Path, written: str) -> tuple[str, ...]:
    try:
        return nearest_names(Path(written).name, (p.name for p in path.parent.iterdir()))
    except (OSError, ValueError):
        return ()


def _pass_on(
    told: Diagnostic, line: LogicalLine, said: s.UseLine, findings: Findings
) -> None:
    """A finding about a used file as a whole, told at the line that uses it."""
    if told.span.line:
        findings.found.append(told)
        return
    also: tuple[Span, ...] = (told.span,)
    findings.add(told.name, told.message, line, said.path, mend=told.mend, also=also)
