"""The process of a command: its exit status and its output are those of the command."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest

START = [sys.executable, "-c", "from fluxnet.__main__ import main; main()"]
MODEL = "substrate A C\nproduct B C\ncompartment all\n    r : A -> B\n"


def started(words: list[str], folder: Path, **options: Any) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [*START, *words], cwd=folder, text=True, check=False, stderr=subprocess.PIPE, **options
    )


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    (tmp_path / "model.flux").write_text(MODEL, encoding="utf-8")
    (tmp_path / "broken.flux").write_text(MODEL.replace("-> B", "-> 2 B"), encoding="utf-8")
    return tmp_path


@pytest.mark.parametrize(
    ("words", "status"),
    [
        (["--help"], 0), ([], 0), (["nonsense"], 2), (["check", "model.flux"], 0),
        (["check", "broken.flux"], 1), (["check", "missing.flux"], 2), (["check", "--help"], 0),
    ],
)  # fmt: skip
def test_the_exit_status_is_the_commands(words: list[str], status: int, folder: Path) -> None:
    assert started(words, folder, stdout=subprocess.PIPE).returncode == status


@pytest.mark.parametrize("words", [["--help"], ["check", "model.flux", "--json"]])
@pytest.mark.parametrize("unbuffered", ["", "1"])
def test_all_output_arrives(words: list[str], unbuffered: str, folder: Path) -> None:
    environment = os.environ | {"PYTHONUNBUFFERED": unbuffered}
    shown = started(words, folder, stdout=subprocess.PIPE, env=environment).stdout

    assert shown.rstrip().endswith(("interrupted", "}"))


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="a device that is always full")
@pytest.mark.parametrize("words", [["--help"], ["check", "model.flux"]])
@pytest.mark.parametrize("unbuffered", ["", "1"])
def test_output_that_cannot_be_written_is_told(
    words: list[str], unbuffered: str, folder: Path
) -> None:
    environment = os.environ | {"PYTHONUNBUFFERED": unbuffered}
    with Path("/dev/full").open("w") as full:
        done = started(words, folder, stdout=full, env=environment)

    assert done.returncode == 2
    assert done.stderr.startswith("fluxnet")
    assert "Traceback" not in done.stderr
    assert len(done.stderr.splitlines()) == 1


@pytest.mark.parametrize("words", [["--help"], ["check", "model.flux"]])
@pytest.mark.parametrize("unbuffered", ["", "1"])
def test_a_reader_that_has_gone_is_no_fault(
    words: list[str], unbuffered: str, folder: Path
) -> None:
    reading, writing = os.pipe()
    os.close(reading)
    environment = os.environ | {"PYTHONUNBUFFERED": unbuffered}
    done = started(words, folder, stdout=writing, env=environment)
    os.close(writing)

    assert done.returncode == 0
    assert done.stderr == ""
