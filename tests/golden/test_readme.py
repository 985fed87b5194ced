"""The screens of the README are those that the commands print."""

from __future__ import annotations

import re
import shlex
from pathlib import Path

import pytest

from fluxnet.cli.main import Exit, run

README = Path(__file__).resolve().parents[2] / "README.md"
BLOCKS = re.findall(r"```(\w*)\n(.*?)```", README.read_text(encoding="utf-8"), re.S)


def test_the_screen_of_a_solve_is_what_the_starter_folder_gives(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    monkeypatch.chdir(tmp_path)
    run(["new", "."])
    capsys.readouterr()
    run(["solve", "model.flux", "example.csv"])
    shown = capsys.readouterr().out
    (block,) = (text for _, text in BLOCKS if text.startswith("run 1"))
    head, ledger = block.split("...\n")

    assert shown.startswith(head)
    assert ledger in shown


def test_a_raw_workbook_goes_through_the_whole_job_without_editing(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    example = README.parent / "examples" / "3-one-yeast-in-three-vessels"
    for name in ("chemostat.xlsx", "lv3.flux"):
        (tmp_path / name).write_bytes((example / name).read_bytes())
    monkeypatch.chdir(tmp_path)
    (commands,) = (text for _, text in BLOCKS if text.startswith("fluxnet rates"))
    (screen,) = (text for _, text in BLOCKS if text.startswith("Rates of slow"))
    shown = []
    for line in commands.splitlines():
        assert run(shlex.split(line)[1:]) == Exit.SOUND, line
        shown.append(capsys.readouterr().out)

    assert len(shown) == 3
    assert screen in shown[0]
    assert "vessel 1 slow: closes" in shown[1]
    assert "Carrier ledger" in shown[2]


def test_the_finding_is_one_of_a_golden_screen() -> None:
    golden = (Path(__file__).parent / "check-broken.txt").read_text(encoding="utf-8")
    (block,) = (text for _, text in BLOCKS if text.startswith("broken.flux"))

    assert block in golden


def test_the_model_of_the_readme_is_sound(tmp_path: Path) -> None:
    (model,) = (text for kind, text in BLOCKS if kind == "flux")
    path = tmp_path / "model.flux"
    path.write_text(model, encoding="utf-8")

    assert run(["check", str(path)]) == Exit.SOUND


def test_there_are_exactly_two_set_up_commands() -> None:
    assert len([text for _, text in BLOCKS if "python3 -m venv" in text]) == 2
