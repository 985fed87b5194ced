"""``fluxnet lump``: its file, its document, its faces, and what it refuses."""

from __future__ import annotations

import json
import re
import shlex
from fractions import Fraction
from pathlib import Path

import jsonschema
import pytest

import fluxnet as fx
from fluxnet.cli.main import Exit, run
from fluxnet.cli.new import MODEL as STARTER
from fluxnet.cli.new import RATES
from fluxnet.network.line_balance import Verdict, balance_line, contents_of_network
from fluxnet.reading.model import read_model_text

MANUAL = Path(fx.__file__).parent / "manual" / "lump.md"
SCHEMA = Path(fx.__file__).parent / "presenting" / "schemas" / "lump-1.json"
(MODEL,) = re.findall(r"```flux\n(.*?)```", MANUAL.read_text(encoding="utf-8"), re.S)
(LINES,) = re.findall(r"```lump\n(.*?)```", MANUAL.read_text(encoding="utf-8"), re.S)
LIMITED = MODEL + "limit glucose <= 3\nlimit oxygen <= 4\n"


@pytest.fixture(autouse=True)
def model(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    monkeypatch.chdir(tmp_path)
    path = tmp_path / "model.flux"
    path.write_text(LIMITED, encoding="utf-8")
    (tmp_path / "starter.flux").write_text(STARTER, encoding="utf-8")
    (tmp_path / "rates.csv").write_text(RATES, encoding="utf-8")
    return path


def document(words: list[str], capsys: pytest.CaptureFixture[str]) -> dict[str, object]:
    run(["lump", *words, "--json"])
    found: dict[str, object] = json.loads(capsys.readouterr().out)
    jsonschema.validate(found, json.loads(SCHEMA.read_text(encoding="utf-8")))
    return found


@pytest.mark.parametrize("line", LINES.strip().splitlines())
def test_each_line_of_the_manual_is_sound(
    line: str, capsys: pytest.CaptureFixture[str]
) -> None:
    words = shlex.split(line)[1:]

    assert run(words) == Exit.SOUND
    shown = capsys.readouterr().out
    assert max(map(len, shown.splitlines())) <= 80
    assert "NOT" not in shown
    document([*words[1:], "--force"], capsys)


def test_the_written_model_is_sound_and_solves_alike(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    assert run(["lump", "model.flux", "--keep", "pyruvate", "-o", "short.flux"]) == Exit.SOUND
    assert run(["check", "short.flux"]) == Exit.SOUND
    text = (tmp_path / "short.flux").read_text(encoding="utf-8")
    assert "glucose-to-pyruvate : glucose -> 2 pyruvate + 2 ATP + 2 NADH" in text
    assert "# = hexokinase + pfk + aldolase + 2 lower" in text

    long, short = fx.read_model("model.flux"), fx.read_model("short.flux")
    for aim in ("ethanol", "lactate", "ATP"):
        ends = [fx.solve(one, maximise=aim).runs[0].optimum for one in (long, short)]
        assert ends[0] == ends[1]
    capsys.readouterr()


def test_the_tidy_form_of_the_written_model_is_itself(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    run(["lump", "model.flux", "--keep", "pyruvate", "-o", "short.flux"])
    before = (tmp_path / "short.flux").read_text(encoding="utf-8")
    run(["check", "short.flux", "--tidy"])

    assert (tmp_path / "short.flux").read_text(encoding="utf-8") == before
    capsys.readouterr()


def test_a_dash_gives_the_model_alone(capsys: pytest.CaptureFixture[str]) -> None:
    assert run(["lump", "model.flux", "--keep", "pyruvate", "-o", "-"]) == Exit.SOUND
    shown = capsys.readouterr().out

    assert read_model_text(shown).network is not None
    assert shown == fx.lump(fx.read_model("model.flux"), keep=["pyruvate"]).text


def test_the_document_tells_what_became_of_each(capsys: pytest.CaptureFixture[str]) -> None:
    found = document(["model.flux", "--keep", "pyruvate"], capsys)

    assert found["counts"] == {
        "reactions": 9, "lumped_reactions": 5, "species": 12, "lumped_species": 8,
    }  # fmt: skip
    assert set(found["eliminated"]) == {"G6P", "FBP", "T3P", "acetaldehyde"}  # type: ignore[call-overload]
    assert found["proof"]["verified"] is True  # type: ignore[index]


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["--keep", "pyruvat"], "pyruvate"),
        (["--keep", ""], "nothing is to be kept"),
        ([], "--keep"),
        (["--overall", "sugr"], "sugar"),
        (["--overall", "sugar", "--keep", "pyruvate"], "--overall"),
        (["rates.csv", "--keep", "pyruvate"], "--overall"),
        (["--keep", "pyruvate", "-o", "model.flux"], "write over"),
        (["--keep", "pyruvate", "-o", "rates.csv"], "--force"),
        (["--keep", "pyruvate", "-o", "-", "--json"], "not both"),
        (["--keep", "pyruvate", "--variant", "fast"], "fast"),
    ],
)
def test_what_makes_no_sense_is_refused(
    words: list[str], said: str, capsys: pytest.CaptureFixture[str]
) -> None:
    assert run(["lump", "model.flux", *words]) == Exit.MISUSE
    assert said in capsys.readouterr().err


