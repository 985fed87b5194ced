"""The parser kept between two starts: made once from the grammar, then loaded.

It lies in the user's cache folder (``$XDG_CACHE_HOME/fluxnet``, else ``~/.cache/fluxnet``; on
Windows ``%LOCALAPPDATA%/fluxnet``) under a name that depends on the grammar, on lark and on
Python. A file that cannot be read, or is not what it should be, is passed over: the parser is
then made anew. Only plain data are read back, never code. (A parser packed with the installation
would spare the first start too, but holds for one version of lark, not known before.)
"""

from __future__ import annotations

import hashlib
import io
import os
import pickle
import sys
import tempfile
from collections.abc import Callable, Iterable
from contextlib import suppress
from pathlib import Path
from typing import Any, cast

import lark
from lark import Lark, Token, Transformer

__all__ = ["cache_file", "keep_parser", "kept_parser"]


class _PlainData(pickle.Unpickler):
    """Reads numbers, texts, lark's texts and their collections; refuses everything else."""

    def find_class(self, module: str, name: str) -> type[Token]:
        if (module, name) == ("lark.lexer", "Token"):
            return Token
        raise pickle.UnpicklingError(f"{module}.{name} is no plain data")


def cache_file(grammar: Iterable[Path]) -> Path | None:
    """Where the parser of a grammar is kept, or None where there is no place for it."""
    digest = hashlib.sha256(f"{lark.__version__} {sys.version_info[:3]}".encode())
    try:
        for path in sorted(grammar):
            digest.update(path.read_bytes())
        said = "LOCALAPPDATA" if os.name == "nt" else "XDG_CACHE_HOME"
        folder = os.environ.get(said) or "~/.cache"
        root = Path(folder).expanduser()
    except (OSError, RuntimeError):
        return None
    if not root.is_absolute():
        return None
    return root / "fluxnet" / f"parser-{digest.hexdigest()[:24]}"


def kept_parser(file: Path, transformer: Transformer[Any, Any]) -> Lark | None:
    """The parser that is kept in a file, or None."""
    try:
        with file.open("rb") as stored:
            data = _PlainData(stored).load()
        load = cast("Callable[..., Lark]", Lark._load_from_dict)
        return load(data["data"], data["memo"], transformer=transformer)
    except Exception:
        # whatever is wrong with the file, the grammar itself is at hand
        return None


def keep_parser(parser: Lark, file: Path) -> None:
    """Keep a parser in a file; a folder that cannot be written to is no fault."""
    stored = io.BytesIO()
    parser.save(stored, ("transformer",))
    with suppress(OSError):
        file.parent.mkdir(parents=True, exist_ok=True)
        handle, name = tempfile.mkstemp(dir=file.parent, prefix="parser-")
        try:
            with os.fdopen(handle, "wb") as temporary:
                temporary.write(stored.getvalue())
            Path(name).replace(file)
        except OSError:
            Path(name).unlink(missing_ok=True)
            raise
