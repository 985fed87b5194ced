"""Streams that are closed, full, without an end or in another encoding."""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path

import pytest

from fluxnet.cli import demo
from fluxnet.cli.main import Exit, run
from fluxnet.cli.new import MODEL, RATES


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    (tmp_path / "model.flux").write_text(MODEL, encoding="utf-8")
    (tmp_path / "rates.csv").write_text(RATES, encoding="utf-8")
    return tmp_path


def shell(folder: Path, words: str) -> subprocess.CompletedProcess[str]:
    """A command line as a shell runs it; ``fluxnet`` stands for the command."""
    line = words.replace("fluxnet", f'"{sys.executable}" -m fluxnet')
    return subprocess.run(
        line, shell=True, cwd=folder, capture_output=True, text=True, encoding="utf-8",
        timeout=60, check=False,
    )  # fmt: skip


@pytest.mark.parametrize(
    ("words", "status"),
    [
        ("fluxnet check model.flux >&-", 0),
        ("fluxnet check model.flux 2>&-", 0),
        ("fluxnet solve model.flux rates.csv --json >&- 2>&-", 0),
        ("fluxnet check missing.flux >&- 2>&-", 2),
        ("fluxnet manual >&-", 0),
        ("fluxnet check - <&-", 2),
        ("fluxnet closure - <&-", 2),
        ("fluxnet check model.flux > /dev/full 2> /dev/full", 2),
        ("fluxnet > /dev/full", 2),
    ],
)
def test_a_stream_that_is_closed_or_full_is_no_fault(
    folder: Path, words: str, status: int
) -> None:
    done = shell(folder, words)

    assert done.returncode == status
    assert "Traceback" not in done.stderr
    assert "a fault of ours" not in done.stderr


@pytest.mark.parametrize("words", ["fluxnet check -", "fluxnet check --tidy -"])
def test_standard_input_without_an_end_is_refused(folder: Path, words: str) -> None:
    done = shell(folder, f"{words} < /dev/zero")

    assert done.returncode == 2
    assert "standard input has more than 50 million bytes" in done.stderr


@pytest.mark.parametrize("encoding", ["latin-1", "utf-16"])
def test_standard_input_is_read_in_the_encodings_of_files(folder: Path, encoding: str) -> None:
    (folder / "model.flux").write_bytes(MODEL.encode(encoding))
    checked = shell(folder, "fluxnet check - < model.flux")
    laid = shell(folder, "fluxnet check --tidy - < model.flux")

    assert (checked.returncode, laid.returncode) == (0, 0)
    assert ("wrong-encoding" in checked.stderr) == (encoding == "latin-1")
    assert "PO  = 1.4 ± 0.2" in laid.stdout


def test_an_interrupted_step_ends_the_demo(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    steps: list[list[str]] = []

    def interrupted(words: list[str]) -> int:
        steps.append(words)
        return Exit.INTERRUPTED

    monkeypatch.setattr(demo, "run_command", interrupted)

    assert run(["demo", str(tmp_path / "demo")]) == Exit.INTERRUPTED
    assert len(steps) == 1


def test_the_tidy_document_holds_the_text_and_whether_it_is_another(folder: Path) -> None:
    (folder / "wild.flux").write_text("substrate   glucose\ncompartment c\n a:glucose->2 X\n")
    first, again = (
        json.loads(shell(folder, "fluxnet check wild.flux --tidy --json").stdout)
        for _ in range(2)
    )
    piped = json.loads(shell(folder, "fluxnet check - --tidy --json < wild.flux").stdout)

    assert first["document"] == "tidy/1"
    assert (first["changed"], again["changed"], piped["changed"]) == (True, False, False)
    assert first["text"] == again["text"] == (folder / "wild.flux").read_text()
    assert "    a : glucose -> 2 X\n" in first["text"]
    assert first["inputs"][0]["sha256"] != again["inputs"][0]["sha256"]


@pytest.mark.parametrize("words", ["fluxnet check - --rates -", "fluxnet solve - -"])
def test_standard_input_is_one_thing_only(folder: Path, words: str) -> None:
    done = shell(folder, f"{words} < model.flux")

    assert done.returncode == 2
    assert "standard input can be the model or the rates, not both" in done.stderr
