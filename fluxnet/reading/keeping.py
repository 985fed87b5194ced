"""A parser made from a grammar, kept for the next start.

Making it takes longer than all the reading that follows, so that it is kept in the user's cache
folder, by the library's own means. The grammar stays what counts: a kept parser is named by the
text of the grammar and the versions that it depends on, and one that is missing, broken or
cannot be written costs only the time of making it again.

A parser packed with the installation would spare the first start as well. It was not chosen: it
holds for one version of the library, which is not known before the installation.
"""

from __future__ import annotations

import os
import sys
from contextlib import suppress
from hashlib import sha256
from pathlib import Path
from typing import Any

import lark
from lark import Lark

__all__ = ["cache_folder", "open_parser"]


def open_parser(grammar: Path, **options: Any) -> Lark:
    """The parser of a grammar: as kept by an earlier start, else made and kept.

    Parameters
    ----------
    grammar
        The file of the grammar; what it imports lies in the same folder.
    options
        Those of :class:`lark.Lark`; none that is an object may change what is parsed.
    """
    place = _place(grammar, options)
    if place is None or place.exists():
        return Lark.open(str(grammar), cache=place and str(place), **options)
    with suppress(OSError):
        place.parent.mkdir(mode=0o700, parents=True, exist_ok=True)
    # It takes its place when it is whole: no process reads what another one is writing.
    made = place.with_suffix(f".{os.getpid()}")
    parser = Lark.open(str(grammar), cache=str(made), **options)
    with suppress(OSError):
        made.replace(place)
    return parser


def cache_folder() -> Path | None:
    """The user's folder for what can be made again; None where there is no home."""
    said = Path(os.environ.get("LOCALAPPDATA" if os.name == "nt" else "XDG_CACHE_HOME", ""))
    if said.is_absolute():
        return said / "fluxnet"
    try:
        return Path.home() / ".cache" / "fluxnet"
    except RuntimeError:
        return None


def _place(grammar: Path, options: dict[str, Any]) -> Path | None:
    """The file of a kept parser, named by all that it depends on."""
    folder = cache_folder()
    if folder is None:
        return None
    plain = sorted((k, v) for k, v in options.items() if isinstance(v, str | int))
    depends = sha256(f"{lark.__version__} {sys.version} {plain}".encode())
    for path in sorted(grammar.parent.glob("*.lark")):
        depends.update(path.read_bytes())
    return folder / f"parser-{depends.hexdigest()[:32]}"
