"""The parser kept between two starts: the same parser, never a reason to fail, never code."""

from __future__ import annotations

import pickle
from collections.abc import Iterator
from pathlib import Path

import pytest

from fluxnet.ground.resources import resource_folder
from fluxnet.reading import parsing
from fluxnet.reading.building import Builder
from fluxnet.reading.parser_cache import cache_file, keep_parser, kept_parser

LINE = "growth : ? G6P + (2*K_X - 1) ATP -> X + 0.1 CO2 accept dead-end: said"
GRAMMAR = sorted(resource_folder("grammar").glob("*.lark"))


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Iterator[Path]:
    """A cache folder of its own, and a parser that is not in memory."""
    monkeypatch.setenv("XDG_CACHE_HOME", str(tmp_path))
    parsing._parser.cache_clear()
    yield tmp_path / "fluxnet"
    parsing._parser.cache_clear()


def start_again() -> object:
    parsing._parser.cache_clear()
    return parsing.parse_statement(LINE)


def test_a_kept_parser_says_the_same(folder: Path) -> None:
    first = start_again()
    (kept,) = folder.iterdir()
    assert kept_parser(kept, Builder()) is not None

    assert start_again() == first
    assert parsing.parse_statement("growth : G6P +") == parsing.Unparsed(14)


@pytest.mark.parametrize("content", [b"", b"rubbish", pickle.dumps({"data": {}, "memo": {}})])
def test_a_file_that_is_not_what_it_should_be_is_passed_over(folder: Path, content: bytes) -> None:
    first = start_again()
    (kept,) = folder.iterdir()
    kept.write_bytes(content)

    assert kept_parser(kept, Builder()) is None
    assert start_again() == first
    assert kept_parser(kept, Builder()) is not None


class Harmful:
    """An object whose reading would write a file."""

    def __reduce__(self) -> tuple[object, tuple[str]]:
        return Path("harm").touch, ()  # type: ignore[return-value]


def test_code_is_never_read_back(folder: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    start_again()
    (kept,) = folder.iterdir()
    kept.write_bytes(pickle.dumps(Harmful()))
    monkeypatch.chdir(folder)

    assert kept_parser(kept, Builder()) is None
    assert not (folder / "harm").exists()


def test_a_folder_that_cannot_be_written_to_is_no_fault(folder: Path) -> None:
    folder.parent.mkdir(exist_ok=True)
    folder.write_text("a file stands where the folder should be", encoding="utf-8")

    assert not isinstance(start_again(), parsing.Unparsed)


def test_nothing_is_left_behind_where_keeping_fails(folder: Path) -> None:
    folder.mkdir()
    (folder / "parser-x").mkdir()

    keep_parser(parsing.statement_parser(), folder / "parser-x")

    assert [p.name for p in folder.iterdir()] == ["parser-x"]


def test_another_grammar_has_another_file(folder: Path, tmp_path: Path) -> None:
    other = tmp_path / "model.lark"
    other.write_text(GRAMMAR[0].read_text("utf-8") + "// more\n", encoding="utf-8")

    one, two = cache_file(GRAMMAR), cache_file([other, *GRAMMAR[1:]])

    assert one is not None
    assert one.parent == folder
    assert one != two


@pytest.mark.parametrize("home", ["relative/folder", ""])
def test_without_a_place_of_its_own_nothing_is_kept(
    monkeypatch: pytest.MonkeyPatch, tmp_path: Path, home: str
) -> None:
    monkeypatch.setenv("XDG_CACHE_HOME", home)
    monkeypatch.setenv("HOME", str(tmp_path))

    found = cache_file(GRAMMAR)

    assert found is None if home else found == tmp_path / ".cache" / "fluxnet" / found.name
