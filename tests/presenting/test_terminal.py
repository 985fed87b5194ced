from __future__ import annotations

import io

import pytest

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Name
from fluxnet.ground.source import Span
from fluxnet.ground.table import Align, Column, Table
from fluxnet.presenting.screen import Heading, Mood, Sentence
from fluxnet.presenting.terminal import Terminal, diagnostic_lines

LONG_NAME = "a_very_long_reaction_name_that_nobody_should_ever_have_to_guess_the_end_of" * 2


class TerminalStream(io.StringIO):
    encoding = "utf-8"

    def isatty(self) -> bool:
        return True


def table(name: str = "glucose") -> Table:
    return Table(
        "rates",
        "Rates",
        (
            Column("species", "species"),
            Column("rate", "rate", "mmol/g/h", Align.RIGHT),
            Column("", "rate_sd", sd_of="rate"),
        ),
        ((name, 2.0, 0.11), ("CO2", None, None)),
        notes=("sd: one standard deviation",),
    )


def shown(encoding: str = "utf-8", **options: bool) -> str:
    data = io.BytesIO()
    stream = io.TextIOWrapper(data, encoding=encoding, errors="backslashreplace")
    screen = (Heading("Run A"), Sentence("It closes.", Mood.GOOD, verdict=True), table(LONG_NAME))
    Terminal.on(stream).show(screen, **options)
    stream.flush()
    return data.getvalue().decode(encoding)


def test_a_name_is_never_cut_in_a_pipe(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.delenv("COLUMNS", raising=False)

    assert LONG_NAME in shown()


def test_no_escape_sequence_reaches_a_pipe() -> None:
    assert "\x1b" not in shown()


def test_a_value_stands_with_its_sd_and_a_missing_one_is_a_dash() -> None:
    text = shown()

    assert "2.00 ± 0.11" in text
    assert "–" in text


def test_quiet_keeps_the_verdict_only() -> None:
    assert shown(quiet=True).strip() == "It closes."


@pytest.mark.parametrize("encoding", ["ascii", "cp1252", "latin-1"])
def test_other_encodings_get_ascii_signs(encoding: str) -> None:
    assert "2.00 +- 0.11" in shown(encoding)


def test_no_color_leaves_no_escape_on_a_terminal(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("NO_COLOR", "1")
    monkeypatch.setenv("TERM", "xterm-256color")
    stream = TerminalStream()
    Terminal.on(stream).show((Sentence("It closes.", Mood.GOOD), table()))

    assert "\x1b" not in stream.getvalue()


def test_a_finding_marks_the_guilty_words_below_the_users_line() -> None:
    line = "    pdh : pyruvate -> 2 CO2"
    lines = diagnostic_lines(
        Diagnostic(
            Name.UNBALANCED_LINE, "it makes carbon", Span("m.flux", 3, 23, 28), source_line=line
        )
    )

    assert lines[0] == "m.flux, line 3, column 23: it makes carbon (unbalanced-line)"
    start = lines[2].index("‾")
    assert lines[1][start : start + 5] == "2 CO2"
    assert lines[2].count("‾") == 5


def test_markup_in_a_name_is_shown_as_typed() -> None:
    stream = io.StringIO()
    Terminal.on(stream).show((Sentence("[bold]X[/bold] :smile:"), table("[red]gl[/red]")))

    assert "[bold]X[/bold] :smile:" in stream.getvalue()
    assert "[red]gl[/red]" in stream.getvalue()


def test_a_place_that_is_a_whole_file_is_told_without_a_line() -> None:
    found = Diagnostic(
        Name.NOT_A_FILE, "sub is a folder", Span("a.flux", 3, 1, 2), also=(Span("sub", 0, 1, 1),)
    )

    assert diagnostic_lines(found)[-1] == "    see      sub"
