"""What the lines of a model said when it was read last.

A model is read again and again while few of its lines change. What a line says depends on its
text alone, so the statements of a file are kept beside the parser (see
:mod:`fluxnet.reading.parser_cache`), by the texts of its lines, and only lines that are new are
parsed. The name of the kept file depends on the grammar, on lark, on Python and on the code that
makes statements. Only statements are read back, never code; whatever is wrong with a kept file,
the lines are parsed.
"""

from __future__ import annotations

import io
import os
import pickle
import tempfile
from collections.abc import Mapping
from contextlib import suppress
from fractions import Fraction
from hashlib import sha256
from pathlib import Path
from typing import Any
from zlib import crc32

from fluxnet.ground.resources import resource_folder
from fluxnet.network.model import Direction, Relation, Role
from fluxnet.reading import syntax
from fluxnet.reading.parser_cache import cache_file

__all__ = ["keep_statements", "kept_statements", "statement_file"]

_PLACES = 32
"""No more files are kept: models whose places are the same take turns."""
_LARGEST = 4_000_000
_MAKERS = ("syntax.py", "building.py")

_PARTS: dict[tuple[str, str], Any] = {
    ("fractions", "Fraction"): Fraction,
    **{(kind.__module__, kind.__name__): kind for kind in (Direction, Relation, Role)},
    **{
        (syntax.__name__, name): getattr(syntax, name)
        for name in syntax.__all__
        if isinstance(getattr(syntax, name), type)
    },
}


class _Statements(pickle.Unpickler):
    """Reads statements and what they are made of; refuses everything else."""

    def find_class(self, module: str, name: str) -> Any:
        found = _PARTS.get((module, name))
        if found is None:
            raise pickle.UnpicklingError(f"{module}.{name} is no part of a statement")
        return found


def statement_file(model: Path) -> Path | None:
    """Where the statements of a model's file are kept, or None where there is no place for it."""
    try:
        parser = cache_file(resource_folder("grammar").glob("*.lark"))
        digest = sha256(b"" if parser is None else parser.name.encode())
        for name in _MAKERS:
            digest.update((Path(__file__).parent / name).read_bytes())
        place = crc32(str(model.resolve()).encode()) % _PLACES
    except (OSError, RuntimeError, UnicodeError):
        return None
    if parser is None:
        return None
    return parser.with_name(f"statements-{digest.hexdigest()[:24]}-{place}")


def kept_statements(file: Path) -> dict[str, syntax.Statement]:
    """The statements that are kept in a file, by the texts of their lines."""
    try:
        with file.open("rb") as stored:
            data = stored.read(_LARGEST + 1)
        kept = _Statements(io.BytesIO(data)).load() if len(data) <= _LARGEST else {}
        return {
            text: said for text, said in kept.items()
            if isinstance(text, str) and isinstance(said, syntax.Statement)
        }  # fmt: skip
    except Exception:
        # whatever is wrong with the file, the lines themselves are at hand
        return {}


def keep_statements(statements: Mapping[str, syntax.Statement], file: Path) -> None:
    """Keep statements in a file; a folder that cannot be written to is no fault."""
    with suppress(OSError, RecursionError):
        data = pickle.dumps(dict(statements), pickle.HIGHEST_PROTOCOL)
        if len(data) > _LARGEST:
            return
        file.parent.mkdir(parents=True, exist_ok=True)
        handle, name = tempfile.mkstemp(dir=file.parent, prefix="statements-")
        try:
            with os.fdopen(handle, "wb") as temporary:
                temporary.write(data)
            Path(name).replace(file)
        except OSError:
            Path(name).unlink(missing_ok=True)
            raise