def test_an_intermediate_between_compartments_stays_and_is_told(
    capsys: pytest.CaptureFixture[str],
) -> None:
    assert run(["lump", "model.flux", "--keep", "ethanol"]) == Exit.SOUND

    assert "passed between sugar and products" in capsys.readouterr().out


def test_a_faulty_model_gives_its_faults(
    model: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    model.write_text(LIMITED.replace("-> 2 ", "-> 3 ").replace("<-> 2", "<-> 3"), encoding="utf-8")

    assert run(["lump", "model.flux", "--keep", "ethanol"]) == Exit.FINDING
    capsys.readouterr()
    assert document(["model.flux", "--keep", "ethanol"], capsys)["lumped"] == []
    assert document(["model.flux", "--overall", "sugar"], capsys)["runs"] == []


def test_an_overall_reaction_balances_and_agrees_with_the_solve(
    capsys: pytest.CaptureFixture[str],
) -> None:
    starter = fx.read_model("starter.flux")
    rates = fx.read_rates("rates.csv", starter)
    solved = fx.solve(starter, rates).runs[0]
    for compartment in ("catabolism", "anabolism", "maintenance"):
        (found,) = fx.overall(starter, compartment, rates).runs
        assert found.line is not None
        verdict = balance_line(found.line, contents_of_network(starter.network)).verdict
        assert verdict in (Verdict.CLOSES, Verdict.ROUNDING)
        (shown,) = [e for e in solved.equations if e.compartment == compartment]
        exact = {t.species: sign * t.coefficient.number for sign, t in found.line.terms}
        assert exact.keys() == {t.species for t in shown.terms}
        for term in shown.terms:
            told = term.coefficient / shown.per_amount
            assert float(exact[term.species]) == pytest.approx(told, abs=3e-6)
    capsys.readouterr()


def test_an_overall_line_can_be_put_into_the_model(capsys: pytest.CaptureFixture[str]) -> None:
    (found,) = fx.overall(fx.read_model("model.flux"), "sugar", maximise="ATP").runs
    text = LIMITED.replace("compartment respiration", f"    {found.text}\ncompartment respiration")

    assert read_model_text(text.replace("compartment sugar", "compartment sugars")).network
    assert found.text == "sugar : glucose -> 2 pyruvate + 2 ATP + 2 NADH"
    assert dict(found.weights)["lower"] == Fraction(2)
    document(["model.flux", "--overall", "sugar", "--maximise", "ATP"], capsys)


def test_where_nothing_was_solved_there_is_no_overall_reaction(
    model: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    model.write_text(MODEL + "limit glucose <= 0\nlimit oxygen = 3\n", encoding="utf-8")

    assert run(["lump", "model.flux", "--overall", "sugar"]) == Exit.FINDING
    assert "no overall reaction" in capsys.readouterr().out
    document(["model.flux", "--overall", "sugar"], capsys)


def test_tables_are_written(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert run(["lump", "model.flux", "--keep", "pyruvate", "--csv", "tables"]) == Exit.SOUND
    rows = (tmp_path / "tables" / "lumped.csv").read_text(encoding="utf-8").splitlines()

    assert rows[0] == "compartment,reaction,equation,stands_for"
    assert len(rows) == 3
    capsys.readouterr()


def test_python_gives_the_same() -> None:
    answer = fx.lump(fx.read_model("model.flux"), keep=["pyruvate"])

    assert answer.to_frame()["reaction"].tolist() == ["glucose-to-pyruvate", "pyruvate-to-ethanol"]
    assert json.loads(answer.to_json())["document"] == "lump/1"
    assert "<table>" in answer._repr_html_()
    with pytest.raises(fx.MisuseError):
        fx.lump(fx.read_model("model.flux"), keep=[])
