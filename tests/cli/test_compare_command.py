"""``fluxnet compare``: one screen that fits, its document, its files, and wrong questions."""

from __future__ import annotations

import csv
import json
import re
from pathlib import Path

import jsonschema
import pytest

import fluxnet
import fluxnet as fx
import fluxnet.presenting
from fluxnet.cli.main import Exit, run
from tests.studies.pathways import ACETATE, CITRATE, GLYCEROL

SCHEMA = Path(fluxnet.presenting.__file__).parent / "schemas" / "compare-1.json"
MODEL = GLYCEROL.replace("upkeep : ATP", "upkeep : ATP") + """\
parameter PO = 1.0 ± 0.1
limit glucose <= 10
limit upkeep = 4 ± 1
variant airless
    limit oxygen <= 0
variant leaky
    drop oxphos
    add to c
        leak : NADH + 0.5 oxygen -> PO ATP
"""
ASK = ["compare", "model.flux", "--product", "glycerol", "--from", "glucose"]


@pytest.fixture(autouse=True)
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    (tmp_path / "model.flux").write_text(MODEL, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    monkeypatch.delenv("COLUMNS", raising=False)
    return tmp_path


def document(words: list[str], capsys: pytest.CaptureFixture[str]) -> dict[str, object]:
    run([*words, "--json"])
    found: dict[str, object] = json.loads(capsys.readouterr().out)
    jsonschema.validate(found, json.loads(SCHEMA.read_text("utf-8")))
    return found


def test_the_document_tells_exactly_and_its_schema_allows_it(
    capsys: pytest.CaptureFixture[str],
) -> None:
    found = document([*ASK, "--staircase", "--measured", "1.5"], capsys)
    first = found["variants"][0]  # type: ignore[index]

    assert first["yields"][-1]["exactly"] == "39/25"
    assert first["staircase"]["adds_up"] is True
    assert first["staircase"]["steps"][-1]["exactly"] == "3/50"
    assert found["odds"]


@pytest.mark.parametrize(
    "more",
    [
        ["--detail", "all", "--staircase"],
        ["--across", "base|airless", "--across", "base|leaky", "--reserve", "CO2=3"],
        ["--draws", "0"],
    ],
    ids=" ".join,
)
def test_every_line_of_the_screen_fits_eighty_columns(
    more: list[str], capsys: pytest.CaptureFixture[str]
) -> None:
    run([*ASK, *more])
    shown = capsys.readouterr().out

    assert max(map(len, shown.splitlines())) <= 80


def test_the_caution_stands_once(capsys: pytest.CaptureFixture[str]) -> None:
    run([*ASK, "--detail", "all"])
    shown = " ".join(capsys.readouterr().out.split())

    assert shown.count("safety review, local codes and licensed engineers") == 1


def test_the_screen_of_the_manual_is_what_the_command_prints(
    folder: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    text = (Path(fluxnet.__file__).parent / "manual" / "compare.md").read_text(encoding="utf-8")
    (model,) = re.findall(r"```flux\n(.*?)```", text, re.S)
    (screen,) = re.findall(r"```compare\n(.*?)```", text, re.S)
    (command,) = re.findall(r"^    fluxnet (compare .*)$", text, re.M)
    (folder / "model.flux").write_text(model, encoding="utf-8")
    run(command.split())

    assert screen in capsys.readouterr().out


def test_quiet_tells_the_best_alone(capsys: pytest.CaptureFixture[str]) -> None:
    assert run([*ASK, "--quiet"]) == Exit.SOUND
    shown = capsys.readouterr().out

    assert shown.startswith("Most glycerol of glucose with maintenance: ")
    assert len(shown.splitlines()) <= 3


def test_the_tables_are_written_with_whole_numbers(folder: Path) -> None:
    assert run([*ASK, "--csv", "out", "--staircase"]) == Exit.SOUND
    with (folder / "out" / "mode_yields.csv").open(encoding="utf-8") as file:
        rows = list(csv.DictReader(file))

    assert {(r["variant"], r["mode"]): r["exactly"] for r in rows}["base", "alone"] == "8/5"
    assert {p.name for p in (folder / "out").iterdir()} >= {"variants.csv", "staircase.csv"}


@pytest.mark.parametrize(
    ("words", "told"),
    [
        (["--product", "glucose", "--from", "glucose"], "product and substrate are both glucose"),
        (["--product", "glycerol", "--from", "glucose", "--detail", "x"], "called 'x'"),
        (["--product", "glycerol", "--from", "glucose", "--staircase", "x"], "called 'x'"),
        (["--product", "glycerol", "--from", "glucose", "--across", "base|"], "empty places"),
        (["--product", "glycerol", "--from", "glucose", "--uptake", "-1"], "an uptake is above"),
        (["--product", "glycerol", "--from", "glucose", "--uptake", "x"], "an uptake is a number"),
        (["--product", "glycerol", "--from", "glucose", "--beside", "x"], "no species x"),
        (["--product", "glycerol", "--from", "glucose", "--draws", "-1"], "not negative"),
    ],
)
def test_a_wrong_question_is_answered_with_one_sentence(
    words: list[str], told: str, capsys: pytest.CaptureFixture[str]
) -> None:
    assert run(["compare", "model.flux", *words]) == Exit.MISUSE
    shown = capsys.readouterr()
    assert told in shown.err
    assert shown.out == ""


def test_an_unknown_variant_is_a_document_too(capsys: pytest.CaptureFixture[str]) -> None:
    found = document([*ASK, "--across", "base|airles"], capsys)

    assert found["variants"] == []
    assert found["warnings"][0]["mend"] == "write airless"  # type: ignore[index]


def test_a_product_that_no_variant_can_make_is_a_finding(
    folder: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    (folder / "model.flux").write_text(CITRATE, encoding="utf-8")
    words = ["compare", "model.flux", "--product", "citrate", "--from", "glucose"]

    assert run([*words, "--across", "anaerobic"]) == Exit.FINDING
    assert "`limit oxygen <= 0` forbids it" in capsys.readouterr().out


def test_the_python_face_shows_itself_and_gives_a_frame() -> None:
    answer = fx.compare(fx.read_model_text(ACETATE), "acetate", "glucose", detail=["base"])

    assert list(answer.to_frame()["name"]) == ["base", "anaerobic"]
    assert answer.to_frame("by_products" if "by_products" in answer.tables else None) is not None
    assert "base, in detail" in str(answer)


def test_what_the_reactor_supplies_is_told_an_hour_and_per_litre(
    capsys: pytest.CaptureFixture[str],
) -> None:
    alone = [*ASK, "--across", "base"]
    run(alone)
    assert '(--biomass "20 g/L": per litre)' in " ".join(capsys.readouterr().out.split())
    run([*alone, "--biomass", "20 g/L"])
    shown = " ".join(capsys.readouterr().out.split())
    assert "At glucose in 10 mmol/g/h: 15.6 mmol/g/h product, oxygen 5.4" in shown
    assert "with 20 g/L of biomass 312 mmol/L/h product, oxygen 108" in shown
    assert " W/L" in shown

    (first, *_) = document([*alone, "--biomass", "20 g/L"], capsys)["variants"]  # type: ignore[misc]
    assert first["supply"]["per_litre"]["oxygen"] == pytest.approx(108)


def test_more_than_can_be_reached_is_called_so(capsys: pytest.CaptureFixture[str]) -> None:
    run([*ASK, "--measured", "1.7"])
    shown = capsys.readouterr().out

    assert "+ more than can" in shown
    assert "not explained" not in shown


def test_a_name_is_known_with_what_all_have_and_without(
    capsys: pytest.CaptureFixture[str],
) -> None:
    common = [*ASK, "--across", "base|airless", "--across", "leaky"]
    for name in ("airless", "airless * leaky"):
        assert run([*common, "--detail", name, "--staircase", name]) == Exit.SOUND
        shown = capsys.readouterr().out
        assert "With leaky, most glycerol" in " ".join(shown.split())
        assert "airless, in detail" in shown
        assert "Where the yield goes: airless" in shown


def test_two_dozen_variants_are_answered_on_one_screen(
    folder: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    example = Path(__file__).parents[2] / "examples" / "2-four-ways-to-one-acid" / "sw9.flux"
    ask = [
        "compare", str(example), "--product", "3-hydroxypropionate", "--from", "glucose|xylose",
        "--across", "malonyl|aspartate|alanine|glycerol", "--across", "sealed|tank|stirred",
        "--reserve", "mu=0.04", "--biomass", "20 g/L", "--draws", "20",
    ]  # fmt: skip
    assert run(ask) == Exit.SOUND
    lines = capsys.readouterr().out.splitlines()

    assert len(lines) <= 48
    assert max(map(len, lines)) <= 80
    assert sum(bool(re.match(r"\d+\*? +(glucose|xylose) ", line)) for line in lines) == 20
    assert run([*ask, "--all"]) == Exit.SOUND
    shown = capsys.readouterr().out
    assert "How sure" in shown
    assert "more: --all" not in shown


def test_the_cause_is_told_with_what_leaves_beside(capsys: pytest.CaptureFixture[str]) -> None:
    example = Path(__file__).parents[2] / "examples" / "2-four-ways-to-one-acid" / "sw9.flux"
    ask = [
        "compare", str(example), "--product", "3-hydroxypropionate", "--from", "xylose",
        "--across", "alanine|aspartate", "--across", "tank", "--reserve", "mu=0.04",
        "--draws", "0",
    ]  # fmt: skip
    second = document(ask, capsys)["second"]

    assert "it spends 1 ATP more per mol 3-hydroxypropionate" in str(second)
    assert "more ATP for that comes from ack, with acetate" in str(second)
