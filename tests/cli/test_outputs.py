"""Results that could not be written are refused before anything is read or computed."""

from __future__ import annotations

import sys
from pathlib import Path

import pytest

from fluxnet.cli import output
from fluxnet.cli.main import Exit, run
from fluxnet.cli.new import MODEL, RATES
from fluxnet.presenting.records import Document

COMMANDS = {
    Document.CHECK: ["check", "model.flux"],
    Document.CLOSURE: ["closure", "rates.csv"],
    Document.SOLVE: ["solve", "model.flux", "rates.csv"],
    Document.CATALOGUE: ["catalogue"],
    Document.COMPARE: ["compare", "model.flux", "--product", "ethanol", "--from", "glucose"],
}


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    (tmp_path / "model.flux").write_text(MODEL, encoding="utf-8")
    (tmp_path / "rates.csv").write_text(RATES, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    return tmp_path


@pytest.fixture
def nothing_is_read(monkeypatch: pytest.MonkeyPatch) -> None:
    """Any reading of an input, or of the catalogue, fails the test."""

    def refuse(*_: object, **__: object) -> None:
        raise AssertionError("the inputs were read")

    for module in ("check", "closure", "solve"):
        monkeypatch.setattr(f"fluxnet.cli.{module}.load_model", refuse)
        monkeypatch.setattr(f"fluxnet.cli.{module}.load_rates", refuse)
    monkeypatch.setattr("fluxnet.cli.compare.load_model", refuse)
    monkeypatch.setattr("fluxnet.cli.catalogue.load_catalogue", refuse)


def refused(words: list[str], capsys: pytest.CaptureFixture[str]) -> str:
    """What a refused command says; it exits with 2 and shows no result."""
    assert run(words) == Exit.MISUSE
    told = capsys.readouterr()
    assert told.out == ""
    return told.err


@pytest.mark.parametrize("document", COMMANDS)
@pytest.mark.usefixtures("nothing_is_read")
def test_a_workbook_without_its_package_is_refused_with_both_ways_out(
    folder: Path, document: str, capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setitem(sys.modules, "xlsxwriter", None)
    text = refused([*COMMANDS[document], "--csv", "out", "--xlsx", "book.xlsx"], capsys)

    assert "pip install 'fluxnet[sheets]'" in text
    assert "pip install xlsxwriter" in text
    assert not (folder / "out").exists()
    assert not (folder / "book.xlsx").exists()


@pytest.mark.parametrize("document", COMMANDS)
@pytest.mark.usefixtures("nothing_is_read")
def test_a_workbook_that_exists_is_refused_before_anything_is_done(
    folder: Path, document: str, capsys: pytest.CaptureFixture[str]
) -> None:
    (folder / "book.xlsx").write_bytes(b"mine")
    text = refused([*COMMANDS[document], "--csv", "out", "--xlsx", "book.xlsx"], capsys)

    assert "book.xlsx exists; --force overwrites it" in text
    assert (folder / "book.xlsx").read_bytes() == b"mine"
    assert not (folder / "out").exists()


@pytest.mark.parametrize("document", [Document.CLOSURE, Document.SOLVE])
@pytest.mark.usefixtures("nothing_is_read")
def test_a_table_that_exists_is_refused_before_anything_is_done(
    folder: Path, document: str, capsys: pytest.CaptureFixture[str]
) -> None:
    (folder / "out").mkdir()
    (folder / "out" / "overview.csv").write_bytes(b"mine")
    text = refused([*COMMANDS[document], "--csv", "out"], capsys)

    assert "overview.csv exists; --force overwrites it" in text


@pytest.mark.parametrize("words", [
    ["--xlsx", "nowhere/book.xlsx"], ["--xlsx", "."], ["--csv", "model.flux"],
])  # fmt: skip
@pytest.mark.usefixtures("nothing_is_read")
def test_a_place_where_nothing_can_be_written_is_refused(
    folder: Path, words: list[str], capsys: pytest.CaptureFixture[str]
) -> None:
    assert "folder" in refused(["closure", "rates.csv", *words], capsys)


@pytest.mark.parametrize("document", [Document.CLOSURE, Document.SOLVE])
@pytest.mark.usefixtures("nothing_is_read")
def test_an_input_is_never_written_over(
    folder: Path, document: str, capsys: pytest.CaptureFixture[str]
) -> None:
    text = refused([*COMMANDS[document], "--csv", ".", "--force"], capsys)

    assert "would write over rates.csv" in text
    assert (folder / "rates.csv").read_text(encoding="utf-8") == RATES


@pytest.mark.usefixtures("nothing_is_read")
def test_a_workbook_that_is_read_is_never_written_over(
    folder: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    (folder / "rates.xlsx").write_bytes(b"PK")
    text = refused(["closure", "rates.xlsx", "--xlsx", "./rates.xlsx", "--force"], capsys)

    assert "would write over rates.xlsx" in text


@pytest.mark.parametrize("words", [
    *COMMANDS.values(),
    ["catalogue", "glucose"],
    ["check", "model.flux", "--rates", "rates.csv"],
    ["solve", "model.flux", "rates.csv", "--maximise", "ethanol"],
    ["solve", "model.flux", "--maximise", "ethanol"],
], ids=" ".join)  # fmt: skip
def test_the_tables_that_are_looked_for_are_those_that_are_written(
    folder: Path, words: list[str]
) -> None:
    run([*words, "--csv", "out"])
    written = {path.stem for path in (folder / "out").iterdir()}
    (document,) = (d for d in COMMANDS if d.startswith(words[0]))

    assert set(output.ALWAYS_WRITTEN[document]) <= written <= output.NAMES_OF_TABLES


def test_nothing_computed_writes_no_file(folder: Path) -> None:
    (folder / "bad.csv").write_text("species,rate,unit\nglucoes,1,mmol\n", encoding="utf-8")
    words = ["closure", "bad.csv", "--json", "--csv", "out", "--xlsx", "book.xlsx"]

    assert run(words) == Exit.FINDING
    assert not (folder / "out").exists()
    assert not (folder / "book.xlsx").exists()
