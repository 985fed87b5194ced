"""Statements kept between two readings: the same ones, never a reason to fail, never code."""

from __future__ import annotations

import pickle
from pathlib import Path

import pytest

from fluxnet.ground.resources import resource_folder
from fluxnet.reading import loading
from fluxnet.reading.lines import LogicalLine
from fluxnet.reading.model import read_model
from fluxnet.reading.statement_cache import keep_statements, kept_statements, statement_file

MODELS = sorted(resource_folder("models").glob("*.flux"))
SMALL = """substrate glucose
product lactate
carrier ATP carries energy
compartment all
    lump : glucose -> 2 lactate + 2 ATP
    upkeep : ATP -> nothing
limit glucose <= 10
"""


@pytest.fixture(autouse=True)
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """A cache folder of its own."""
    monkeypatch.setenv("XDG_CACHE_HOME", str(tmp_path / "cache"))
    return tmp_path


@pytest.fixture
def parsed(monkeypatch: pytest.MonkeyPatch) -> list[str]:
    """The lines that were parsed."""
    texts: list[str] = []
    real = loading.parse_statement

    def parse_statement(text: str) -> object:
        texts.append(text)
        return real(text)

    monkeypatch.setattr(loading, "parse_statement", parse_statement)
    return texts


@pytest.mark.parametrize("path", MODELS, ids=[path.stem for path in MODELS])
def test_a_model_read_again_is_the_same_without_parsing_a_line(path, parsed):
    first = read_model(path)
    assert parsed
    parsed.clear()

    again = read_model(path)

    assert parsed == []
    assert again.network == first.network
    assert again.diagnostics == first.diagnostics


def test_only_a_line_that_changed_is_parsed_again(folder, parsed):
    path = folder / "small.flux"
    path.write_text(SMALL, encoding="utf-8")
    read_model(path)
    parsed.clear()
    path.write_text("\n" + SMALL.replace("<= 10", "<= 12"), encoding="utf-8")

    network = read_model(path).network

    assert [text.strip() for text in parsed] == ["limit glucose <= 12"]
    assert network is not None
    assert network.limits[0].high == 12


def test_a_faulty_line_is_told_each_time_at_its_own_place(folder):
    path = folder / "small.flux"
    path.write_text(SMALL + "limit glucose <=\n", encoding="utf-8")
    first = read_model(path).diagnostics
    path.write_text("\n\n" + SMALL + "limit glucose <=\n", encoding="utf-8")

    again = read_model(path).diagnostics

    assert [d.name for d in again] == [d.name for d in first]
    assert [d.span.line for d in again] == [d.span.line + 2 for d in first]


class Harmful:
    """An object whose reading would write a file."""

    def __reduce__(self):
        return Path("harm").touch, ()


@pytest.mark.parametrize(
    "content",
    [b"", b"rubbish", pickle.dumps([1]), pickle.dumps({"limit glucose <= 10": "said"}),
     pickle.dumps({"limit glucose <= 10": LogicalLine}), pickle.dumps({"a": Harmful()})],
)  # fmt: skip
def test_a_file_that_is_not_what_it_should_be_is_passed_over(
    folder, content, parsed, monkeypatch
):
    monkeypatch.chdir(folder)
    path = folder / "small.flux"
    path.write_text(SMALL, encoding="utf-8")
    first = read_model(path)
    file = statement_file(path)
    assert file is not None
    assert kept_statements(file)
    file.write_bytes(content)
    assert kept_statements(file) == {}
    parsed.clear()

    assert read_model(path).network == first.network
    assert parsed
    assert not (folder / "harm").exists()


def test_a_folder_that_cannot_be_made_is_no_fault(folder, monkeypatch):
    (folder / "file").write_text("", encoding="utf-8")
    monkeypatch.setenv("XDG_CACHE_HOME", str(folder / "file"))
    path = folder / "small.flux"
    path.write_text(SMALL, encoding="utf-8")

    assert read_model(path).network is not None


def test_no_more_files_are_kept_than_there_are_places(folder):
    for k in range(40):
        file = statement_file(folder / f"{k}.flux")
        assert file is not None
        keep_statements({}, file)
    assert len(list((folder / "cache" / "fluxnet").iterdir())) <= 32
