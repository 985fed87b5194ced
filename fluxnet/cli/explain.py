"""``fluxnet explain``: what a diagnostic means and what to do about it."""

from __future__ import annotations

import argparse
import re
import sys
from difflib import get_close_matches
from textwrap import wrap

from fluxnet.cli.main import Exit
from fluxnet.cli.manual import MANUAL
from fluxnet.ground.names import Name

__all__ = ["EXAMPLES", "add_arguments", "read_words", "run"]

EXAMPLES = """What a message or a word of a screen means.

  fluxnet explain unbalanced-line
  fluxnet explain not balanceable
  fluxnet explain                    the list of all names
"""


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Options of the command."""
    parser.add_argument(
        "name", nargs="*", help="the name at the end of a message, or a word of a screen"
    )


def run(arguments: argparse.Namespace) -> int:
    """Print one explanation, or the list."""
    if not arguments.name:
        width = max(len(name.value) for name in Name)
        for name in Name:
            line = f"{name.value:<{width}}  {name.severity.value:<7}  {name.headline}"
            print(_broken(line, " " * (width + 11)))
        return Exit.SOUND
    wanted = " ".join(arguments.name).strip("()\"'").replace("_", " ").lower()
    found = next((name for name in Name if name.value == wanted.replace(" ", "-")), None)
    words = read_words()
    if found is not None:
        print(_broken(f"{found.value} ({found.severity.value}): {found.headline}", ""))
        print(_broken(f"    why it matters  {found.why}", " " * 20))
        print(_broken(f"    what to do      {found.remedy}", " " * 20))
        return Exit.SOUND
    if wanted in words:
        print(_broken(f"{wanted}: {words[wanted]}", "    "))
        return Exit.SOUND
    near = get_close_matches(wanted, [*(name.value for name in Name), *words], 3, 0.5)
    hint = f"; near to it are {', '.join(near)}" if near else ""
    print(f"fluxnet explain: no message or word is called {wanted!r}{hint}", file=sys.stderr)
    return Exit.MISUSE


def read_words() -> dict[str, str]:
    """The words of the screens with their meanings, from the manual's page on them."""
    text = (MANUAL / "words.md").read_text(encoding="utf-8")
    found = re.findall(r"\*\*([^*]+)\*\*: (.*?)(?=\s\*\*|\n\n|\Z)", text, re.S)
    return {word.lower(): " ".join(meaning.split()) for word, meaning in found}


def _broken(text: str, indent: str) -> str:
    """The text broken for 80 columns."""
    return "\n".join(wrap(text, 80, subsequent_indent=indent, break_on_hyphens=False))
