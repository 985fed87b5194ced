"""A parser kept from an earlier start parses as the grammar says, and never stops anybody."""

from __future__ import annotations

import os
import stat
from pathlib import Path

import pytest

from fluxnet.ground.resources import resource_folder
from fluxnet.reading.keeping import cache_folder
from fluxnet.reading.parsing import statement_parser

LINES = [
    "model A name: any text",
    "substrate glucose C6H12O6, xylose",
    "biomass X C1H1.8O0.5N0.2 ash 5 % ± 1 %",
    "parameter a = 0.7 ± 0.1 in [0, 1]",
    "limit : A + 2 B <-> (1 - a) C accept unbalanced-line : a reason",
    "limit out ethanol / in glucose between 0.1 and 0.5",
]
BAD = ["substrate", "r : A -> -> B", "limit at most 3", "parameter a = ?"]


@pytest.fixture(autouse=True)
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    base = tmp_path / "cache"
    monkeypatch.setenv("LOCALAPPDATA" if os.name == "nt" else "XDG_CACHE_HOME", str(base))
    return base / "fluxnet"


def said(text: str) -> object:
    import lark

    try:
        return statement_parser().parse(text)
    except lark.exceptions.UnexpectedInput as error:
        accepts = getattr(error, "accepts", None) or getattr(error, "allowed", None)
        return type(error), error.pos_in_stream, accepts


def kept(folder: Path) -> list[Path]:
    return sorted(folder.iterdir())


def test_the_second_parser_is_the_kept_one_and_says_the_same(folder: Path) -> None:
    made = [said(line) for line in (*LINES, *BAD)]
    (place,) = kept(folder)
    before = place.stat().st_mtime_ns

    again = [said(line) for line in (*LINES, *BAD)]

    assert again == made
    assert statement_parser().source_path == "<deserialized>"
    assert kept(folder) == [place]
    assert place.stat().st_mtime_ns == before


@pytest.mark.parametrize("part", [0, 10, 2000, -1])
def test_a_broken_file_is_made_again(folder: Path, part: int) -> None:
    whole = said(LINES[0])
    (place,) = kept(folder)
    content = place.read_bytes()
    place.write_bytes(content[:part])

    assert said(LINES[0]) == whole
    assert statement_parser().source_path == "<deserialized>"
    assert len(place.read_bytes()) == len(content)


def test_a_file_that_is_no_parser_is_no_obstacle(
    folder: Path, capfd: pytest.CaptureFixture[str]
) -> None:
    whole = said(LINES[0])
    (place,) = kept(folder)
    first, _, rest = place.read_bytes().partition(b"\n")
    place.write_bytes(first + b"\n" + rest[:1] + b"nonsense")

    assert said(LINES[0]) == whole
    assert capfd.readouterr() == ("", "")


@pytest.mark.parametrize("what", ["a file", "a closed folder"])
def test_a_folder_that_cannot_be_written_is_no_obstacle(
    folder: Path, what: str, capfd: pytest.CaptureFixture[str]
) -> None:
    if what == "a file":
        folder.parent.write_text("not a folder")
    else:
        folder.mkdir(parents=True)
        folder.chmod(stat.S_IRUSR | stat.S_IXUSR)

    said(LINES[0])
    said(LINES[0])

    assert capfd.readouterr() == ("", "")
    if what == "a file":
        assert folder.parent.read_text() == "not a folder"


def test_another_grammar_is_kept_by_another_name(
    folder: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    statement_parser()
    grammar = tmp_path / "grammar"
    grammar.mkdir()
    for path in resource_folder("grammar").glob("*.lark"):
        text = path.read_text("utf-8").replace('"substrate"', '"fed"')
        (grammar / path.name).write_text(text, "utf-8")
    monkeypatch.setattr("fluxnet.reading.parsing.resource_folder", lambda _: grammar)

    with pytest.raises(ValueError, match="fed"):
        statement_parser().parse("fed glucose")  # a role that the model's data do not know

    assert len(kept(folder)) == 2


def test_a_relative_folder_is_not_taken(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    monkeypatch.setenv("LOCALAPPDATA" if os.name == "nt" else "XDG_CACHE_HOME", "some/where")
    monkeypatch.setattr(Path, "home", lambda: tmp_path)

    assert cache_folder() == tmp_path / ".cache" / "fluxnet"


def test_without_a_home_nothing_is_kept(monkeypatch: pytest.MonkeyPatch) -> None:
    def homeless() -> Path:
        raise RuntimeError("no home")

    monkeypatch.setenv("LOCALAPPDATA" if os.name == "nt" else "XDG_CACHE_HOME", "")
    monkeypatch.setattr(Path, "home", homeless)

    assert cache_folder() is None
    statement_parser()
