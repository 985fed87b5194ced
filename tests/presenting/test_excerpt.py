"""The user's own line below a finding, whatever stands in it."""

from __future__ import annotations

import io

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.source import Span
from fluxnet.presenting.excerpt import excerpt_lines, seen
from fluxnet.presenting.terminal import Terminal


def finding(source: str, start: int, end: int) -> Diagnostic:
    span = Span("m.flux", 3, start, end)
    return Diagnostic(Name.UNREADABLE_LINE, "no", span, source_line=source)


def test_signs_that_steer_a_terminal_are_shown_as_their_escapes() -> None:
    source = "product eth\x1b[31manol, a\u202eb"
    stream = io.StringIO()
    Terminal(stream, colour=False, width=80, ascii_only=False).show_diagnostics(
        (finding(source, 12, 13),)
    )

    assert "\x1b" not in stream.getvalue()
    assert "\u202e" not in stream.getvalue()
    assert r"    product eth\x1b[31manol, a\u202eb" in stream.getvalue().splitlines()


def test_the_mark_stands_below_the_words_behind_an_escape() -> None:
    shown, mark = excerpt_lines(finding("\x07 glucose oops", 11, 15))

    assert shown[mark.index("‾") : mark.index("‾") + 4] == "oops"
    assert len(mark.strip()) == 4


def test_of_a_long_line_only_what_stands_around_the_words_is_shown() -> None:
    source = "    " + "a" * 5_000 + "HERE" + "b" * 10_000_000
    shown, mark = excerpt_lines(finding(source, 5_005, 5_009))

    assert len(shown) < 300
    assert shown.startswith("    ... a")
    assert shown.endswith("b ...")
    assert shown[mark.index("‾") : len(mark)] == "HERE"
    start, whole = excerpt_lines(finding(source, 5, len(source) + 1))
    assert start.startswith("    aaaa")
    assert len(whole) < 300


def test_ordinary_text_is_left_alone() -> None:
    assert seen("α ± 2 µmol → بيروفات 🍺") == "α ± 2 µmol → بيروفات 🍺"
