"""Screens and diagnostics on a terminal or in a pipe (rich is imported when called)."""

from __future__ import annotations

import os
import sys
from io import StringIO
from typing import TYPE_CHECKING, NoReturn, TextIO

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.ground.names import Severity
from fluxnet.ground.record import record
from fluxnet.ground.table import Align, Table
from fluxnet.presenting.cells import table_cells
from fluxnet.presenting.excerpt import excerpt_lines, place_of, seen
from fluxnet.presenting.screen import Block, Data, Drawing, Heading, Mood, Sentence
from fluxnet.presenting.table_lines import lay_out

if TYPE_CHECKING:
    from rich.console import Console
    from rich.text import Text

__all__ = ["Terminal", "diagnostic_lines", "rich_text"]

_STYLE = {
    Mood.PLAIN: "",
    Mood.GOOD: "green",
    Mood.BAD: "bold red",
    Mood.DOUBTFUL: "yellow",
    Mood.QUIET: "dim",
}
_SEVERITY_STYLE = {Severity.ERROR: "bold red", Severity.WARNING: "yellow", Severity.NOTE: "cyan"}

# What stands for a sign where the stream's encoding lacks it.
_ASCII = str.maketrans(
    {"±": "+-", "→": "->", "⇌": "<->", "·": ".", "‾": "^", "─": "-", "━": "=", "…": "...",
     "–": "-", "≤": "<=", "≥": ">=", "µ": "u", "γ": "gamma", "×": "x"}
)  # fmt: skip


@record
class Terminal:
    """A stream, whether it may be coloured, and how wide it is.

    In a pipe nothing is coloured and no line is cut: tables are as wide as they need.
    """

    stream: TextIO
    colour: bool
    width: int | None
    ascii_only: bool

    @classmethod
    def on(cls, stream: TextIO | None = None, *, no_color: bool = False) -> Terminal:
        """Find out what a stream can do (standard output by default)."""
        stream = stream or sys.stdout
        is_terminal = stream.isatty()
        colour = (
            is_terminal
            and not no_color
            and not os.environ.get("NO_COLOR")
            and os.environ.get("TERM") != "dumb"
        )
        try:
            "±→‾─–".encode(getattr(stream, "encoding", None) or "ascii")
            ascii_only = False
        except (UnicodeEncodeError, LookupError):
            ascii_only = True
        return cls(stream, colour, None if is_terminal else _pipe_width(), ascii_only)

    @classmethod
    def text(cls, stream: TextIO) -> Terminal:
        """A terminal that writes plain text with all its signs into a stream."""
        return cls(stream, colour=False, width=_pipe_width(), ascii_only=False)

    def show(self, screen: tuple[Block, ...], *, quiet: bool = False) -> None:
        """Show a screen; quiet keeps only the verdicts."""
        console = self._console()
        after_table = False
        if quiet:
            screen = _verdicts(screen)
        shown = [b for b in screen if not isinstance(b, Table) or b.is_shown]
        for place, block in enumerate(shown):
            if isinstance(block, Data):
                continue
            if after_table and isinstance(block, Sentence):
                print(file=self.stream)
            after_table = isinstance(block, (Table, Drawing))
            if isinstance(block, Heading):
                self._print(console, ("\n" if place else "") + block.text, "bold")
            elif isinstance(block, Sentence):
                self._print(console, block.text, _STYLE[block.mood])
            elif isinstance(block, Drawing):
                print(file=self.stream)
                for line in block.lines:
                    self._print_whole(console, line)
            else:
                self._show_table(console, block)

    def show_diagnostics(self, diagnostics: tuple[Diagnostic, ...], *, most: int = 20) -> None:
        """Show findings, the first ``most`` of them in full."""
        console = self._console()
        for diagnostic in diagnostics[:most]:
            head, *rest = diagnostic_lines(diagnostic)
            self._print(console, head, _SEVERITY_STYLE[diagnostic.severity])
            marked = 2 if diagnostic.source_line is not None else 0
            for line in rest[:marked]:
                self._print_whole(console, line)
            for line in rest[marked:]:
                self._print(console, line, "", hang=13)
        if len(diagnostics) > most:
            self._print(console, f"... and {len(diagnostics) - most} more (--all shows them)", "")

    def _console(self) -> Console:
        from rich.console import Console

        class Plain(Console):
            """A console that leaves a reader that has gone to the command."""

            def on_broken_pipe(self) -> NoReturn:
                raise BrokenPipeError

        return Plain(
            file=self.stream,
            force_terminal=self.colour,
            no_color=not self.colour,
            color_system="auto" if self.colour else None,
            width=self.width,
            highlight=False,
            markup=False,
            emoji=False,
            legacy_windows=False,
        )

    def _print(self, console: Console, text: str, style: str, hang: int = 0) -> None:
        from textwrap import wrap

        for line in text.split("\n"):
            parts = wrap(
                self._plain(line), self._text_width(console), break_on_hyphens=False,
                subsequent_indent=" " * hang,
            )  # fmt: skip
            for part in parts or [""]:
                self._print_whole(console, part, style)

    def _print_whole(self, console: Console, line: str, style: str = "") -> None:
        """A line that must not be broken, because the next belongs below it."""
        if style and self.colour:
            from rich.text import Text

            console.print(Text(self._plain(line), style), soft_wrap=True)
        else:
            print(self._plain(line), file=self.stream)

    def _text_width(self, console: Console) -> int:
        """How wide texts are: in a pipe 80 columns, where only tables may be wider."""
        return console.width if self.width is None else min(self.width, 80)

    def _plain(self, text: str) -> str:
        return seen(text).translate(_ASCII) if self.ascii_only else seen(text)

    def _show_table(self, console: Console, table: Table) -> None:
        print(file=self.stream)
        if table.title:
            self._print(console, table.title, "bold")
        columns, cells = table_cells(table)
        titles = [self._plain(f"{c.title} [{c.unit}]" if c.unit else c.title) for c in columns]
        rows = [[self._plain(cell) for cell in row] for row in cells]
        head, rule, lines = lay_out(
            titles,
            rows,
            [column.align is Align.RIGHT for column in columns],
            [column.wrap for column in columns],
            console.width,
            self._text_width(console),
            self._plain("─"),
        )
        for line in head.split("\n"):
            self._print_whole(console, line, "bold")
        print(rule, *lines, sep="\n", file=self.stream)
        for note in table.notes:
            self._print(console, "  " + note, "dim")


