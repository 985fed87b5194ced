"""What a model accepts is said in every report, and is no open warning there."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest

import fluxnet as fx
from fluxnet.cli.main import Exit, run

MODEL = """\
substrate glucose
product   ethanol, CO2
carrier   NADH
inside    pyruvate
parameter a = 1 ± 0.4 in [0.1, 3]
compartment c
    gly  : glucose -> 2 pyruvate + 2 NADH  accept dead-end: drained by hand.
    eth  : pyruvate + NADH -> ethanol + CO2
    turn : (2 - a) pyruvate -> (2 - a) pyruvate  accept coefficient-changes-sign: never above 2
limit glucose <= 5
"""
MODEL = MODEL.replace(
    "(2 - a) pyruvate -> (2 - a) pyruvate",
    "(2 - a) pyruvate + (2 - a) NADH -> (2 - a) ethanol + (2 - a) CO2",
)
RATES = "run,glucose,ethanol\n,mmol/g/h,mmol/g/h\nA,2 ± 0.1,4 ± 0.1\n"
SENTENCE = (
    "Accepted in the model: dead-end, line 7: drained by hand; "
    "coefficient-changes-sign, line 9: never above 2."
)


@pytest.fixture(autouse=True)
def folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    (tmp_path / "model.flux").write_text(MODEL, encoding="utf-8")
    (tmp_path / "rates.csv").write_text(RATES, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    return tmp_path


REPORTS = [
    ["solve", "model.flux", "rates.csv"],
    ["solve", "model.flux", "--maximise", "ethanol"],
    ["closure", "rates.csv", "--model", "model.flux"],
]


@pytest.mark.parametrize("words", REPORTS, ids=" ".join)
def test_a_report_says_in_one_sentence_what_the_model_accepts(
    words: list[str], capsys: pytest.CaptureFixture[str]
) -> None:
    run(words)
    out, err = capsys.readouterr()

    assert " ".join(out.split()).endswith(SENTENCE)
    assert "coefficient-changes-sign" not in err


@pytest.mark.parametrize("words", REPORTS, ids=" ".join)
def test_its_document_lists_them_with_their_reasons(
    words: list[str], capsys: pytest.CaptureFixture[str]
) -> None:
    run([*words, "--json"])
    told = json.loads(capsys.readouterr().out)["warnings"]

    accepted = {d["name"]: (d["line"], d["accepted"]) for d in told if d["accepted"]}
    assert accepted == {
        "coefficient-changes-sign": (9, "never above 2"),
        "dead-end": (7, "drained by hand."),
    }


def test_the_python_answers_say_it_too() -> None:
    model = fx.read_model_text(MODEL)
    rates = fx.read_rates_text(RATES, model)
    answers: list[fx.Answer[Any]] = [fx.solve(model, rates), fx.closure(rates, model)]

    for answer in answers:
        assert " ".join(str(answer).split()).endswith(SENTENCE)


def test_an_acceptance_of_a_variant_is_said_where_it_is_applied(
    folder: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    (folder / "model.flux").write_text(
        MODEL + "variant slow\n    limit glucose <= 1  accept blocked-reaction: on purpose\n",
        encoding="utf-8",
    )
    ask = ["solve", "model.flux", "--maximise", "ethanol"]
    run(ask)
    base = capsys.readouterr().out
    run([*ask, "--variant", "slow"])
    slow = capsys.readouterr().out

    assert "on purpose" not in base
    assert "blocked-reaction, line 12: on purpose" in " ".join(slow.split())


def test_without_acceptances_nothing_is_said(
    folder: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    text = "\n".join(line.split("accept ")[0] for line in MODEL.splitlines())
    (folder / "model.flux").write_text(text, encoding="utf-8")
    status = run(["solve", "model.flux", "rates.csv"])
    out, err = capsys.readouterr()

    assert status == Exit.SOUND
    assert "Accepted" not in out
    assert "coefficient-changes-sign" in err
