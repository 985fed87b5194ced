from __future__ import annotations

import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

from fluxnet.cli.main import COMMANDS, Exit, run
from fluxnet.cli.new import MODEL, RATES


@pytest.fixture
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    (tmp_path / "model.flux").write_text(MODEL, encoding="utf-8")
    (tmp_path / "rates.csv").write_text(RATES, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    return tmp_path


def run_process(*words: str, **variables: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "fluxnet", *words],
        capture_output=True,
        text=True,
        encoding="utf-8",
        env={**os.environ, **variables},
        check=False,
    )


def test_the_bare_command_shows_the_questions(capsys: pytest.CaptureFixture[str]) -> None:
    assert run([]) == Exit.SOUND
    shown = capsys.readouterr().out

    for command in COMMANDS:
        assert command.question in shown
        assert command.example in shown


def test_an_unknown_command_is_answered_with_the_nearest(
    capsys: pytest.CaptureFixture[str],
) -> None:
    assert run(["slove"]) == Exit.MISUSE
    assert "the nearest is solve" in capsys.readouterr().err


@pytest.mark.parametrize("command", sorted({c.name for c in COMMANDS}))
def test_the_help_of_each_command_begins_with_examples(
    command: str, capsys: pytest.CaptureFixture[str]
) -> None:
    assert run([command, "--help"]) == Exit.SOUND
    shown = capsys.readouterr().out

    assert f"  fluxnet {command}" in shown


def test_help_and_the_bare_command_import_no_third_party_package() -> None:
    code = (
        "import sys; from fluxnet.cli.main import run; run(['--help']); run([]);"
        "homes = {m.split('.')[0] for m in sys.modules} - set(sys.stdlib_module_names);"
        "homes = sorted(h for h in homes if not h.startswith('_') and h != 'fluxnet');"
        "print(homes, file=sys.stderr)"
    )
    root = Path(__file__).resolve().parents[2]
    done = subprocess.run(
        [sys.executable, "-S", "-c", code], capture_output=True, text=True, check=False,
        env={**os.environ, "PYTHONPATH": str(root)},
    )  # fmt: skip

    assert done.stderr.strip().splitlines()[-1] == "[]"


def test_check_loads_neither_scipy_nor_pandas_nor_matplotlib(folder: Path) -> None:
    code = (
        "import sys; from fluxnet.cli.main import run; run(['check', 'model.flux']);"
        "print([m for m in ('scipy', 'pandas', 'matplotlib') if m in sys.modules], file=sys.stderr)"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=False)

    assert done.stderr.strip().splitlines()[-1] == "[]"


@pytest.mark.parametrize(
    "words",
    [
        ["check", "model.flux", "--json"],
        ["closure", "rates.csv", "--json"],
        ["solve", "model.flux", "rates.csv", "--json"],
        ["solve", "model.flux", "--maximise", "ethanol", "--json"],
        ["catalogue", "--json"],
        ["check", "missing.flux", "--json"],
        ["check", "model.flux", "--tidy", "--json"],
        ["check", "missing.flux", "--tidy", "--json"],
        ["closure", "missing.csv", "--json"],
        ["solve", "missing.flux", "--json"],
        ["compare", "missing.flux", "--product", "ethanol", "--from", "glucose", "--json"],
        ["compare", "model.flux", "--product", "ethanol", "--from", "glucose", "--json"],
    ],
    ids=" ".join,
)
def test_standard_output_of_json_is_a_document_that_its_schema_allows(
    folder: Path, words: list[str], capsys: pytest.CaptureFixture[str]
) -> None:
    import jsonschema

    import fluxnet.presenting

    run(words)
    document = json.loads(capsys.readouterr().out)
    schemas = Path(fluxnet.presenting.__file__).parent / "schemas"
    schema = json.loads(
        (schemas / f"{document['document'].replace('/', '-')}.json").read_text(encoding="utf-8")
    )

    jsonschema.validate(document, schema)
    assert document["fluxnet"]