def rich_text(screen: tuple[Block, ...], width: int) -> Text:
    r"""A screen as rich prints it in a console of that width: brackets are units, not markup.

    Examples
    --------
    >>> rich_text((Heading("run A"), Sentence("It closes.")), 80).plain
    'run A\nIt closes.'
    """
    from rich.text import Text

    stream = StringIO()
    Terminal(stream, colour=False, width=width, ascii_only=False).show(screen)
    return Text(stream.getvalue().rstrip("\n"), no_wrap=True)


def _verdicts(screen: tuple[Block, ...]) -> tuple[Block, ...]:
    """The verdicts alone, with the headings of runs; of several screens with all headings."""
    several = sum(isinstance(block, Heading) for block in screen) > 1
    return tuple(
        block
        for block in screen
        if (isinstance(block, Sentence) and block.verdict)
        or (isinstance(block, Heading) and (several or block.is_run))
    )


def diagnostic_lines(diagnostic: Diagnostic) -> tuple[str, ...]:
    """A finding as lines: the sentence with its place, the source, because, mend.

    The exact words are marked in the line below the source line.

    Examples
    --------
    >>> from fluxnet.ground.names import Name
    >>> from fluxnet.ground.source import Span
    >>> span = Span("m.flux", 3, 1, 2)
    >>> diagnostic_lines(Diagnostic(Name.UNBALANCED_LINE, "it makes carbon", span))
    ('m.flux, line 3, column 1: it makes carbon (unbalanced-line)',)
    """
    place = place_of(diagnostic.span)
    head = f"{place}: " if place else ""
    severity = "" if diagnostic.severity is Severity.ERROR else f"{diagnostic.severity.value}: "
    lines = [f"{head}{severity}{diagnostic.message} ({diagnostic.name.value})"]
    lines.extend(excerpt_lines(diagnostic))
    if diagnostic.because:
        lines.append(f"    because  {diagnostic.because}")
    if diagnostic.mend:
        lines.append(f"    mend     {diagnostic.mend}")
    for other in diagnostic.also:
        lines.append(f"    see      {place_of(other)}")
    if diagnostic.accepted is not None:
        lines.append(f"    accepted {diagnostic.accepted}")
    return tuple(lines)


def _pipe_width() -> int:
    """Wide enough that nothing is cut where the output is not a terminal."""
    columns = os.environ.get("COLUMNS", "")
    return int(columns) if columns.isdigit() and int(columns) >= 40 else 200
