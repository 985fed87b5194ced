"""The process of a command: its exit status and its output are those of the command."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path
from typing import Any

import pytest

from fluxnet.ground.resources import resource_folder

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


def test_solving_measured_rates_loads_few_modules(tmp_path: Path) -> None:
    """What conflicts, proofs, aims and suspects need is loaded where there are any."""
    (tmp_path / "rates.csv").write_text(
        "run,species,direction,rate,sd,unit\n1,glucose,in,4.0,3 %,mmol/g/h\n", encoding="utf-8"
    )
    model = resource_folder("models") / "amino-acid.flux"
    code = (
        "import sys; from fluxnet.cli.main import run; "
        f"assert run(['solve', {str(model)!r}, 'rates.csv']) == 0;"
        "print(*(m for m in sys.modules if m.startswith('fluxnet')), file=sys.stderr)"
    )
    done = subprocess.run(
        [sys.executable, "-c", code], capture_output=True, text=True, check=True, cwd=tmp_path
    )
    loaded = done.stderr.strip().splitlines()[-1].split()

    assert 100 < len(loaded) <= 220
    rooms = ("conflict", "proof", "bill", "suspect", "aims", "programme", "simplex", "linear")
    assert [m for m in loaded if m.split(".")[-1] in rooms] == ["fluxnet.exact.linear"]
    assert not [m for m in loaded if ".fault_" in m and not m.endswith("fault_record")]