def test_inputs_are_named_with_their_hashes(
    folder: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    import hashlib

    run(["solve", "model.flux", "rates.csv", "--json"])
    document = json.loads(capsys.readouterr().out)

    assert [i["file"] for i in document["inputs"]] == ["model.flux", "rates.csv"]
    expected = hashlib.sha256((folder / "model.flux").read_bytes()).hexdigest()
    assert document["inputs"][0]["sha256"] == expected


def test_tables_go_to_csv_files_and_are_not_overwritten_unasked(
    folder: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    assert run(["solve", "model.flux", "rates.csv", "--csv", "out", "-q"]) == Exit.SOUND
    assert (folder / "out" / "ledger.csv").read_text(encoding="utf-8").startswith("run,carrier,")
    assert run(["solve", "model.flux", "rates.csv", "--csv", "out"]) == Exit.MISUSE
    assert "--force" in capsys.readouterr().err


def test_quiet_gives_the_verdict_only(folder: Path, capsys: pytest.CaptureFixture[str]) -> None:
    run(["check", "model.flux", "--quiet"])

    assert len(capsys.readouterr().out.strip().splitlines()) == 1


def test_standard_input_is_read_for_a_hyphen(folder: Path) -> None:
    with (folder / "model.flux").open() as file:
        done = subprocess.run([sys.executable, "-m", "fluxnet", "check", "-", "-q"], stdin=file,
                              capture_output=True, text=True, check=False)  # fmt: skip

    assert done.returncode == Exit.SOUND
    assert "Sound" in done.stdout


def test_a_closed_pipe_ends_quietly(folder: Path) -> None:
    done = subprocess.run(
        f"{sys.executable} -m fluxnet catalogue | head -1", shell=True, capture_output=True,
        text=True, check=False,
    )  # fmt: skip

    assert "Traceback" not in done.stderr


def test_output_in_ascii_has_no_other_sign(folder: Path) -> None:
    done = subprocess.run(
        [sys.executable, "-m", "fluxnet", "solve", "model.flux", "rates.csv"], check=False,
        capture_output=True, env={**os.environ, "PYTHONIOENCODING": "ascii"},
    )  # fmt: skip

    assert done.returncode in (Exit.SOUND, Exit.FINDING)
    assert done.stdout.isascii()
    assert b"+-" in done.stdout


def test_a_fault_of_ours_is_told_with_a_file_and_no_traceback(
    folder: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    import tempfile

    import fluxnet.cli.check

    def broken(arguments: object) -> int:
        raise RuntimeError("planted")

    monkeypatch.setattr(fluxnet.cli.check, "run", broken)
    monkeypatch.setattr(tempfile, "tempdir", str(folder))
    assert run(["check", "model.flux"]) == Exit.OURS
    told = capsys.readouterr().err

    assert "Traceback" not in told
    (report,) = folder.glob("fluxnet-fault-*.txt")
    assert report.name in told
    assert "planted" in report.read_text(encoding="utf-8")


def test_an_interrupt_ends_with_130(
    folder: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    import fluxnet.cli.check

    def stopped(arguments: object) -> int:
        raise KeyboardInterrupt

    monkeypatch.setattr(fluxnet.cli.check, "run", stopped)

    assert run(["check", "model.flux"]) == Exit.INTERRUPTED
    assert capsys.readouterr().err == "interrupted\n"


def test_new_writes_a_folder_that_checks_closes_and_solves(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.chdir(tmp_path)

    assert run(["new", "mine"]) == Exit.SOUND
    assert run(["check", "mine/model.flux"]) == Exit.SOUND
    assert run(["closure", "mine/example.csv", "--model", "mine/model.flux"]) == Exit.SOUND
    assert run(["solve", "mine/model.flux", "mine/example.csv"]) == Exit.SOUND
    assert run(["new", "mine"]) == Exit.MISUSE


def test_the_table_of_a_new_folder_is_empty_and_takes_a_row_a_run(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.chdir(tmp_path)
    run(["new", "mine"])
    table = tmp_path / "mine" / "rates.csv"

    assert run(["closure", "mine/rates.csv"]) == Exit.FINDING
    assert "no row below it (no-measured-rate)" in " ".join(capsys.readouterr().err.split())
    filled = table.read_text(encoding="utf-8") + "1,2.05,3 %,3.6,5 %,4.4,5 %,0.58,5 %,0.172,3 %\n"
    table.write_text(filled, encoding="utf-8")
    assert run(["solve", "mine/model.flux", "mine/rates.csv"]) == Exit.SOUND
