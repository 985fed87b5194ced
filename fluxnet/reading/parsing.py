"""From one logical line to a statement, by the grammar."""

from __future__ import annotations

from functools import cache
from typing import NamedTuple, cast

import lark
import lark.lexer
from lark import Lark

from fluxnet.ground.resources import resource_folder
from fluxnet.reading import syntax as s
from fluxnet.reading.building import Builder
from fluxnet.reading.parser_cache import cache_file, keep_parser, kept_parser

__all__ = ["Unparsed", "expected_terminals", "parse_statement", "statement_parser"]


def statement_parser(*, strict: bool = False) -> Lark:
    """The parser of one statement, made from the grammar.

    Raises
    ------
    lark.exceptions.GrammarError, lark.exceptions.LexError
        Where the grammar holds a conflict, or with ``strict`` two terminals that collide.
    """
    if strict:
        return _build(strict=True)
    # Where interegular is installed lark tests all terminals for collisions at every start,
    # at three times the cost of the rest. A test does it once.
    tested = lark.lexer.has_interegular
    lark.lexer.has_interegular = False
    try:
        return _build(strict=False)
    finally:
        lark.lexer.has_interegular = tested


def _build(*, strict: bool) -> Lark:
    return Lark.open(
        str(resource_folder("grammar") / "model.lark"), start="statement", parser="lalr",
        lexer="contextual", transformer=Builder(), maybe_placeholders=False,
        keep_all_tokens=True, strict=strict,
    )


@cache
def _parser() -> Lark:
    """The parser, kept from an earlier start where there is one."""
    file = cache_file(resource_folder("grammar").glob("*.lark"))
    kept = None if file is None else kept_parser(file, Builder())
    if kept is not None:
        return kept
    made = statement_parser()
    if file is not None:
        keep_parser(made, file)
    return made


class Unparsed(NamedTuple):
    """Where a line could not be read on."""

    position: int


def parse_statement(text: str) -> s.Statement | Unparsed:
    """The statement of a logical line, or where it stops to be one.

    Examples
    --------
    >>> parse_statement("drop oxphos").line
    DropLine(items=(Word(text='oxphos', start=5, end=11),))
    >>> parse_statement("drop ->")
    Unparsed(position=5)
    """
    try:
        return cast("s.Statement", _parser().parse(text))
    except lark.exceptions.UnexpectedToken as error:
        end = error.token.type == "$END"
        return Unparsed(len(text) if end else cast("int", error.token.start_pos))
    except lark.exceptions.UnexpectedCharacters as error:
        return Unparsed(error.pos_in_stream or 0)
    except ValueError:  # a number of thousands of digits
        return Unparsed(0)


def expected_terminals(text: str) -> tuple[str, ...]:
    """The names of the terminals that could stand where a line cannot be read on.

    Examples
    --------
    >>> expected_terminals("basis")
    ('COLON', 'TEXT')
    """
    try:
        _parser().parse(text)
    except lark.exceptions.UnexpectedToken as error:
        return tuple(sorted(error.accepts or error.expected))
    except lark.exceptions.UnexpectedCharacters as error:
        return tuple(sorted(error.allowed or ()))
    except ValueError:
        pass
    return ()
