"""From bytes to text: byte-order marks, UTF-8, UTF-16, Latin-1; what is no text is refused."""

from __future__ import annotations

import codecs

from fluxnet.ground.pattern import pattern_of
from fluxnet.ground.record import record

__all__ = ["Decoded", "decode"]

_MARKS = (
    (codecs.BOM_UTF8, "utf-8", "UTF-8"),
    (codecs.BOM_UTF16_LE, "utf-16-le", "UTF-16"),
    (codecs.BOM_UTF16_BE, "utf-16-be", "UTF-16"),
)
_CONTROL = pattern_of("[\x00-\x08\x0e-\x1f]")


@record
class Decoded:
    """Text and the encoding it was read in; ``text`` is None where the bytes are no text.

    ``guessed`` says that the encoding does not show in the bytes (Latin-1).
    """

    text: str | None
    encoding: str
    guessed: bool = False


def decode(data: bytes) -> Decoded:
    r"""Read bytes as text.

    A byte-order mark decides; without one UTF-16 is known by its zero bytes, then UTF-8 is
    tried, then Latin-1 (with the Windows signs where they fit).

    Examples
    --------
    >>> decode("mu; µ".encode("latin-1"))
    Decoded(text='mu; µ', encoding='Latin-1', guessed=True)
    >>> decode(b"\x00\x01\x02\x03").text is None
    True
    """
    for mark, codec, shown in _MARKS:
        if data.startswith(mark):
            return _checked(data[len(mark) :], codec, shown)
    half = len(data) // 2
    if half and not len(data) % 2:
        for codec, start in (("utf-16-le", 1), ("utf-16-be", 0)):
            if data[start::2].count(0) > 0.7 * half and not data[1 - start :: 2].count(0):
                return _checked(data, codec, "UTF-16")
    found = _checked(data, "utf-8", "UTF-8")
    if found.text is not None or b"\x00" in data:
        return found
    for codec in ("cp1252", "latin-1"):
        found = _checked(data, codec, "Latin-1", guessed=True)
        if found.text is not None:
            return found
    return found


def _checked(data: bytes, codec: str, shown: str, *, guessed: bool = False) -> Decoded:
    try:
        text = data.decode(codec)
    except UnicodeDecodeError:
        return Decoded(None, shown, guessed)
    if _CONTROL.search(text):
        return Decoded(None, shown, guessed)
    return Decoded(text, shown, guessed)
