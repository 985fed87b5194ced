"""Results as data: the envelope of every ``--json`` document."""

from __future__ import annotations

import hashlib
import math
from collections.abc import Mapping, Sequence
from enum import StrEnum
from fractions import Fraction
from pathlib import Path
from typing import Any

import fluxnet
from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.record import record
from fluxnet.ground.source import Span

__all__ = [
    "Document", "Input", "diagnostic_record", "document_text", "hash_bytes", "hash_file",
    "span_record",
]

Record = dict[str, Any]
_MOST_SPREAD_OUT = 100
_NO_RUNS = '\n  "runs": []'


class Document(StrEnum):
    """The names of the documents with their versions."""

    CHECK = "check/1"
    TIDY = "tidy/1"
    CLOSURE = "closure/1"
    SOLVE = "solve/1"
    CATALOGUE = "catalogue/1"
    FRONTIER = "frontier/1"
    ROUTES = "routes/1"
    COMPARE = "compare/1"
    LUMP = "lump/1"
    RATES = "rates/1"


@record
class Input:
    """A file that a result depends on, with the SHA-256 of its bytes."""

    file: str
    sha256: str


def hash_file(path: Path, shown: str) -> Input:
    """The input as named by the user, with its hash."""
    return hash_bytes(path.read_bytes(), shown)


def hash_bytes(data: bytes, shown: str) -> Input:
    """The input that was read as these bytes, with their hash."""
    return Input(shown, hashlib.sha256(data).hexdigest())


def document_text(
    document: Document,
    inputs: Sequence[Input],
    diagnostics: Sequence[Diagnostic],
    body: Mapping[str, Any],
) -> str:
    """A whole document as JSON text: the envelope, the findings, then the body's keys.

    Numbers are at full precision; missing ones and infinities are null. Many runs stand one a
    line, which is shorter and sooner written.
    """
    record = {
        "fluxnet": fluxnet.__version__,
        "document": document,
        "inputs": [{"file": i.file, "sha256": i.sha256} for i in inputs],
        "warnings": [diagnostic_record(d) for d in diagnostics],
        **body,
    }
    runs = record.get("runs", ())
    if len(runs) <= _MOST_SPREAD_OUT:
        return _json(record, indent=2)
    head, tail = _json({**record, "runs": []}, indent=2).split(_NO_RUNS, 1)
    lines = ",\n".join(f"    {_json(run)}" for run in runs)
    return f"{head}{_NO_RUNS[:-1]}\n{lines}\n  ]{tail}"


def _json(value: Any, indent: int | None = None) -> str:
    import json  # most answers are shown, not written

    return json.dumps(_finite(value), ensure_ascii=False, allow_nan=False, indent=indent)


def diagnostic_record(diagnostic: Diagnostic) -> Record:
    """A finding as data."""
    return {
        "name": diagnostic.name.value,
        "severity": diagnostic.severity.value,
        "message": diagnostic.message,
        **span_record(diagnostic.span),
        "because": diagnostic.because,
        "mend": diagnostic.mend,
        "also": [span_record(span) for span in diagnostic.also],
        "accepted": diagnostic.accepted,
    }


def span_record(span: Span) -> Record:
    """A place as data; null where the finding has none."""
    known = span.line > 0
    return {
        "file": span.file or None,
        "line": span.line if known else None,
        "column": span.column if known else None,
        "end_column": span.end_column if known else None,
    }


def _finite(value: Any) -> Any:
    """The value with what JSON lacks replaced: fractions by floats, NaN and infinity by null."""
    if isinstance(value, Mapping):
        return {key: _finite(item) for key, item in value.items()}
    if isinstance(value, (list, tuple)):
        return [_finite(item) for item in value]
    if isinstance(value, (bool, str)) or value is None:
        return value
    if isinstance(value, Fraction):
        return float(value)
    if isinstance(value, int):
        return value
    number = float(value)
    return number if math.isfinite(number) else None
