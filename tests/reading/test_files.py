"""Files as they come: missing, of another kind, in another encoding, too long."""

from __future__ import annotations

import os
from pathlib import Path

import pytest

from fluxnet.ground.diagnostic import Diagnostic
from fluxnet.reading.model import read_model

MODEL = """\
model Gär-Modell µ
substrate glucose
product ethanol, CO2
parameter p = 2 ± 0.1
compartment c
    a : p glucose -> (2*p) ethanol + (2*p) CO2
"""


def read(path: Path, content: bytes, **options: bool) -> tuple[object, list[Diagnostic]]:
    path.write_bytes(content)
    reading = read_model(path, **options)
    return reading.network, list(reading.diagnostics)


@pytest.fixture
def path(tmp_path: Path) -> Path:
    return tmp_path / "model.flux"


@pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "utf-16"])
def test_unicode_texts_are_read_as_they_are(path: Path, encoding: str) -> None:
    network, found = read(path, MODEL.encode(encoding))

    assert found == []
    assert network.title == "Gär-Modell µ".replace("\u00b5", "\u03bc")


def test_latin_1_is_read_with_a_note_at_the_first_such_letter(path: Path) -> None:
    network, found = read(path, ("substrate xylose\n" + MODEL).encode("latin-1"))

    assert [(d.name.value, d.span.line) for d in found] == [("wrong-encoding", 2)]
    assert network.title.startswith("Gär")
    assert network.parameters[0].sd is not None


def test_a_missing_file_is_told_with_a_near_name(path: Path) -> None:
    read(path, MODEL.encode())

    found = read_model(path.with_name("modle.flux")).diagnostics

    assert [d.name.value for d in found] == ["file-missing"]
    assert "model.flux" in found[0].mend


def test_a_missing_folder_is_told(path: Path) -> None:
    found = read_model(path.parent / "no" / "model.flux").diagnostics[0]

    assert found.name.value == "file-missing"
    assert "folder" in found.mend


def test_a_path_that_no_system_can_open_is_told() -> None:
    assert read_model("bad\x00name").diagnostics[0].name.value == "file-missing"




@pytest.mark.parametrize("content", [b"PK\x03\x04rest", b"%PDF-1.7\n", b"a\x00b"])
def test_a_file_of_another_kind_is_told(path: Path, content: bytes) -> None:
    network, found = read(path, content)

    assert network is None
    assert [d.name.value for d in found] == ["binary-file"]


@pytest.mark.parametrize("content", [b"", b"\n\n", b"# only a remark\n", b"   \t\n"])
def test_a_file_that_says_nothing_is_told_as_empty(path: Path, content: bytes) -> None:
    network, found = read(path, content)

    assert network is None
    assert [(d.name.value, d.span.line) for d in found] == [("empty-file", 0)]


def test_more_than_20000_lines_are_refused_unless_they_are_meant(path: Path) -> None:
    content = MODEL.encode() + b"# x\n" * 19_995

    refused, found = read(path, content)
    taken, nothing = read(path, content, large=True)

    assert refused is None
    assert "20001" in found[0].message
    assert (taken is not None, nothing) == (True, [])


def test_a_file_without_an_end_is_not_read_to_the_end() -> None:
    endless = Path("/dev/zero")
    if not endless.exists():
        endless = Path(os.devnull)

    assert read_model(endless).network is None
