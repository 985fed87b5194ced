"""The grammar: free of conflicts, told in names, and complete for the words of the language."""

from __future__ import annotations

import re

import pytest

from fluxnet.ground.resources import resource_folder
from fluxnet.reading.faults import _PLAIN, _WORDS
from fluxnet.reading.model import read_model_text
from fluxnet.reading.parsing import Unparsed, parse_statement, statement_parser


def test_no_two_terminals_collide_and_no_rule_conflicts() -> None:
    statement_parser(strict=True)


def test_building_the_parser_leaves_the_library_as_it_was() -> None:
    import lark.lexer

    before = lark.lexer.has_interegular

    statement_parser()

    assert lark.lexer.has_interegular is before


def test_every_terminal_has_a_name_of_the_grammar() -> None:
    names = {terminal.name for terminal in statement_parser().terminals}

    written = "".join(path.read_text("utf-8") for path in resource_folder("grammar").glob("*.lark"))

    assert names == set(re.findall(r"^([A-Z_]+)(?:\.\d)?:", written, re.MULTILINE))


def test_every_terminal_has_words_for_a_message() -> None:
    keywords = {word.upper() for word in _WORDS} | {
        "CARRIES", "ENERGY", "ASH", "MU", "FLUX", "IN", "OUT", "BETWEEN", "AND", "FROM", "TO",
    }  # fmt: skip

    names = {terminal.name for terminal in statement_parser().terminals} - {"BLANK"}

    assert names - keywords <= set(_PLAIN)


@pytest.mark.parametrize("word", _WORDS)
def test_a_word_of_the_language_can_name_a_reaction(word: str) -> None:
    assert not isinstance(parse_statement(f"{word} : A -> B"), Unparsed)


SPECIES = [
    *(word for word in _WORDS if word != "biomass"), "in", "out", "between", "carries", "energy",
    "ash", "flux", "from", "to", "and", "accept", "charge",
]  # fmt: skip


@pytest.mark.parametrize("word", SPECIES)
def test_a_word_of_the_language_can_name_a_species(word: str) -> None:
    text = (
        f"exchange {word} C6H12O6\nproduct ethanol, CO2\ncompartment c\n"
        f"    a : {word} -> 2 ethanol + 2 CO2\nlimit {word} in <= 3\n"
    )

    reading = read_model_text(text)

    assert reading.network is not None, reading.diagnostics
    assert reading.network.limits[0].quantity.name == word


@pytest.mark.parametrize("word", ["nothing", "mu"])
def test_nothing_and_mu_cannot_be_names(word: str) -> None:
    reading = read_model_text(f"inside {word}\n")

    assert "reserved-name" in [d.name.value for d in reading.diagnostics]
