"""Suspects on screen and as data, through the commands."""

from __future__ import annotations

import json
from pathlib import Path

import jsonschema
import pytest

from fluxnet.cli.main import run
from fluxnet.ground.resources import resource_folder

SCHEMAS = Path(__file__).resolve().parents[2] / "fluxnet" / "presenting" / "schemas"
CLOSURE = ["closure", "rates.csv", "--model", "tw4.flux"]
SOLVE = ["solve", "tw4.flux", "rates.csv"]


@pytest.fixture(autouse=True)
def folder(tmp_path, monkeypatch):
    for source in (resource_folder("examples") / "1-four-weeks-of-a-diol").iterdir():
        if source.suffix in (".flux", ".csv"):
            (tmp_path / source.name).write_bytes(source.read_bytes())
    monkeypatch.chdir(tmp_path)
    monkeypatch.delenv("COLUMNS", raising=False)
    return tmp_path


def shown(capsys, *words: str) -> str:
    run(list(words))
    return capsys.readouterr().out


@pytest.mark.parametrize("command", [CLOSURE, SOLVE], ids=["closure", "solve"])
def test_one_screen_says_what_is_wrong_how_sure_that_is_and_what_to_do(command, capsys):
    text = shown(capsys, *command, "--run", "W11")
    lines = text.splitlines()
    assert max(map(len, lines)) <= 80
    until = next(i for i, line in enumerate(lines) if line.startswith("To do:"))
    assert until < 45
    screen = " ".join(" ".join(lines[: until + 4]).split())
    assert "What could be wrong?" in screen
    assert "oxygen in 3.888 4.5" in screen
    assert "To do: measure oxygen in once more." in screen


def test_two_relations_are_said_to_be_no_evidence(capsys):
    text = " ".join(shown(capsys, *CLOSURE, "--run", "W11").split())
    assert "that it fits well is no evidence" in text
    assert "A closed balance is no proof" in text


def test_a_run_that_closes_shows_no_suspects_unless_asked(capsys):
    assert "Suspects" not in shown(capsys, *CLOSURE, "--run", "W15")
    text = " ".join(shown(capsys, *CLOSURE, "--run", "W15", "--suspects").split())
    assert "is no sign of an error" in text
    assert "To do" not in text
    assert "Suspects" not in shown(capsys, *SOLVE, "--run", "W15")
    assert "Suspects" in shown(capsys, *SOLVE, "--run", "W15", "--suspects")


def test_all_shows_rare_and_impossible_ones_too(capsys):
    few = shown(capsys, *CLOSURE, "--run", "W11")
    assert "methane out" not in few
    assert "less likely" in few
    every = shown(capsys, *CLOSURE, "--run", "W11", "--all")
    assert "methane out" in every
    assert "(not possible)" in every


@pytest.mark.parametrize(
    ("command", "name"), [(CLOSURE, "closure-1"), (SOLVE, "solve-1")], ids=["closure", "solve"]
)
def test_suspects_are_there_as_data(command, name, capsys):
    document = json.loads(shown(capsys, *command, "--json"))
    jsonschema.validate(document, json.loads((SCHEMAS / f"{name}.json").read_text("utf-8")))
    runs = {one["run"]: one for one in document["runs"]}
    assert runs["W15"]["suspects"] == []
    assert runs["W15"]["suspect_search"] is None
    first = runs["W11"]["suspects"][0]
    assert first["species"] == "oxygen"
    assert first["kind"] == "measured_rate"
    assert first["direction"] == "in"
    assert first["group"] == 1
    assert first["possible"] is True
    assert first["measured"] - first["size"] == pytest.approx(first["would_be"])
    assert first["words"].startswith("oxygen in would have to be 4.5")
    assert first["readings"]
    search = runs["W11"]["suspect_search"]
    assert search["tried"] >= len(runs["W11"]["suspects"])
    assert search["explained"] is True


def test_suspects_are_a_table_of_their_own(capsys, folder):
    run([*CLOSURE, "--run", "W11", "--csv", "out"])
    text = (folder / "out" / "suspects.csv").read_text(encoding="utf-8-sig")
    assert text.splitlines()[0].startswith("run,kind,species,direction,size,sd,unit")
    assert "would have to be" in text


def test_pairs_are_told_where_no_single_error_will_do(capsys, folder):
    rows = (folder / "rates.csv").read_text(encoding="utf-8")
    wrong = rows.replace("W15,CO2,out,8.891", "W15,CO2,out,6.891")
    wrong = wrong.replace("W15,oxygen,in,4.501", "W15,oxygen,in,7.501")
    (folder / "wrong.csv").write_text(wrong, encoding="utf-8")
    text = " ".join(shown(capsys, "solve", "tw4.flux", "wrong.csv", "--run", "W15").split())
    assert "No single error explains it" in text
    assert "and CO2 out would have to be 8.8 ± 0.5 instead of 6.891" in text
    assert "To do: look into oxygen in once more and CO2 out once more." in text
    assert "each of the two is needed beside the other" in text
